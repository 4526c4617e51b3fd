"""As `test_generated`, at length. Its cases are drawn when it is collected, so only `-m release` collects it."""

import pytest

from burntally.model.decode import JSON, MSGPACK
from tests.contract.generation import RELEASE_PROFILE, AnyCase, schema_for

schema = schema_for([JSON, MSGPACK], RELEASE_PROFILE)


@pytest.mark.release
@schema.parametrize()
def test_the_server_keeps_to_its_contract_at_length(case: AnyCase) -> None:
    case.call_and_validate()
