"""Air in layers of linear temperature, as the U.S. Standard Atmosphere 1976 has it below 86 km."""

import math
from collections.abc import Sequence
from typing import NamedTuple

from burntally_service.kernels.constants import G0

__all__ = [
    "Air",
    "AirLayer",
    "MolarMassRow",
    "geometric_altitude",
    "geopotential_altitude",
    "layer_pressure",
    "layered_air",
    "molar_mass_ratio",
]


class AirLayer(NamedTuple):
    """A layer, from its base to the base of the next one.

    Attributes
    ----------
    base : float
        Geopotential altitude of the base, [m].
    temperature : float
        Molecular-scale temperature at the base, [K].
    lapse : float
        Its change with geopotential altitude, [K/m].
    pressure : float
        Pressure at the base, [Pa].
    """

    base: float
    temperature: float
    lapse: float
    pressure: float


class MolarMassRow(NamedTuple):
    """Where air begins to come apart.

    Attributes
    ----------
    alt : float
        Geometric altitude, [m].
    ratio : float
        Mean molar mass over that at sea level, [-].
    """

    alt: float
    ratio: float


class Air(NamedTuple):
    """Air at one place.

    Attributes
    ----------
    temperature : float
        Molecular-scale temperature, the kinetic one times M_0/M, [K].
    pressure : float
        Pressure, [Pa].
    density : float
        Density, [kg/m3].
    sound_speed : float
        Speed of sound, [m/s].
    """

    temperature: float
    pressure: float
    density: float
    sound_speed: float


_NO_AIR = Air(math.nan, math.nan, math.nan, math.nan)
_EXP_MAX = 709.0  # math.exp raises beyond 709.78, where the compiled twin gives infinity
_DEEPEST = -5000.0  # U.S. Standard Atmosphere, 1976, table I begins there, [m]


def geopotential_altitude(alt: float, r_body: float) -> float:
    r"""Altitude that needs the same work at constant gravity.

    .. math:: H = \frac{r_0 Z}{r_0 + Z}

    Parameters
    ----------
    alt : float
        Geometric altitude Z, > -r_body, [m].
    r_body : float
        Radius r_0 to which gravity refers, > 0, [m].

    Returns
    -------
    float
        Geopotential altitude, [m]; NaN outside the ranges above.

    References
    ----------
    .. [1] U.S. Standard Atmosphere, 1976, NOAA-S/T 76-1562, eq. 18.

    Examples
    --------
    >>> round(geopotential_altitude(86000.0, 6356766.0), 3)
    84852.046
    """
    if not (r_body > 0.0 and alt > -r_body):
        return math.nan
    return alt / (1.0 + alt / r_body)


def geometric_altitude(h: float, r_body: float) -> float:
    r"""Altitude that is measured, the inverse of `geopotential_altitude`.

    .. math:: Z = \frac{r_0 H}{r_0 - H}

    Parameters
    ----------
    h : float
        Geopotential altitude H, < r_body, [m].
    r_body : float
        Radius r_0 to which gravity refers, > 0, [m].

    Returns
    -------
    float
        Geometric altitude, [m]; NaN outside the ranges above.

    References
    ----------
    .. [1] U.S. Standard Atmosphere, 1976, NOAA-S/T 76-1562, eq. 19.

    Examples
    --------
    >>> round(geometric_altitude(84852.046, 6356766.0), 2)
    86000.0
    """
    if not (r_body > 0.0 and h < r_body):
        return math.nan
    left = 1.0 - h / r_body
    return h / left if left > 0.0 else math.nan


