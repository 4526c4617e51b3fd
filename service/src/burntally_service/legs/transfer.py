"""A transfer: from the orbit flown, or an approaching hyperbola, to an orbit about the same body."""

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace

from burntally.model.budget import Caution
from burntally.model.errors import UncomputableError, Violation
from burntally.model.mission import Hyperbola, Location, Orbit, OrbitLocation, Transfer
from burntally_service.bodies import Body
from burntally_service.kernels.ellipses import Place
from burntally_service.kernels.hyperbolas import hyperbolic_excess_speed, hyperbolic_speed
from burntally_service.kernels.planes import Crossing, crossing
from burntally_service.legs.errand import COPLANAR, Errand
from burntally_service.legs.orbit import Size, body_named, location_after, radians_or_none, size_after, size_of
from burntally_service.legs.path import Path
from burntally_service.legs.planned import LegPlan, PlanFinding, unplanned
from burntally_service.legs.weigh import Choice, choose, extent

__all__ = ["plan_transfer"]

# Planes nearer to each other than this are one: an angle turned whole turns on is off by rounding [rad].
_ONE_PLANE = 1e-12

_LINE_ASSUMED = Caution(
    code="line-of-nodes-assumed",
    message="the argument of periapsis is not known: the apse line is taken to lie on the line of nodes",
)
_AIM_ASSUMED = Caution(
    code="asymptote-assumed",
    message="the arrival is taken to be aimed into the plane asked for; its asymptote must allow that inclination",
)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Asked:
    """A transfer made out: its geometry, the orbit that absent elements are carried over from, what is assumed."""

    errand: Errand
    start: OrbitLocation
    cautions: tuple[Caution, ...] = ()


def plan_transfer(leg: Transfer, start: Location | None, bodies: Mapping[str, Body], *, pointer: str = "") -> LegPlan:
    """Plan a transfer.

    Parameters
    ----------
    leg : Transfer
        The leg; its cost is not stated.
    start : Location or None
        Where it starts; the first burn is wherever on that orbit it is cheapest.
    bodies : mapping of str to Body
        Bodies of the mission.
    pointer : str
        JSON Pointer to the leg, for errors.

    Returns
    -------
    LegPlan
        The cheapest way that the leg's strategy and limits allow, or a finding.

    Raises
    ------
    burntally.model.errors.UncomputableError
        If the target is no orbit about the body, or a bi-elliptic transfer is asked for without a bound.
    """
    _check_strategy(leg, pointer)
    if start is None or start.body is None or not isinstance(start, OrbitLocation | Hyperbola):
        return unplanned(_lost("a transfer starts from an orbit, and where this leg starts is not one"))
    body = body_named(start.body, bodies, pointer=f"{pointer}/to/body")
    if leg.to.body not in {None, body.name}:
        message = f"the leg starts at {body.name}; use a transit to reach {leg.to.body}"
        return unplanned(PlanFinding(code="wrong-body", message=message, suffix="/to/body"))
    if isinstance(start, Hyperbola):
        asked = _from_hyperbola(leg, start, body, pointer)
    else:
        asked = _from_orbit(leg, start, body, pointer)
    if isinstance(asked, PlanFinding):
        return unplanned(asked, _meant_end(leg, start, body, pointer))
    return _planned(leg, asked, choose(asked.errand, leg, body), body)


def _planned(leg: Transfer, asked: _Asked, choice: Choice, body: Body) -> LegPlan:
    """Put the way that was chosen into a plan."""
    errand, path = asked.errand, choice.path
    findings = () if choice.finding is None else (choice.finding,)
    if path is None:
        return LegPlan(source="computed", end=_end(leg, asked, None, body), findings=findings)
    low, high = extent(path, errand)
    return LegPlan(
        source="computed",
        manoeuvres=tuple(step.manoeuvre(body.name) for step in path.steps),
        end=_end(leg, asked, path, body),
        strategy=path.family if path.steps else None,
        alternatives=choice.alternatives,
        findings=findings,
        cautions=asked.cautions + _reach(high, body),
        lowest_periapsis=body.altitude_at(low),
    )


def _end(leg: Transfer, asked: _Asked, path: Path | None, body: Body) -> OrbitLocation:
    """Tell where the transfer ends."""
    argp = asked.start.argument_of_periapsis
    if path is None or path.apse is None:
        argp = None
    elif argp is not None and path.steps:
        # Without a burn the stated angle stays as it is, since radians and back would change its last digit.
        argp = math.degrees(path.apse) % 360.0
    return location_after(leg.to, asked.start, body, argument_of_periapsis=argp)


def _from_orbit(leg: Transfer, start: OrbitLocation, body: Body, pointer: str) -> _Asked | PlanFinding:
    """Make out what is asked from an orbit, or why that cannot be told."""
    size = size_of(start, body, pointer="")
    if size is None:
        return _lost("the size of the orbit that this leg starts from is not known")
    turn = _turn(leg, start)
    if isinstance(turn, PlanFinding):
        return turn
    final = size_after(leg.to, size, body, pointer=f"{pointer}/to")
    apse_f = radians_or_none(leg.to.argument_of_periapsis)
    errand = Errand(mu=body.mu, initial=size, final=final, apse_f=apse_f, turn=turn)
    known = radians_or_none(start.argument_of_periapsis)
    if known is not None and not size.is_circular:
        return _Asked(errand=replace(errand, apse_i=known), start=start)
    # An unknown apse line is taken on the line of nodes; a circle has none, and the first burn may be anywhere.
    assumed = not size.is_circular and (errand.turns or errand.asks_apse)
    errand = replace(errand, apse_i=turn.argument_i if errand.turns else 0.0)
    return _Asked(errand=errand, start=start, cautions=(_LINE_ASSUMED,) if assumed else ())


