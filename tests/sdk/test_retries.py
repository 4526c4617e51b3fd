"""When a request is tried again, and when that ends."""

import pytest

from burntally.client.errors import ConnectionFailed, DecodingError, ServiceMissing, TimedOut
from burntally.client.messages import Reply, Request
from burntally.client.retries import PAUSE_MAX_S, PAUSE_MIN_S, Outcome, Retries, retry_after_s, worth_retrying

# RFC 9110, section 5.6.7, writes this date; 784111777 s is what it is since the Unix epoch.
RFC_DATE = "Sun, 06 Nov 1994 08:49:37 GMT"
RFC_DATE_S = 784111777.0
REQUEST = Request(operation_id="list_bodies", method="GET", path="/v1/bodies")


class Clock:
    """A clock that moves when it is told to."""

    def __init__(self) -> None:
        self.now_s = 100.0

    def __call__(self) -> float:
        return self.now_s


def reply(status: int, **headers: str) -> Reply:
    return Reply(status=status, body=b"", headers={name.replace("_", "-"): text for name, text in headers.items()})


def retries(clock: Clock, *, timeout_s: float = 60.0, tries: int = 5) -> Retries:
    """Draw the longest pause that may be drawn."""
    return Retries(
        timeout_s=timeout_s, tries=tries, clock=clock, wall_clock=lambda: RFC_DATE_S - 3.0, spread=lambda _, most: most
    )


@pytest.mark.parametrize("status", [408, 429, 500, 502, 503, 504, 599])
def test_a_status_that_may_pass_is_tried_again(status: int) -> None:
    assert worth_retrying(reply(status))


@pytest.mark.parametrize("status", [200, 304, 400, 404, 406, 412, 413, 415, 422])
def test_a_status_that_will_not_pass_stands(status: int) -> None:
    assert not worth_retrying(reply(status))


@pytest.mark.parametrize(
    "outcome,again",
    [
        (ConnectionFailed("dropped"), True),
        (TimedOut("late"), False),
        (ServiceMissing("none"), False),
        (DecodingError("odd", request=REQUEST, response=reply(200)), False),
    ],
)
def test_only_a_failed_connection_is_tried_again(outcome: Outcome, again: bool) -> None:
    assert worth_retrying(outcome) is again


def test_pauses_double_up_to_their_bound() -> None:
    course = retries(Clock(), tries=7)
    course.first()
    pauses = [attempt.pause_s for _ in range(6) if (attempt := course.after(reply(503)))]
    assert pauses == [1.0, 2.0, 4.0, 8.0, 8.0, 8.0]


def test_a_pause_is_drawn_between_its_bounds() -> None:
    drawn: list[tuple[float, float]] = []

    def spread(least: float, most: float) -> float:
        drawn.append((least, most))
        return least

    course = Retries(timeout_s=60.0, tries=9, clock=Clock(), wall_clock=lambda: 0.0, spread=spread)
    course.first()
    for _ in range(8):
        course.after(reply(500))
    assert (min(low for low, _ in drawn), max(high for _, high in drawn)) == (PAUSE_MIN_S, PAUSE_MAX_S)


def test_tries_are_counted() -> None:
    course = retries(Clock(), tries=2)
    course.first()
    course.after(reply(503))
    assert course.after(reply(503)) is None


def test_what_the_service_asks_for_is_kept() -> None:
    course = retries(Clock())
    course.first()
    attempt = course.after(reply(429, retry_after="7"))
    assert attempt is not None
    assert attempt.pause_s == 7.0


def test_a_shorter_wait_than_the_own_pause_is_not_taken() -> None:
    course = retries(Clock())
    course.first()
    attempt = course.after(reply(429, retry_after="0"))
    assert attempt is not None
    assert attempt.pause_s == 1.0


def test_a_wait_beyond_the_deadline_ends_the_tries() -> None:
    course = retries(Clock(), timeout_s=10.0)
    course.first()
    assert course.after(reply(503, retry_after="11")) is None


def test_time_spent_shortens_the_next_try() -> None:
    clock = Clock()
    course = retries(clock, timeout_s=10.0)
    course.first()
    clock.now_s += 4.0
    attempt = course.after(reply(503))
    assert attempt is not None
    assert attempt.timeout_s == pytest.approx(5.0, rel=1e-12)


def test_no_time_is_no_try() -> None:
    assert retries(Clock(), timeout_s=0.0).first() is None


@pytest.mark.parametrize(
    "asked,seconds",
    [("12", 12.0), (RFC_DATE, 3.0), ("Sun, 06 Nov 1994 08:49:30 GMT", 0.0), ("soon", None), ("-1", None), ("", None)],
)
def test_retry_after_is_read_as_seconds_or_as_a_date(asked: str, seconds: float | None) -> None:
    assert retry_after_s(reply(503, retry_after=asked), now_s=RFC_DATE_S - 3.0) == seconds


def test_nothing_asked_is_nothing_read() -> None:
    assert retry_after_s(reply(503), now_s=0.0) is None
