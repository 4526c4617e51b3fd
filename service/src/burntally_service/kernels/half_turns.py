"""Burns on one line through the body, half a revolution apart, from any place of one orbit to any of another.

The line is where two planes meet. It need not be a line of apsides: the burns then change the radial speed too. A row
that holds NaN means that there is no such manoeuvre.
"""

from __future__ import annotations

import math
from typing import NamedTuple

from burntally_service.kernels.ellipses import Place, coasting_time
from burntally_service.kernels.manoeuvres import Burn, combined_burn
from burntally_service.kernels.orbits import apsis_speed
from burntally_service.kernels.plane_split import SpeedChange, optimal_split

__all__ = [
    "Arc",
    "HalfTurn",
    "Impulse",
    "TwoHalfTurns",
    "half_turn",
    "half_turn_arc",
    "two_half_turns",
    "widest_half_turn",
]

_UNUSED = SpeedChange(0.0, 0.0)
_BISECTIONS = 200


class Impulse(NamedTuple):
    """An impulse anywhere on an orbit.

    Attributes
    ----------
    dv : float
        Velocity increment, >= 0, [m/s].
    radial : float
        Its part away from the body, [m/s].
    transverse : float
        Its part across the radius, along the motion before the burn, [m/s].
    normal : float
        Its part out of the plane, >= 0; the node at which it is burned decides to which side, [m/s].
    plane_change : float
        Angle by which the plane turns, >= 0, [rad].
    """

    dv: float
    radial: float
    transverse: float
    normal: float
    plane_change: float


class Arc(NamedTuple):
    """Half a revolution between two burns.

    Attributes
    ----------
    tof : float
        Time of flight, [s].
    r_min, r_max : float
        Least and greatest radius on the way, [m].
    """

    tof: float
    r_min: float
    r_max: float


class HalfTurn(NamedTuple):
    """Two burns, half a revolution apart.

    Attributes
    ----------
    dv : float
        Sum of the velocity increments, [m/s].
    first, second : Impulse
        The burns.
    arc : Arc
        The way between them.
    """

    dv: float
    first: Impulse
    second: Impulse
    arc: Arc


class TwoHalfTurns(NamedTuple):
    """Three burns, half a revolution apart.

    Attributes
    ----------
    dv : float
        Sum of the velocity increments, [m/s].
    first, second, third : Impulse
        The burns.
    arc_1, arc_2 : Arc
        The ways between them.
    """

    dv: float
    first: Impulse
    second: Impulse
    third: Impulse
    arc_1: Arc
    arc_2: Arc


_NO_ARC = Arc(math.nan, math.nan, math.nan)


def half_turn_arc(mu: float, r_1: float, r_2: float, v_radial: float) -> Arc:
    r"""Half a revolution between two radii on opposite sides of a body.

    .. math:: \frac{2}{p} = \frac{1}{r_1} + \frac{1}{r_2}, \quad e \cos \nu_1 = \frac{p}{r_1} - 1, \quad
              e \sin \nu_1 = v_r \sqrt{p / \mu}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r_1, r_2 : float
        Radius at the start and at the end, > 0, [m].
    v_radial : float
        Radial speed at the start; at the end it is the opposite, [m/s].

    Returns
    -------
    Arc
        Time [s] and radii [m]; NaN outside the ranges above, or where the way is no ellipse.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eqs. 2.45 and 2.49.

    Examples
    --------
    >>> round(half_turn_arc(3.986004415e14, 6569481.11, 42159485.57, 0.0).tof, 2)
    18924.17
    """
    if not (mu > 0.0 and 0.0 < r_1 < math.inf and 0.0 < r_2 < math.inf and -math.inf < v_radial < math.inf):
        return _NO_ARC
    slr = 2.0 * r_1 / (1.0 + r_1 / r_2)
    along = (r_2 - r_1) / (r_1 + r_2)
    across = v_radial * math.sqrt(slr) / math.sqrt(mu)
    ecc = math.sqrt(along * along + across * across)
    if not ecc < 1.0:
        return _NO_ARC
    r_peri, r_apo = slr / (1.0 + ecc), slr / (1.0 - ecc)
    nu = math.atan2(across, along)
    tof = coasting_time(mu, r_peri, r_apo, nu, nu + math.pi)
    low = r_peri if v_radial < 0.0 else min(r_1, r_2)
    high = r_apo if v_radial > 0.0 else max(r_1, r_2)
    return Arc(tof, low, high)


