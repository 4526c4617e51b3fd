"""Findings: what is wrong with a design, doubtful, or worth knowing, with the field whose change would mend it."""

from collections.abc import Iterator

from burntally.model.budget import Finding
from burntally_service.budget.drawing import Drawn, Line
from burntally_service.budget.leg_books import load_name
from burntally_service.budget.limits import limit_findings, overfilled
from burntally_service.budget.plan import PlannedLeg
from burntally_service.budget.stage_books import left_behind, stage_left_behind
from burntally_service.kernels import tally_rows as rows
from burntally_service.kernels.tally_books import DRY_FRACTION
from burntally_service.vehicle.masses import has_uncovered_item

__all__ = ["findings_of", "load_pointer", "stage_pointer"]


def findings_of(drawn: Drawn) -> list[Finding]:
    """Everything that the books and the plan show, errors first.

    Parameters
    ----------
    drawn : Drawn
        The books.

    Returns
    -------
    list of Finding
        Without remedies; one for each leg and code, load and limit.
    """
    found: list[Finding] = [
        *_planned(drawn),
        *_unpaid(drawn),
        *_not_started(drawn),
        *_exchanges(drawn),
        *_boiled_dry(drawn),
        *overfilled(drawn),
        *limit_findings(drawn),
        *_feeds(drawn),
        *_ledger_notes(drawn),
        *_left(drawn),
        *_rules(drawn),
    ]
    order = {"error": 0, "warning": 1, "note": 2}
    unique: dict[tuple[str, str | None, int | None, str], Finding] = {}
    for finding in found:
        unique.setdefault(_identity(finding), finding)
    return sorted(unique.values(), key=lambda finding: order[finding.severity])


def _identity(finding: Finding) -> tuple[str, str | None, int | None, str]:
    """What two findings share that are told once: code and leg; for a part of the vehicle, code and pointer."""
    where = finding.pointer if finding.leg is None or finding.pointer.startswith("/vehicle") else ""
    return finding.code, finding.branch, finding.leg, where


def stage_pointer(stage: int) -> str:
    """Where a stage stands in the design."""
    return f"/vehicle/stages/{stage}"


def load_pointer(drawn: Drawn, load: int) -> str:
    """Where a load stands in the design."""
    stage, place = drawn.lowered.loads[load]
    return f"{stage_pointer(stage)}/propellants/{place}"


def _branch_name(drawn: Drawn, branch: int) -> str:
    plan = drawn.branches[branch]
    return plan.name if plan else ""


def _planned(drawn: Drawn) -> Iterator[Finding]:
    """What planning a leg found."""
    for branch, plan in enumerate(drawn.branches):
        for row in plan.legs if plan else ():
            for found in row.plan.findings:
                yield Finding(
                    code=found.code,
                    severity=found.severity,
                    message=found.message,
                    pointer=row.pointer + found.suffix,
                    value=found.value,
                    limit=found.limit,
                    unit=found.unit,
                    branch=_branch_name(drawn, branch),
                    leg=row.index,
                    remedies=[],
                )


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
        branch=_branch_name(drawn, drawn.lowered.legs[leg][0]),
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


def _exchanges(drawn: Drawn) -> Iterator[Finding]:
    """Legs that name a part that is not aboard, or release more than there is."""
    for line in drawn.lines:
        branch, row = drawn.lowered.legs[line.leg]
        if row is None:
            continue
        name = _branch_name(drawn, branch)
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
    if line.kind not in {rows.LINE_RELEASE, rows.LINE_HANDED} or line.delta_v == float("inf"):
        return False
    return line.kg < line.delta_v * (1.0 - DRY_FRACTION)


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
                pointer=f"{load_pointer(drawn, load)}/boiloff_per_day",
                branch=_branch_name(drawn, drawn.lowered.legs[line.leg][0]),
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
                pointer=f"{load_pointer(drawn, load)}/mass",
                value=behind,
                unit="kg",
                remedies=[],
            )
        if model.propellants[place].held_back > 0.0 and model.name not in of:
            yield Finding(
                code="held-back-unused",
                severity="note",
                message=f"{load_name(drawn, load)} is held back, and {model.name} has no branch that may burn it",
                pointer=f"{load_pointer(drawn, load)}/held_back",
                value=model.propellants[place].held_back,
                unit="kg",
                remedies=[],
            )


def _rules(drawn: Drawn) -> Iterator[Finding]:
    """Categories without a contingency rule, and mass items without growth."""
    seen: set[str] = set()
    for branch, plan in enumerate(drawn.branches):
        for row in plan.legs if plan else ():
            if row.category is None or row.rule_index >= 0 or row.category in seen:
                continue
            if row.charged or row.kilograms > 0.0:
                seen.add(row.category)
                message = f"no rule adds contingency to the category {row.category}"
                yield _note("no-contingency", message, row, _branch_name(drawn, branch))
    vehicle = drawn.design.vehicle
    stages = [
        (f"{stage_pointer(index)}/dry_mass", stage.dry_mass, stage.mass_growth)
        for index, stage in enumerate(vehicle.stages)
    ]
    payloads = [
        (f"/vehicle/payloads/{index}/mass", payload.mass, None) for index, payload in enumerate(vehicle.payloads)
    ]
    for pointer, masses, fallback in [*stages, *payloads]:
        if has_uncovered_item(masses, drawn.rules, fallback=fallback):
            yield Finding(
                code="no-growth",
                severity="note",
                message="a mass item is covered by no growth, its own or a rule's",
                pointer=pointer,
                remedies=[],
            )
            return
