"""Rocket equation, propellant and burn time."""

import math
from collections.abc import Sequence

from burntally_service.kernels.constants import G0

__all__ = [
    "burn_time",
    "exhaust_speed",
    "ideal_delta_v",
    "mass_flow",
    "mass_ratio",
    "mixed_exhaust_speed",
    "propellant_burned",
    "propellant_load",
    "propellant_required",
    "specific_impulse",
    "thrust_to_weight",
]

_EXP_MAX = 709.0  # math.exp raises beyond 709.78, where the compiled twin gives infinity


def exhaust_speed(isp: float) -> float:
    r"""Effective exhaust speed of an engine.

    .. math:: c = g_0 I_{sp}

    Parameters
    ----------
    isp : float
        Specific impulse by weight, > 0, [s].

    Returns
    -------
    float
        Effective exhaust speed, [m/s]; NaN outside the range above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., eq. 2-6.

    Examples
    --------
    >>> round(exhaust_speed(345.0), 4)
    3383.2942
    """
    if not isp > 0.0:
        return math.nan
    return isp * G0


def specific_impulse(v_exhaust: float) -> float:
    r"""Specific impulse by weight, the inverse of `exhaust_speed`.

    .. math:: I_{sp} = c / g_0

    Parameters
    ----------
    v_exhaust : float
        Effective exhaust speed, > 0, [m/s].

    Returns
    -------
    float
        Specific impulse, [s]; NaN outside the range above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., eq. 2-6.

    Examples
    --------
    >>> round(specific_impulse(3383.29425), 6)
    345.0
    """
    if not v_exhaust > 0.0:
        return math.nan
    return v_exhaust / G0


def ideal_delta_v(v_exhaust: float, mass_ratio: float) -> float:
    r"""Speed gained in a burn without losses.

    .. math:: \Delta v = c \ln (m_i / m_f)

    Parameters
    ----------
    v_exhaust : float
        Effective exhaust speed c, > 0, [m/s].
    mass_ratio : float
        Initial over final mass, >= 1, [-].

    Returns
    -------
    float
        Velocity increment, [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., sec. 4.1 (its MR is our 1/mass_ratio).

    Examples
    --------
    >>> round(ideal_delta_v(3000.0, 3.0), 3)
    3295.837
    """
    if not (v_exhaust > 0.0 and mass_ratio >= 1.0):
        return math.nan
    return v_exhaust * math.log(mass_ratio)


def mass_ratio(dv: float, v_exhaust: float) -> float:
    r"""Initial over final mass of a burn, the inverse of `ideal_delta_v`.

    .. math:: m_i / m_f = e^{\Delta v / c}

    Parameters
    ----------
    dv : float
        Velocity increment, >= 0, [m/s].
    v_exhaust : float
        Effective exhaust speed c, > 0, [m/s].

    Returns
    -------
    float
        Mass ratio, >= 1, [-]; infinite where it exceeds what a double can hold; NaN outside the ranges above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., sec. 4.1 (its MR is our 1/mass_ratio).

    Examples
    --------
    >>> round(mass_ratio(3295.836866, 3000.0), 6)
    3.0
    """
    if not (dv >= 0.0 and v_exhaust > 0.0):
        return math.nan
    exponent = dv / v_exhaust
    return math.exp(exponent) if exponent < _EXP_MAX else exponent * math.inf


def propellant_required(m_final: float, dv: float, v_exhaust: float) -> float:
    r"""Propellant that must be burned to end with a given mass.

    .. math:: m_p = m_f (e^{\Delta v / c} - 1)

    Parameters
    ----------
    m_final : float
        Mass after the burn, >= 0, [kg].
    dv : float
        Velocity increment, >= 0, [m/s].
    v_exhaust : float
        Effective exhaust speed c, > 0, [m/s].

    Returns
    -------
    float
        Propellant, [kg]; infinite where it exceeds what a double can hold; NaN outside the ranges above.

    Notes
    -----
    expm1 keeps the digits of a small burn, which a difference of two masses would lose.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 6.1.

    Examples
    --------
    >>> round(propellant_required(1012.665187, 1500.0, 3138.128), 3)
    620.594
    """
    if not (0.0 <= m_final < math.inf and dv >= 0.0 and v_exhaust > 0.0):
        return math.nan
    exponent = dv / v_exhaust
    if exponent < _EXP_MAX:
        return m_final * math.expm1(exponent)
    return m_final * math.inf


def propellant_burned(m_initial: float, dv: float, v_exhaust: float) -> float:
    r"""Propellant burned from a given mass.

    .. math:: m_p = m_i (1 - e^{-\Delta v / c})

    Parameters
    ----------
    m_initial : float
        Mass before the burn, >= 0, [kg].
    dv : float
        Velocity increment, >= 0, [m/s].
    v_exhaust : float
        Effective exhaust speed c, > 0, [m/s].

    Returns
    -------
    float
        Propellant, below m_initial, [kg]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 6.1.

    Examples
    --------
    >>> round(propellant_burned(2000.0, 3052.2, 300.0 * 9.807), 1)
    1291.3
    """
    if not (0.0 <= m_initial < math.inf and dv >= 0.0 and v_exhaust > 0.0):
        return math.nan
    return -m_initial * math.expm1(-dv / v_exhaust)


