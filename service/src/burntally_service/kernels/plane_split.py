"""How a plane change is best shared among two or three burns."""

import math
from typing import NamedTuple

__all__ = ["SpeedChange", "Split", "combined_delta_v", "optimal_split"]

# A share below this part of its greatest slope saves less than a double can hold.
_LEAST_SLOPE = 1e-12
# The sum is flat at the optimum: this error of the slope moves it by far less than its rounding.
_SLOPE_TOLERANCE = 1e-13
_MAX_STEPS = 100


class SpeedChange(NamedTuple):
    """A burn in its plane.

    Attributes
    ----------
    v : float
        Speed before, >= 0; 0 marks a burn that does not exist, [m/s].
    change : float
        Change of speed, >= -v, [m/s].
    """

    v: float
    change: float


class Split(NamedTuple):
    """Shares of a plane change.

    Attributes
    ----------
    first, second, third : float
        Turn of the plane in each burn, [rad].
    """

    first: float
    second: float
    third: float


def combined_delta_v(burn: SpeedChange, angle: float) -> float:
    r"""Velocity increment of a burn that changes the speed and turns the plane at once.

    .. math:: \Delta v^2 = (v_f - v_i)^2 + 4 v_i v_f \sin^2(\theta / 2)

    Parameters
    ----------
    burn : SpeedChange
        Speed v_i before and the change v_f - v_i in the plane, [m/s].
    angle : float
        Turn theta of the plane, 0 to pi, [rad].

    Returns
    -------
    float
        Velocity increment, [m/s]; NaN outside the ranges above.

    Notes
    -----
    The cosine law subtracts nearly equal squares where the turn is small; this form does not.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 6.20.

    Examples
    --------
    >>> combined_delta_v(SpeedChange(3.0, 1.0), math.pi / 2.0)
    5.0
    """
    v_f = burn.v + burn.change
    if not (0.0 <= burn.v < math.inf and 0.0 <= v_f < math.inf and 0.0 <= angle <= math.pi):
        return math.nan
    half_sine = math.sin(0.5 * angle)
    return math.sqrt(burn.change * burn.change + 4.0 * burn.v * v_f * half_sine * half_sine)


def optimal_split(first: SpeedChange, second: SpeedChange, third: SpeedChange, angle: float) -> Split:
    r"""Shares of a plane change that make the sum of the velocity increments least.

    At the optimum every burn has the same slope :math:`\partial \Delta v_k / \partial \theta_k = \lambda`.

    Parameters
    ----------
    first, second, third : SpeedChange
        The burns in their plane; `SpeedChange(0.0, 0.0)` for one that does not exist, [m/s].
    angle : float
        Whole plane change, 0 to pi, [rad].

    Returns
    -------
    Split
        The shares, [rad]; NaN outside the ranges above.

    Notes
    -----
    The slope of a burn first rises with its share and then falls. Two burns on the falling side cannot both be
    optimal, so all but one (the carrier) are on the rising side, where the share is a closed function of the slope.
    Each burn is tried as the carrier, which leaves one equation in the slope for each.

    References
    ----------
    .. [1] Vallado, Fundamentals of Astrodynamics and Applications, 4th ed., sec. 6.5.2 (combined plane changes).

    Examples
    --------
    >>> leo, geo = SpeedChange(7793.184, 2451.0), SpeedChange(1595.0, 1479.0)
    >>> split = optimal_split(leo, geo, SpeedChange(0.0, 0.0), math.radians(28.5))
    >>> round(math.degrees(split.first), 1)
    2.2
    """
    if angle == 0.0:
        return Split(0.0, 0.0, 0.0)
    by_first = _shared(first, second, third, angle)
    by_second = _shared(second, first, third, angle)
    by_third = _shared(third, first, second, angle)
    best = Split(by_first.first, by_first.second, by_first.third)
    least = _cost(first, second, third, best)
    other = Split(by_second.second, by_second.first, by_second.third)
    cost = _cost(first, second, third, other)
    if cost < least or math.isnan(least):
        best, least = other, cost
    other = Split(by_third.second, by_third.third, by_third.first)
    if _cost(first, second, third, other) < least:
        best = other
    return best


