"""The examples in the contract are what the service answers today."""

import math
from collections.abc import Iterator
from typing import Any

import msgspec
import pytest

from burntally_service.api.examples import answer_of, example_bytes, requests_of
from burntally_service.operations import OPERATIONS, answer

REQUESTS = [(row, name) for row in OPERATIONS for name in requests_of(row)]


def leaves(value: Any, pointer: str = "") -> Iterator[tuple[str, Any]]:
    if isinstance(value, dict):
        for key, inner in value.items():
            yield from leaves(inner, f"{pointer}/{key}")
    elif isinstance(value, list):
        for index, inner in enumerate(value):
            yield from leaves(inner, f"{pointer}/{index}")
    else:
        yield pointer, value


def is_stable(pointer: str) -> bool:
    """Tell what the contract promises to keep: codes are stable, words are not."""
    return not pointer.endswith("/message")


def is_same(was: Any, is_now: Any) -> bool:
    # Another processor's library may round the last digit otherwise.
    numbers = isinstance(was, float) and isinstance(is_now, float)
    return math.isclose(was, is_now, rel_tol=1e-9, abs_tol=1e-6) if numbers else bool(was == is_now)


@pytest.mark.parametrize("operation_id", OPERATIONS)
def test_the_recorded_answer_still_holds(operation_id: str) -> None:
    recorded = dict(leaves(answer_of(operation_id)["answer"]["value"]))
    told = dict(leaves(msgspec.json.decode(answer(operation_id, example_bytes(operation_id)))))
    assert recorded.keys() == told.keys()
    changed = [pointer for pointer in told if not is_same(recorded[pointer], told[pointer])]
    assert list(filter(is_stable, changed)) == []


@pytest.mark.parametrize("operation_id,name", REQUESTS)
def test_every_example_request_is_answered(operation_id: str, name: str) -> None:
    assert answer(operation_id, msgspec.json.encode(requests_of(operation_id)[name]["value"]))
