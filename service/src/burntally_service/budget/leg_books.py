"""The ledger in the words of the contract: what each leg was charged, who paid, what burned and what happened."""

from typing import Literal

from burntally.model.budget import (
    BranchBook,
    Burn,
    ContingencyBook,
    Event,
    LegBook,
    Losses,
    Payer,
    ReserveBook,
    RuleUsed,
)
from burntally.model.mission import Land, Site, Spiral
from burntally.model.rules import Contingency
from burntally_service.budget.drawing import Drawn, Line
from burntally_service.budget.plan import BranchPlan, PlannedLeg
from burntally_service.kernels import tally_rows as rows
from burntally_service.legs.epochs import epoch_after

__all__ = ["branch_books", "limiting_mark", "load_name", "local_gravity", "margin_of"]

LIMITING_TOLERANCE = 1e-6
"""A leg within this of the least slack limits [m/s] (rule M)."""

_PURPOSES: dict[int, Literal["manoeuvre", "contingency", "reserve", "upkeep"]] = {
    rows.MANOEUVRE: "manoeuvre",
    rows.CONTINGENCY: "contingency",
    rows.RESERVE: "reserve",
    rows.UPKEEP: "upkeep",
}

_EventKind = Literal["ignition", "separation", "release", "take_on", "boiloff", "propellant"]


def margin_of(drawn: Drawn, branch: int) -> float | None:
    """Margin of a branch: its least slack, or minus the sum owed; None where there is nothing to pay [m/s]."""
    owed = drawn.books.branch_owed[branch]
    if owed > 0.0:
        return -owed
    return min((slack for _, slack in _marks(drawn, branch) if slack is not None), default=None)


def limiting_mark(drawn: Drawn, branch: int) -> int | None:
    """Index in its branch of the leg that holds the margin down; None for the reserve."""
    legs = drawn.legs_of(branch)
    if drawn.books.branch_owed[branch] > 0.0:
        return next((row.index for leg, row in legs if drawn.books.owed[leg] > 0.0), None)
    least = margin_of(drawn, branch)
    if least is None:
        return None
    for index, slack in _marks(drawn, branch):
        if slack is not None and slack <= least + LIMITING_TOLERANCE:
            return index
    return None


def _marks(drawn: Drawn, branch: int) -> list[tuple[int | None, float | None]]:
    """Slack of each leg of a branch, then of its reserve."""
    marks: list[tuple[int | None, float | None]] = [(row.index, drawn.slack[leg]) for leg, row in drawn.legs_of(branch)]
    marks.append((None, drawn.slack[len(drawn.lowered.tables.legs) + branch]))
    return marks


def branch_books(drawn: Drawn, faulty: set[str]) -> list[BranchBook]:
    """Books of every branch.

    Parameters
    ----------
    drawn : Drawn
        The books as drawn.
    faulty : set of str
        Branches that have a finding of severity error.

    Returns
    -------
    list of BranchBook
        In the order of the mission, the main branch first.
    """
    by_leg: dict[int, list[Line]] = {}
    for line in drawn.lines:
        by_leg.setdefault(line.leg, []).append(line)
    books: list[BranchBook] = []
    for branch, plan in enumerate(drawn.branches):
        if plan is None:
            name = drawn.design.mission.branches[branch - 1].of
            books.append(BranchBook(name=name, closes=False, owed=0.0, charged=0.0, legs=[]))
        else:
            books.append(_branch_book(drawn, branch, plan, (by_leg, faulty)))
    return books


def _branch_book(
    drawn: Drawn, branch: int, plan: BranchPlan, context: tuple[dict[int, list[Line]], set[str]]
) -> BranchBook:
    """Book of one branch that started."""
    by_leg, faulty = context
    margin = margin_of(drawn, branch)
    books = drawn.books
    reserve_slack = drawn.slack[len(drawn.lowered.tables.legs) + branch]
    return BranchBook(
        name=plan.name,
        closes=(margin is None or margin >= 0.0) and plan.name not in faulty,
        margin=margin,
        owed=books.branch_owed[branch],
        charged=books.branch_charged[branch],
        reserve=ReserveBook(charged=books.reserve[branch], owed=books.reserve_owed[branch], slack=reserve_slack),
        legs=[_leg_book(drawn, leg, row, by_leg.get(leg, [])) for leg, row in drawn.legs_of(branch)],
        end=plan.end,
        end_epoch=epoch_after(drawn.design.mission.epoch, books.branch_clock[branch]),
        end_mass=books.branch_mass[branch],
    )


def _leg_book(drawn: Drawn, leg: int, row: PlannedLeg, lines: list[Line]) -> LegBook:
    """Book of one leg."""
    books = drawn.books
    epoch = drawn.design.mission.epoch
    gravity = local_gravity(drawn, row)
    began, ended = books.clock_before[leg], books.clock_after[leg]
    by_fraction, by_floor, by_fixed = books.by_fraction[leg], books.by_floor[leg], books.by_fixed[leg]
    return LegBook(
        name=row.leg.name,
        kind=str(row.leg.__struct_config__.tag),
        pointer=row.pointer,
        category=row.category,
        rule=_rule_used(row),
        source=row.plan.source,
        paid=books.owed[leg] == 0.0,
        slack=drawn.slack[leg],
        owed=books.owed[leg],
        start=row.start,
        end=row.plan.end,
        start_epoch=epoch_after(epoch, began),
        end_epoch=epoch_after(epoch, ended),
        elapsed=began,
        duration=ended - began,
        required=books.required[leg],
        losses=Losses(),
        contingency=ContingencyBook(fraction=by_fraction, floor=by_floor, fixed=by_fixed),
        charged=books.required[leg] + (by_fraction + by_floor + by_fixed),
        payers=_payers(drawn, lines),
        mass_before=books.mass_before[leg],
        mass_after=books.mass_after[leg],
        manoeuvres=row.plan.told_manoeuvres(began),
        alternatives=list(row.plan.alternatives),
        burns=[_burn(drawn, row, line, gravity) for line in lines if line.kind == rows.LINE_BURN],
        events=[event for line in lines if (event := _event(drawn, line)) is not None],
    )


