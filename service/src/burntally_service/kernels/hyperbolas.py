"""Hyperbolas about a body, and the burns that enter and leave them, in forms that keep their digits."""

import math

from burntally_service.kernels.orbits import apsis_speed

__all__ = [
    "aiming_radius",
    "asymptote_angle",
    "characteristic_energy",
    "cheapest_capture_radius",
    "hyperbola_eccentricity",
    "hyperbolic_excess_speed",
    "hyperbolic_speed",
    "hyperbolic_speed_change",
    "turn_angle",
]


def characteristic_energy(v_inf: float) -> float:
    r"""Characteristic energy of a hyperbola.

    .. math:: C_3 = v_\infty^2

    Parameters
    ----------
    v_inf : float
        Hyperbolic excess speed, >= 0, [m/s].

    Returns
    -------
    float
        Twice the specific energy, [m2/s2]; NaN outside the range above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 2.116.

    Examples
    --------
    >>> characteristic_energy(3000.0)
    9000000.0
    """
    return v_inf * v_inf if v_inf >= 0.0 else math.nan


def hyperbolic_excess_speed(c3: float) -> float:
    r"""Speed left at infinity.

    .. math:: v_\infty = \sqrt{C_3}

    Parameters
    ----------
    c3 : float
        Characteristic energy, >= 0, [m2/s2].

    Returns
    -------
    float
        Speed, [m/s]; NaN outside the range above: there is no escape.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 2.116.

    Examples
    --------
    >>> hyperbolic_excess_speed(9e6)
    3000.0
    """
    return math.sqrt(c3) if c3 >= 0.0 else math.nan


def hyperbolic_speed(mu: float, r: float, v_inf: float) -> float:
    r"""Speed on a hyperbola.

    .. math:: v = \sqrt{v_\infty^2 + 2 \mu / r}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r : float
        Radius, > 0, [m].
    v_inf : float
        Hyperbolic excess speed, >= 0, [m/s].

    Returns
    -------
    float
        Speed, [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 2.115.

    Examples
    --------
    >>> round(hyperbolic_speed(3.986e14, 6678e3, 2943.5), 1)
    11315.5
    """
    if not (mu > 0.0 and r > 0.0 and v_inf >= 0.0):
        return math.nan
    return math.sqrt(v_inf * v_inf + 2.0 * mu / r)


def hyperbolic_speed_change(mu: float, r: float, r_opposite: float, v_inf: float) -> float:
    r"""Change of speed at an apsis that turns an ellipse into a hyperbola with this periapsis.

    .. math:: v_f - v_i = \frac{v_\infty^2 + 2 \mu / (r + r_o)}{v_i + v_f}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r : float
        Radius of the burn, > 0, [m].
    r_opposite : float
        Radius r_o of the opposite apsis of the ellipse, > 0, [m].
    v_inf : float
        Hyperbolic excess speed, >= 0, [m/s].

    Returns
    -------
    float
        Change of speed, >= 0, [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 8.6 (difference of two vis-viva squares).

    Examples
    --------
    >>> round(hyperbolic_speed_change(3.986e14, 6678e3, 6678e3, 2943.5), 1)
    3589.7
    """
    v_i = apsis_speed(mu, r, r_opposite)
    v_f = hyperbolic_speed(mu, r, v_inf)
    if not v_i + v_f > 0.0:
        return math.nan
    return (v_inf * v_inf + 2.0 * (mu / (r + r_opposite))) / (v_i + v_f)


def hyperbola_eccentricity(mu: float, r_peri: float, v_inf: float) -> float:
    r"""Eccentricity of a hyperbola.

    .. math:: e = 1 + r_p v_\infty^2 / \mu

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r_peri : float
        Periapsis radius, > 0, [m].
    v_inf : float
        Hyperbolic excess speed, >= 0, [m/s].

    Returns
    -------
    float
        Eccentricity, >= 1, [-]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 8.38.

    Examples
    --------
    >>> round(hyperbola_eccentricity(3.986e14, 6678e3, 2943.5), 4)
    1.1452
    """
    if not (mu > 0.0 and r_peri > 0.0 and v_inf >= 0.0):
        return math.nan
    return 1.0 + r_peri / mu * v_inf * v_inf


def asymptote_angle(ecc: float) -> float:
    r"""Angle between the apse line and the asymptote of a hyperbola.

    .. math:: \beta = \arccos(1 / e)

    Parameters
    ----------
    ecc : float
        Eccentricity, >= 1, [-].

    Returns
    -------
    float
        Angle, [rad]; NaN outside the range above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 8.43.

    Examples
    --------
    >>> round(math.degrees(asymptote_angle(1.1452)), 1)
    29.2
    """
    if not ecc >= 1.0:
        return math.nan
    # acos(1/e) would lose half of the digits near the parabola.
    return math.atan(math.sqrt((ecc - 1.0) * (ecc + 1.0)))


def turn_angle(ecc: float) -> float:
    r"""Angle by which a pass along a hyperbola turns the velocity.

    .. math:: \delta = 2 \arcsin(1 / e)

    Parameters
    ----------
    ecc : float
        Eccentricity, >= 1, [-].

    Returns
    -------
    float
        Angle, [rad]; NaN outside the range above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 2.100.

    Examples
    --------
    >>> round(math.degrees(turn_angle(2.0)), 9)
    60.0
    """
    if not ecc >= 1.0:
        return math.nan
    return 2.0 * math.asin(1.0 / ecc)


def aiming_radius(mu: float, r_peri: float, v_inf: float) -> float:
    r"""Distance of the asymptote of a hyperbola from the body's centre.

    .. math:: \Delta = r_p \sqrt{1 + \frac{2 \mu}{r_p v_\infty^2}}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r_peri : float
        Periapsis radius, > 0, [m].
    v_inf : float
        Hyperbolic excess speed, > 0, [m/s].

    Returns
    -------
    float
        Aiming radius, [m]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 8.57.

    Examples
    --------
    >>> round(aiming_radius(4.2828e13, 5447300.0, 2647.9), -2)
    9809200.0
    """
    if not (mu > 0.0 and r_peri > 0.0 and v_inf > 0.0):
        return math.nan
    return r_peri * math.sqrt(1.0 + 2.0 * mu / r_peri / v_inf / v_inf)


def cheapest_capture_radius(mu: float, v_inf: float, ecc: float) -> float:
    r"""Periapsis at which capture into an orbit of a given eccentricity costs least.

    .. math:: r_p = \frac{2 \mu}{v_\infty^2} \frac{1 - e}{1 + e}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    v_inf : float
        Hyperbolic excess speed, > 0, [m/s].
    ecc : float
        Eccentricity e of the orbit after, 0 to 1, without 1, [-].

    Returns
    -------
    float
        Periapsis radius, [m]; NaN outside the ranges above.

    Notes
    -----
    At a given *period* the lowest periapsis is cheaper still.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 8.67.

    Examples
    --------
    >>> round(cheapest_capture_radius(4.2828e13, 2647.9, 0.38323), -2)
    5447300.0
    """
    if not (mu > 0.0 and v_inf > 0.0 and 0.0 <= ecc < 1.0):
        return math.nan
    return 2.0 * mu / v_inf / v_inf * ((1.0 - ecc) / (1.0 + ecc))
