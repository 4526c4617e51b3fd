"""A real server: it starts, gets ready, answers, and stops when it is asked to."""

import http.client
import os
import re
import signal
import subprocess
import sys
import time
from collections.abc import Iterator

import pytest

from burntally_service.api.examples import example_bytes
from burntally_service.operations import answer

START_S = 30.0
ADDRESS = re.compile(r"running on http://127\.0\.0\.1:(\d+)")
SERVE = "from burntally_service.api.serve import serve; serve(port=0)"


@pytest.fixture
def process() -> Iterator[subprocess.Popen[str]]:
    environment = {**os.environ, "PYTHONUNBUFFERED": "1"}
    with subprocess.Popen(
        [sys.executable, "-c", SERVE], stderr=subprocess.PIPE, stdout=subprocess.DEVNULL, text=True, env=environment
    ) as process:
        try:
            yield process
        finally:
            process.kill()


@pytest.fixture
def connection(process: subprocess.Popen[str]) -> Iterator[http.client.HTTPConnection]:
    connection = http.client.HTTPConnection("127.0.0.1", port_of(process), timeout=START_S)
    yield connection
    connection.close()


def port_of(process: subprocess.Popen[str]) -> int:
    """Read the port from the log; the line comes once the server is listening."""
    assert process.stderr is not None
    for line in process.stderr:
        if found := ADDRESS.search(line):
            return int(found[1])
    raise AssertionError("the server ended without listening")


def ask(connection: http.client.HTTPConnection, method: str, path: str, body: bytes | None = None) -> tuple[int, bytes]:
    connection.request(method, path, body=body, headers={"Content-Type": "application/json"} if body else {})
    response = connection.getresponse()
    return response.status, response.read()


def test_a_server_is_ready_once_it_listens(connection: http.client.HTTPConnection) -> None:
    assert ask(connection, "GET", "/readyz") == (200, b'{"status":"ready"}')


def test_a_server_answers_what_is_answered_in_process(connection: http.client.HTTPConnection) -> None:
    body = example_bytes("create_budget")
    assert ask(connection, "POST", "/v1/budgets", body) == (200, answer("create_budget", body))


def test_a_server_that_is_told_to_stop_has_not_failed(
    process: subprocess.Popen[str], connection: http.client.HTTPConnection
) -> None:
    ask(connection, "GET", "/healthz")
    asked_at = time.monotonic()
    process.send_signal(signal.SIGTERM)
    assert process.wait(timeout=10) == 0
    assert time.monotonic() - asked_at < 10