def _rule_used(row: PlannedLeg) -> RuleUsed | None:
    """The rule that a leg took, if it was charged under one."""
    if row.rule_index < 0 or not (row.charged or row.kilograms > 0.0):
        return None
    rule: Contingency = row.rule
    return RuleUsed(category=rule.category, clause=rule.clause)


def _payers(drawn: Drawn, lines: list[Line]) -> list[Payer]:
    """What each stage gave to a leg and its contingency, in the order in which they paid."""
    given: dict[int, tuple[int, float, float]] = {}
    for line in lines:
        if line.kind == rows.LINE_IGNITION:
            # What is lit has paid, be it nothing: its loss may have left it dry.
            stage = drawn.lowered.engines[line.part][0]
            given.setdefault(stage, (0, 0.0, 0.0))
        elif line.kind <= rows.LINE_DRAW and line.purpose != rows.RESERVE:
            stage = drawn.lowered.tables.burners[line.part].stage
            mask, delta_v, kg = given.get(stage, (0, 0.0, 0.0))
            given[stage] = (mask | line.mask, delta_v + line.delta_v, kg + line.kg)
    return [
        Payer(
            stage=drawn.part_name(stage),
            engines=list(drawn.lit(stage, mask).names),
            delta_v=delta_v,
            propellant=kg,
        )
        for stage, (mask, delta_v, kg) in given.items()
    ]


def local_gravity(drawn: Drawn, row: PlannedLeg) -> float | None:
    """Gravity where a leg lifts off or lands; None elsewhere [m/s2]."""
    place = row.start if isinstance(row.start, Site) else row.plan.end if isinstance(row.leg, Land) else None
    if not isinstance(place, Site):
        return None
    body = drawn.bodies[place.body]
    r = body.radius_at(place.altitude)
    return body.mu / (r * r)


def _burn(drawn: Drawn, row: PlannedLeg, line: Line, gravity: float | None) -> Burn:
    """One burn; its thrust and flow are those of the engines that its line says were lit."""
    stage = drawn.lowered.tables.burners[line.part].stage
    lit = drawn.lit(stage, line.mask)
    thrust = lit.thrust
    after = line.mass - line.kg
    return Burn(
        stage=drawn.part_name(stage),
        engines=list(lit.names),
        purpose="manoeuvre" if isinstance(row.leg, Spiral) and line.purpose == rows.UPKEEP else _PURPOSES[line.purpose],
        delta_v=line.delta_v,
        propellant=line.kg,
        burn_time=line.kg / lit.mdot,
        time=line.time,
        mass_before=line.mass,
        mass_after=after,
        thrust=thrust,
        thrust_to_weight_ignition=None if gravity is None else thrust / (line.mass * gravity),
        thrust_to_weight_burnout=None if gravity is None else thrust / (after * gravity),
        acceleration_burnout=thrust / after,
    )


def _event(drawn: Drawn, line: Line) -> Event | None:
    """What a line tells beside the burns."""
    stages = len(drawn.lowered.stages)
    tables = drawn.lowered.tables
    kind: _EventKind
    if line.kind == rows.LINE_BURN:
        return None
    if line.kind == rows.LINE_IGNITION:
        stage = drawn.lowered.engines[line.part][0]
        kind, part = "ignition", f"{drawn.part_name(stage)}/{drawn.engine_name(line.part)}"
    elif line.kind == rows.LINE_SEPARATION:
        kind, part = "separation", drawn.part_name(line.part)
    elif line.kind == rows.LINE_RELEASE:
        kind, part = "release", drawn.part_name(stages + line.part)
    elif line.kind == rows.LINE_TAKEN_PAYLOAD:
        kind, part = "take_on", drawn.part_name(stages + line.part)
    elif line.kind == rows.LINE_DOCKED:
        kind, part = "take_on", drawn.part_name(line.part)
    elif line.kind == rows.LINE_DRAW:
        kind, part = "propellant", drawn.part_name(tables.burners[line.part].stage)
    elif line.kind in {rows.LINE_HANDED, rows.LINE_TAKEN, rows.LINE_BOILED}:
        kind = {rows.LINE_HANDED: "release", rows.LINE_TAKEN: "take_on"}.get(line.kind, "boiloff")  # type: ignore[assignment]
        part = load_name(drawn, line.part)
    else:
        return None
    return Event(kind=kind, part=part, mass=line.kg, time=line.time)


def load_name(drawn: Drawn, load: int) -> str:
    """Name of a load with its stage."""
    stage, place = drawn.lowered.loads[load]
    model = drawn.lowered.stages[stage]
    return f"{model.name}/{model.propellants[place].name}"