def propellant_load(m_dry: float, dv: float, v_exhaust: float, residual_fraction: float) -> float:
    r"""Propellant to load for a velocity increment when a share of the load never burns.

    .. math:: m_p = m_{dry} \frac{k}{1 - r - r k}, \qquad k = e^{\Delta v / c} - 1

    Parameters
    ----------
    m_dry : float
        Mass without any propellant, >= 0, [kg].
    dv : float
        Velocity increment, >= 0, [m/s].
    v_exhaust : float
        Effective exhaust speed c, > 0, [m/s].
    residual_fraction : float
        Share r of the whole load that rides along as dead mass, 0 <= r < 1, [-].

    Returns
    -------
    float
        Load, residual included, [kg]; infinite where no load is enough; NaN outside the ranges above.

    Notes
    -----
    The residual is accelerated by every burn. Adding it on top, m_p (1 + r), would load too little.

    References
    ----------
    .. [1] ESA, Margin philosophy for science assessment studies, SRE-PA/2011.097, issue 1 rev. 3, R-M1-6.

    Examples
    --------
    >>> round(propellant_load(1000.0, 1500.0, 3138.128, 0.02), 4)
    633.2594
    """
    if not (0.0 <= residual_fraction < 1.0):
        return math.nan
    required = propellant_required(m_dry, dv, v_exhaust)
    exponent = dv / v_exhaust if v_exhaust > 0.0 else math.nan
    if not exponent < _EXP_MAX:
        return required
    usable_share = 1.0 - residual_fraction * (1.0 + math.expm1(exponent))
    return required / usable_share if usable_share > 0.0 else math.inf


def mass_flow(thrust: float, v_exhaust: float) -> float:
    r"""Propellant flow of an engine.

    .. math:: \dot m = F / c

    Parameters
    ----------
    thrust : float
        Thrust F, >= 0, [N].
    v_exhaust : float
        Effective exhaust speed c at the same ambient pressure, > 0, [m/s].

    Returns
    -------
    float
        Mass flow, [kg/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., eq. 2-6.

    Examples
    --------
    >>> round(mass_flow(54936.0, 2354.4), 4)
    23.3333
    """
    if not (thrust >= 0.0 and v_exhaust > 0.0):
        return math.nan
    return thrust / v_exhaust


def burn_time(m_prop: float, mdot: float) -> float:
    r"""Duration of a burn at constant flow.

    .. math:: t_b = m_p / \dot m

    Parameters
    ----------
    m_prop : float
        Propellant to burn, >= 0, [kg].
    mdot : float
        Mass flow, > 0, [kg/s].

    Returns
    -------
    float
        Burn time, [s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., sec. 2.1.

    Examples
    --------
    >>> burn_time(70.0, 35.0)
    2.0
    """
    if not (m_prop >= 0.0 and mdot > 0.0):
        return math.nan
    return m_prop / mdot


def thrust_to_weight(thrust: float, mass: float, gravity: float) -> float:
    r"""Thrust over weight.

    .. math:: F / (m g)

    Parameters
    ----------
    thrust : float
        Thrust, >= 0, [N].
    mass : float
        Mass, > 0, [kg].
    gravity : float
        Acceleration of gravity that defines the weight, local or standard, > 0, [m/s2].

    Returns
    -------
    float
        Ratio, [-]; NaN outside the ranges above.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., sec. 2.1 and example 2-1.

    Examples
    --------
    >>> round(thrust_to_weight(54936.0, 200.0, 9.81), 6)
    28.0
    """
    if not (thrust >= 0.0 and mass > 0.0 and gravity > 0.0):
        return math.nan
    # Divided twice: the product of two small numbers could be zero.
    return thrust / mass / gravity


def mixed_exhaust_speed(thrusts: Sequence[float], v_exhausts: Sequence[float]) -> float:
    r"""Effective exhaust speed of unlike engines that burn together.

    .. math:: c = \sum F_i \Big/ \sum (F_i / c_i)

    Parameters
    ----------
    thrusts : sequence of float
        Thrust of each engine, >= 0, shape (n,), [N].
    v_exhausts : sequence of float
        Effective exhaust speed of each engine at the same ambient pressure, > 0, shape (n,), [m/s].

    Returns
    -------
    float
        Effective exhaust speed, [m/s]; NaN outside the ranges above, where the lengths differ, or where nothing flows.

    Notes
    -----
    Never the mean of the specific impulses, which is too high: the poorer engine burns the greater share.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., sec. 11.2, eqs. 11-1 to 11-3.

    Examples
    --------
    >>> speeds = [exhaust_speed(280.0), exhaust_speed(430.0)]
    >>> round(specific_impulse(mixed_exhaust_speed([2e6, 1e6], speeds)), 4)
    316.8421
    """
    if len(thrusts) != len(v_exhausts):
        return math.nan
    total_thrust = 0.0
    total_flow = 0.0
    for i in range(len(thrusts)):
        total_thrust += thrusts[i]
        total_flow += mass_flow(thrusts[i], v_exhausts[i])
    if not total_flow > 0.0:
        return math.nan
    return total_thrust / total_flow
