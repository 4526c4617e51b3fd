"""Epochs: UTC, in days of 86 400 s."""

import pytest

from burntally_service.legs.epochs import epoch_after, seconds_between


@pytest.mark.parametrize(
    "earlier, later, seconds",
    [
        ("2031-01-01", "2031-01-02", 86400.0),
        ("2016-12-31T23:59:59Z", "2017-01-01T00:00:00Z", 1.0),
        ("2031-01-01T00:00:00.25", "2031-01-01T00:00:01", 0.75),
        ("2031-01-02", "2031-01-01", -86400.0),
    ],
)
def test_time_between_two(earlier: str, later: str, seconds: float) -> None:
    assert seconds_between(earlier, later) == seconds


@pytest.mark.parametrize(
    "epoch, elapsed, later",
    [
        ("2031-01-01", 3600.0, "2031-01-01T01:00:00.000Z"),
        ("2031-01-01T00:00:00.5Z", 0.25, "2031-01-01T00:00:00.750Z"),
        ("2199-01-01", 3.2e11, None),
        (None, 1.0, None),
    ],
)
def test_some_time_after_one(epoch: str | None, elapsed: float, later: str | None) -> None:
    assert epoch_after(epoch, elapsed) == later


def test_there_and_back_is_no_time() -> None:
    later = epoch_after("2031-01-01", 1234.5)
    assert later is not None
    assert seconds_between("2031-01-01", later) == 1234.5
