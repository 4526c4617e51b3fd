"""Tandem staging: similar stages, and the split of a delta-v that makes the vehicle lightest."""

import math
from collections.abc import Sequence

__all__ = [
    "endless_staging_delta_v",
    "optimal_mass_ratio",
    "stage_mass_ratio",
    "stage_payload_fraction",
    "staging_multiplier",
    "step_mass",
]

_MAX_STEPS = 200
_TOLERANCE = 1e-15


def stage_payload_fraction(payload_fraction: float, stages: float) -> float:
    r"""Payload fraction of each of several similar stages.

    .. math:: \pi = \pi_{PL}^{1/N}

    Parameters
    ----------
    payload_fraction : float
        Payload over initial mass of the whole vehicle, 0 to 1, without 0, [-].
    stages : float
        Number of stages N, >= 1, [-].

    Returns
    -------
    float
        What a stage carries over the mass at its ignition, [-]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 11.5.

    Examples
    --------
    >>> round(stage_payload_fraction(0.05, 3.0), 7)
    0.3684031
    """
    if not (0.0 < payload_fraction <= 1.0 and stages >= 1.0):
        return math.nan
    return math.pow(payload_fraction, 1.0 / stages)


def stage_mass_ratio(struct_coeff: float, payload_fraction: float) -> float:
    r"""Mass ratio of a stage that burns all of its propellant.

    .. math:: n = \frac{1}{\epsilon + (1 - \epsilon) \pi}

    Parameters
    ----------
    struct_coeff : float
        Dry over dry and propellant mass of the stage, 0 to 1, [-].
    payload_fraction : float
        What the stage carries over the mass at its ignition, 0 to 1, [-].

    Returns
    -------
    float
        Initial over final mass, infinite where nothing would be left, [-]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 11.5.

    Examples
    --------
    >>> round(stage_mass_ratio(0.15, 0.05), 6)
    5.194805
    """
    if not (0.0 <= struct_coeff <= 1.0 and 0.0 <= payload_fraction <= 1.0):
        return math.nan
    left = struct_coeff + (1.0 - struct_coeff) * payload_fraction
    return 1.0 / left if left > 0.0 else math.inf


def endless_staging_delta_v(v_exhaust: float, struct_coeff: float, payload_fraction: float) -> float:
    r"""Velocity increment that ever more similar stages approach.

    .. math:: \Delta v = c (1 - \epsilon) \ln (1 / \pi_{PL})

    Parameters
    ----------
    v_exhaust : float
        Effective exhaust speed c, > 0, [m/s].
    struct_coeff : float
        Dry over dry and propellant mass of each stage, 0 to 1, [-].
    payload_fraction : float
        Payload over initial mass of the whole vehicle, 0 to 1, without 0, [-].

    Returns
    -------
    float
        Velocity increment, [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 11.5.

    Examples
    --------
    >>> round(endless_staging_delta_v(350.0 * 9.81, 0.15, 0.05), 2)
    8742.97
    """
    if not (v_exhaust > 0.0 and 0.0 <= struct_coeff <= 1.0 and 0.0 < payload_fraction <= 1.0):
        return math.nan
    return v_exhaust * (1.0 - struct_coeff) * -math.log(payload_fraction)


def step_mass(mass_ratio: float, struct_coeff: float, m_carried: float) -> float:
    r"""Dry and propellant mass of a stage that gives its load a mass ratio.

    .. math:: m = m_{carried} \frac{n - 1}{1 - n \epsilon}

    Parameters
    ----------
    mass_ratio : float
        Initial over final mass n, >= 1, [-].
    struct_coeff : float
        Dry over dry and propellant mass of the stage, 0 to 1, [-].
    m_carried : float
        Mass above the stage, >= 0, [kg].

    Returns
    -------
    float
        Mass of the stage, infinite where no stage reaches the ratio, [kg]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 11.6.

    Examples
    --------
    >>> round(step_mass(1.36062, 0.2, 5000.0))
    2477
    """
    if not (mass_ratio >= 1.0 and 0.0 <= struct_coeff <= 1.0 and m_carried >= 0.0):
        return math.nan
    left = 1.0 - mass_ratio * struct_coeff
    return m_carried * ((mass_ratio - 1.0) / left) if left > 0.0 else math.inf


