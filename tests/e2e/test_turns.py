"""Turns: what computes long is stopped, bounded and kept from others, and a worker that dies is replaced."""

import os
import signal
import threading
import time
from collections.abc import Iterator
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

import pytest

from burntally_service.api.examples import example_bytes
from tests.e2e.serving import Served, cpu_s, head_of, long_design, serving

LONG = long_design()
SMALL = example_bytes("create_budget")
TIMEOUT_S = 1.5
SETTLE_S = 10.0


@pytest.fixture(scope="module")
def served() -> Iterator[Served]:
    with serving(compute_timeout_s=TIMEOUT_S, workers=1, most_waiting=0) as served:
        yield served


@pytest.fixture
def busy(served: Served) -> Iterator[Served]:
    """A server whose one worker computes."""
    with served.connect() as connection:
        connection.sendall(head_of(LONG) + LONG)
        until(lambda: any(is_computing(pid) for pid in served.workers()))
        yield served
    until(lambda: not any(is_computing(pid) for pid in served.workers()))


def until(holds: object) -> None:
    assert callable(holds)
    ends = time.monotonic() + SETTLE_S
    while not holds():
        assert time.monotonic() < ends
        time.sleep(0.02)


def is_computing(pid: int) -> bool:
    """Whether a process is taking the processor."""
    try:
        before = cpu_s(pid)
        time.sleep(0.15)
        return cpu_s(pid) - before > 0.03
    except FileNotFoundError:
        # A worker that is stopped before it has set itself up ends there.
        return False


def test_a_long_computation_is_stopped_in_time(served: Served) -> None:
    begins = time.monotonic()
    reply = served.ask(LONG)
    assert (reply.status, reply.code) == (503, "took-too-long")
    assert int(reply.headers["retry-after"]) >= TIMEOUT_S
    assert time.monotonic() - begins < TIMEOUT_S + 3.0


def test_its_worker_serves_the_next(served: Served) -> None:
    served.ask(LONG)
    before = served.workers()
    assert served.ask(long_design(legs=20, splits=1)).status == 200
    assert served.workers() == before


def test_a_caller_who_hangs_up_stops_the_computation() -> None:
    with serving(compute_timeout_s=60, workers=1) as patient:
        with patient.connect() as connection:
            connection.sendall(head_of(LONG) + LONG)
            until(lambda: any(is_computing(pid) for pid in patient.workers()))
        until(lambda: not any(is_computing(pid) for pid in patient.workers()))
        assert patient.ask(SMALL).status == 200


def test_small_requests_are_answered_beside_a_long_one(busy: Served) -> None:
    assert busy.ask(SMALL).status == 200


def test_what_does_not_fit_in_the_queue_is_refused_at_once(busy: Served) -> None:
    begins = time.monotonic()
    reply = busy.ask(LONG)
    assert (reply.status, reply.code, reply.headers["retry-after"]) == (503, "overloaded", "1")
    assert time.monotonic() - begins < 1.0


def test_a_worker_that_dies_is_told_and_replaced(served: Served) -> None:
    with ThreadPoolExecutor(1) as callers:
        asked = callers.submit(served.ask, LONG)
        until(lambda: any(is_computing(pid) for pid in served.workers()))
        for pid in served.workers():
            os.kill(pid, signal.SIGKILL)
        reply = asked.result()
    assert (reply.status, reply.code) == (503, "worker-lost")
    assert served.ask(long_design(legs=20, splits=1)).status == 200


def test_a_worker_ends_with_a_server_that_is_killed() -> None:
    with serving(compute_timeout_s=60, workers=1) as killed, killed.connect() as connection:
        connection.sendall(head_of(LONG) + LONG)
        until(lambda: any(is_computing(pid) for pid in killed.workers()))
        (worker,) = killed.workers()
        killed.process.kill()
        until(lambda: not Path(f"/proc/{worker}/cmdline").exists() or not Path(f"/proc/{worker}/cmdline").read_bytes())


def test_workers_are_started_when_first_needed() -> None:
    with serving() as served:
        assert served.ask(SMALL).status == 200
        assert served.workers() == []


def test_so_many_workers_and_no_more() -> None:
    with serving(compute_timeout_s=TIMEOUT_S, workers=2, most_waiting=4) as served:
        callers = [threading.Thread(target=served.ask, args=(LONG,)) for _ in range(4)]
        for caller in callers:
            caller.start()
        until(lambda: len(served.workers()) == 2)
        for caller in callers:
            caller.join()
        assert len(served.workers()) == 2
