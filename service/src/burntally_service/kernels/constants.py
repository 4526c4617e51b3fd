"""Constants that are exact by definition, in SI.

Bodies and atmospheres are data with their own sources; only what a standard fixes for good is written here.
"""

from typing import Final

__all__ = ["DAY", "G0", "JULIAN_YEAR", "STANDARD_PRESSURE"]

G0: Final = 9.80665
"""Standard acceleration of gravity, [m/s2]: 3rd CGPM (1901), declaration 2; BIPM, The SI Brochure, 9th ed. (2019)."""

STANDARD_PRESSURE: Final = 101325.0
"""Standard atmosphere, [Pa]: 10th CGPM (1954), resolution 4; ISO 2533:1975, table 1."""

DAY: Final = 86400.0
"""Day, [s]: BIPM, The SI Brochure, 9th ed. (2019), table 8."""

JULIAN_YEAR: Final = 31557600.0
"""Julian year of 365.25 days, [s]: IAU Style Manual (1989), sec. 5.15."""
