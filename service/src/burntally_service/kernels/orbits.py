"""Two-body orbits: speeds, sizes and periods, in forms that keep their digits."""

import math

__all__ = [
    "apsis_speed",
    "apsis_speed_change",
    "circular_speed",
    "eccentricity",
    "escape_speed",
    "mean_motion",
    "opposite_apsis",
    "orbital_speed",
    "period",
    "semi_major_axis",
    "soi_radius",
    "synodic_period",
]

_TWO_PI = 2.0 * math.pi


def circular_speed(mu: float, r: float) -> float:
    r"""Speed on a circular orbit.

    .. math:: v = \sqrt{\mu / r}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r : float
        Radius, > 0, [m].

    Returns
    -------
    float
        Speed, [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 2.63.

    Examples
    --------
    >>> round(circular_speed(3.986004418e14, 6578137.0), 4)
    7784.2617
    """
    if not (mu > 0.0 and r > 0.0):
        return math.nan
    return math.sqrt(mu / r)


def escape_speed(mu: float, r: float) -> float:
    r"""Speed on a parabola.

    .. math:: v = \sqrt{2 \mu / r}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r : float
        Radius, > 0, [m].

    Returns
    -------
    float
        Speed, [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 2.91.

    Examples
    --------
    >>> round(escape_speed(3.986004418e14, 6578137.0), 3)
    11008.609
    """
    if not (mu > 0.0 and r > 0.0):
        return math.nan
    return math.sqrt(2.0 * mu / r)


def orbital_speed(mu: float, r: float, sma: float) -> float:
    r"""Speed at a radius (vis-viva).

    .. math:: v = \sqrt{\mu (2 / r - 1 / a)}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r : float
        Radius, > 0, [m].
    sma : float
        Semi-major axis a, negative on a hyperbola, not 0, [m].

    Returns
    -------
    float
        Speed, [m/s]; NaN outside the ranges above, or where the orbit does not reach the radius.

    Notes
    -----
    At an apsis `apsis_speed` keeps more digits.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eqs. 2.81 and 2.114.

    Examples
    --------
    >>> round(orbital_speed(3.986004418e14, 7e6, 8e6), 3)
    8003.798
    """
    if not (mu > 0.0 and r > 0.0 and sma != 0.0):
        return math.nan
    squared = mu / r * (2.0 - r / sma)
    return math.sqrt(squared) if squared >= 0.0 else math.nan


def apsis_speed(mu: float, r: float, r_opposite: float) -> float:
    r"""Speed at an apsis of an ellipse.

    .. math:: v = \sqrt{\frac{2 \mu}{r (1 + r / r_o)}}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r : float
        Radius of this apsis, > 0, [m].
    r_opposite : float
        Radius r_o of the opposite apsis, > 0; infinite on a parabola, [m].

    Returns
    -------
    float
        Speed, [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 6.2 (vis-viva with 2a = r + r_o).

    Examples
    --------
    >>> round(apsis_speed(3.986e14, 6858e3, 7178e3), 2)
    7710.19
    """
    if not (mu > 0.0 and r > 0.0 and r_opposite > 0.0):
        return math.nan
    return math.sqrt(2.0 * mu / r / (1.0 + r / r_opposite))


def apsis_speed_change(mu: float, r: float, r_opposite_i: float, r_opposite_f: float) -> float:
    r"""Change of speed at an apsis that moves the opposite one.

    .. math:: v_f - v_i = \frac{2 \mu (r_f - r_i)}{(r + r_i)(r + r_f)(v_i + v_f)}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    r : float
        Radius of the burn, > 0, [m].
    r_opposite_i, r_opposite_f : float
        Radius of the opposite apsis before and after, > 0, finite, [m].

    Returns
    -------
    float
        Change of speed, positive where the opposite apsis rises, [m/s]; NaN outside the ranges above.

    Notes
    -----
    The difference of the two speeds would lose the digits of a small change; here only radii are subtracted.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 6.2 (difference of two vis-viva squares).

    Examples
    --------
    >>> round(apsis_speed_change(3.986004418e14, 6778137.0, 6778137.0, 6798137.0), 6)
    5.646421
    """
    v_i = apsis_speed(mu, r, r_opposite_i)
    v_f = apsis_speed(mu, r, r_opposite_f)
    if not v_i + v_f > 0.0:
        return math.nan
    rise = (r_opposite_f - r_opposite_i) / (r + r_opposite_i)
    return 2.0 * (mu / (r + r_opposite_f)) * rise / (v_i + v_f)


