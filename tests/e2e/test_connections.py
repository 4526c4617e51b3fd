"""Connections that send slowly, too much, or nonsense are cut off, each with a problem where one can be told."""

import contextlib
import re
import socket
import time
from collections.abc import Iterator

import pytest

from burntally.model.decode import JSON, decode
from burntally.model.operations import Problem
from burntally_service.api.examples import example_bytes
from burntally_service.operations import answer
from tests.e2e.serving import Served, head_of, long_design, rest_of, serving

SMALL = example_bytes("create_budget")
TIMEOUT_S = 1.0
# Default deadlines are 8 s each; here it is how late a cut may come.
LATE_S = 2.5


@pytest.fixture(scope="module")
def served() -> Iterator[Served]:
    with serving(head_timeout_s=TIMEOUT_S, body_timeout_s=TIMEOUT_S, most_connections=4) as served:
        yield served


def example_answer() -> bytes:
    return answer("create_budget", SMALL)


def problem_of(told: bytes) -> tuple[int, Problem]:
    head, _, body = told.partition(b"\r\n\r\n")
    assert b"content-type: application/problem+json" in head
    assert b"connection: close" in head
    return int(head.split()[1]), decode(Problem, body, media_type=JSON)


def trickle(connection: socket.socket, piece: bytes) -> float:
    """Send a piece again and again until the server has had enough; how long that took [s]."""
    begins = time.monotonic()
    connection.settimeout(0.1)
    while time.monotonic() - begins < 10 * TIMEOUT_S:
        try:
            connection.sendall(piece)
            if not connection.recv(65536):
                break
        except TimeoutError:
            continue
        except ConnectionError:
            break
    return time.monotonic() - begins


def test_a_slow_head_is_cut_off(served: Served) -> None:
    with served.connect() as connection:
        connection.sendall(b"GET /healthz HTTP/1.1\r\nHost: ")
        status, problem = problem_of(rest_of(connection))
    assert (status, problem.code) == (408, "request-timeout")


@pytest.mark.parametrize("begin", [b"", b"\r\n", b"GET /healthz HTTP/1.1\r\nX-Long: "], ids=["bare", "lines", "head"])
def test_to_send_ever_more_of_a_head_keeps_nothing_open(served: Served, begin: bytes) -> None:
    with served.connect() as connection:
        connection.sendall(begin)
        assert trickle(connection, begin[-2:] or b"\r\n") < TIMEOUT_S + LATE_S


def test_a_second_head_on_a_connection_has_its_deadline_too(served: Served) -> None:
    with served.connect() as connection:
        connection.sendall(b"GET /healthz HTTP/1.1\r\nHost: x\r\n\r\n")
        assert connection.recv(65536).startswith(b"HTTP/1.1 200")
        connection.sendall(b"GET /healthz HT")
        assert problem_of(rest_of(connection))[0] == 408


def test_a_slow_body_is_cut_off(served: Served) -> None:
    with served.connect() as connection:
        connection.sendall(head_of(SMALL) + SMALL[:20])
        status, problem = problem_of(rest_of(connection))
    assert (status, problem.code) == (408, "request-timeout")


def test_a_body_that_nobody_reads_keeps_nothing_open(served: Served) -> None:
    with served.connect() as connection:
        connection.sendall(head_of(b"x" * 100_000, path="/nothing"))
        assert connection.recv(65536).startswith(b"HTTP/1.1 404")
        assert trickle(connection, b"x") < TIMEOUT_S + LATE_S


@pytest.mark.parametrize(
    "sent",
    [b"\x16\x03\x01\x02\x00\x01\x00\r\n\r\n", b"GET\r\n\r\n", b"GET / HTTP/9.9\r\n\r\n", b"G\xff / HTTP/1.1\r\n\r\n"],
)
def test_what_is_no_http_is_told_as_a_problem(served: Served, sent: bytes) -> None:
    with served.connect() as connection:
        connection.sendall(sent)
        status, problem = problem_of(rest_of(connection))
    assert (status, problem.code) == (400, "invalid-request")


@pytest.mark.parametrize("what", ["target", "field", "fields"])
def test_a_head_that_is_too_large_is_refused(served: Served, what: str) -> None:
    target = b"/" + b"a" * (40_000 if what == "target" else 1)
    fields = (
        b"X: " + b"a" * 40_000 if what == "field" else b"\r\n".join([b"X: a"] * (10_000 if what == "fields" else 1))
    )
    with served.connect() as connection:
        with contextlib.suppress(ConnectionError):
            connection.sendall(b"GET " + target + b" HTTP/1.1\r\n" + fields + b"\r\n\r\n")
        status, problem = problem_of(rest_of(connection))
    assert (status, problem.code) == (431, "header-too-large")


