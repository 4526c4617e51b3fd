"""Quantities as text: a number with its unit, read into the unit of the contract.

Units have the syntax of `astropy.units`; `g0` is added for accelerations. The common ones are read from a table of
exact factors, in decimal, so that ``"1.001 km"`` is the same float as ``1001.0``; the rest needs the `units` extra.
"""

import re
from decimal import Context, Decimal
from typing import Final

from burntally.model import _astropy
from burntally.model._trail import suggestion
from burntally.model._units import COMMON, DIMENSIONS, G0, SPELLING
from burntally.model.errors import BurntallyError

__all__ = ["QuantityError", "dimension_of", "read", "units_of", "wire_pattern"]

_NUMBER: Final = r"[+\-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+\-]?[0-9]{1,3})?"
# ASCII digits and the true end: `\d` also means Arabic digits, and `$` also matches before a newline.
_QUANTITY: Final = re.compile(rf"({_NUMBER}) *([^0-9\s][^\n]*)?\Z")
_UNIT: Final = re.compile(r"[A-Za-z%][A-Za-z0-9_%*/^(). +\-]*\Z")
# A power of zero is no unit (and would make `g0` a pure number); one of three digits is none that a design needs.
_ODD_POWER: Final = re.compile(r"[A-Za-z)^*]0|[0-9]{3}")
_SPACED_SLASH: Final = re.compile(r" */ *")
_SIGNED_POWER: Final = re.compile(r"(?:\*\*|\^)(?=[0-9])")
_LONGEST: Final = 100
# Digits enough that a product of any number that fits in `_LONGEST` is rounded once, to a double.
_EXACT: Final = Context(prec=160)


class QuantityError(BurntallyError, ValueError):
    """A text that is no quantity of the dimension that is wanted."""


def units_of(x_unit: str) -> tuple[str, ...]:
    """Name the common units of a dimension.

    Parameters
    ----------
    x_unit : str
        Unit of the contract, as the schema's `x-unit` gives it.

    Returns
    -------
    tuple of str
        Units that are read without the `units` extra; none for an unknown `x_unit`.

    Examples
    --------
    >>> units_of("N")
    ('N', 'kN', 'MN', 'mN', 'uN')
    """
    return tuple(COMMON.get(x_unit, ()))


def dimension_of(x_unit: str) -> str:
    """Say in words what a unit of the contract measures.

    Examples
    --------
    >>> dimension_of("kg")
    'a mass'
    """
    return DIMENSIONS.get(x_unit, f"a quantity in {x_unit}")


def wire_pattern(*x_units: str) -> str:
    """Regular expression, in the dialect of JSON Schema, of a number with a common unit of any of these dimensions.

    Parameters
    ----------
    *x_units : str
        Units of the contract.

    Returns
    -------
    str
        The pattern; what it matches is read without the `units` extra, and what is read may be written otherwise.

    Examples
    --------
    >>> import re
    >>> bool(re.match(wire_pattern("kg"), "7.65 t"))
    True
    """
    units = "|".join(re.escape(unit) for x_unit in x_units for unit in units_of(x_unit))
    return rf"^{_NUMBER} ?({units})$"


def read(text: str, x_unit: str, or_unit: str | None = None) -> float:
    """Read a number with its unit.

    Parameters
    ----------
    text : str
        A number, white space if any, a unit: ``"7.65 t"``, ``"3.38 km / s"``, ``"12 %"``.
    x_unit : str
        Unit of the contract, which the answer is in.
    or_unit : str, optional
        A speed's unit, where a time may be written as the speed that it gives when multiplied by g0 (specific impulse).

    Returns
    -------
    float
        The quantity in `x_unit`. It may be infinite where the number is too large; bounds are the caller's.

    Raises
    ------
    QuantityError
        `text` is not a number with a unit, the unit is unknown, or it measures something else.

    Examples
    --------
    >>> read("7.65 t", "kg")
    7650.0
    >>> round(read("3.38 km/s", "s", "m/s"), 2)
    344.66
    """
    number, unit = _split(text)
    exact = COMMON[x_unit].get(unit)
    if exact is None:
        return _read_slowly(number, _respelt(unit), x_unit, or_unit)
    return float(_EXACT.multiply(Decimal(number), exact))


def _split(text: str) -> tuple[str, str]:
    found = _QUANTITY.match(text.strip(" ")) if len(text) <= _LONGEST else None
    if found is None:
        raise QuantityError("is not a number with its unit")
    number, unit = found.groups()
    if unit is None:
        raise QuantityError("carries no unit; write a plain number, or add one")
    return number, unit


def _respelt(unit: str) -> str:
    if not unit.isascii():
        unit = unit.translate(SPELLING).strip()
    unit = _SIGNED_POWER.sub("", _SPACED_SLASH.sub("/", unit))
    if not _UNIT.match(unit):
        raise QuantityError(f"has no unit that can be read, {unit!a}")
    return unit


def _read_slowly(number: str, unit: str, x_unit: str, or_unit: str | None) -> float:
    value = _in(number, unit, x_unit)
    if value is None and or_unit is not None:
        speed = _in(number, unit, or_unit)
        value = None if speed is None else speed / float(G0)
    if value is None:
        raise QuantityError(_why_not(number, unit, x_unit))
    return value


def _in(number: str, unit: str, x_unit: str) -> float | None:
    exact = COMMON[x_unit].get(unit)
    if exact is not None:
        return float(_EXACT.multiply(Decimal(number), exact))
    if _table_of(unit) is not None:
        return None
    if _ODD_POWER.search(unit) or unit.count("/") > 1:
        raise QuantityError(f"has an unknown unit, {unit!r}; write powers as in m/s2")
    factor = _looked_up(unit, x_unit)
    return None if factor is None else float(number) * factor


def _table_of(unit: str) -> str | None:
    return next((x_unit for x_unit, units in COMMON.items() if unit in units), None)


def _looked_up(unit: str, x_unit: str) -> float | None:
    try:
        return _astropy.factor(unit, x_unit)
    except _astropy.AstropyMissingError as error:
        common = ", ".join(units_of(x_unit))
        raise QuantityError(
            f"has a unit outside the common ones ({common}): {unit!r}; others need `pip install burntally[units]`"
        ) from error
    except ValueError as error:
        raise QuantityError(f"has an unknown unit, {unit!r}{suggestion(unit, units_of(x_unit))}") from error


def _why_not(number: str, unit: str, x_unit: str) -> str:
    if x_unit == "m/s2" and unit == "g":
        return f"is in grams, a mass; for standard gravities write {number} g0"
    measured = _table_of(unit)
    is_a = f", {dimension_of(measured)}" if measured is not None else ""
    return f"is in {unit!r}{is_a}, and {dimension_of(x_unit)} is wanted"
