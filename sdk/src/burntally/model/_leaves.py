"""How the walker reads a single value: a number or quantity, a count, a text, a choice, a yes or no."""

import re
from collections.abc import Callable, Mapping
from datetime import UTC, date, datetime
from typing import Final, get_args

from msgspec import inspect

from burntally.model._trail import Trail, kind_of, suggestion, tell
from burntally.model.quantity import QuantityError, dimension_of, read, units_of
from burntally.model.scalars import OR_UNIT_KEY, UNIT_KEY, CategoryPath, Epoch, Name, Pointer

__all__ = ["Reader", "boolean", "choice_of", "count_of", "number_of", "text_of"]

Reader = Callable[[object, Trail], object]
"""Reads the value at a trail; gives it back as the decoder wants it, or tells what is wrong with it."""

Bounded = inspect.FloatType | inspect.IntType


def _pattern_of(scalar: object) -> str:
    pattern = get_args(scalar)[1].pattern
    return pattern if isinstance(pattern, str) else ""


_EPOCH: Final = _pattern_of(Epoch)
_IN_WORDS: Final[dict[str, str]] = {
    _pattern_of(Name): "letters, digits, spaces, `_`, `.` and `-`",
    _pattern_of(CategoryPath): "a dotted path of letters, digits, `_` and `-`",
    _pattern_of(Pointer): "a JSON Pointer",
    _EPOCH: "an ISO 8601 date or date and time in UTC, years 1900 to 2200, such as 2031-04-12T06:00:00Z",
}


def number_of(info: inspect.FloatType, extra: Mapping[str, object]) -> Reader:
    """Make the reader of a number or quantity.

    Parameters
    ----------
    info : FloatType
        Bounds.
    extra : Mapping
        What the type adds to its schema: its unit, if it may be written with one.

    Returns
    -------
    Reader
        Reads plain numbers, and text with a unit where the type has one.
    """
    x_unit, or_unit = extra.get(UNIT_KEY), extra.get(OR_UNIT_KEY)
    unit = x_unit if isinstance(x_unit, str) else None
    other = or_unit if isinstance(or_unit, str) else None
    expected = f"a number{_range(info)}{_units(unit, other)}"

    def read_number(value: object, trail: Trail) -> object:
        number = value
        if isinstance(value, str) and unit is not None:
            try:
                number = read(value, unit, other)
            except QuantityError as error:
                tell(trail, str(error), read=value, expected=expected)
                return value
        if isinstance(number, bool) or not isinstance(number, int | float):
            tell(trail, f"is {kind_of(value)} where a number is wanted", read=value, expected=expected)
        elif (wrong := _outside(number, info)) is not None:
            tell(trail, wrong, read=value, expected=expected)
        return number

    return read_number


def count_of(info: inspect.IntType) -> Reader:
    """Make the reader of a whole number; `3.0` is one, as JSON Schema has it."""
    expected = f"a whole number{_range(info)}"

    def read_count(value: object, trail: Trail) -> object:
        number = _whole(value)
        if isinstance(number, bool) or not isinstance(number, int):
            tell(trail, "is not a whole number", read=value, expected=expected)
        elif (wrong := _outside(number, info)) is not None:
            tell(trail, wrong, read=value, expected=expected)
        return number

    return read_count


def choice_of(info: inspect.LiteralType) -> Reader:
    """Make the reader of one of a few values."""
    values = tuple(info.values)
    names = tuple(str(value) for value in values)
    expected = " or ".join(repr(value) if isinstance(value, str) else str(value) for value in values)

    def read_choice(value: object, trail: Trail) -> object:
        number = _whole(value)
        if not any(number == known and type(number) is type(known) for known in values):
            near = suggestion(value, names) if isinstance(value, str) else ""
            tell(trail, f"is none of the values that are allowed{near}", read=value, expected=expected)
        return number

    return read_choice


def text_of(info: inspect.StrType) -> Reader:
    """Make the reader of a text; a date of TOML or YAML is read as one where an epoch is wanted."""
    # In Python `$` also matches before a trailing newline; in a schema it does not.
    pattern = re.compile(re.sub(r"\$\Z", r"\\Z", info.pattern)) if info.pattern is not None else None
    least, most = info.min_length or 0, info.max_length
    limits = f"{least} to {most} characters" if most is not None else "text"
    expected = f"{limits}: {_IN_WORDS.get(info.pattern, info.pattern)}" if info.pattern is not None else limits

    def read_text(value: object, trail: Trail) -> object:
        text = _iso(value) if info.pattern == _EPOCH and isinstance(value, date) else value
        if not isinstance(text, str):
            tell(trail, f"is {kind_of(value)} where text is wanted", read=value, expected=expected)
        elif len(text) < least or (most is not None and len(text) > most):
            tell(trail, f"has {len(text)} characters", read=value, expected=expected)
        elif (pattern is not None and not pattern.search(text)) or _is_broken(text):
            tell(trail, "has characters or a form that are not allowed", read=value, expected=expected)
        return text

    return read_text


def boolean(value: object, trail: Trail) -> object:
    """Read a yes or no."""
    if not isinstance(value, bool):
        tell(trail, f"is {kind_of(value)} where true or false is wanted", read=value, expected="true or false")
    return value


def _whole(value: object) -> object:
    return int(value) if isinstance(value, float) and value.is_integer() else value


def _outside(number: float, info: Bounded) -> str | None:
    if number - number != 0.0:  # NaN or infinity; an integer may be too large for `isfinite`
        return "is not a finite number that can be computed with"
    if (info.ge is not None and number < info.ge) or (info.gt is not None and number <= info.gt):
        return "is below the least that is allowed"
    if (info.le is not None and number > info.le) or (info.lt is not None and number >= info.lt):
        return "is above the most that is allowed"
    return None


def _range(info: Bounded) -> str:
    low = f" above {_short(info.gt)}" if info.gt is not None else "" if info.ge is None else f" from {_short(info.ge)}"
    high = f" below {_short(info.lt)}" if info.lt is not None else "" if info.le is None else f" to {_short(info.le)}"
    return f"{low}{high}"


def _short(number: float) -> str:
    return f"{number:g}".replace("e+0", "e").replace("e+", "e")


def _units(unit: str | None, other: str | None) -> str:
    if unit is None:
        return ""
    plain = "" if unit == "1" else f" in {unit}"
    also = f", or {dimension_of(other)} ({', '.join(units_of(other))})" if other is not None else ""
    return f"{plain}, or text with a unit ({', '.join(units_of(unit))}){also}"


def _iso(value: date) -> str:
    if isinstance(value, datetime) and value.tzinfo is not None:
        value = value.astimezone(UTC).replace(tzinfo=None)
    return value.isoformat()


def _is_broken(text: str) -> bool:
    # Half of a surrogate pair is no character: it cannot be written as UTF-8 again.
    return not text.isascii() and any("\ud800" <= sign <= "\udfff" for sign in text)
