"""A coast: time that passes, with or without upkeep."""

from typing import Literal

from burntally.model.mission import Coast, Location
from burntally_service.kernels.constants import JULIAN_YEAR
from burntally_service.legs.epochs import seconds_between
from burntally_service.legs.planned import Clock, LegPlan, PlanFinding, PlannedManoeuvre

__all__ = ["plan_coast"]


def plan_coast(leg: Coast, start: Location | None, clock: Clock) -> LegPlan:
    """Plan a coast.

    Parameters
    ----------
    leg : Coast
        The leg.
    start : Location or None
        Where it starts, and ends.
    clock : Clock
        When it starts.

    Returns
    -------
    LegPlan
        Its time, and its upkeep at the end of it; a date that has passed is a finding.
    """
    duration = _duration(leg, clock)
    if isinstance(duration, PlanFinding):
        return LegPlan(source="none", end=start, findings=(duration,))
    upkeep = leg.delta_v
    if upkeep is None and leg.upkeep_per_year is not None:
        upkeep = leg.upkeep_per_year * (duration / JULIAN_YEAR)
    if upkeep is None:
        return LegPlan(source="none", coast_after=duration, end=start)
    manoeuvre = PlannedManoeuvre(
        name="upkeep",
        body=None if start is None else start.body,
        coast_before=duration,
        delta_v=upkeep,
        purpose="upkeep",
    )
    source: Literal["computed", "stated"] = "computed" if leg.delta_v is None else "stated"
    return LegPlan(source=source, manoeuvres=(manoeuvre,), end=start)


def _duration(leg: Coast, clock: Clock) -> float | PlanFinding:
    """How long the coast takes [s], or why that cannot be."""
    if leg.until is None:
        return leg.duration or 0.0
    if clock.epoch is None:
        message = "a coast until a date needs the epoch of the mission"
        return PlanFinding(code="time-limit", message=message, suffix="/until")
    duration = seconds_between(clock.epoch, leg.until) - clock.elapsed
    if duration >= 0.0:
        return duration
    message = f"the date has passed {-duration:.6g} s before the leg starts"
    return PlanFinding(code="time-limit", message=message, suffix="/until", value=duration, limit=0.0, unit="s")
