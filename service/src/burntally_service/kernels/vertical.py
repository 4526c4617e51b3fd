"""Vertical ascent in closed form: constant thrust, no drag, uniform gravity."""

import math

__all__ = [
    "gravity_loss_vertical",
    "height_vertical",
]


def gravity_loss_vertical(gravity: float, t_burn: float) -> float:
    r"""Speed lost to gravity in a vertical burn under uniform gravity.

    .. math:: \Delta v_g = g t_b

    Parameters
    ----------
    gravity : float
        Acceleration of gravity, >= 0, [m/s2].
    t_burn : float
        Burn time, >= 0, [s].

    Returns
    -------
    float
        Loss, >= 0, [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 11.4.

    Examples
    --------
    >>> gravity_loss_vertical(9.80665, 100.0)
    980.665
    """
    if not (gravity >= 0.0 and t_burn >= 0.0):
        return math.nan
    return gravity * t_burn


def height_vertical(v_exhaust: float, mass_ratio: float, t_burn: float, gravity: float) -> float:
    r"""Height at burn-out of a vertical burn from rest, at constant thrust, without drag, under uniform gravity.

    .. math:: h = c t_b \left(1 - \frac{\ln n}{n - 1}\right) - \tfrac12 g t_b^2

    Parameters
    ----------
    v_exhaust : float
        Effective exhaust speed c, > 0, [m/s].
    mass_ratio : float
        Initial over final mass n, > 1, [-].
    t_burn : float
        Burn time, >= 0, [s].
    gravity : float
        Acceleration of gravity, >= 0, [m/s2].

    Returns
    -------
    float
        Height above the start, [m]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 11.4.

    Examples
    --------
    >>> round(height_vertical(2941.995, 10.0 / 3.0, 102.96982, 9.80665))
    94636
    """
    if not (v_exhaust > 0.0 and mass_ratio > 1.0 and t_burn >= 0.0 and gravity >= 0.0):
        return math.nan
    excess = mass_ratio - 1.0
    rise = v_exhaust * t_burn * (1.0 - math.log1p(excess) / excess)
    return rise - 0.5 * gravity * t_burn * t_burn