def half_turn(mu: float, departure: Place, arrival: Place, angle: float) -> HalfTurn:
    r"""Two burns on opposite sides of a body, the plane change and the radial speeds shared between them at best.

    .. math:: \Delta v^2 = (v_{r1} + v_{r2})^2 + \Big(\sum_k \Delta v_{k}^{\perp}\Big)^2

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    departure : Place
        Place of the first burn, on the orbit before, [m] and [m/s].
    arrival : Place
        Place of the second burn, half a revolution on, on the orbit after, [m] and [m/s].
    angle : float
        Angle between the planes, which meet in the line through both places, 0 to pi, [rad].

    Returns
    -------
    HalfTurn
        The burns, [m/s], [s], [m] and [rad]; NaN outside the ranges above.

    Notes
    -----
    Half a revolution fixes the angular momentum, hence both transverse speeds, and leaves the radial one free; it has
    opposite signs at the two ends. So the burns are plane vectors (radial; the rest) that sum to a fixed vector once
    the plane change is shared, and their lengths sum to the least where all point the same way. The share itself is
    then the one that is best without radial speeds.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 2.45 (the angular momentum).
    .. [2] Vallado, Fundamentals of Astrodynamics and Applications, 4th ed., sec. 6.5 (the share).

    Examples
    --------
    >>> from burntally_service.kernels.ellipses import apsis_place
    >>> low, high = apsis_place(3.986004418e14, 6563137.0, 6563137.0), apsis_place(3.986004418e14, 42164e3, 42164e3)
    >>> round(half_turn(3.986004418e14, low, high, math.radians(28.5)).dv, 3)
    4272.429
    """
    r_1, r_2 = departure.r, arrival.r
    at_1 = _change(departure.v_transverse, apsis_speed(mu, r_1, r_2))
    at_2 = _change(apsis_speed(mu, r_2, r_1), arrival.v_transverse)
    split = optimal_split(at_1, at_2, _UNUSED, angle)
    first = combined_burn(at_1.v, at_1.change, split.first)
    second = combined_burn(at_2.v, at_2.change, split.second)
    gap = -departure.v_radial - arrival.v_radial
    whole = first.dv + second.dv
    radial_2 = -_share(gap, second.dv, whole)
    radial_1 = gap + radial_2
    return HalfTurn(
        _length(gap, whole),
        _with_radial(first, radial_1),
        _with_radial(second, radial_2),
        half_turn_arc(mu, r_1, r_2, departure.v_radial + radial_1),
    )


