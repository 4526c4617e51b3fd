"""Places on an ellipse, the time between them, and its line of apsides."""

from __future__ import annotations

import math
from typing import NamedTuple

from burntally_service.kernels.orbits import apsis_speed, mean_motion

__all__ = ["Place", "apse_turn", "apsis_place", "coasting_time", "ellipse_place"]

_TWO_PI = 2.0 * math.pi


class Place(NamedTuple):
    """A place on an orbit and how it is passed.

    Attributes
    ----------
    r : float
        Radius, [m].
    v_radial : float
        Speed away from the body, [m/s].
    v_transverse : float
        Speed across the radius, [m/s].
    """

    r: float
    v_radial: float
    v_transverse: float


_NO_PLACE = Place(math.nan, math.nan, math.nan)


def apsis_place(mu: float, r: float, r_opposite: float) -> Place:
    r"""An apsis of an ellipse as a place.

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r : float
        Radius of the apsis, > 0, [m].
    r_opposite : float
        Radius of the opposite apsis, > 0, [m].

    Returns
    -------
    Place
        The place, [m] and [m/s]; its speed is NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 2.7.

    Examples
    --------
    >>> round(apsis_place(3.986e14, 7000e3, 7000e3).v_transverse, 2)
    7546.05
    """
    return Place(r, 0.0, apsis_speed(mu, r, r_opposite))


def ellipse_place(mu: float, r_peri: float, r_apo: float, nu: float) -> Place:
    r"""Radius and speeds at a true anomaly of an ellipse.

    .. math:: r = \frac{p}{1 + e \cos \nu}, \quad v_r = \sqrt{\mu / p}\, e \sin \nu, \quad v_t = \sqrt{\mu p} / r

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r_peri : float
        Radius of the periapsis, > 0, [m].
    r_apo : float
        Radius of the apoapsis, >= r_peri, finite, [m].
    nu : float
        True anomaly, finite, [rad].

    Returns
    -------
    Place
        The place, [m] and [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eqs. 2.45, 2.48 and 2.49.

    Examples
    --------
    >>> place = ellipse_place(3.986e14, 7000e3, 14000e3, math.radians(90.0))
    >>> round(place.r), round(place.v_radial, 1), round(place.v_transverse, 1)
    (9333333, 2178.4, 6535.1)
    """
    if not (mu > 0.0 and 0.0 < r_peri <= r_apo < math.inf and -math.inf < nu < math.inf):
        return _NO_PLACE
    ratio = r_peri / r_apo
    ecc = (1.0 - ratio) / (1.0 + ratio)
    slr = 2.0 * r_peri / (1.0 + ratio)
    cosine, sine = math.cos(0.5 * nu), math.sin(0.5 * nu)
    # 1 + e cos(nu) by the half angle, which keeps its digits where the ellipse is thin and far out; no double has a
    # cosine of zero.
    r = r_peri / (cosine * cosine + ratio * (sine * sine))
    # The square root of mu over slr, taken apart since their product or ratio may not fit a double.
    speed = math.sqrt(mu) / math.sqrt(slr)
    return Place(r, speed * ecc * math.sin(nu), speed * (slr / r))


def coasting_time(mu: float, r_peri: float, r_apo: float, nu_i: float, nu_f: float) -> float:
    r"""Time to fly on from one true anomaly of an ellipse to another.

    .. math:: t = (M_2 - M_1) \sqrt{a^3 / \mu}, \qquad M = E - e \sin E

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r_peri : float
        Radius of the periapsis, > 0, [m].
    r_apo : float
        Radius of the apoapsis, >= r_peri, finite, [m].
    nu_i, nu_f : float
        True anomaly at the start and at the end, finite, [rad].

    Returns
    -------
    float
        Time, from 0 to a period, [s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eqs. 3.10b and 3.14.

    Examples
    --------
    >>> round(coasting_time(3.986e14, 9600e3, 21000e3, 0.0, math.radians(120.0)))
    4077
    """
    finite = -math.inf < nu_i < math.inf and -math.inf < nu_f < math.inf
    if not (mu > 0.0 and 0.0 < r_peri <= r_apo < math.inf and finite):
        return math.nan
    mean_anom = _mean_anomaly(r_peri / r_apo, nu_f) - _mean_anomaly(r_peri / r_apo, nu_i)
    if mean_anom < 0.0:
        mean_anom += _TWO_PI
    rate = mean_motion(mu, 0.5 * r_peri + 0.5 * r_apo)
    # On an orbit too wide for a double the rate is nothing, which Python refuses to divide by.
    return mean_anom / rate if rate > 0.0 else math.nan


def apse_turn(mu: float, r_peri: float, r_apo: float, angle: float) -> float:
    r"""Cost of turning the line of apsides in its plane, in one burn where the two ellipses cross.

    .. math:: \Delta v = 2 \sqrt{\mu / p}\, e \sin(\Delta\omega / 2)

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r_peri : float
        Radius of the periapsis, > 0, [m].
    r_apo : float
        Radius of the apoapsis, >= r_peri, finite, [m].
    angle : float
        Angle between the lines of apsides, 0 to pi, [rad].

    Returns
    -------
    float
        Velocity increment, all of it radial, [m/s]; NaN outside the ranges above.

    Notes
    -----
    The ellipses, equal in size, cross on the line that halves the angle, on either side of the body. The radial speed
    is turned about there, and nothing else changes.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 6.7.

    Examples
    --------
    >>> round(apse_turn(3.986e14, 7000e3, 14000e3, math.radians(30.0)), 2)
    1127.6
    """
    if not 0.0 <= angle <= math.pi:
        return math.nan
    return 2.0 * ellipse_place(mu, r_peri, r_apo, 0.5 * angle).v_radial


def _mean_anomaly(ratio: float, nu: float) -> float:
    """Mean anomaly of a true one, from -pi to pi; `ratio` is that of periapsis and apoapsis, [rad].

    tan(E / 2) = sqrt((1 - e) / (1 + e)) tan(nu / 2), and the root is that of the ratio.
    """
    ecc_anom = 2.0 * math.atan2(math.sqrt(ratio) * math.sin(0.5 * nu), math.cos(0.5 * nu))
    if ecc_anom > math.pi:
        ecc_anom -= _TWO_PI
    elif ecc_anom < -math.pi:
        ecc_anom += _TWO_PI
    return ecc_anom - (1.0 - ratio) / (1.0 + ratio) * math.sin(ecc_anom)
