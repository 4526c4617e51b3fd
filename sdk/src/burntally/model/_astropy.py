"""The one place that knows `astropy.units`: factors of units that the table of common ones does not hold."""

import re
from functools import lru_cache
from typing import Any, Final

__all__ = ["AstropyMissingError", "factor"]

_WORD: Final = re.compile(r"[A-Za-z_]+")


class AstropyMissingError(ImportError):
    """The units library is not installed; it is an extra."""


@lru_cache(maxsize=512)
def factor(unit: str, x_unit: str) -> float | None:
    """Factor from a unit in the syntax of `astropy.units` to a unit of the contract.

    Parameters
    ----------
    unit : str
        The unit as it was written.
    x_unit : str
        Unit of the contract.

    Returns
    -------
    float or None
        The factor; None: `unit` measures something else.

    Raises
    ------
    ValueError
        There is no such unit.
    AstropyMissingError
        The library is not installed.
    """
    try:
        from astropy import units  # type: ignore[import-untyped]  # ships none; 0.3 s, for units that few designs use
    except ImportError as error:
        raise AstropyMissingError from error
    # The library takes 10 ms to look for names near an unknown one: too long for a body that is full of them.
    library: Any = units
    known = library.get_current_unit_registry().registry
    if not all(word in known for word in _WORD.findall(unit)):
        raise ValueError(unit)
    wanted = library.dimensionless_unscaled if x_unit == "1" else library.Unit(x_unit)
    try:
        return float(library.Unit(unit).to(wanted))
    except units.UnitConversionError:
        return None
