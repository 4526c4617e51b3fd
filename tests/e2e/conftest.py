"""Where the tests find a server: one that already runs, named by its address, or one that they start."""

import os
import re
import subprocess
import sys
from collections.abc import Iterator

import pytest

from tests.e2e.container import built_image, install_runner

URL_VARIABLE = "E2E_SERVER_URL"
_ADDRESS = re.compile(r"running on (http://127\.0\.0\.1:\d+)")
_SERVE = "from burntally_service.api.serve import serve; serve(port=0)"


@pytest.fixture(scope="session")
def url() -> Iterator[str]:
    """Address of the server under test."""
    given = os.environ.get(URL_VARIABLE)
    if given:
        yield given
        return
    started = started_server()
    with started as process:
        yield url_of(process)
        process.kill()


@pytest.fixture
def process() -> Iterator[subprocess.Popen[str]]:
    """A server of the test's own, which it may stop."""
    with started_server() as process:
        try:
            yield process
        finally:
            process.kill()


@pytest.fixture(scope="session")
def image() -> str:
    """Name of the image of this checkout, built anew; what has not changed comes from the store of layers."""
    install_runner()
    return built_image()


def started_server() -> subprocess.Popen[str]:
    """Start a server on a free port."""
    environment = {**os.environ, "PYTHONUNBUFFERED": "1"}
    return subprocess.Popen(
        [sys.executable, "-c", _SERVE], stderr=subprocess.PIPE, stdout=subprocess.DEVNULL, text=True, env=environment
    )


def url_of(process: subprocess.Popen[str]) -> str:
    """Read the address from the log; the line comes once the server is listening."""
    assert process.stderr is not None
    for line in process.stderr:
        if found := _ADDRESS.search(line):
            return found[1]
    raise AssertionError("the server ended without listening")
