"""Where the walker is, and how it tells what is wrong there."""

import json
from datetime import date
from typing import Final

from burntally.model._parse import Unbounded
from burntally.model.errors import Violation

__all__ = ["Report", "ReportFullError", "Trail", "kind_of", "shown", "suggestion", "tell"]


class ReportFullError(Exception):
    """So much is wrong that reading on would serve nobody but who sends bodies to keep a server busy."""


class Report:
    """What is wrong with a value, as it is found; the root of every trail."""

    def __init__(self) -> None:
        self.violations: list[Violation] = []

    def add(self, violation: Violation) -> None:
        """Add a violation, and stop the reading where there are too many."""
        self.violations.append(violation)
        if len(self.violations) >= _MOST:
            message = f"reading stopped after {_MOST} violations"
            self.violations.append(Violation(pointer="", message=message, expected="fewer of them"))
            raise ReportFullError


Trail = Report | tuple["Trail", object]
"""The way from the root to a value, innermost first: cheap to lengthen, and rendered only where something is wrong."""

_LONGEST: Final = 60
_MOST: Final = 200
_KINDS: Final[dict[type, str]] = {
    bool: "a boolean",
    int: "a number",
    float: "a number",
    Unbounded: "a number",
    str: "text",
    list: "a list",
    dict: "an object",
    bytes: "binary data",
    type(None): "null",
}


def kind_of(value: object) -> str:
    """Say in words what kind of value this is."""
    if isinstance(value, dict):
        return "an object"
    return _KINDS.get(type(value), "a date" if isinstance(value, date) else f"a {type(value).__name__}")


def shown(value: object) -> str:
    """Show a value as it was written, cut where it is long."""
    if isinstance(value, Unbounded):
        return value.text
    if isinstance(value, str):
        return _writable(_cut(json.dumps(value[: _LONGEST + 1], ensure_ascii=False)))
    if isinstance(value, int) and value.bit_length() > _LONGEST * 4:
        return "a number of many digits"
    if value is None or isinstance(value, bool | int | float):
        return _cut(json.dumps(value))
    return kind_of(value)


def tell(trail: Trail, message: str, *, read: object = ..., expected: str | None = None) -> None:
    """Add a violation to the report that a trail starts from.

    Parameters
    ----------
    trail : Report or tuple
        Where it is wrong.
    message : str
        What is wrong.
    read : object, optional
        The value there; absent: there is none.
    expected : str, optional
        What is wanted.
    """
    parts: list[str] = []
    while not isinstance(trail, Report):
        trail, part = trail
        parts.append("/" + str(part).replace("~", "~0").replace("/", "~1"))
    pointer = _writable("".join(reversed(parts)))
    seen = None if read is ... else shown(read)
    trail.add(Violation(pointer=pointer, message=message, read=seen, expected=expected))


def suggestion(name: object, names: tuple[str, ...]) -> str:
    """Name the nearest of the names that would have been right, for the end of a message."""
    from difflib import get_close_matches  # only for what is wrong

    near = get_close_matches(str(name)[:_LONGEST], names, n=1)
    return f"; did you mean {near[0]!r}?" if near else ""


def _cut(text: str) -> str:
    return text if len(text) <= _LONGEST else f"{text[: _LONGEST - 3]}..."


def _writable(text: str) -> str:
    # Half of a surrogate pair cannot be written as UTF-8; the answer that tells of it must be.
    return text.encode("utf-8", "backslashreplace").decode()
