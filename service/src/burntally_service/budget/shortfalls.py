"""Shortfalls: what cannot be paid, released, docked or started, with the field whose change would mend it."""

import math
from collections.abc import Iterator

from burntally.model.budget import Finding
from burntally.model.mission import Location, OrbitLocation, TakeOn
from burntally_service.budget.drawing import Drawn, Line, stage_pointer
from burntally_service.budget.leg_books import load_name
from burntally_service.budget.plan import PlannedLeg
from burntally_service.kernels import tally_rows as rows
from burntally_service.kernels.tally_books import DRY_FRACTION

__all__ = ["shortfalls"]

_ORBIT_TOLERANCES = {"periapsis": 1.0, "apoapsis": 1.0, "period": 1e-3, "inclination": 1e-6, "raan": 1e-6}
"""How far orbits may lie apart and still be one [m, s, deg]."""


_EXCHANGED = frozenset({rows.LINE_ABSENT, rows.LINE_RELEASE, rows.LINE_HANDED})
"""Lines of what should have left, and may have been too little or not there."""


def shortfalls(drawn: Drawn) -> Iterator[Finding]:
    """What cannot be paid, released, docked or started.

    Parameters
    ----------
    drawn : Drawn
        The books.

    Yields
    ------
    Finding
        Of severity error, without remedies.
    """
    yield from _unpaid(drawn)
    yield from _not_started(drawn)
    yield from _docking(drawn)
    yield from _exchanges(drawn)
    yield from _boiled_dry(drawn)


def _unpaid(drawn: Drawn) -> Iterator[Finding]:
    """What no account pays, and why."""
    books = drawn.books
    for branch, plan in enumerate(drawn.branches):
        if plan is None:
            continue
        for leg, row in drawn.legs_of(branch):
            if books.owed[leg] > 0.0:
                yield _unpaid_leg(drawn, leg, row)
        owed = books.reserve_owed[branch]
        if owed > 0.0:
            yield Finding(
                code="reserve-unpaid",
                severity="error",
                message=f"{owed:.1f} m/s of the reserve of {books.reserve[branch]:.1f} m/s cannot be held",
                pointer=plan.reserve_pointer,
                value=owed,
                limit=0.0,
                unit="m/s",
                branch=plan.name,
                remedies=[],
            )


def _unpaid_leg(drawn: Drawn, leg: int, row: PlannedLeg) -> Finding:
    """The finding of a leg that owes."""
    owed, cause = drawn.books.owed[leg], _cause(drawn, leg, row)
    named = bool(row.account[0])
    payers = ", ".join(row.account[0])
    code, pointer = "leg-unpaid", row.pointer
    message = f"{owed:.1f} m/s are owed: no stage aboard can pay them"
    if named and cause == rows.NO_IGNITION:
        engine = _exhausted_engine(drawn, drawn.lowered.tables.legs[leg].account)
        stage, place = drawn.lowered.engines[engine]
        code, pointer = "ignitions-exceeded", f"{stage_pointer(stage)}/engines/{place}"
        lacking = f"{drawn.engine_name(engine)} of {drawn.part_name(stage)}"
        message = f"{owed:.1f} m/s are owed: {lacking} has no ignition left"
    elif named:
        code, told = {
            rows.GONE: ("payer-gone", "has separated before"),
            rows.INERT: ("payer-inert", "has no engine to burn"),
        }.get(cause, ("payer-dry", "ran dry"))
        pointer = f"{row.pointer}/paid_by"
        message = f"{owed:.1f} m/s are owed: {payers} {told}"
    return Finding(
        code=code,
        severity="error",
        message=message,
        pointer=pointer,
        value=owed,
        limit=0.0,
        unit="m/s",
        branch=drawn.branch_name(drawn.lowered.legs[leg][0]),
        leg=row.index,
        remedies=[],
    )


def _cause(drawn: Drawn, leg: int, row: PlannedLeg) -> int:
    """Why a leg owes; the tally knows those payers alone that have an engine, and the others may have left too."""
    cause = drawn.books.cause[leg]
    if not row.account[0] or cause not in {rows.GONE, rows.INERT}:
        return cause
    if not _aboard(drawn, leg).intersection(row.account[0]):
        return rows.GONE
    return rows.DRY if cause == rows.GONE else cause


def _aboard(drawn: Drawn, leg: int) -> set[str]:
    """Stages in the branch of a leg when it ends."""
    where = [0] * len(drawn.lowered.stages)
    for line in drawn.lines[: drawn.books.line_end[leg]]:
        if line.kind == rows.LINE_SEPARATION:
            where[line.part] = line.purpose
        elif line.kind == rows.LINE_DOCKED:
            where[line.part] = drawn.lowered.legs[line.leg][0]
    branch = drawn.lowered.legs[leg][0]
    return {drawn.part_name(stage) for stage, at in enumerate(where) if at == branch}


