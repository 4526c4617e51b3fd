"""Whether an answer is the recorded one: the same but for words, and for the last digit of a number."""

import math
from collections.abc import Iterator
from typing import Any

__all__ = ["differences"]


def differences(recorded: Any, told: Any) -> list[str]:
    """Pointers at which an answer is not what was recorded."""
    was, is_now = dict(_leaves(recorded)), dict(_leaves(told))
    changed = [key for key in was.keys() & is_now.keys() if _is_stable(key) and not _is_same(was[key], is_now[key])]
    return sorted([*changed, *(was.keys() ^ is_now.keys())])


def _leaves(value: Any, pointer: str = "") -> Iterator[tuple[str, Any]]:
    if value and isinstance(value, dict):
        for key, inner in value.items():
            yield from _leaves(inner, f"{pointer}/{key}")
    elif value and isinstance(value, list):
        for index, inner in enumerate(value):
            yield from _leaves(inner, f"{pointer}/{index}")
    else:
        yield pointer, value


def _is_stable(pointer: str) -> bool:
    """Tell what the contract promises to keep: codes are stable, words are not."""
    return not pointer.endswith("/message")


def _is_same(was: Any, is_now: Any) -> bool:
    # Another processor's library may round the last digit otherwise, and 1.0 is 1 to a program without integers.
    numbers = all(isinstance(value, float | int) and not isinstance(value, bool) for value in (was, is_now))
    return math.isclose(was, is_now, rel_tol=1e-9, abs_tol=1e-6) if numbers else bool(was == is_now)
