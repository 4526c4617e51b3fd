"""Orbits as legs compute with them: radii from the centre of the body, and angles in radians.

Altitudes of the contract become radii here and nowhere else. Where an orbit is told back, its altitudes are those that
the design stated, wherever the burns left them alone, so that no rounding creeps into a row of legs.
"""

import math
from collections.abc import Mapping

from msgspec import Struct

from burntally.model.errors import UncomputableError, Violation
from burntally.model.mission import Hyperbola, Location, Orbit, OrbitLocation
from burntally.model.names import unknown_name
from burntally_service.bodies import Body
from burntally_service.kernels.ellipses import Place, apsis_place, ellipse_place
from burntally_service.kernels.orbits import opposite_apsis, semi_major_axis

__all__ = [
    "Size",
    "body_named",
    "check_start",
    "location_after",
    "radians_or_none",
    "size_after",
    "size_of",
]

# Below this share of the radius, apsides are one and the same: a circle.
_CIRCULAR = 1e-9
# Nearer than this to an apsis, a place is the apsis [rad].
_AT_APSIS = 1e-9


class Size(Struct, frozen=True, kw_only=True):
    """Size and form of an ellipse.

    Attributes
    ----------
    r_peri : float
        Radius of the periapsis, > 0, [m].
    r_apo : float
        Radius of the apoapsis, >= r_peri, [m].
    """

    r_peri: float
    r_apo: float

    def __post_init__(self) -> None:
        if not 0.0 < self.r_peri <= self.r_apo < math.inf:
            raise ValueError(f"no ellipse: periapsis {self.r_peri} m, apoapsis {self.r_apo} m from the centre")

    @property
    def is_circular(self) -> bool:
        """Whether periapsis and apoapsis are one."""
        return self.r_apo - self.r_peri <= _CIRCULAR * self.r_apo

    def place(self, mu: float, nu: float) -> Place:
        """Radius and speeds at a true anomaly; at an apsis, to the last digit."""
        from_apoapsis = abs(math.remainder(nu - math.pi, math.tau))
        if abs(math.remainder(nu, math.tau)) <= _AT_APSIS or self.is_circular:
            return apsis_place(mu, self.r_peri, self.r_apo)
        if from_apoapsis <= _AT_APSIS:
            return apsis_place(mu, self.r_apo, self.r_peri)
        return ellipse_place(mu, self.r_peri, self.r_apo, nu)


def radians_or_none(angle_deg: float | None) -> float | None:
    """Turn an angle of the contract into radians."""
    return None if angle_deg is None else math.radians(angle_deg)


def body_named(name: str, bodies: Mapping[str, Body], *, pointer: str) -> Body:
    """Find a body of the mission.

    Parameters
    ----------
    name : str
        Name of the body.
    bodies : mapping of str to Body
        Bodies of the mission.
    pointer : str
        JSON Pointer to the field that names it.

    Returns
    -------
    Body
        The body.

    Raises
    ------
    burntally.model.errors.UncomputableError
        If there is no such body; it names those that there are.
    """
    if name not in bodies:
        raise UncomputableError([unknown_name("body", name, known=bodies, pointer=pointer)])
    return bodies[name]


def check_start(start: Location, bodies: Mapping[str, Body], *, pointer: str) -> None:
    """Refuse a start that names no known body, or an orbit that is none.

    Parameters
    ----------
    start : Location
        Where a mission starts.
    bodies : mapping of str to Body
        Bodies of the mission.
    pointer : str
        JSON Pointer to the start.

    Raises
    ------
    burntally.model.errors.UncomputableError
        With the pointer of the field that is at fault.
    """
    if start.body is None:
        expected = "the body that the orbit is about"
        raise UncomputableError([Violation(pointer=f"{pointer}/body", message="is missing", expected=expected)])
    body = body_named(start.body, bodies, pointer=f"{pointer}/body")
    if isinstance(start, OrbitLocation):
        size_of(start, body, pointer=pointer)
    elif isinstance(start, Hyperbola) and start.periapsis is not None:
        _radius(start.periapsis, body, f"{pointer}/periapsis")


def size_of(orbit: Orbit, body: Body, *, pointer: str) -> Size | None:
    """Size of an orbit whose fields tell both apsides.

    Parameters
    ----------
    orbit : Orbit
        A location in orbit, or a target.
    body : Body
        Body that it is about.
    pointer : str
        JSON Pointer to the orbit.

    Returns
    -------
    Size or None
        None where an apsis is absent.

    Raises
    ------
    burntally.model.errors.UncomputableError
        If there is no such orbit about the body.
    """
    if orbit.altitude is not None:
        r = _radius(orbit.altitude, body, f"{pointer}/altitude")
        return Size(r_peri=r, r_apo=r)
    if orbit.periapsis is None:
        return None
    r_peri = _radius(orbit.periapsis, body, f"{pointer}/periapsis")
    if orbit.apoapsis is not None:
        r_apo = _radius(orbit.apoapsis, body, f"{pointer}/apoapsis")
        return Size(r_peri=min(r_peri, r_apo), r_apo=max(r_peri, r_apo))
    if orbit.period is not None:
        return _size_by_period(r_peri, orbit.period, body, f"{pointer}/period")
    return None


