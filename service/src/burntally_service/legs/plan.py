"""Planning a leg, whatever its kind."""

import math
from collections.abc import Mapping

from msgspec import structs

from burntally.model.mission import (
    Allowance,
    ChargedLeg,
    Coast,
    Deorbit,
    Land,
    Leg,
    Location,
    OrbitLocation,
    Transfer,
)
from burntally_service.bodies import Body
from burntally_service.legs.coast import plan_coast
from burntally_service.legs.deorbit import plan_deorbit
from burntally_service.legs.orbit import body_named, size_of
from burntally_service.legs.planned import Clock, LegPlan, PlanFinding
from burntally_service.legs.stated import plan_stated
from burntally_service.legs.transfer import plan_transfer

__all__ = ["plan_leg"]


_ENDING_ELSEWHERE = (Allowance, Land)


def plan_leg(
    leg: Leg, start: Location | None, *, bodies: Mapping[str, Body], clock: Clock, pointer: str = ""
) -> LegPlan:
    """Plan a leg: which manoeuvres it needs from a location, and where it ends.

    Parameters
    ----------
    leg : Leg
        The leg.
    start : Location or None
        Where it starts; None where nobody can know.
    bodies : mapping of str to Body
        Bodies of the mission.
    clock : Clock
        When it starts.
    pointer : str
        JSON Pointer to the leg, for errors.

    Returns
    -------
    LegPlan
        The plan; a leg that cannot be planned has a finding of severity error, and no manoeuvres.

    Raises
    ------
    burntally.model.errors.UncomputableError
        If the leg names an unknown body, or an orbit that is none.
    """
    plan = _plan(leg, start, bodies, clock, pointer)
    note = _entering(leg, start, bodies)
    return plan if note is None else structs.replace(plan, findings=(*plan.findings, note))


def _plan(leg: Leg, start: Location | None, bodies: Mapping[str, Body], clock: Clock, pointer: str) -> LegPlan:
    """Plan a leg by its kind."""
    if isinstance(leg, Coast):
        return plan_coast(leg, start, clock)
    if isinstance(leg, Allowance) and leg.delta_v is None:
        # Kilograms are the budget's: there is nothing to fly.
        return LegPlan(source="stated", end=start)
    if not isinstance(leg, ChargedLeg):
        return LegPlan(source="none", end=start)
    if isinstance(leg, Transfer) and leg.delta_v is None:
        return plan_transfer(leg, start, bodies, pointer=pointer)
    if isinstance(leg, Deorbit) and leg.delta_v is None:
        return plan_deorbit(leg, start, bodies, pointer=pointer)
    return plan_stated(leg, getattr(leg, "delta_v", None) or 0.0, start, bodies, pointer=pointer)


def _entering(leg: Leg, start: Location | None, bodies: Mapping[str, Body]) -> PlanFinding | None:
    """Note that a leg goes on from an orbit whose periapsis is in the air."""
    if not isinstance(leg, ChargedLeg) or isinstance(leg, _ENDING_ELSEWHERE):
        return None
    if not isinstance(start, OrbitLocation) or start.body is None:
        return None
    body = body_named(start.body, bodies, pointer="/start/body")
    size = size_of(start, body, pointer="/start")
    altitude = math.inf if size is None else body.altitude_at(size.r_peri)
    if body.atmosphere_top <= 0.0 or altitude >= body.atmosphere_top:
        return None
    message = f"the leg goes on from an orbit whose periapsis, at {altitude:.6g} m, is in the air of {body.name}"
    return PlanFinding(
        code="entering", severity="note", message=message, value=altitude, limit=body.atmosphere_top, unit="m"
    )