def optimal_mass_ratio(v_exhaust: float, struct_coeff: float, multiplier: float) -> float:
    r"""Mass ratio of one stage of the lightest vehicle.

    .. math:: n = \max\left(1, \frac{c p - 1}{c \epsilon p}\right)

    Parameters
    ----------
    v_exhaust : float
        Effective exhaust speed c, > 0, [m/s].
    struct_coeff : float
        Dry over dry and propellant mass of the stage, 0 to 1, without 0 and 1, [-].
    multiplier : float
        Lagrange multiplier p, > 0, [s/m].

    Returns
    -------
    float
        Initial over final mass, [-]; NaN outside the ranges above.

    Notes
    -----
    1 means that the vehicle is lightest without this stage. Without that bound the formula gives a poor stage under
    much better ones a ratio below one, that is, a negative mass.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 11.6.

    Examples
    --------
    >>> round(optimal_mass_ratio(400.0 * 9.81, 0.1, 0.466823e-3), 3)
    4.541
    """
    if not (0.0 < v_exhaust < math.inf and 0.0 < struct_coeff < 1.0 and multiplier > 0.0):
        return math.nan
    scaled = v_exhaust * multiplier
    if not scaled > 1.0:
        return 1.0
    return max(1.0, (1.0 - 1.0 / scaled) / struct_coeff)


def staging_multiplier(dv: float, v_exhausts: Sequence[float], struct_coeffs: Sequence[float]) -> float:
    r"""Lagrange multiplier of the lightest vehicle for a velocity increment.

    .. math:: \Delta v = \sum c_i \ln n_i(p)

    Parameters
    ----------
    dv : float
        Velocity increment, > 0, [m/s].
    v_exhausts : sequence of float
        Effective exhaust speed of each stage, > 0, shape (n,), [m/s].
    struct_coeffs : sequence of float
        Dry over dry and propellant mass of each stage, 0 to 1, without 0 and 1, shape (n,), [-].

    Returns
    -------
    float
        Multiplier p for `optimal_mass_ratio`, [s/m]; NaN outside the ranges above, or where no vehicle reaches dv.

    Notes
    -----
    The sum rises with p, from nothing to its bound at the structural coefficients, so a bisection in 1/p cannot fail.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 11.6.

    Examples
    --------
    >>> speeds = [400.0 * 9.81, 350.0 * 9.81, 300.0 * 9.81]
    >>> round(1000.0 * staging_multiplier(10000.0, speeds, [0.1, 0.15, 0.2]), 6)
    0.466823
    """
    if len(v_exhausts) != len(struct_coeffs) or len(v_exhausts) == 0:
        return math.nan
    fastest = 0.0
    for i in range(len(v_exhausts)):
        fastest = max(fastest, v_exhausts[i])
    # In 1/p the root lies between 0 (every stage at its bound) and the fastest exhaust (no stage burns).
    low, high = 0.0, fastest
    for _ in range(_MAX_STEPS):
        middle = 0.5 * (low + high)
        if not middle > 0.0 or high - low <= _TOLERANCE * high:
            break
        if _staged_delta_v(1.0 / middle, v_exhausts, struct_coeffs) >= dv:
            low = middle
        else:
            high = middle
    reached = dv > 0.0 and low > 0.0 and _staged_delta_v(1.0 / low, v_exhausts, struct_coeffs) >= dv
    return 1.0 / low if reached else math.nan


def _staged_delta_v(multiplier: float, v_exhausts: Sequence[float], struct_coeffs: Sequence[float]) -> float:
    """Velocity increment of the lightest vehicle that has a multiplier, [m/s]."""
    total = 0.0
    for i in range(len(v_exhausts)):
        ratio = optimal_mass_ratio(v_exhausts[i], struct_coeffs[i], multiplier)
        total += v_exhausts[i] * math.log(ratio)
    return total
