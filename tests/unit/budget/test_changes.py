"""The least change that lets a branch be paid, at the ends of what a number may be."""

import pytest

from burntally_service.budget.changes import Change, least_change


@pytest.mark.parametrize("now", [5e-324, 1e-300, 1e9])
def test_the_least_change_of_a_number_of_any_size_is_found(now: float) -> None:
    change = Change(pointer="/mission/legs/0/delta_v", now=now, bound=0.0, words="ask less", unit="m/s")
    found = least_change(change, lambda value: max(0.0, value - 0.5 * now))
    assert found is not None
    assert 0.0 <= found <= 0.5 * now