def test_one_connection_too_many_is_refused(served: Served) -> None:
    with contextlib.ExitStack() as opened:
        for _ in range(4):
            opened.enter_context(served.connect()).sendall(b"GET ")
        time.sleep(0.2)
        status, problem = problem_of(rest_of(opened.enter_context(served.connect())))
    assert (status, problem.code) == (503, "overloaded")


def test_nonsense_behind_a_request_does_not_spoil_its_answer(served: Served) -> None:
    with served.connect() as connection:
        connection.sendall(head_of(SMALL) + SMALL + b"\x00nonsense")
        told = rest_of(connection)
    assert told.startswith(b"HTTP/1.1 200")
    assert told.count(b"HTTP/1.1 ") == 1


def test_requests_may_follow_one_another_without_waiting(served: Served) -> None:
    with served.connect() as connection:
        connection.sendall(
            2 * (head_of(SMALL) + SMALL) + b"GET /healthz HTTP/1.1\r\nHost: x\r\nConnection: close\r\n\r\n"
        )
        assert rest_of(connection).count(b"HTTP/1.1 200") == 3


@pytest.mark.parametrize("kind", [b"h2c", b"websocket"])
def test_an_offer_of_another_protocol_changes_nothing(served: Served, kind: bytes) -> None:
    offer = b"Connection: Upgrade\r\nUpgrade: " + kind + b"\r\n\r\n"
    last = b"GET /healthz HTTP/1.1\r\nHost: x\r\nConnection: close\r\n\r\n"
    with served.connect() as connection:
        connection.sendall(2 * (head_of(SMALL)[:-2] + offer + SMALL) + b"GET /healthz HTTP/1.1\r\nHost: x\r\n" + offer)
        connection.sendall(last)
        told = rest_of(connection)
    assert told.count(b"HTTP/1.1 200") == 4
    assert told.count(example_answer()) == 2


def test_a_body_may_come_after_an_offer_and_in_chunks(served: Served) -> None:
    offer = b"Connection: close, Upgrade\r\nUpgrade: h2c\r\nTransfer-Encoding: chunked\r\n\r\n"
    head = head_of(SMALL).partition(b"Content-Length")[0]
    with served.connect() as connection:
        connection.sendall(head + offer)
        time.sleep(0.1)
        connection.sendall(b"%x\r\n" % len(SMALL) + SMALL + b"\r\n0\r\n\r\n")
        assert rest_of(connection).endswith(example_answer())


@pytest.mark.parametrize("follows", [b"GET /heal", head_of(SMALL) + SMALL[:10]], ids=["head", "body"])
def test_what_follows_slowly_does_not_spoil_an_answer(follows: bytes) -> None:
    slow = long_design(legs=130, splits=1)
    # Short enough to pass twice while the first is being answered.
    with (
        serving(head_timeout_s=0.2, body_timeout_s=0.2, compute_timeout_s=60) as served,
        served.connect() as connection,
    ):
        connection.sendall(head_of(slow) + slow + follows)
        told = rest_of(connection)
    assert told.startswith(b"HTTP/1.1 200")
    assert told.count(b"HTTP/1.1 408") == 1


def test_answers_keep_the_order_of_requests_where_too_many_are_in_flight() -> None:
    slow = long_design(legs=60, splits=1)
    with serving(most_in_flight=1, compute_timeout_s=60) as served, served.connect() as connection:
        connection.sendall(2 * (head_of(slow) + slow))
        told = connection.recv(1)
        # The second is being answered, and keeps the only place there is.
        assert served.ask(SMALL).code == "overloaded"
        connection.sendall(b"GET /healthz HTTP/1.1\r\nHost: x\r\nConnection: close\r\n\r\n")
        told += rest_of(connection)
    assert re.findall(rb"HTTP/1\.1 (\d+)", told) == [b"200", b"200", b"200"]
    assert told.endswith(b'{"status":"ok"}')


def test_more_in_flight_than_may_be_is_refused_until_there_is_room() -> None:
    long = long_design()
    with serving(most_in_flight=1, compute_timeout_s=60) as served:
        with served.connect() as connection:
            connection.sendall(head_of(long) + long)
            time.sleep(0.5)
            refused = served.ask(SMALL)
        time.sleep(0.5)
        answered = served.ask(SMALL)
    assert (refused.status, refused.code, refused.headers["retry-after"]) == (503, "overloaded", "1")
    assert decode(Problem, refused.content, media_type=JSON).request_id == refused.headers["x-request-id"]
    assert answered.status == 200
