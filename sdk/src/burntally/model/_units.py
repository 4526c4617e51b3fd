"""The common units of each dimension of the contract, as exact decimal factors; a table, so that no library is loaded.

Every entry has the meaning that `astropy.units` gives it, which a test compares; `g0` alone is ours. Each factor is
exact by definition [1]_, [2]_ but the two that hold pi, which are given to more digits than a double holds.

References
----------
.. [1] BIPM, The International System of Units, 9th ed., 2019, tables 4, 7 and 8 (g0: 3rd CGPM, 1901).
.. [2] IAU 2012 Resolution B2 (au); IAU recommendations of 1989, sec. 5.15 (Julian year of 365.25 d).
"""

from collections.abc import Mapping
from decimal import Decimal
from types import MappingProxyType
from typing import Final

__all__ = ["COMMON", "DIMENSIONS", "G0", "SPELLING"]

G0: Final = Decimal("9.80665")
"""Standard acceleration of gravity [m/s2]."""

_RADIAN: Final = "57.295779513082320876798154814105170332405"

_FACTORS: Final[dict[str, dict[str, str]]] = {
    "1": {"%": "0.01"},
    "kg": {"kg": "1", "t": "1e3", "g": "1e-3", "mg": "1e-6", "Mg": "1e3"},
    "N": {"N": "1", "kN": "1e3", "MN": "1e6", "mN": "1e-3", "uN": "1e-6"},
    "s": {"s": "1", "min": "60", "h": "3600", "d": "86400", "wk": "604800", "yr": "31557600", "ms": "1e-3"},
    "m/s": {"m/s": "1", "km/s": "1e3", "cm/s": "1e-2", "mm/s": "1e-3"},
    "m": {"m": "1", "km": "1e3", "cm": "1e-2", "mm": "1e-3", "um": "1e-6", "Mm": "1e6", "AU": "149597870700"},
    "m2": {"m2": "1", "cm2": "1e-4", "mm2": "1e-6", "dm2": "1e-2"},
    "deg": {"deg": "1", "rad": _RADIAN, "mrad": f"{_RADIAN}e-3"},
    "m/s2": {"m/s2": "1", "g0": str(G0), "km/s2": "1e3", "cm/s2": "1e-2", "mm/s2": "1e-3"},
    "Pa": {"Pa": "1", "kPa": "1e3", "MPa": "1e6", "hPa": "1e2", "bar": "1e5", "mbar": "1e2"},
    "m2/s2": {"m2/s2": "1", "km2/s2": "1e6"},
    "m3/s2": {"m3/s2": "1", "km3/s2": "1e9"},
}

COMMON: Final[Mapping[str, Mapping[str, Decimal]]] = MappingProxyType(
    {
        x_unit: MappingProxyType({unit: Decimal(factor) for unit, factor in factors.items()})
        for x_unit, factors in _FACTORS.items()
    }
)
"""Factor of each common unit to the unit of the contract, by that unit."""

DIMENSIONS: Final[Mapping[str, str]] = MappingProxyType(
    {
        "1": "a fraction",
        "kg": "a mass",
        "N": "a force",
        "s": "a time",
        "m/s": "a speed",
        "m": "a length",
        "m2": "an area",
        "deg": "an angle",
        "m/s2": "an acceleration",
        "Pa": "a pressure",
        "m2/s2": "a squared speed",
        "m3/s2": "a gravitational parameter",
    }
)
"""What each unit of the contract measures, in words."""

SPELLING: Final[Mapping[int, str]] = MappingProxyType(
    {ord("°"): "deg", ord("²"): "2", ord("³"): "3", ord("·"): " ", ord("µ"): "u", ord("μ"): "u"}
)
"""Signs outside ASCII that are usual in units, and what they stand for."""
