"""Requests with something done to their bytes: each is answered in time, and never by a failure of ours."""

import logging
import os
import socket
import subprocess
import sys
import time
from collections.abc import Iterator
from contextlib import suppress

import httpx2
import pytest

from burntally_service.api.app import create_app
from burntally_service.api.settings import Settings
from burntally_service.operations import OPERATIONS
from tests.contract.firing import DEADLINE_S, Outcome, fire, resident_mib
from tests.contract.mutations import mutated

SEED = int(os.environ.get("CONTRACT_TEST_SEED", "3"))
GROWTH_MIB = 24.0


@pytest.fixture(autouse=True)
def _unlogged() -> Iterator[None]:
    """Log nothing: what is kept of a log until a test ends would pass for a growth of memory."""
    logging.disable(logging.CRITICAL)
    yield
    logging.disable(logging.NOTSET)


@pytest.fixture
def server() -> Iterator[tuple[str, int]]:
    """A server of the test's own: its address, and its process."""
    with socket.create_server(("127.0.0.1", 0)) as free:
        port = free.getsockname()[1]
    serve = f"from burntally_service.api.serve import serve; serve(port={port})"
    with subprocess.Popen([sys.executable, "-c", serve], stderr=subprocess.DEVNULL) as process:
        url = f"http://127.0.0.1:{port}"
        _await_ready(url)
        yield url, process.pid
        process.terminate()


def _await_ready(url: str) -> None:
    ends = time.monotonic() + 30.0
    while time.monotonic() < ends:
        with suppress(httpx2.TransportError):
            if httpx2.get(f"{url}/readyz").status_code == 200:
                return
        time.sleep(0.05)
    raise AssertionError("the server did not become ready")


def test_every_mutated_body_is_answered() -> None:
    outcome = fire(create_app(Settings()), seed=SEED, count=1_000)
    assert outcome.wrong == []
    # Some must get through, or nothing but the decoder was tried.
    assert outcome.statuses[200] > 50
    assert outcome.statuses[422] > 10


@pytest.mark.release
def test_a_hundred_thousand_mutated_bodies_are_answered_without_growth() -> None:
    first = fire(create_app(Settings()), seed=SEED + 1, count=20_000)
    held_mib = resident_mib()
    rest = fire(create_app(Settings()), seed=SEED + 2, count=80_000)
    grown_mib = resident_mib() - held_mib
    print(f"\n{first.statuses + rest.statuses}, slowest {rest.slowest_s:.2f} s, grown by {grown_mib:.1f} MiB")  # noqa: T201 - the figures are what a release reports
    assert (first.wrong + rest.wrong)[:3] == []
    assert grown_mib < GROWTH_MIB


@pytest.mark.release
def test_a_server_answers_mutated_bodies_and_lives_on(server: tuple[str, int]) -> None:
    url, process = server
    outcome = Outcome()
    held_mib = 0.0
    with httpx2.Client(base_url=url, timeout=DEADLINE_S) as client:
        for index, shot in enumerate(mutated(SEED + 3, 20_000)):
            path = OPERATIONS[shot.operation_id].path
            response = client.post(path, content=shot.body, headers={"Content-Type": shot.media_type})
            outcome.add(shot, response.status_code, response.content, duration_s=response.elapsed.total_seconds())
            if index == 4_000:
                held_mib = resident_mib(process)
        assert client.get("/readyz").status_code == 200
    grown_mib = resident_mib(process) - held_mib
    print(f"\n{outcome.statuses}, slowest {outcome.slowest_s:.2f} s, grown by {grown_mib:.1f} MiB")  # noqa: T201 - as above
    assert outcome.wrong[:3] == []
    assert grown_mib < GROWTH_MIB
