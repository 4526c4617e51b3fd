"""Identities: the caller's where they are as the standard has them, else our own."""

from typing import Any

import pytest

from burntally_service.api.traces import identity_of

TRACE, SPAN = "4bf92f3577b34da6a3ce929d0e0e4736", "00f067aa0ba902b7"
VALID = f"00-{TRACE}-{SPAN}-01"


def scope(*headers: tuple[str, str]) -> Any:
    return {"headers": [(name.encode(), value.encode("latin-1")) for name, value in headers]}


@pytest.mark.parametrize(
    "sent", [VALID, f"00-{TRACE}-{SPAN}-00", f"01-{TRACE}-{SPAN}-ff", f"cc-{TRACE}-{SPAN}-01-more"]
)
def test_a_trace_is_taken_up(sent: str) -> None:
    identity = identity_of(scope(("traceparent", sent)))
    assert (identity.trace_id, identity.parent_id) == (TRACE, SPAN)
    assert identity.span_id != SPAN


@pytest.mark.parametrize(
    "sent",
    [
        "",
        VALID[:-1],
        VALID + "0",
        VALID + "-more",
        VALID.upper(),
        VALID.replace("-", "_"),
        VALID + "\n",
        f"ff-{TRACE}-{SPAN}-01",
        f"0-{TRACE}-{SPAN}-01",
        f"01-{TRACE}-{SPAN}-01more",
        f"00-{'0' * 32}-{SPAN}-01",
        f"00-{TRACE}-{'0' * 16}-01",
        f"00-{TRACE[:-1]}g-{SPAN}-01",
        f"00-{TRACE}-{SPAN}-0x",
    ],
    ids=repr,
)
def test_a_trace_that_is_not_valid_starts_anew(sent: str) -> None:
    identity = identity_of(scope(("traceparent", sent)))
    assert (identity.trace_id != TRACE, identity.parent_id) == (True, None)


def test_of_two_traces_neither_is_taken_up() -> None:
    identity = identity_of(scope(("traceparent", VALID), ("traceparent", VALID)))
    assert identity.parent_id is None


def test_what_is_made_here_is_as_the_standard_has_it() -> None:
    identity = identity_of(scope())
    assert [len(identity.request_id), len(identity.trace_id), len(identity.span_id)] == [16, 32, 16]
    assert int(identity.trace_id, 16) > 0


def test_nothing_is_made_twice() -> None:
    made = [identity_of(scope()) for _ in range(100)]
    assert len({name for row in made for name in (row.request_id, row.trace_id, row.span_id)}) == 300


def test_an_id_that_could_break_a_line_is_not_taken_over() -> None:
    assert identity_of(scope(("x-request-id", "a\nb"))).request_id != "a\nb"