def two_half_turns(mu: float, departure: Place, r_b: float, arrival: Place, angle: float) -> TwoHalfTurns:
    r"""Three burns by way of an intermediate radius, the plane change and the radial speeds shared at best.

    .. math:: \Delta v^2 = (v_{r2} - v_{r1})^2 + \Big(\sum_k \Delta v_{k}^{\perp}\Big)^2

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    departure : Place
        Place of the first burn, on the orbit before, [m] and [m/s].
    r_b : float
        Radius of the second burn, half a revolution on, > 0, [m].
    arrival : Place
        Place of the third burn, a whole revolution on, on the orbit after, [m] and [m/s].
    angle : float
        Angle between the planes, which meet in the line through all places, 0 to pi, [rad].

    Returns
    -------
    TwoHalfTurns
        The burns, [m/s], [s], [m] and [rad]; NaN outside the ranges above.

    Notes
    -----
    As in `half_turn`, the burns are shared so that all point the same way.

    References
    ----------
    .. [1] Vallado, Fundamentals of Astrodynamics and Applications, 4th ed., sec. 6.3.2, example 6-2.

    Examples
    --------
    >>> from burntally_service.kernels.ellipses import apsis_place
    >>> low = apsis_place(3.986004415e14, 6569481.11, 6569481.11)
    >>> high = apsis_place(3.986004415e14, 382688137.0, 382688137.0)
    >>> round(two_half_turns(3.986004415e14, low, 510251137.0, high, 0.0).dv, 3)
    3904.057
    """
    r_1, r_2 = departure.r, arrival.r
    at_1 = _change(departure.v_transverse, apsis_speed(mu, r_1, r_b))
    at_b = _change(apsis_speed(mu, r_b, r_1), apsis_speed(mu, r_b, r_2))
    at_2 = _change(apsis_speed(mu, r_2, r_b), arrival.v_transverse)
    split = optimal_split(at_1, at_b, at_2, angle)
    first = combined_burn(at_1.v, at_1.change, split.first)
    second = combined_burn(at_b.v, at_b.change, split.second)
    third = combined_burn(at_2.v, at_2.change, split.third)
    gap = arrival.v_radial - departure.v_radial
    whole = first.dv + second.dv + third.dv
    radial_b = -_share(gap, second.dv, whole)
    radial_1 = gap + radial_b - _share(gap, third.dv, whole)
    after_1 = departure.v_radial + radial_1
    after_b = radial_b - after_1
    return TwoHalfTurns(
        _length(gap, whole),
        _with_radial(first, radial_1),
        _with_radial(second, radial_b),
        _with_radial(third, arrival.v_radial + after_b),
        half_turn_arc(mu, r_1, r_b, after_1),
        half_turn_arc(mu, r_b, r_2, after_b),
    )


def widest_half_turn(mu: float, r_1: float, r_2: float, tof: float) -> float:
    r"""Greatest intermediate radius of two half revolutions within a time.

    .. math:: t = \pi \sqrt{(r_1 + r_b)^3 / (8 \mu)} + \pi \sqrt{(r_b + r_2)^3 / (8 \mu)}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r_1, r_2 : float
        Radius of the first and of the last burn, > 0, [m].
    tof : float
        Time of flight, finite, [s].

    Returns
    -------
    float
        Radius, [m]; 0 where the time does not suffice for any, NaN outside the ranges above.

    References
    ----------
    .. [1] Vallado, Fundamentals of Astrodynamics and Applications, 4th ed., sec. 6.3.2, eq. 6-3.

    Examples
    --------
    >>> round(widest_half_turn(3.986e14, 7e6, 105e6, 488868.0) / 1e6, 3)
    210.0
    """
    if not (0.0 < mu < math.inf and 0.0 < r_1 < math.inf and 0.0 < r_2 < math.inf and 0.0 <= tof < math.inf):
        return math.nan
    turns = tof / math.pi
    low, high = 0.0, 2.0 * math.pow(turns * math.sqrt(mu), 2.0 / 3.0)
    if not high < math.inf:
        return math.nan
    for _ in range(_BISECTIONS):
        middle = 0.5 * (low + high)
        if not low < middle < high:
            break
        if _half_time(mu, r_1 + middle) + _half_time(mu, middle + r_2) > turns:
            high = middle
        else:
            low = middle
    return low


def _half_time(mu: float, major_axis: float) -> float:
    """Time of half a revolution over pi, [s]."""
    sma = 0.5 * major_axis
    return sma * math.sqrt(sma) / math.sqrt(mu)


def _change(v: float, v_f: float) -> SpeedChange:
    """Change of a speed."""
    return SpeedChange(v, v_f - v)


def _share(gap: float, dv: float, whole: float) -> float:
    """Part of a radial change that goes with a burn's part of the sum, [m/s]."""
    return gap * (dv / whole) if whole > 0.0 else 0.0


def _length(x: float, y: float) -> float:
    """Length of a plane vector."""
    return math.sqrt(x * x + y * y)


def _with_radial(burn: Burn, radial: float) -> Impulse:
    """Add a radial part to a burn."""
    return Impulse(_length(radial, burn.dv), radial, burn.transverse, burn.normal, burn.plane_change)
