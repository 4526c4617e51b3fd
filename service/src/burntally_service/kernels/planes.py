"""How two orbital planes lie to each other."""

from __future__ import annotations

import math
from typing import NamedTuple

__all__ = ["Crossing", "crossing"]

_TWO_PI = 2.0 * math.pi


class Crossing(NamedTuple):
    """Where one plane meets another.

    Attributes
    ----------
    angle : float
        Angle between the planes, 0 to pi, [rad].
    argument_i : float
        Argument of latitude, on the initial orbit, of the node at which it turns into the final one by a turn of the
        velocity towards the orbit's own normal, 0 to 2 pi, [rad].
    argument_f : float
        Argument of latitude of the same node on the final orbit, 0 to 2 pi, [rad].
    """

    angle: float
    argument_i: float
    argument_f: float


def crossing(inc_i: float, raan_i: float, inc_f: float, raan_f: float) -> Crossing:
    r"""Angle between two orbital planes and the node at which they meet.

    .. math::

        \cos \theta &= \cos i_1 \cos i_2 + \sin i_1 \sin i_2 \cos \Delta\Omega \\
        \tan u_1 &= \frac{\sin i_2 \sin \Delta\Omega}{\cos i_1 \sin i_2 \cos \Delta\Omega - \sin i_1 \cos i_2}

    Parameters
    ----------
    inc_i : float
        Inclination of the initial orbit, 0 to pi, [rad].
    raan_i : float
        Right ascension of its ascending node, finite, [rad].
    inc_f : float
        Inclination of the final orbit, 0 to pi, [rad].
    raan_f : float
        Right ascension of its ascending node, finite, [rad].

    Returns
    -------
    Crossing
        Angle and arguments of latitude, [rad]; NaN outside the ranges above.

    Notes
    -----
    At the node opposite to this one, half a revolution on, the velocity turns the other way. The sines of small
    differences are taken of the differences, so that near planes keep their digits. Where the planes are one, or one
    is the other flown backwards, any line of it would do: the initial orbit's own node is taken.

    References
    ----------
    .. [1] Vallado, Fundamentals of Astrodynamics and Applications, 4th ed., sec. 6.4.3.

    Examples
    --------
    >>> turn = crossing(math.radians(55.0), 0.0, math.radians(40.0), math.radians(45.0))
    >>> round(2.0 * 5892.311 * math.sin(0.5 * turn.angle), 3)
    3615.925
    """
    gap = raan_f - raan_i
    if not (0.0 <= inc_i <= math.pi and 0.0 <= inc_f <= math.pi and -math.inf < gap < math.inf):
        return Crossing(math.nan, math.nan, math.nan)
    half_sine = math.sin(0.5 * gap)
    versed = 2.0 * half_sine * half_sine
    tilt = math.sin(inc_f - inc_i)
    along_i = tilt - math.cos(inc_i) * math.sin(inc_f) * versed
    across_i = math.sin(inc_f) * math.sin(gap)
    along_f = tilt + math.cos(inc_f) * math.sin(inc_i) * versed
    across_f = math.sin(inc_i) * math.sin(gap)
    sine = math.sqrt(along_i * along_i + across_i * across_i)
    cosine = math.cos(inc_f - inc_i) - math.sin(inc_i) * math.sin(inc_f) * versed
    angle = math.atan2(sine, cosine)
    if not sine > 0.0:
        turned = math.atan2(math.sin(gap), math.cos(gap))
        return Crossing(angle, 0.0, _positive(-turned if math.cos(inc_f) >= 0.0 else turned))
    return Crossing(angle, _positive(math.atan2(across_i, along_i)), _positive(math.atan2(across_f, along_f)))


def _positive(angle: float) -> float:
    """Angle between -pi and pi moved to 0 to 2 pi, [rad]."""
    return angle + _TWO_PI if angle < 0.0 else angle
