"""What each stage has, gave and keeps; and what was delivered."""

from msgspec import structs

from burntally.model.budget import Delivery, DeltaVBook, LoadBook, Separated, StageBook
from burntally_service.budget.drawing import Drawn, Line
from burntally_service.kernels import tally_rows as rows
from burntally_service.kernels.tally_books import blank_books, load_up, stage_mass
from burntally_service.kernels.tally_burns import burn_out
from burntally_service.legs.epochs import epoch_after
from burntally_service.vehicle.masses import dry_mass_of

__all__ = ["deliveries", "left_behind", "stage_books", "stage_left_behind"]


def stage_books(drawn: Drawn) -> list[StageBook]:
    """Book of every stage, in the order of the stack."""
    capability = _capability(drawn)
    left = _left(drawn)
    return [_stage_book(drawn, stage, (capability[stage], left[stage])) for stage in range(len(drawn.lowered.stages))]


def _stage_book(drawn: Drawn, stage: int, ideal: tuple[float, float]) -> StageBook:
    """Book of one stage."""
    model = drawn.lowered.stages[stage]
    row = drawn.lowered.tables.stages[stage]
    burners = drawn.lowered.tables.burners
    spent = 0.0
    for line in drawn.lines:
        if line.kind == rows.LINE_BURN and burners[line.part].stage == stage:
            spent += line.delta_v
    return StageBook(
        name=model.name,
        count=1,
        dry_mass=dry_mass_of(model, drawn.rules),
        delta_v=DeltaVBook(capability=ideal[0], spent=spent, left=ideal[1]),
        ignitions={
            drawn.engine_name(engine): int(drawn.books.used[engine])
            for engine in range(row.first_engine, row.end_engine)
        },
        loads=[_load_book(drawn, load) for load in range(row.first_load, row.end_load)],
        separated=_separated(drawn, stage),
    )


def _load_book(drawn: Drawn, load: int) -> LoadBook:
    """Where the propellant of one load went."""
    books = drawn.books
    stage, place = drawn.lowered.loads[load]
    model = drawn.lowered.stages[stage].propellants[place]
    return LoadBook(
        name=model.name,
        loaded=model.mass,
        taken_on=books.taken[load],
        burned=books.burned[load],
        ignition_loss=books.lost[load],
        boiled_off=books.boiled[load],
        handed_over=books.handed[load],
        residual=books.residual[load],
        held_back=books.held[load],
        left=books.usable[load],
    )


def _separation_of(drawn: Drawn, stage: int) -> Line | None:
    """The line in which a stage left its first stack; None if it stayed."""
    for line in drawn.lines:
        if line.kind == rows.LINE_SEPARATION and line.part == stage:
            return line
    return None


def left_behind(drawn: Drawn, load: int) -> float:
    """Usable propellant of a load that left with its stage and that no branch burns [kg]."""
    stage = drawn.lowered.loads[load][0]
    if drawn.books.where[stage] != rows.NOT_FLOWN:
        return 0.0
    return drawn.books.usable[load]


def stage_left_behind(drawn: Drawn, stage: int) -> float:
    """Usable propellant of all loads of a stage that left with it and that no branch burns [kg]."""
    loads = drawn.lowered.tables.stages[stage]
    behind = 0.0
    for load in range(loads.first_load, loads.end_load):
        behind += left_behind(drawn, load)
    return behind


def _separated(drawn: Drawn, stage: int) -> Separated | None:
    """Where and when a stage left."""
    line = _separation_of(drawn, stage)
    if line is None:
        return None
    branch, row = drawn.lowered.legs[line.leg]
    return Separated(
        branch=drawn.branch_name(branch),
        # A reserve that follows no leg is held at the end of the branch, after the last one.
        leg=row.index if row else drawn.legs_of(branch)[-1][1].index,
        time=line.time,
        left_behind=stage_left_behind(drawn, stage),
    )


def _capability(drawn: Drawn) -> list[float]:
    """Ideal delta-v of each stage's usable load under the stack as first flown [m/s]."""
    tables = drawn.lowered.tables
    start = blank_books(tables, 0)
    load_up(tables, start)
    above = 0.0
    capability = [0.0] * len(tables.stages)
    for stage in range(len(tables.stages) - 1, -1, -1):
        above += stage_mass(tables, start, stage)
        capability[stage] = burn_out(tables, start, stage, above)
    return capability


def _left(drawn: Drawn) -> list[float]:
    """Ideal delta-v of what is left of each stage, under all that is above it in the branch that it ends in [m/s]."""
    tables, books = drawn.lowered.tables, drawn.books
    end = structs.replace(books, usable=list(books.usable), flow=list(books.flow), flow_of=list(books.flow_of))
    left = [0.0] * len(tables.stages)
    above = [0.0] * len(tables.branches)
    for stage in reversed(books.order):
        branch = books.where[stage]
        if branch != rows.NOT_FLOWN:
            above[branch] += stage_mass(tables, books, stage)
            left[stage] = burn_out(tables, end, stage, above[branch])
    return left


def deliveries(drawn: Drawn) -> list[Delivery]:
    """Payloads released, in order."""
    delivered: list[Delivery] = []
    for line in drawn.lines:
        branch, row = drawn.lowered.legs[line.leg]
        if line.kind == rows.LINE_RELEASE and row is not None:
            delivered.append(
                Delivery(
                    name=drawn.part_name(len(drawn.lowered.stages) + line.part),
                    mass=line.kg,
                    branch=drawn.branch_name(branch),
                    leg=row.index,
                    location=row.start,
                    epoch=epoch_after(drawn.design.mission.epoch, line.time),
                )
            )
    return delivered
