"""Limits: what a design must keep to, held against what the books and the plan show."""

from collections.abc import Callable, Iterator

from burntally.model.budget import Finding
from burntally.model.mission import Ascend, Site
from burntally_service.budget.drawing import Drawn, Line, Lit
from burntally_service.budget.leg_books import local_gravity
from burntally_service.budget.plan import PlannedLeg
from burntally_service.kernels import tally_rows as rows

__all__ = ["limit_findings", "overfilled"]

_ROUNDING = 1e-12


def _limit(drawn: Drawn, name: str) -> float | None:
    """A limit of the rules; None where there is none or it was lifted."""
    value = getattr(drawn.rules.limits, name) if drawn.rules.limits else None
    return value if isinstance(value, float) else None


def _pointer(drawn: Drawn, name: str) -> str:
    """Where a limit stands: itself, or the nearest ancestor in the design where a preset gave it."""
    stated = drawn.design.rules.limits
    if stated is None:
        return "/rules"
    return f"/rules/limits/{name}" if isinstance(getattr(stated, name), float) else "/rules/limits"


def limit_findings(drawn: Drawn) -> Iterator[Finding]:
    """Limits that are passed, one finding for each leg and limit.

    Parameters
    ----------
    drawn : Drawn
        The books.

    Yields
    ------
    Finding
        Without remedies.
    """
    yield from _burn_limits(drawn)
    yield from _durations(drawn)
    yield from _periapsides(drawn)
    yield from _lift_off(drawn)


def _lit(drawn: Drawn, line: Line) -> Lit:
    """The engines that a line says were lit."""
    return drawn.lit(drawn.lowered.tables.burners[line.part].stage, line.mask)


def _burn_limits(drawn: Drawn) -> Iterator[Finding]:
    """Acceleration at burn-out, and the time of one burn."""
    checks: list[tuple[str, str, str, Callable[[Line, float, float], float]]] = [
        ("acceleration_max", "acceleration-high", "m/s2", lambda line, thrust, _: thrust / (line.mass - line.kg)),
        ("burn_time_max", "burn-time-long", "s", lambda line, _, mdot: line.kg / mdot),
    ]
    for name, code, unit, measure in checks:
        limit = _limit(drawn, name)
        if limit is None:
            continue
        for line in drawn.lines:
            if line.kind == rows.LINE_BURN:
                lit = _lit(drawn, line)
                value = measure(line, lit.thrust, lit.mdot)
                if value > limit:
                    yield _passed(drawn, line.leg, (name, code, unit), (value, limit))


def _passed(drawn: Drawn, leg: int, what: tuple[str, str, str], numbers: tuple[float, float]) -> Finding:
    """The finding of a limit that is passed within a leg."""
    name, code, unit = what
    value, limit = numbers
    branch, row = drawn.lowered.legs[leg]
    return Finding(
        code=code,
        severity="error",
        message=f"{value:.6g} {unit} passes the limit {name} of {limit:.6g} {unit}",
        pointer=_pointer(drawn, name),
        value=value,
        limit=limit,
        unit=unit,
        branch=drawn.branch_name(branch),
        leg=row.index if row else None,
        remedies=[],
    )


def _durations(drawn: Drawn) -> Iterator[Finding]:
    """How long each branch takes."""
    limit = _limit(drawn, "duration_max")
    for branch, plan in enumerate(drawn.branches):
        if limit is None or plan is None:
            continue
        took = drawn.books.branch_clock[branch] - plan.start_elapsed
        if took > limit:
            last = drawn.legs_of(branch)[-1][0]
            yield _passed(drawn, last, ("duration_max", "duration-long", "s"), (took, limit))


def _periapsides(drawn: Drawn) -> Iterator[Finding]:
    """How low each computed leg passes."""
    limit = _limit(drawn, "periapsis_min")
    for leg, (_, row) in enumerate(drawn.lowered.legs):
        if limit is None or row is None or row.plan.lowest_periapsis is None:
            continue
        if row.plan.lowest_periapsis < limit:
            yield _passed(drawn, leg, ("periapsis_min", "periapsis-low", "m"), (row.plan.lowest_periapsis, limit))


def _lift_off(drawn: Drawn) -> Iterator[Finding]:
    """Thrust-to-weight where a leg lifts off from a site, in vacuum thrust and local gravity."""
    for leg, (_, row) in enumerate(drawn.lowered.legs):
        if row is None or not isinstance(row.leg, Ascend) or not isinstance(row.start, Site):
            continue
        value = _first_thrust_to_weight(drawn, leg, row)
        limit = _limit(drawn, "liftoff_thrust_to_weight_min")
        if value is None:
            continue
        if value <= 1.0:
            yield _cannot_lift(drawn, leg, row, value)
        elif limit is not None and value < limit:
            what = ("liftoff_thrust_to_weight_min", "thrust-to-weight-low", "")
            yield _passed(drawn, leg, what, (value, limit))


def _first_thrust_to_weight(drawn: Drawn, leg: int, row: PlannedLeg) -> float | None:
    """Thrust-to-weight of the first burn of a leg; None if it has none."""
    gravity = local_gravity(drawn, row)
    for line in drawn.lines:
        if line.leg == leg and line.kind == rows.LINE_BURN and gravity is not None:
            return _lit(drawn, line).thrust / (line.mass * gravity)
    return None


def _cannot_lift(drawn: Drawn, leg: int, row: PlannedLeg, value: float) -> Finding:
    """The finding of a stack that stays on the ground."""
    return Finding(
        code="cannot-lift-off",
        severity="error",
        message=f"thrust-to-weight at lift-off is {value:.3f}, in vacuum thrust",
        pointer=row.pointer,
        value=value,
        limit=1.0,
        branch=drawn.branch_name(drawn.lowered.legs[leg][0]),
        leg=row.index,
        remedies=[],
    )


def overfilled(drawn: Drawn) -> Iterator[Finding]:
    """Loads above their capacity, or above the share of it that the rules allow, at the start or when taken on."""
    share = _limit(drawn, "fill_max")
    highest: dict[int, float] = {}
    for load, row in enumerate(drawn.lowered.tables.loads):
        highest[load] = row.mass
    for line in drawn.lines:
        if line.kind == rows.LINE_TAKEN:
            highest[line.part] = max(highest[line.part], line.delta_v + line.kg)
    for load, kg in highest.items():
        capacity = drawn.lowered.tables.loads[load].capacity
        limit = capacity if share is None else share * capacity
        # A load stated as share times capacity may lie above it by a rounding, and is no more than may be loaded.
        if kg > limit * (1.0 + _ROUNDING):
            stage, place = drawn.lowered.loads[load]
            model = drawn.lowered.stages[stage]
            of = "" if share is None else f": fill_max {share:.6g} of {capacity:.6g} kg"
            yield Finding(
                code="overfilled",
                severity="error",
                message=f"{kg:.6g} kg of {model.propellants[place].name} in {model.name} pass the "
                f"{limit:.6g} kg that may be loaded{of}",
                pointer=f"{drawn.load_pointer(load)}/mass",
                value=kg,
                limit=limit,
                unit="kg",
                remedies=[],
            )
