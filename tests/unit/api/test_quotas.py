"""Quotas: how many requests pass, when there are more, and that the table is bounded."""

import math
from fractions import Fraction

import http_sf
import pytest
from hypothesis import given
from hypothesis import strategies as st

from burntally_service.api.quotas import Quota, Quotas


class Clock:
    """A clock that moves when it is told to."""

    def __init__(self) -> None:
        self.now_s = 1000.0

    def __call__(self) -> float:
        return self.now_s


def passed(quotas: Quotas, caller: str, tries: int) -> int:
    return sum(not quotas.charge(caller).is_spent for _ in range(tries))


@pytest.mark.parametrize("per_minute", [1, 2, 7, 60, 61, 977, 6000])
def test_a_full_bucket_lets_a_minutes_requests_pass(per_minute: int) -> None:
    assert passed(Quotas(per_minute, clock=Clock()), "a", per_minute + 10) == per_minute


def test_each_caller_has_a_bucket() -> None:
    quotas = Quotas(3, clock=Clock())
    assert [passed(quotas, caller, 5) for caller in "ab"] == [3, 3]


def test_what_is_taken_comes_back_steadily() -> None:
    clock = Clock()
    quotas = Quotas(6, clock=clock)
    passed(quotas, "a", 6)
    clock.now_s += 20.0
    assert passed(quotas, "a", 6) == 2


def test_a_bucket_holds_no_more_than_a_minutes_requests() -> None:
    clock = Clock()
    quotas = Quotas(6, clock=clock)
    passed(quotas, "a", 1)
    clock.now_s += 3600.0
    assert passed(quotas, "a", 20) == 6


def test_whoever_tries_too_often_loses_no_more() -> None:
    clock = Clock()
    quotas = Quotas(6, clock=clock)
    passed(quotas, "a", 500)
    clock.now_s += 10.0
    assert passed(quotas, "a", 1) == 1


@given(
    per_minute=st.integers(1, 500),
    waits_s=st.lists(st.floats(0.0, 120.0, allow_subnormal=False), min_size=1, max_size=30),
)
def test_whoever_waits_as_told_is_let_in(per_minute: int, waits_s: list[float]) -> None:
    clock = Clock()
    quotas = Quotas(per_minute, clock=clock)
    for wait_s in waits_s:
        clock.now_s += wait_s
        quota = quotas.charge("a")
        if quota.is_spent:
            clock.now_s += quota.more_in_s
            assert not quotas.charge("a").is_spent


@given(per_minute=st.integers(1, 500), waits_s=st.lists(st.integers(0, 5), min_size=1, max_size=60))
def test_no_window_lets_more_pass_than_promised(per_minute: int, waits_s: list[int]) -> None:
    """A bucket of n that fills by n a minute lets n + n·t/60 pass in any t seconds."""
    clock = Clock()
    quotas = Quotas(per_minute, clock=clock)
    count = 0
    for wait_s in waits_s:
        clock.now_s += wait_s
        count += passed(quotas, "a", per_minute)
    bound = per_minute + Fraction(per_minute * sum(waits_s), 60)
    assert count <= math.floor(bound)


def test_what_is_left_is_what_passes() -> None:
    quotas = Quotas(9, clock=Clock())
    assert [quotas.charge("a").left for _ in range(10)] == [8, 7, 6, 5, 4, 3, 2, 1, 0, 0]


def test_the_table_is_bounded_and_keeps_who_came_last() -> None:
    quotas = Quotas(1, callers_max=100, clock=Clock())
    for number in range(1000):
        quotas.charge(str(number))
    assert len(quotas) == 100
    assert quotas.charge("999").is_spent


@pytest.mark.parametrize("is_spent", [False, True])
def test_the_fields_are_structured(is_spent: bool) -> None:
    headers = Quota(is_spent=is_spent, left=3, more_in_s=2, per_minute=90).headers
    policy = http_sf.parse(headers["RateLimit-Policy"].encode(), tltype="list")
    left = http_sf.parse(headers["RateLimit"].encode(), tltype="list")
    assert (policy, left) == ([("default", {"q": 90, "w": 60})], [("default", {"r": 3, "t": 2})])
    assert headers.get("Retry-After") == ("2" if is_spent else None)
