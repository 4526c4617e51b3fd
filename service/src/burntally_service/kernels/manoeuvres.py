"""Single impulses at an apsis, which may turn the plane.

A row that holds NaN means that there is no such manoeuvre.
"""

import math
from typing import NamedTuple

from burntally_service.kernels.hyperbolas import hyperbolic_speed, hyperbolic_speed_change
from burntally_service.kernels.orbits import apsis_speed, apsis_speed_change
from burntally_service.kernels.plane_split import SpeedChange, combined_delta_v

__all__ = [
    "Apsis",
    "Burn",
    "apsis_change",
    "capture_burn",
    "combined_burn",
    "escape_burn",
    "plane_change",
]


class Apsis(NamedTuple):
    """An orbit, as seen from the apsis where it is burned.

    Attributes
    ----------
    r : float
        Radius of this apsis, [m].
    r_opposite : float
        Radius of the opposite apsis, [m].
    """

    r: float
    r_opposite: float


class Burn(NamedTuple):
    """An impulse at an apsis.

    Attributes
    ----------
    dv : float
        Velocity increment, >= 0, [m/s].
    transverse : float
        Its part along the motion before the burn, negative where it brakes, [m/s].
    normal : float
        Its part out of the plane, >= 0; the node at which it is burned decides to which side, [m/s].
    plane_change : float
        Angle by which the plane turns, >= 0, [rad].
    """

    dv: float
    transverse: float
    normal: float
    plane_change: float


_NO_BURN = Burn(math.nan, math.nan, math.nan, math.nan)


def plane_change(v: float, angle: float) -> float:
    r"""Cost of a turn of the velocity at constant speed.

    .. math:: \Delta v = 2 v \sin(\theta / 2)

    Parameters
    ----------
    v : float
        Speed, >= 0, [m/s].
    angle : float
        Angle theta between the velocities, 0 to pi, [rad].

    Returns
    -------
    float
        Velocity increment, [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 6.23.

    Examples
    --------
    >>> round(plane_change(7668.5579, math.radians(10.0)), 3)
    1336.718
    """
    return combined_delta_v(SpeedChange(v, 0.0), angle)


def combined_burn(v: float, change: float, angle: float) -> Burn:
    r"""A burn that changes the speed and turns the plane at once.

    .. math:: \Delta v^2 = (v_f - v_i)^2 + 4 v_i v_f \sin^2(\theta / 2)

    Parameters
    ----------
    v : float
        Speed before the burn, >= 0, [m/s].
    change : float
        Change of speed v_f - v_i, >= -v, [m/s].
    angle : float
        Turn of the plane theta, 0 to pi, [rad].

    Returns
    -------
    Burn
        The burn, [m/s] and [rad]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., eq. 6.20.

    Examples
    --------
    >>> round(combined_burn(1607.8, 1466.8, math.radians(28.0)).dv, 1)
    1819.0
    """
    dv = combined_delta_v(SpeedChange(v, change), angle)
    if math.isnan(dv):
        return _NO_BURN
    half_sine = math.sin(0.5 * angle)
    v_f = v + change
    # v_f cos(theta) - v_i, written so that a small change keeps its digits.
    transverse = change - 2.0 * v_f * half_sine * half_sine
    return Burn(dv, transverse, v_f * math.sin(angle), angle)


def apsis_change(mu: float, apsis: Apsis, r_opposite: float, angle: float) -> Burn:
    r"""One burn at an apsis that moves the opposite one, and may turn the plane.

    .. math:: v = \sqrt{2 \mu / (r (1 + r / r_o))} \quad \text{before and after}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    apsis : Apsis
        The orbit before, seen from the apsis of the burn; radii > 0, [m].
    r_opposite : float
        Radius of the opposite apsis after the burn, > 0, [m].
    angle : float
        Turn of the plane, 0 to pi, [rad].

    Returns
    -------
    Burn
        The burn, [m/s] and [rad]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., secs. 6.2 and 6.9.

    Examples
    --------
    Lowering the perigee of a circular orbit at 400 km to 50 km.

    >>> round(apsis_change(3.986004418e14, Apsis(6778137.0, 6778137.0), 6428137.0, 0.0).transverse, 4)
    -102.3005
    """
    v = apsis_speed(mu, apsis.r, apsis.r_opposite)
    return combined_burn(v, apsis_speed_change(mu, apsis.r, apsis.r_opposite, r_opposite), angle)


def escape_burn(mu: float, apsis: Apsis, v_inf: float, angle: float) -> Burn:
    r"""One burn at an apsis onto a hyperbola whose periapsis is there, and may turn the plane.

    .. math:: v_f = \sqrt{v_\infty^2 + 2 \mu / r}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    apsis : Apsis
        The orbit before, seen from the apsis of the burn; radii > 0, [m].
    v_inf : float
        Hyperbolic excess speed, >= 0, [m/s].
    angle : float
        Turn of the plane, 0 to pi, [rad].

    Returns
    -------
    Burn
        The burn, [m/s] and [rad]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 8.6, eq. 8.42.

    Examples
    --------
    >>> round(escape_burn(3.986e14, Apsis(6678e3, 6678e3), 2943.5, 0.0).dv, 1)
    3589.7
    """
    v = apsis_speed(mu, apsis.r, apsis.r_opposite)
    return combined_burn(v, hyperbolic_speed_change(mu, apsis.r, apsis.r_opposite, v_inf), angle)


def capture_burn(mu: float, apsis: Apsis, v_inf: float, angle: float) -> Burn:
    r"""One burn at the periapsis of a hyperbola into an orbit with an apsis there, and may turn the plane.

    .. math:: v_i = \sqrt{v_\infty^2 + 2 \mu / r}

    Parameters
    ----------
    mu : float
        Gravitational parameter, > 0, [m3/s2].
    apsis : Apsis
        The orbit after, seen from the apsis of the burn; radii > 0, [m].
    v_inf : float
        Hyperbolic excess speed, >= 0, [m/s].
    angle : float
        Turn of the plane, 0 to pi, [rad].

    Returns
    -------
    Burn
        The burn, its transverse part negative, [m/s] and [rad]; NaN outside the ranges above.

    References
    ----------
    .. [1] Curtis, Orbital Mechanics for Engineering Students, 3rd ed., sec. 8.8, eq. 8.60.

    Examples
    --------
    >>> round(capture_burn(4.9028e12, Apsis(1837400.0, 1837400.0), 831.717, 0.0).transverse, 2)
    -821.78
    """
    v = hyperbolic_speed(mu, apsis.r, v_inf)
    return combined_burn(v, -hyperbolic_speed_change(mu, apsis.r, apsis.r_opposite, v_inf), angle)
