"""How ambient pressure takes thrust from an engine whose mass flow stays the same."""

import math

from burntally_service.kernels.constants import STANDARD_PRESSURE

__all__ = ["exhaust_speed_in_air", "exit_area", "exit_area_of_thrusts", "thrust_in_air"]


def thrust_in_air(thrust: float, area_exit: float, p_a: float) -> float:
    r"""Thrust at an ambient pressure.

    .. math:: F = F_{vac} - p_a A_e, \quad F \ge 0

    Parameters
    ----------
    thrust : float
        Thrust in vacuum, >= 0, [N].
    area_exit : float
        Exit area of the nozzle, >= 0, [m2].
    p_a : float
        Ambient pressure, >= 0, [Pa].

    Returns
    -------
    float
        Thrust, never below zero, [N]; NaN outside the ranges above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., eq. 2-13.

    Examples
    --------
    >>> thrust_in_air(1e6, 1.0, 101325.0)
    898675.0
    """
    if not (thrust >= 0.0 and area_exit >= 0.0 and p_a >= 0.0):
        return math.nan
    lost = p_a * area_exit
    return thrust - lost if lost < thrust else 0.0


def exhaust_speed_in_air(v_exhaust: float, thrust: float, area_exit: float, p_a: float) -> float:
    r"""Effective exhaust speed at an ambient pressure.

    .. math:: c = c_{vac} F / F_{vac}

    Parameters
    ----------
    v_exhaust : float
        Effective exhaust speed in vacuum, > 0, [m/s].
    thrust : float
        Thrust in vacuum, > 0, [N].
    area_exit : float
        Exit area of the nozzle, >= 0, [m2].
    p_a : float
        Ambient pressure, >= 0, [Pa].

    Returns
    -------
    float
        Effective exhaust speed, [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., eqs. 2-6 and 2-13.

    Examples
    --------
    >>> round(exhaust_speed_in_air(340.0 * 9.80665, 1e6, 1.0, 101325.0) / 9.80665, 4)
    305.5495
    """
    if not (v_exhaust > 0.0 and 0.0 < thrust < math.inf):
        return math.nan
    return v_exhaust * (thrust_in_air(thrust, area_exit, p_a) / thrust)


def exit_area(thrust: float, isp: float, isp_sea_level: float) -> float:
    r"""Exit area that a pair of specific impulses implies.

    .. math:: A_e = \frac{F_{vac}}{p_0} \left(1 - \frac{I_{sl}}{I_{vac}}\right)

    Parameters
    ----------
    thrust : float
        Thrust in vacuum, >= 0, [N].
    isp : float
        Specific impulse in vacuum, > 0, [s].
    isp_sea_level : float
        Specific impulse at 101 325 Pa, 0 to isp, [s].

    Returns
    -------
    float
        Area, [m2]; NaN outside the ranges above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., eqs. 2-6 and 2-13.

    Examples
    --------
    >>> round(exit_area(1e6, 340.0, 305.5495), 4)
    1.0
    """
    if not (thrust >= 0.0 and 0.0 <= isp_sea_level <= isp < math.inf and isp > 0.0):
        return math.nan
    return thrust / STANDARD_PRESSURE * ((isp - isp_sea_level) / isp)


def exit_area_of_thrusts(thrust: float, thrust_sea_level: float) -> float:
    r"""Exit area that a pair of thrusts implies.

    .. math:: A_e = (F_{vac} - F_{sl}) / p_0

    Parameters
    ----------
    thrust : float
        Thrust in vacuum, [N].
    thrust_sea_level : float
        Thrust at 101 325 Pa, 0 to thrust, [N].

    Returns
    -------
    float
        Area, [m2]; NaN outside the ranges above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., eq. 2-13.

    Examples
    --------
    >>> round(exit_area_of_thrusts(1033100.0, 486200.0), 5)
    5.39748
    """
    if not 0.0 <= thrust_sea_level <= thrust:
        return math.nan
    return (thrust - thrust_sea_level) / STANDARD_PRESSURE
