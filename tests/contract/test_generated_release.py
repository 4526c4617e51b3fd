"""As `test_generated`, at length. Its cases are drawn when it is collected, so only `-m release` collects it.

`CONTRACT_TEST_SEED` draws others; `.ci/nightly` goes through several seeds.
"""

from collections import Counter

import pytest
from hypothesis import settings

from burntally.model.decode import JSON, MSGPACK
from tests.contract.generation import RELEASE_PROFILE, SEED, AnyCase, schema_for

schema = schema_for([JSON, MSGPACK], RELEASE_PROFILE)
sent: Counter[str] = Counter()


@pytest.mark.release
@schema.parametrize()
def test_the_server_keeps_to_its_contract_at_length(case: AnyCase) -> None:
    sent[f"{case.operation.label}, {case.media_type}"] += 1
    case.call_and_validate()


@pytest.mark.release
def test_what_is_listed_can_be_asked_for_at_length() -> None:
    steps = settings(max_examples=100, stateful_step_count=4, deadline=None)
    schema.as_state_machine().run(settings=steps)


@pytest.mark.release
def test_enough_was_sent() -> None:
    print(f"\nseed {SEED}: {sent.total()} requests, {dict(sent)}")  # noqa: T201 - the figure that a release reports
    assert sent.total() >= 5_000
