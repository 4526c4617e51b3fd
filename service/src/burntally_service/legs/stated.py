"""Legs whose cost is stated: one manoeuvre, no clock time; where such a leg ends is the same as if it were computed."""

from collections.abc import Mapping

from burntally.model.mission import (
    Ascend,
    Deorbit,
    Flyby,
    Land,
    Leg,
    Location,
    Orbit,
    OrbitLocation,
    Rendezvous,
    Site,
    Spiral,
    Transfer,
    Transit,
)
from burntally_service.bodies import Body
from burntally_service.legs.deorbit import deorbited
from burntally_service.legs.orbit import body_named, location_after, size_of
from burntally_service.legs.planned import LegPlan, PlannedManoeuvre

__all__ = ["plan_stated"]


_INTO_ORBIT = (Ascend, Transit, Transfer, Spiral)


def plan_stated(
    leg: Leg, delta_v: float, start: Location | None, bodies: Mapping[str, Body], *, pointer: str = ""
) -> LegPlan:
    """Plan a leg that states its cost.

    Parameters
    ----------
    leg : Leg
        The leg.
    delta_v : float
        Its cost, [m/s].
    start : Location or None
        Where it starts.
    bodies : mapping of str to Body
        Bodies of the mission.
    pointer : str
        JSON Pointer to the leg, for errors.

    Returns
    -------
    LegPlan
        One manoeuvre, even if it costs nothing: a rule may still add to it.

    Raises
    ------
    burntally.model.errors.UncomputableError
        If the target is no orbit about its body.
    """
    body = None if start is None else start.body
    manoeuvre = PlannedManoeuvre(name="stated", body=body, delta_v=delta_v)
    return LegPlan(source="stated", manoeuvres=(manoeuvre,), end=_end(leg, start, bodies, pointer))


def _end(leg: Leg, start: Location | None, bodies: Mapping[str, Body], pointer: str) -> Location | None:
    """Where a leg ends."""
    if isinstance(leg, _INTO_ORBIT):
        return _reached(leg.to, start, bodies, f"{pointer}/to")
    if isinstance(leg, Rendezvous):
        return start if leg.to is None else _reached(leg.to, start, bodies, f"{pointer}/to")
    if isinstance(leg, Deorbit):
        return deorbited(leg, start, bodies, pointer=pointer)
    if isinstance(leg, Land):
        return _landed(leg, start)
    return None if isinstance(leg, Flyby) else start


def _reached(to: Orbit, start: Location | None, bodies: Mapping[str, Body], pointer: str) -> OrbitLocation | None:
    """Orbit reached, with absent elements carried over from an orbit about the same body; None without a size."""
    name = to.body or (None if start is None else start.body)
    if name is None:
        return None
    body = body_named(name, bodies, pointer=f"{pointer}/body")
    before = start if isinstance(start, OrbitLocation) and start.body == name else None
    sized = before is not None and size_of(before, body, pointer="") is not None
    if not sized and size_of(to, body, pointer=pointer) is None:
        return None
    return location_after(to, before, body, argument_of_periapsis=None if before is None else _kept_apse(to, before))


def _kept_apse(to: Orbit, before: OrbitLocation) -> float | None:
    """Argument of periapsis where neither size nor plane is asked to change [deg]."""
    moved = (to.altitude, to.periapsis, to.apoapsis, to.inclination, to.raan)
    return before.argument_of_periapsis if all(element is None for element in moved) else None


def _landed(leg: Land, start: Location | None) -> Site | None:
    """Site of a landing; None where nobody says which."""
    if leg.site is None or start is None or start.body is None:
        return None
    return Site(body=start.body, latitude=leg.site.latitude, longitude=leg.site.longitude, altitude=leg.site.altitude)