def _cost(first: SpeedChange, second: SpeedChange, third: SpeedChange, split: Split) -> float:
    """Sum of the velocity increments, [m/s]."""
    return (
        combined_delta_v(first, split.first)
        + combined_delta_v(second, split.second)
        + combined_delta_v(third, split.third)
    )


def _shared(carrier: SpeedChange, one: SpeedChange, other: SpeedChange, angle: float) -> Split:
    """Shares (carrier, one, other) at equal slope, the last two on the rising side."""
    if not (carrier.v > 0.0 and 0.0 <= angle <= math.pi):
        return Split(math.nan, math.nan, math.nan)
    high = min(_greatest_slope(one), _greatest_slope(other))
    low = _LEAST_SLOPE * high
    # Without a second burn, or where even the least share saves nothing, the carrier turns alone.
    if not (0.0 < high < math.inf and _excess(carrier, one, other, angle, low) > 0.0):
        return Split(angle, 0.0, 0.0)
    slope = _equal_slope(carrier, one, other, angle, high)
    share_one, share_other = _rising_share(one, slope), _rising_share(other, slope)
    return Split(angle - share_one - share_other, share_one, share_other)


def _equal_slope(carrier: SpeedChange, one: SpeedChange, other: SpeedChange, angle: float, high: float) -> float:
    """Slope, up to `high`, at which the carrier gains no more by sharing (Illinois method)."""
    low = _LEAST_SLOPE * high
    f_low = _excess(carrier, one, other, angle, low)
    f_high = _excess(carrier, one, other, angle, high)
    if f_high >= 0.0:
        return high
    moved = 0.0
    for _ in range(_MAX_STEPS):
        slope = low + (high - low) * (f_low / (f_low - f_high))
        f = _excess(carrier, one, other, angle, slope)
        # The value of an end that stays put twice is halved, or it would stay for good on a curved function.
        if f > 0.0:
            f_high = 0.5 * f_high if moved > 0.0 else f_high
            low, f_low, moved = slope, f, 1.0
        else:
            f_low = 0.5 * f_low if moved < 0.0 else f_low
            high, f_high, moved = slope, f, -1.0
        if not (abs(f) > _SLOPE_TOLERANCE * slope and high - low > _SLOPE_TOLERANCE * high):
            return slope
    return low


def _excess(carrier: SpeedChange, one: SpeedChange, other: SpeedChange, angle: float, slope: float) -> float:
    """Slope of the carrier with what the others leave to it, less theirs, [m/s]."""
    rest = angle - _rising_share(one, slope) - _rising_share(other, slope)
    half_sine = math.sin(0.5 * rest)
    product = carrier.v * (carrier.v + carrier.change)
    dv = math.sqrt(carrier.change * carrier.change + 4.0 * product * half_sine * half_sine)
    return product * math.sin(rest) / dv - slope if dv > 0.0 else -slope


def _greatest_slope(burn: SpeedChange) -> float:
    """Slope at the turn from rising to falling, [m/s]; infinite for a burn that does not exist."""
    return min(burn.v, burn.v + burn.change) if burn.v > 0.0 else math.inf


def _rising_share(burn: SpeedChange, slope: float) -> float:
    """Turn of the plane at which a burn has a slope, on the rising side, [rad].

    1 - cos(theta) = slope^2 change^2 / (P (P - slope^2 + sqrt((v_i^2 - slope^2) (v_f^2 - slope^2)))), P = v_i v_f.
    """
    v_f = burn.v + burn.change
    product = burn.v * v_f
    factors = (burn.v - slope) * (burn.v + slope) * (v_f - slope) * (v_f + slope)
    # Negative for speeds that no burn has; the root would raise.
    if not factors >= 0.0:
        return 0.0
    below = 2.0 * product * (product - slope * slope + math.sqrt(factors))
    if not below > 0.0:
        return 0.0
    return 2.0 * math.asin(min(1.0, slope * abs(burn.change) / math.sqrt(below)))
