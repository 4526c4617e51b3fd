"""Impulsive transfers between orbits that share a line of apsides, and phasing within one orbit.

Every burn is at an apsis. A row that holds NaN means that there is no such transfer.
"""

import math
from typing import NamedTuple

from burntally_service.kernels.manoeuvres import Apsis, Burn, apsis_change, combined_burn
from burntally_service.kernels.orbits import apsis_speed, apsis_speed_change, period
from burntally_service.kernels.plane_split import SpeedChange, optimal_split

__all__ = [
    "Bielliptic",
    "Phasing",
    "Transfer",
    "apsis_transfer",
    "bielliptic",
    "cheapest_transfer",
    "hohmann",
    "phasing",
]


class Transfer(NamedTuple):
    """Two burns, half a revolution apart.

    Attributes
    ----------
    dv : float
        Sum of the velocity increments, [m/s].
    tof : float
        Time from the first burn to the last, [s].
    r_1, r_2 : float
        Radius of each burn, [m].
    first, second : Burn
        The burns.
    """

    dv: float
    tof: float
    r_1: float
    r_2: float
    first: Burn
    second: Burn


class Bielliptic(NamedTuple):
    """Three burns, half a revolution apart.

    Attributes
    ----------
    dv : float
        Sum of the velocity increments, [m/s].
    tof_1, tof_2 : float
        Time from the first burn to the second, and on to the third, [s].
    first, second, third : Burn
        The burns; the second is at the intermediate radius.
    """

    dv: float
    tof_1: float
    tof_2: float
    first: Burn
    second: Burn
    third: Burn


class Phasing(NamedTuple):
    """A phasing orbit, entered and left at one apsis.

    Attributes
    ----------
    dv : float
        Sum of the velocity increments, [m/s].
    tof : float
        Time from the first burn to the last, [s].
    r_opposite : float
        Radius of the apsis of the phasing orbit that faces the burns, [m].
    period : float
        Period of the phasing orbit, [s].
    first, second : Burn
        The burns, equal and opposite.
    """

    dv: float
    tof: float
    r_opposite: float
    period: float
    first: Burn
    second: Burn


_TWO_PI = 2.0 * math.pi
_NO_BURN = Burn(math.nan, math.nan, math.nan, math.nan)
_UNUSED = SpeedChange(0.0, 0.0)


def hohmann(mu: float, r_1: float, r_2: float) -> Transfer:
    r"""Two-burn transfer between coplanar circular orbits.

    .. math:: t = \pi \sqrt{(r_1 + r_2)^3 / (8 \mu)}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r_1, r_2 : float
        Radius of the orbit before and after, > 0, [m].

    Returns
    -------
    Transfer
        The burns, [m/s], [s], [m] and [rad]; NaN outside the ranges above.

    References
    ----------
    .. [1] Vallado, Fundamentals of Astrodynamics and Applications, 4th ed., sec. 6.3.1, example 6-1.

    Examples
    --------
    >>> round(hohmann(3.986004415e14, 6569481.11, 42159485.57).dv, 3)
    3935.224
    """
    return apsis_transfer(mu, Apsis(r_1, r_1), Apsis(r_2, r_2), 0.0)


def apsis_transfer(mu: float, departure: Apsis, arrival: Apsis, angle: float) -> Transfer:
    r"""Two burns from an apsis of one orbit to an apsis of another, the plane change split between them at best.

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    departure : Apsis
        The orbit before, seen from the apsis of the first burn; radii > 0, [m].
    arrival : Apsis
        The orbit after, seen from the apsis of the second burn; radii > 0, [m].
    angle : float
        Angle between the planes, which meet in the line of apsides, 0 to pi, [rad].

    Returns
    -------
    Transfer
        The burns, [m/s], [s], [m] and [rad]; NaN outside the ranges above.

    Notes
    -----
    The burns are on opposite sides of the body. So the line of apsides keeps its sense if one of the two apsides is a
    periapsis and the other an apoapsis, and turns about otherwise.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 6.3.
    .. [2] Vallado, Fundamentals of Astrodynamics and Applications, 4th ed., sec. 6.5 (the split).

    Examples
    --------
    >>> best = apsis_transfer(3.986004418e14, Apsis(6563137.0, 6563137.0), Apsis(42164e3, 42164e3), math.radians(28.5))
    >>> round(best.dv, 3), round(math.degrees(best.first.plane_change), 4)
    (4272.429, 2.1645)
    """
    r_1, r_2 = departure.r, arrival.r
    at_1 = SpeedChange(
        apsis_speed(mu, r_1, departure.r_opposite), apsis_speed_change(mu, r_1, departure.r_opposite, r_2)
    )
    at_2 = SpeedChange(apsis_speed(mu, r_2, r_1), apsis_speed_change(mu, r_2, r_1, arrival.r_opposite))
    split = optimal_split(at_1, at_2, _UNUSED, angle)
    first = combined_burn(at_1.v, at_1.change, split.first)
    second = combined_burn(at_2.v, at_2.change, split.second)
    return Transfer(first.dv + second.dv, 0.5 * period(mu, 0.5 * (r_1 + r_2)), r_1, r_2, first, second)