def _exhausted_engine(drawn: Drawn, account: int) -> int:
    """First engine of an account that has used all its ignitions."""
    tables = drawn.lowered.tables
    stages = len(tables.stages)
    for stage in range(stages):
        burner = tables.burner_of[account * stages + stage]
        if burner >= 0:
            row = tables.burners[burner]
            for engine in tables.lit[row.first_lit : row.end_lit]:
                if drawn.books.used[engine] >= tables.engines[engine].max_ignitions:
                    return engine
    return 0


def _not_started(drawn: Drawn) -> Iterator[Finding]:
    """Branches whose part never separated."""
    for index, branch in enumerate(drawn.design.mission.branches):
        if drawn.branches[index + 1] is None:
            yield Finding(
                code="branch-not-started",
                severity="error",
                message=f"{branch.of} starts no branch of its own: it stays, or leaves with a part that has one",
                pointer=f"/mission/branches/{index}/of",
                branch=branch.of,
                remedies=[],
            )


def _docking(drawn: Drawn) -> Iterator[Finding]:
    """Docking between orbits that differ; where one of them is not known, nobody can tell."""
    ends = {plan.part: plan.end for plan in drawn.branches if plan}
    for branch, plan in enumerate(drawn.branches):
        for row in plan.legs if plan else ():
            docked = row.leg.branch if isinstance(row.leg, TakeOn) else None
            if docked and _lie_apart(ends.get(docked), row.start):
                yield Finding(
                    code="orbit-mismatch",
                    severity="error",
                    message=f"what is left of {docked} ends on another orbit than the one that it is to be taken on in",
                    pointer=f"{row.pointer}/branch",
                    branch=drawn.branch_name(branch),
                    leg=row.index,
                    remedies=[],
                )


def _lie_apart(one: Location | None, other: Location | None) -> bool:
    """Tell whether two locations are orbits that differ in anything that both of them tell."""
    if not isinstance(one, OrbitLocation) or not isinstance(other, OrbitLocation):
        return False
    if one.body != other.body:
        return True
    for name, tolerance in _ORBIT_TOLERANCES.items():
        left, right = _element(one, name), _element(other, name)
        if left is not None and right is not None and abs(left - right) > tolerance:
            return True
    return False


def _element(orbit: OrbitLocation, name: str) -> float | None:
    """An element of an orbit, the altitude of a circular one for both apsides."""
    value: float | None = getattr(orbit, name)
    return orbit.altitude if value is None and name in {"periapsis", "apoapsis"} else value


def _exchanges(drawn: Drawn) -> Iterator[Finding]:
    """Legs that name a part that is not aboard, or release more than there is."""
    for line in drawn.lines:
        if line.kind not in _EXCHANGED:
            continue
        branch, row = drawn.lowered.legs[line.leg]
        if row is None:
            continue
        name = drawn.branch_name(branch)
        if line.kind == rows.LINE_ABSENT:
            yield Finding(
                code="part-absent",
                severity="error",
                message=f"{drawn.part_name(line.part)} is not aboard when the leg needs it",
                pointer=row.pointer,
                branch=name,
                leg=row.index,
                remedies=[],
            )
        elif _is_short(line):
            wanted, there = line.delta_v, line.kg
            yield Finding(
                code="release-short",
                severity="error",
                message=f"the leg releases {wanted:.6g} kg and {there:.6g} kg are there",
                pointer=row.pointer,
                value=wanted,
                limit=there,
                unit="kg",
                branch=name,
                leg=row.index,
                remedies=[],
            )


def _is_short(line: Line) -> bool:
    """Tell whether a release asked for more than there was."""
    return line.delta_v != math.inf and line.kg < line.delta_v * (1.0 - DRY_FRACTION)


def _boiled_dry(drawn: Drawn) -> Iterator[Finding]:
    """Loads that boiled off before a charge that could then not be paid."""
    dried: dict[int, Line] = {}
    for line in drawn.lines:
        if line.kind == rows.LINE_BOILED and line.mask:
            dried.setdefault(line.part, line)
    told: set[int] = set()
    for load, line in dried.items():
        stage = drawn.lowered.loads[load][0]
        if stage not in told and _missed_later(drawn, stage, line):
            told.add(stage)
            yield Finding(
                code="boiled-dry",
                severity="error",
                message=f"{load_name(drawn, load)} boils dry before a later charge that it was to pay",
                pointer=f"{drawn.load_pointer(load)}/boiloff_per_day",
                branch=drawn.branch_name(drawn.lowered.legs[line.leg][0]),
                leg=getattr(drawn.lowered.legs[line.leg][1], "index", None),
                remedies=[],
            )


def _missed_later(drawn: Drawn, stage: int, line: Line) -> bool:
    """Tell whether a leg at or after a line owes, and its account could have drawn on a stage."""
    tables = drawn.lowered.tables
    branch = drawn.lowered.legs[line.leg][0]
    for leg in range(line.leg, len(tables.legs)):
        row = tables.legs[leg]
        owes = drawn.books.owed[leg] > 0.0 or (row.reserves and drawn.books.reserve_owed[branch] > 0.0)
        if row.branch == branch and owes and tables.burner_of[row.account * len(tables.stages) + stage] >= 0:
            return True
    return False