def semi_major_axis(mu: float, period: float) -> float:
    r"""Semi-major axis of the ellipse with a given period.

    .. math:: a = \left(\mu (T / 2\pi)^2\right)^{1/3}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    period : float
        Orbital period T, > 0, [s].

    Returns
    -------
    float
        Semi-major axis, [m]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 2.83.

    Examples
    --------
    >>> round(semi_major_axis(4.2828e13, 25200.0), -2)
    8831900.0
    """
    if not (0.0 < mu < math.inf and 0.0 < period < math.inf):
        return math.nan
    rate = period / _TWO_PI
    cube = mu * rate * rate
    return math.pow(cube, 1.0 / 3.0) if cube < math.inf else math.inf


def opposite_apsis(sma: float, r: float) -> float:
    r"""Radius of the other apsis.

    .. math:: r_o = 2 a - r

    Parameters
    ----------
    sma : float
        Semi-major axis a of an ellipse, > r / 2, [m].
    r : float
        Radius of one apsis, > 0, [m].

    Returns
    -------
    float
        Radius, [m]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 2.7.

    Examples
    --------
    >>> opposite_apsis(8e6, 7e6)
    9000000.0
    """
    r_opposite = 2.0 * sma - r
    return r_opposite if r > 0.0 and r_opposite > 0.0 else math.nan


def eccentricity(r_peri: float, r_apo: float) -> float:
    r"""Eccentricity of an ellipse.

    .. math:: e = (r_a - r_p) / (r_a + r_p)

    Parameters
    ----------
    r_peri : float
        Periapsis radius, > 0, [m].
    r_apo : float
        Apoapsis radius, >= r_peri, [m].

    Returns
    -------
    float
        Eccentricity, [-]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 2.84.

    Examples
    --------
    >>> eccentricity(6e6, 10e6)
    0.25
    """
    if not (0.0 < r_peri <= r_apo < math.inf):
        return math.nan
    return (r_apo - r_peri) / (r_apo + r_peri)


def mean_motion(mu: float, sma: float) -> float:
    r"""Mean angular rate on an ellipse.

    .. math:: n = \sqrt{\mu / a^3}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    sma : float
        Semi-major axis a, > 0, [m].

    Returns
    -------
    float
        Rate, [rad/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 3.9.

    Examples
    --------
    >>> round(mean_motion(3.986004418e14, 42164169.6), 10)
    7.29212e-05
    """
    if not (mu > 0.0 and sma > 0.0):
        return math.nan
    return math.sqrt(mu / sma) / sma


def period(mu: float, sma: float) -> float:
    r"""Period of an ellipse.

    .. math:: T = 2 \pi \sqrt{a^3 / \mu}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    sma : float
        Semi-major axis a, > 0, [m].

    Returns
    -------
    float
        Period, [s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 2.83.

    Examples
    --------
    >>> round(period(3.986004418e14, 42164169.6), 1)
    86164.1
    """
    if not (mu > 0.0 and sma > 0.0):
        return math.nan
    return _TWO_PI * sma * math.sqrt(sma / mu)


def synodic_period(period_1: float, period_2: float) -> float:
    r"""Time after which two bodies stand in the same relative phase again.

    .. math:: T_s = \frac{T_1 T_2}{|T_1 - T_2|}

    Parameters
    ----------
    period_1, period_2 : float
        Periods, > 0, [s].

    Returns
    -------
    float
        Synodic period, infinite for equal periods, [s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 8.10.

    Examples
    --------
    >>> round(synodic_period(365.26, 687.99), 3)
    778.655
    """
    if not (0.0 < period_1 < math.inf and 0.0 < period_2 < math.inf):
        return math.nan
    gap = abs(period_1 - period_2)
    return period_1 / gap * period_2 if gap > 0.0 else math.inf


def soi_radius(sma: float, mu: float, mu_parent: float) -> float:
    r"""Radius of the sphere of influence (Laplace).

    .. math:: r = a (\mu / \mu_p)^{2/5}

    Parameters
    ----------
    sma : float
        Semi-major axis a of the body's orbit about its parent, > 0, [m].
    mu : float
        Gravitational parameter of the body, or of its whole system, > 0, [m3/s2].
    mu_parent : float
        Gravitational parameter of the parent, > 0, [m3/s2].

    Returns
    -------
    float
        Radius, [m]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 8.34.

    Examples
    --------
    >>> round(soi_radius(384.4e6, 0.0123000371, 1.0), -2)
    66182900.0
    """
    if not (sma > 0.0 and 0.0 < mu < math.inf and 0.0 < mu_parent < math.inf):
        return math.nan
    ratio = mu / mu_parent
    return sma * math.pow(ratio, 0.4) if ratio < math.inf else math.inf