def cheapest_transfer(mu: float, initial: Apsis, final: Apsis, angle: float) -> Transfer:
    r"""The cheapest of the two-burn transfers between the apsides of two orbits.

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    initial : Apsis
        The orbit before, seen from either apsis; radii > 0, [m].
    final : Apsis
        The orbit after, seen from either apsis; radii > 0, [m].
    angle : float
        Angle between the planes, which meet in the line of apsides, 0 to pi, [rad].

    Returns
    -------
    Transfer
        The burns, [m/s], [s], [m] and [rad]; NaN outside the ranges above. `r_1` and `r_2` tell the apsides taken; of
        equally cheap pairs the one nearest to those given is taken.

    Notes
    -----
    The final line of apsides is free to turn about. Where its sense is fixed, compare `apsis_transfer` by hand.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 6.3 and example 6.1.

    Examples
    --------
    >>> best = cheapest_transfer(3.986e14, Apsis(6858e3, 7178e3), Apsis(22378e3, 22378e3), 0.0)
    >>> round(best.dv, 1), best.r_1
    (3052.2, 6858000.0)
    """
    turned_initial = Apsis(initial.r_opposite, initial.r)
    turned_final = Apsis(final.r_opposite, final.r)
    best = apsis_transfer(mu, initial, final, angle)
    if final.r != final.r_opposite:
        best = _cheaper(best, apsis_transfer(mu, initial, turned_final, angle))
    if initial.r != initial.r_opposite:
        best = _cheaper(best, apsis_transfer(mu, turned_initial, final, angle))
        if final.r != final.r_opposite:
            best = _cheaper(best, apsis_transfer(mu, turned_initial, turned_final, angle))
    return best


def bielliptic(mu: float, departure: Apsis, r_b: float, arrival: Apsis, angle: float) -> Bielliptic:
    r"""Three burns by way of an intermediate radius, the plane change split between them at best.

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    departure : Apsis
        The orbit before, seen from the apsis of the first burn; radii > 0, [m].
    r_b : float
        Radius of the second burn, > 0, [m].
    arrival : Apsis
        The orbit after, seen from the apsis of the third burn; radii > 0, [m].
    angle : float
        Angle between the planes, which meet in the line of apsides, 0 to pi, [rad].

    Returns
    -------
    Bielliptic
        The burns, [m/s], [s] and [rad]; NaN outside the ranges above.

    References
    ----------
    .. [1] Vallado, Fundamentals of Astrodynamics and Applications, 4th ed., sec. 6.3.2, example 6-2.

    Examples
    --------
    >>> low, high = Apsis(6569481.11, 6569481.11), Apsis(382688137.0, 382688137.0)
    >>> round(bielliptic(3.986004415e14, low, 510251137.0, high, 0.0).dv, 3)
    3904.057
    """
    r_1, r_2 = departure.r, arrival.r
    at_1 = SpeedChange(
        apsis_speed(mu, r_1, departure.r_opposite), apsis_speed_change(mu, r_1, departure.r_opposite, r_b)
    )
    at_b = SpeedChange(apsis_speed(mu, r_b, r_1), apsis_speed_change(mu, r_b, r_1, r_2))
    at_2 = SpeedChange(apsis_speed(mu, r_2, r_b), apsis_speed_change(mu, r_2, r_b, arrival.r_opposite))
    split = optimal_split(at_1, at_b, at_2, angle)
    first = combined_burn(at_1.v, at_1.change, split.first)
    second = combined_burn(at_b.v, at_b.change, split.second)
    third = combined_burn(at_2.v, at_2.change, split.third)
    tof_1 = 0.5 * period(mu, 0.5 * (r_1 + r_b))
    tof_2 = 0.5 * period(mu, 0.5 * (r_b + r_2))
    return Bielliptic(first.dv + second.dv + third.dv, tof_1, tof_2, first, second, third)


def phasing(mu: float, apsis: Apsis, phase_angle: float, revolutions: float) -> Phasing:
    r"""Two burns at one apsis that shift the place along the orbit.

    .. math:: T_p = T \left(1 - \frac{\phi}{2 \pi k}\right)

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    apsis : Apsis
        The orbit, seen from the apsis of the burns; radii > 0, [m].
    phase_angle : float
        Mean anomaly phi to gain, negative to fall back, < 2 pi k, [rad].
    revolutions : float
        Turns k on the phasing orbit, >= 1, [-].

    Returns
    -------
    Phasing
        The burns and the orbit between them, [m/s], [s], [m] and [rad]; NaN outside the ranges above, or where the
        phasing orbit would have to be smaller than half of `apsis.r`.

    Notes
    -----
    A target ahead by phi can be met from below (phi) or, waiting for it, from above (phi - 2 pi).

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 6.5, example 6.4.

    Examples
    --------
    >>> west = phasing(3.986e14, Apsis(42164e3, 42164e3), math.radians(-12.0), 3.0)
    >>> round(west.dv, 1)
    22.5
    """
    share = phase_angle / (_TWO_PI * revolutions) if revolutions >= 1.0 else math.nan
    if not (share < 1.0 and share > -math.inf):
        return Phasing(math.nan, math.nan, math.nan, math.nan, _NO_BURN, _NO_BURN)
    sma = 0.5 * (apsis.r + apsis.r_opposite)
    # expm1 and log1p, since a small shift over many turns changes the orbit by little.
    r_opposite = apsis.r_opposite + 2.0 * sma * math.expm1(math.log1p(-share) * 2.0 / 3.0)
    first = apsis_change(mu, apsis, r_opposite, 0.0)
    second = Burn(first.dv, -first.transverse, first.normal, first.plane_change)
    period_p = period(mu, sma) * (1.0 - share)
    return Phasing(2.0 * first.dv, revolutions * period_p, r_opposite, period_p, first, second)


def _cheaper(one: Transfer, other: Transfer) -> Transfer:
    """Take the other one only if it is cheaper."""
    return other if other.dv < one.dv else one