def size_after(to: Orbit, size: Size, body: Body, *, pointer: str) -> Size:
    """Size of a target, with an absent apsis left where the burns leave it.

    Parameters
    ----------
    to : Orbit
        The target.
    size : Size
        Size of the orbit before.
    body : Body
        Body that both are about.
    pointer : str
        JSON Pointer to the target.

    Returns
    -------
    Size
        An apsis that moves past the other one takes it along: the target is then a circle.

    Raises
    ------
    burntally.model.errors.UncomputableError
        If there is no such orbit about the body.
    """
    whole = size_of(to, body, pointer=pointer)
    if whole is not None:
        return whole
    if to.periapsis is not None:
        r_peri = _radius(to.periapsis, body, f"{pointer}/periapsis")
        return Size(r_peri=r_peri, r_apo=max(r_peri, size.r_apo))
    if to.apoapsis is not None:
        r_apo = _radius(to.apoapsis, body, f"{pointer}/apoapsis")
        return Size(r_peri=min(size.r_peri, r_apo), r_apo=r_apo)
    return size


def location_after(
    to: Orbit, start: OrbitLocation | None, body: Body, *, argument_of_periapsis: float | None
) -> OrbitLocation:
    """Tell an orbit that a leg reaches, its absent elements carried over from the start.

    Parameters
    ----------
    to : Orbit
        The target.
    start : OrbitLocation or None
        Where the leg starts; None for a target that tells its size by itself.
    body : Body
        Body that both are about.
    argument_of_periapsis : float or None
        Argument of periapsis where the target does not say, [deg].

    Returns
    -------
    OrbitLocation
        The orbit.
    """
    before = start or OrbitLocation()
    altitude, periapsis, apoapsis, period = _told_size(to, before, body)
    argp = to.argument_of_periapsis if to.argument_of_periapsis is not None else argument_of_periapsis
    return OrbitLocation(
        body=body.name,
        altitude=altitude,
        periapsis=periapsis,
        apoapsis=apoapsis,
        period=period,
        inclination=before.inclination if to.inclination is None else to.inclination,
        raan=before.raan if to.raan is None else to.raan,
        argument_of_periapsis=None if altitude is not None else argp,
    )


def _told_size(to: Orbit, before: OrbitLocation, body: Body) -> tuple[float | None, ...]:
    """Altitude, periapsis, apoapsis and period of the orbit reached, as they are told."""
    if to.altitude is not None or (to.periapsis is not None and (to.apoapsis is not None or to.period is not None)):
        return to.altitude, to.periapsis, to.apoapsis, to.period
    low = before.altitude if before.periapsis is None else before.periapsis
    if to.apoapsis is not None:
        apart = low is not None and low < to.apoapsis
        return (None, low, to.apoapsis, None) if apart else (to.apoapsis, None, None, None)
    if to.periapsis is not None:
        high = _told_apoapsis(before, body)
        apart = high is not None and to.periapsis < high
        return (None, to.periapsis, high, None) if apart else (to.periapsis, None, None, None)
    return before.altitude, before.periapsis, before.apoapsis, before.period


def _told_apoapsis(before: OrbitLocation, body: Body) -> float | None:
    """Altitude of the apoapsis, as stated or from the period [m]."""
    if before.altitude is not None or before.apoapsis is not None:
        return before.altitude if before.apoapsis is None else before.apoapsis
    size = size_of(before, body, pointer="")
    return None if size is None else body.altitude_at(size.r_apo)


def _size_by_period(r_peri: float, period: float, body: Body, pointer: str) -> Size:
    """Ellipse with a periapsis and a period."""
    r_apo = opposite_apsis(semi_major_axis(body.mu, period), r_peri)
    if not r_peri <= r_apo < math.inf:
        message = "is too short for an orbit whose periapsis is so high"
        wanted = "a longer period, or a lower periapsis"
        raise UncomputableError([Violation(pointer=pointer, message=message, read=f"{period:g} s", expected=wanted)])
    return Size(r_peri=r_peri, r_apo=r_apo)


def _radius(altitude: float, body: Body, pointer: str) -> float:
    """Radius at an altitude, which must not be at the centre of the body or beyond."""
    r = body.radius_at(altitude)
    if not r > 0.0:
        message = f"is at or beyond the centre of {body.name}, whose radius is {body.radius:g} m"
        wanted = f"above {-body.radius:g} m"
        raise UncomputableError([Violation(pointer=pointer, message=message, read=f"{altitude:g} m", expected=wanted)])
    return r