def layer_pressure(layer: AirLayer, h: float, r_gas: float) -> float:
    r"""Pressure in a layer of linear temperature, in hydrostatic balance.

    .. math:: p = p_b \exp\left(-\frac{g_0}{R}\int_{H_b}^{H} \frac{dH}{T_b + L (H - H_b)}\right)

    Parameters
    ----------
    layer : AirLayer
        The layer.
    h : float
        Geopotential altitude H, [m].
    r_gas : float
        Specific gas constant R, > 0, [J/(kg K)].

    Returns
    -------
    float
        Pressure, [Pa]; NaN outside the range above, or where the temperature would not be positive.

    Notes
    -----
    One form serves the layers with and without a lapse rate; the source has two, equations 33a and 33b.

    References
    ----------
    .. [1] U.S. Standard Atmosphere, 1976, NOAA-S/T 76-1562, eqs. 33a and 33b.

    Examples
    --------
    >>> round(layer_pressure(AirLayer(0.0, 288.15, -0.0065, 101325.0), 11000.0, 287.05287))
    22632
    """
    if not (r_gas > 0.0 and layer.temperature > 0.0 and layer.pressure >= 0.0):
        return math.nan
    rise = (h - layer.base) / layer.temperature
    growth = layer.lapse * rise
    if not -1.0 < growth < math.inf:
        return math.nan
    exponent = -G0 / r_gas * rise * (math.log1p(growth) / growth if growth != 0.0 else 1.0)
    return layer.pressure * math.exp(exponent) if exponent < _EXP_MAX else math.nan


def layered_air(h: float, layers: Sequence[AirLayer], r_gas: float, gamma: float) -> Air:
    r"""Air at a geopotential altitude.

    .. math:: \rho = \frac{p}{R T}, \qquad a = \sqrt{\gamma R T}

    Parameters
    ----------
    h : float
        Geopotential altitude, from -5000 to the base of the last layer, [m].
    layers : sequence of AirLayer
        Layers by rising base, shape (n,), n >= 2; the last one only marks the top, [m], [K], [K/m], [Pa].
    r_gas : float
        Specific gas constant R, > 0, [J/(kg K)].
    gamma : float
        Ratio of heat capacities, > 0, [-].

    Returns
    -------
    Air
        The air, [K], [Pa], [kg/m3] and [m/s]; NaN outside the ranges above.

    References
    ----------
    .. [1] U.S. Standard Atmosphere, 1976, NOAA-S/T 76-1562, eqs. 23, 33, 42 and 50.

    Examples
    --------
    >>> ground, top = AirLayer(0.0, 288.15, -0.0065, 101325.0), AirLayer(11e3, 216.65, 0.0, 22632.06)
    >>> round(layered_air(0.0, [ground, top], 287.05287, 1.4).sound_speed, 3)
    340.294
    """
    last = len(layers) - 1
    if last < 1 or not (_DEEPEST <= h <= layers[last].base and r_gas > 0.0 and gamma > 0.0):
        return _NO_AIR
    place = 0
    while place + 1 < last and h >= layers[place + 1].base:
        place += 1
    layer = AirLayer(layers[place].base, layers[place].temperature, layers[place].lapse, layers[place].pressure)
    temperature = layer.temperature + layer.lapse * (h - layer.base)
    squared = gamma * r_gas * temperature
    if not (temperature > 0.0 and 0.0 < squared < math.inf):
        return _NO_AIR
    pressure = layer_pressure(layer, h, r_gas)
    return Air(temperature, pressure, pressure / temperature / r_gas, math.sqrt(squared))


def molar_mass_ratio(alt: float, rows: Sequence[MolarMassRow]) -> float:
    r"""Mean molar mass of the air over that at sea level, between the rows of a table.

    .. math:: T = T_M \, M / M_0

    Parameters
    ----------
    alt : float
        Geometric altitude, at most that of the last row, [m].
    rows : sequence of MolarMassRow
        Table by rising altitude, shape (n,), n >= 1; air is whole below the first row, [m], [-].

    Returns
    -------
    float
        Ratio M/M_0, which makes the molecular-scale temperature the kinetic one, [-]; NaN above the table.

    References
    ----------
    .. [1] U.S. Standard Atmosphere, 1976, NOAA-S/T 76-1562, table 8 and eq. 22.

    Examples
    --------
    >>> round(molar_mass_ratio(85750.0, [MolarMassRow(85500.0, 0.999641), MolarMassRow(86000.0, 0.999579)]), 5)
    0.99961
    """
    if len(rows) == 0:
        return math.nan
    if alt <= rows[0].alt:
        return rows[0].ratio
    for i in range(1, len(rows)):
        width = rows[i].alt - rows[i - 1].alt
        if alt <= rows[i].alt and width > 0.0:
            share = (alt - rows[i - 1].alt) / width
            return rows[i - 1].ratio + share * (rows[i].ratio - rows[i - 1].ratio)
    return math.nan
