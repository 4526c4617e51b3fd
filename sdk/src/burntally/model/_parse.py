"""Bodies as plain values, with all kept that a generic decoder loses: keys written twice, numbers too large.

The quick parsers of msgspec come first; the slow ones here run only on a body that the quick way refused, to say why.
"""

import json
import math
from collections import Counter
from collections.abc import Iterable, Sequence
from typing import Final, TypeGuard

from burntally.model.errors import ContractError, Violation

__all__ = [
    "DEEPEST",
    "Doubled",
    "Unbounded",
    "depth_of",
    "is_list",
    "is_object",
    "json_values",
    "object_of",
    "one_violation",
    "too_deep",
]

DEEPEST: Final = 32
"""Levels of nesting that are read; a design needs ten."""

_LONGEST_INTEGER: Final = 310
_SHOWN: Final = 40


class Doubled(dict[object, object]):
    """An object with keys that were written more than once; `doubled` names them, the last value stands."""

    doubled: tuple[object, ...] = ()


class Unbounded(float):
    """A number that no double holds, with the text that it was written as."""

    text: str = ""


def is_object(value: object) -> TypeGuard[dict[object, object]]:
    """Tell whether a plain value is an object."""
    return isinstance(value, dict)


def is_list(value: object) -> TypeGuard[list[object]]:
    """Tell whether a plain value is a list."""
    return isinstance(value, list)


def one_violation(message: str, *, expected: str | None = None, read: str | None = None) -> ContractError:
    """Error with one violation, of the body as a whole.

    Parameters
    ----------
    message : str
        What is wrong.
    expected, read : str, optional
        What was wanted, and what was found.

    Returns
    -------
    ContractError
        The error, to be raised.
    """
    return ContractError([Violation(pointer="", message=message, read=read, expected=expected)])


def json_values(data: bytes) -> object:
    """Parse JSON without losing what a contract refuses.

    Parameters
    ----------
    data : bytes
        The body.

    Returns
    -------
    object
        Plain values; `Doubled` for an object with a key twice, `Unbounded` for NaN, infinities and numbers too large.

    Raises
    ------
    ContractError
        The body is empty, not UTF-8, not JSON, or nested beyond reading.
    """
    if not data.strip():
        raise one_violation("the body is empty", expected="a JSON document")
    try:
        text = data.decode("utf-8")
        parsed: object = json.loads(
            text,
            object_pairs_hook=object_of,
            parse_int=_integer,
            parse_float=_number,
            parse_constant=_unbounded,
        )
    except UnicodeDecodeError as error:
        raise one_violation(
            f"the body is not UTF-8, at byte {error.start}", expected="a JSON document in UTF-8"
        ) from error
    except json.JSONDecodeError as error:
        place = f"line {error.lineno}, column {error.colno}"
        raise one_violation(f"the body is not JSON: {error.msg} ({place})", expected="a JSON document") from error
    except RecursionError as error:
        raise too_deep() from error
    return parsed


def too_deep() -> ContractError:
    """Error of a body that is nested too deep."""
    return one_violation("the body is nested too deep", expected=f"at most {DEEPEST} levels")


def depth_of(parsed: object, *, is_tree: bool) -> int:
    """Count the levels of nesting, up to one more than `DEEPEST`.

    Parameters
    ----------
    parsed : object
        Plain values.
    is_tree : bool
        Whether each value stands in one place alone; in YAML one may stand in many.

    Returns
    -------
    int
        Levels; 0 for a lone scalar.
    """
    containers = _containers if is_tree else _distinct_containers
    level = containers([parsed])
    depth = 0
    while level and depth <= DEEPEST:
        depth += 1
        level = containers(inner for held in level for inner in (held.values() if isinstance(held, dict) else held))
    return depth


def object_of(pairs: Sequence[tuple[object, object]]) -> dict[object, object]:
    """Make an object of its pairs, and mark it where a key is written twice."""
    made = dict(pairs)
    if len(made) == len(pairs):
        return made
    doubled = Doubled(made)
    doubled.doubled = tuple(name for name, count in Counter(name for name, _ in pairs).items() if count > 1)
    return doubled


def _containers(values: Iterable[object]) -> list[dict[object, object] | list[object]]:
    return [value for value in values if is_object(value) or is_list(value)]


def _distinct_containers(values: Iterable[object]) -> list[dict[object, object] | list[object]]:
    # Each of them once: the ways to one that stands in many places double with each level.
    return list({id(value): value for value in _containers(values)}.values())


def _integer(text: str) -> int | float:
    return int(text) if len(text) <= _LONGEST_INTEGER else _unbounded(text)


def _number(text: str) -> float:
    value = float(text)
    return value if math.isfinite(value) else _unbounded(text)


def _unbounded(text: str) -> Unbounded:
    value = Unbounded("nan" if text == "NaN" else "-inf" if text.startswith("-") else "inf")
    value.text = text[:_SHOWN]
    return value
