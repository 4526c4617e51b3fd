"""Where the walker is, and how it tells what is wrong there."""

import json
from datetime import date
from typing import Final

from burntally.model._parse import Unbounded
from burntally.model.errors import Violation

__all__ = ["Report", "Trail", "kind_of", "pointer_to", "shown", "suggestion", "tell"]

Trail = tuple["Trail | None", object]
"""The way from the root to a value, innermost first: cheap to lengthen, and rendered only where something is wrong."""

Report = list[Violation]

_LONGEST: Final = 60
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


def pointer_to(trail: Trail | None) -> str:
    """Render a trail as a JSON Pointer (RFC 6901).

    Examples
    --------
    >>> pointer_to(((None, "feeds"), "a/b"))
    '/feeds/a~1b'
    """
    parts: list[str] = []
    while trail is not None:
        trail, part = trail
        parts.append(str(part).replace("~", "~0").replace("/", "~1"))
    return _writable("".join(f"/{part}" for part in reversed(parts)))


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


def tell(report: Report, trail: Trail | None, message: str, *, read: object = ..., expected: str | None = None) -> None:
    """Add a violation to a report.

    Parameters
    ----------
    report : list of Violation
        What is wrong so far.
    trail : tuple or None
        Where it is wrong.
    message : str
        What is wrong.
    read : object, optional
        The value there; absent: there is none.
    expected : str, optional
        What is wanted.
    """
    seen = None if read is ... else shown(read)
    report.append(Violation(pointer=pointer_to(trail), message=message, read=seen, expected=expected))


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
