"""The examples in the contract are what the service answers today."""

import msgspec
import pytest

from burntally_service.api.examples import answer_of, example_bytes, requests_of
from burntally_service.operations import OPERATIONS, answer
from tests.contract.likeness import differences

REQUESTS = [(row, name) for row in OPERATIONS for name in requests_of(row)]


@pytest.mark.parametrize("operation_id", OPERATIONS)
def test_the_recorded_answer_still_holds(operation_id: str) -> None:
    told = msgspec.json.decode(answer(operation_id, example_bytes(operation_id)))
    assert differences(answer_of(operation_id)["answer"]["value"], told) == []


@pytest.mark.parametrize("operation_id,name", REQUESTS)
def test_every_example_request_is_answered(operation_id: str, name: str) -> None:
    assert answer(operation_id, msgspec.json.encode(requests_of(operation_id)[name]["value"]))
