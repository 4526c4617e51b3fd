"""Notes: what is worth knowing of a design that may close all the same, and the mixtures that do not end together."""

from collections.abc import Iterator

from burntally.model.budget import Finding
from burntally.model.vehicle import MassList, Vehicle
from burntally_service.budget.drawing import Drawn, stage_pointer
from burntally_service.budget.leg_books import load_name
from burntally_service.budget.plan import PlannedLeg
from burntally_service.budget.stage_books import left_behind, stage_left_behind
from burntally_service.kernels.tally_books import DRY_FRACTION
from burntally_service.vehicle.masses import has_uncovered_item

__all__ = ["notes"]


def notes(drawn: Drawn) -> Iterator[Finding]:
    """What is worth knowing: mixtures, handovers, what is carried, left or held back, and what no rule covers.

    Parameters
    ----------
    drawn : Drawn
        The books.

    Yields
    ------
    Finding
        Of severity warning or note.
    """
    yield from _feeds(drawn)
    yield from _ledger_notes(drawn)
    yield from _left(drawn)
    yield from _uncharged_categories(drawn)
    yield from _ungrown_masses(drawn)


def _feeds(drawn: Drawn) -> Iterator[Finding]:
    """Mixtures of which one load ran dry in a burn while another was left; one finding a stage."""
    for stage, mark in enumerate(drawn.books.unbalanced):
        if mark:
            kg = drawn.books.unbalanced_kg[stage]
            place = drawn.lowered.engines[mark - 1][1]
            yield Finding(
                code="feed-unbalanced",
                severity="warning",
                message=f"one load of {drawn.part_name(stage)} runs dry, and {kg:.6g} kg of the other cannot burn "
                "without it",
                pointer=f"{stage_pointer(stage)}/engines/{place}/feeds",
                value=kg,
                unit="kg",
                remedies=[],
            )


def _ledger_notes(drawn: Drawn) -> Iterator[Finding]:
    """Handovers, stages carried unlit, and branches with nothing to pay."""
    books = drawn.books
    for branch, plan in enumerate(drawn.branches):
        if plan is None:
            continue
        legs = drawn.legs_of(branch)
        for leg, row in legs:
            if books.handover[leg]:
                message = f"{drawn.part_name(books.handover[leg] - 1)} cannot go on, and another stage does"
                yield _note("handover", message, row, plan.name)
            if books.unlit[leg]:
                yield _note("unlit-aboard", "a stage is carried while one above it burns", row, plan.name)
        if not any(row.charged or row.kilograms > 0.0 for _, row in legs):
            yield Finding(
                code="nothing-to-pay",
                severity="note",
                message="no leg is charged",
                pointer=f"{plan.pointer}/legs",
                branch=plan.name,
                remedies=[],
            )


def _note(code: str, message: str, row: PlannedLeg, branch: str) -> Finding:
    """A note on a leg."""
    return Finding(
        code=code, severity="note", message=message, pointer=row.pointer, branch=branch, leg=row.index, remedies=[]
    )


def _left(drawn: Drawn) -> Iterator[Finding]:
    """Propellant that nobody burns: left in what separated, one finding a stage, or held back without a branch."""
    of = {branch.of for branch in drawn.design.mission.branches}
    told: set[int] = set()
    for load, (stage, place) in enumerate(drawn.lowered.loads):
        model = drawn.lowered.stages[stage]
        kg = left_behind(drawn, load)
        if kg > DRY_FRACTION * drawn.books.stock[load] and stage not in told:
            told.add(stage)
            behind = stage_left_behind(drawn, stage)
            yield Finding(
                code="left-behind",
                severity="note",
                message=f"{behind:.6g} kg of usable propellant leave with {model.name}",
                pointer=f"{drawn.load_pointer(load)}/mass",
                value=behind,
                unit="kg",
                remedies=[],
            )
        if model.propellants[place].held_back > 0.0 and model.name not in of:
            yield Finding(
                code="held-back-unused",
                severity="note",
                message=f"{load_name(drawn, load)} is held back, and {model.name} has no branch that may burn it",
                pointer=f"{drawn.load_pointer(load)}/held_back",
                value=model.propellants[place].held_back,
                unit="kg",
                remedies=[],
            )


def _uncharged_categories(drawn: Drawn) -> Iterator[Finding]:
    """Categories that are charged and that no rule adds contingency to, each at its first leg."""
    seen: set[str] = set()
    for branch, plan in enumerate(drawn.branches):
        for row in plan.legs if plan else ():
            if row.category is None or row.rule_index >= 0 or row.category in seen:
                continue
            if row.charged or row.kilograms > 0.0:
                seen.add(row.category)
                message = f"no rule adds contingency to the category {row.category}"
                yield _note("no-contingency", message, row, drawn.branch_name(branch))


def _ungrown_masses(drawn: Drawn) -> Iterator[Finding]:
    """The first mass item that no growth covers, its own or a rule's."""
    for pointer, masses, fallback in _mass_lists(drawn.design.vehicle):
        if has_uncovered_item(masses, drawn.rules, fallback=fallback):
            yield Finding(
                code="no-growth",
                severity="note",
                message="a mass item is covered by no growth, its own or a rule's",
                pointer=pointer,
                remedies=[],
            )
            return


def _mass_lists(vehicle: Vehicle) -> Iterator[tuple[str, MassList, float | None]]:
    """Every mass list of a vehicle, with its pointer and the growth that its part falls back on."""
    for index, stage in enumerate(vehicle.stages):
        yield f"{stage_pointer(index)}/dry_mass", stage.dry_mass, stage.mass_growth
    for index, payload in enumerate(vehicle.payloads):
        yield f"/vehicle/payloads/{index}/mass", payload.mass, None
