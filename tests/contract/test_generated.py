"""The server keeps to its contract, whatever is sent: requests are generated from the document, right and wrong."""

from hypothesis import settings

from burntally.model.decode import JSON
from tests.contract.generation import PROFILE, AnyCase, schema_for

# The border reads both media types into the same values, so this run generates one of them.
schema = schema_for([JSON], PROFILE)


@schema.parametrize()
def test_the_server_keeps_to_its_contract(case: AnyCase) -> None:
    case.call_and_validate()


def test_what_is_listed_can_be_asked_for() -> None:
    steps = settings(max_examples=10, stateful_step_count=3, deadline=None)
    schema.as_state_machine().run(settings=steps)
