"""A deorbit: one burn at the apoapsis that lowers the periapsis."""

from collections.abc import Mapping

from burntally.model.mission import Deorbit, Location, Orbit, OrbitLocation
from burntally_service.bodies import Body
from burntally_service.kernels.half_turns import Impulse
from burntally_service.kernels.manoeuvres import Apsis, apsis_change
from burntally_service.legs.orbit import Size, body_named, location_after, size_after, size_of
from burntally_service.legs.path import BURN_LEAST, Step
from burntally_service.legs.planned import LegPlan, PlanFinding, unplanned

__all__ = ["deorbited", "plan_deorbit"]


def plan_deorbit(leg: Deorbit, start: Location | None, bodies: Mapping[str, Body], *, pointer: str = "") -> LegPlan:
    """Plan a deorbit.

    Parameters
    ----------
    leg : Deorbit
        The leg; its cost is not stated.
    start : Location or None
        Where it starts.
    bodies : mapping of str to Body
        Bodies of the mission.
    pointer : str
        JSON Pointer to the leg, for errors.

    Returns
    -------
    LegPlan
        One burn; none where the periapsis is as low already. The path is meant to come down, so its lowest point is
        not told, and meeting the ground is no finding.

    Raises
    ------
    burntally.model.errors.UncomputableError
        If the periapsis is at or beyond the centre of the body.
    """
    lowered = _lowered(leg, start, bodies, pointer)
    if lowered is None:
        message = "a deorbit starts from an orbit, and where this leg starts is not one"
        return unplanned(PlanFinding(code="location-unknown", message=message))
    body, size, r_peri, end = lowered
    burn = apsis_change(body.mu, Apsis(size.r_apo, size.r_peri), r_peri, 0.0)
    impulse = Impulse(burn.dv, 0.0, burn.transverse, burn.normal, burn.plane_change)
    step = Step(name="lower periapsis", place="apoapsis", r=size.r_apo, impulse=impulse)
    manoeuvres = (step.manoeuvre(body.name),) if burn.dv > BURN_LEAST else ()
    return LegPlan(source="computed", manoeuvres=manoeuvres, end=end, strategy="one_burn" if manoeuvres else None)


def deorbited(
    leg: Deorbit, start: Location | None, bodies: Mapping[str, Body], *, pointer: str = ""
) -> OrbitLocation | None:
    """Orbit after a deorbit; None where the start is no orbit.

    A periapsis that is lower already stays: a deorbit never raises.
    """
    lowered = _lowered(leg, start, bodies, pointer)
    return None if lowered is None else lowered[-1]


def _lowered(
    leg: Deorbit, start: Location | None, bodies: Mapping[str, Body], pointer: str
) -> tuple[Body, Size, float, OrbitLocation] | None:
    """Body, size before, radius of the periapsis after, and where the leg ends; None where the start is no orbit."""
    if not isinstance(start, OrbitLocation) or start.body is None:
        return None
    body = body_named(start.body, bodies, pointer=f"{pointer}/periapsis")
    size = size_of(start, body, pointer="")
    if size is None:
        return None
    to = Orbit(periapsis=leg.periapsis)
    final = size_after(to, size, body, pointer=pointer)
    if final.r_peri >= size.r_peri:
        return body, size, size.r_peri, start
    end = location_after(to, start, body, argument_of_periapsis=start.argument_of_periapsis)
    return body, size, final.r_peri, end