def _turn(leg: Transfer, start: OrbitLocation) -> Crossing | PlanFinding:
    """Turn of the plane that is asked, or why it cannot be told."""
    to = leg.to
    if to.inclination is None and to.raan is None:
        return COPLANAR
    if start.inclination is None:
        message = "the plane that this leg starts in is not known, so the change of plane cannot be told"
        return PlanFinding(
            code="plane-unknown", message=message, suffix="/to/raan" if to.inclination is None else "/to/inclination"
        )
    inc_i = math.radians(start.inclination)
    inc_f = inc_i if to.inclination is None else math.radians(to.inclination)
    if to.raan is None or not (0.0 < inc_i < math.pi and 0.0 < inc_f < math.pi):
        # An orbit in the equator has no node of its own: the other's serves both.
        return _told(crossing(inc_i, 0.0, inc_f, 0.0))
    if start.raan is None:
        message = "the node of the orbit that this leg starts from is not known, so the turn to another cannot be told"
        return PlanFinding(code="node-unknown", message=message, suffix="/to/raan")
    return _told(crossing(inc_i, math.radians(start.raan), inc_f, math.radians(to.raan)))


def _told(turn: Crossing) -> Crossing:
    """Turn of the plane with what is rounding left out."""
    return turn if turn.angle > _ONE_PLANE else turn._replace(angle=0.0)


def _from_hyperbola(leg: Transfer, start: Hyperbola, body: Body, pointer: str) -> _Asked | PlanFinding:
    """Make out what is asked of a capture, or why that cannot be told."""
    if not start.approaching:
        return _lost("a capture is burned at the periapsis of a hyperbola, and this one departs from the body")
    if leg.to.raan is not None:
        message = "the asymptote of the arrival is not known, so no node can be aimed at"
        return PlanFinding(code="node-unknown", message=message, suffix="/to/raan")
    pass_altitude = _pass_altitude(leg, start)
    if pass_altitude is None:
        return _lost("neither the arrival nor the target says at which periapsis the capture is burned")
    before = OrbitLocation(periapsis=pass_altitude)
    size = _captured_size(leg, before, body, pointer)
    if size is None:
        return _lost("a capture needs an apoapsis or a period", "/to")
    r = body.radius_at(pass_altitude)
    v = hyperbolic_speed(body.mu, r, hyperbolic_excess_speed(start.c3))
    if not (r > 0.0 and math.isfinite(v)):
        return _lost("the arrival has no excess speed, so it is no hyperbola")
    apse_f = radians_or_none(leg.to.argument_of_periapsis)
    errand = Errand(mu=body.mu, initial=size, arriving=Place(r, 0.0, v), final=size, apse_f=apse_f)
    aimed = (_AIM_ASSUMED,) if leg.to.inclination is not None or apse_f is not None else ()
    return _Asked(errand=errand, start=before, cautions=aimed)


def _pass_altitude(leg: Transfer, start: Hyperbola) -> float | None:
    """Altitude at which the hyperbola passes: its own, or else the one that the target aims it at [m]."""
    if start.periapsis is not None:
        return start.periapsis
    return leg.to.altitude if leg.to.periapsis is None else leg.to.periapsis


def _captured_size(leg: Transfer, before: OrbitLocation, body: Body, pointer: str) -> Size | None:
    """Size of the orbit that is captured into; None where the target leaves it open."""
    size = size_of(leg.to, body, pointer=f"{pointer}/to")
    if size is not None or leg.to.apoapsis is None or before.periapsis is None:
        return size
    low = size_of(Orbit(altitude=before.periapsis), body, pointer=f"{pointer}/to")
    return None if low is None else size_after(leg.to, low, body, pointer=f"{pointer}/to")


def _meant_end(leg: Transfer, start: Location, body: Body, pointer: str) -> OrbitLocation | None:
    """Where a leg that cannot be planned was meant to end, so that the legs after it can be."""
    before = start if isinstance(start, OrbitLocation) else None
    sized = size_of(leg.to, body, pointer=f"{pointer}/to") is not None
    if not sized and (before is None or size_of(before, body, pointer="") is None):
        return None
    return location_after(leg.to, before, body, argument_of_periapsis=None)


def _reach(r_max: float, body: Body) -> tuple[Caution, ...]:
    """Caution where a way leads beyond the sphere of influence."""
    if r_max <= body.soi_radius:
        return ()
    message = f"the path leaves the sphere of influence of {body.name}, where two bodies no longer tell the truth"
    return (Caution(code="sphere-of-influence", message=message),)


def _check_strategy(leg: Transfer, pointer: str) -> None:
    """Refuse a bi-elliptic transfer that nothing bounds: the farther it goes, the cheaper it seems."""
    if leg.strategy == "bielliptic" and leg.apoapsis_max is None and leg.time_limit is None:
        message = "is bi-elliptic, and nothing bounds how far out it goes"
        wanted = "apoapsis_max or time_limit beside it"
        pointer = f"{pointer}/strategy"
        raise UncomputableError([Violation(pointer=pointer, message=message, read='"bielliptic"', expected=wanted)])


def _lost(message: str, suffix: str = "") -> PlanFinding:
    """Finding for a leg that needs what its start does not give."""
    return PlanFinding(code="location-unknown", message=message, suffix=suffix)
