"""A container that is told to stop takes on nothing, finishes what it has, and ends in time with zero."""

import http.client
import os
import signal
import socket
import time
from collections.abc import Iterator
from concurrent.futures import ThreadPoolExecutor
from contextlib import closing

import pytest

from burntally_service.api.examples import example_bytes
from burntally_service.operations import answer
from tests.e2e.container import PORT, Container, podman

pytestmark = pytest.mark.release

MOST_STOP_S = 10.0
CALLERS = 8
LOAD_S = 2.0
BODY = example_bytes("create_budget")
EXPECTED = answer("create_budget", BODY)
TYPE = {"Content-Type": "application/json"}
HEAD = f"POST /v1/budgets HTTP/1.1\r\nHost: x\r\nContent-Type: application/json\r\nContent-Length: {len(BODY)}\r\n\r\n"


@pytest.fixture
def running(image: str) -> Iterator[Container]:
    with Container.made(image) as container:
        container.start()
        yield container


def stop(container: Container) -> None:
    os.kill(container.pid, signal.SIGTERM)


def ending(container: Container, stopped_at: float) -> tuple[str, bool]:
    """Give the exit code, and whether it came in time."""
    return podman("wait", container.name), time.monotonic() - stopped_at < MOST_STOP_S


def test_it_is_not_ready_while_it_finishes_what_it_has(running: Container) -> None:
    with running.inside(lambda: socket.create_connection(("127.0.0.1", PORT), timeout=10)) as begun:
        begun.sendall(HEAD.encode() + BODY[:-10])
        time.sleep(0.1)
        stopped_at = time.monotonic()
        stop(running)
        time.sleep(0.1)
        assert running.status_of("/readyz") == http.HTTPStatus.SERVICE_UNAVAILABLE
        begun.sendall(BODY[-10:])
        reply = http.client.HTTPResponse(begun)
        reply.begin()
        assert (reply.status, reply.read()) == (200, EXPECTED)
    assert ending(running, stopped_at) == ("0", True)


def asked(connection: http.client.HTTPConnection) -> bool:
    """Ask once on a connection that stands; tell whether the whole answer came."""
    try:
        connection.request("POST", "/v1/budgets", BODY, TYPE)
        return connection.getresponse().read() == EXPECTED
    except (OSError, http.client.HTTPException):
        connection.close()
        return False


def asked_until_nobody_listens() -> list[bool]:
    """Ask again and again, on one connection for as long as the server keeps it."""
    answers: list[bool] = []
    with closing(http.client.HTTPConnection("127.0.0.1", PORT, timeout=20)) as connection:
        while True:
            try:
                if connection.sock is None:
                    connection.connect()
            except ConnectionRefusedError:
                return answers
            answers.append(asked(connection))


def test_under_load_it_loses_nothing_that_it_took(running: Container) -> None:
    stopped_at: list[float] = []

    def load() -> list[list[bool]]:
        with ThreadPoolExecutor(CALLERS) as callers:
            calls = [callers.submit(asked_until_nobody_listens) for _ in range(CALLERS)]
            time.sleep(LOAD_S)
            stopped_at.append(time.monotonic())
            stop(running)
            return [call.result() for call in calls]

    answers = running.inside(load)
    assert all(answers)
    assert all(all(each) for each in answers)
    assert ending(running, stopped_at[0]) == ("0", True)
