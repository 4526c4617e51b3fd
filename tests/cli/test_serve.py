"""The two commands together, as processes: what is served is what is computed in-process."""

import json
import os
import signal
import socket
import subprocess
import sys
import time
from collections.abc import Iterator
from pathlib import Path

import pytest

from burntally import connect, errors
from burntally_service.api.examples import requests_of

BURNTALLY = str(Path(sys.executable).parent / "burntally")
START_MAX_S = 30.0


def free_port() -> int:
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        port: int = probe.getsockname()[1]
        return port


@pytest.fixture(scope="module")
def server() -> Iterator[tuple[str, "subprocess.Popen[bytes]"]]:
    """Start a server, and wait until it answers."""
    port = free_port()
    url = f"http://127.0.0.1:{port}"
    with subprocess.Popen([BURNTALLY, "serve", "--port", str(port)], stderr=subprocess.DEVNULL) as process:
        try:
            wait_for(url, process)
            yield url, process
        finally:
            process.kill()


def wait_for(url: str, process: "subprocess.Popen[bytes]") -> None:
    deadline = time.monotonic() + START_MAX_S
    with connect(url, tries=1) as client:
        while time.monotonic() < deadline and process.poll() is None:
            try:
                client.bodies()
            except errors.ConnectionFailed:
                time.sleep(0.05)
            else:
                return
    pytest.fail("the server did not start")


@pytest.fixture
def designs(tmp_path: Path) -> list[str]:
    paths = []
    for name, example in requests_of("create_budget").items():
        path = tmp_path / f"{name}.json"
        path.write_text(json.dumps(example["value"]), encoding="utf-8")
        paths.append(str(path))
    return paths


def check(*arguments: str) -> tuple[int, bytes]:
    done = subprocess.run([BURNTALLY, "check", *arguments], check=False, capture_output=True)
    return done.returncode, done.stdout


@pytest.mark.parametrize("layout", ["text", "json"])
def test_a_server_gives_what_is_computed_in_process(
    layout: str, designs: list[str], server: tuple[str, "subprocess.Popen[bytes]"]
) -> None:
    arguments = ["--format", layout, *designs]
    assert check("--server", server[0], *arguments) == check(*arguments)


def test_a_stop_that_was_asked_for_is_a_success(server: tuple[str, "subprocess.Popen[bytes]"]) -> None:
    # The last test of the module: nothing answers afterwards.
    server[1].send_signal(signal.SIGTERM)
    assert server[1].wait(timeout=10.0) == 0


def test_a_port_in_use_is_internal() -> None:
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = str(taken.getsockname()[1])
        done = subprocess.run([BURNTALLY, "serve", "--port", port], check=False, capture_output=True)
    assert done.returncode == 5


def test_a_setting_that_cannot_be_read_is_usage() -> None:
    environment = os.environ | {"BURNTALLY_MAX_BODY_BYTES": "plenty"}
    done = subprocess.run([BURNTALLY, "serve"], check=False, capture_output=True, env=environment)
    assert (done.returncode, b"BURNTALLY_MAX_BODY_BYTES" in done.stderr) == (2, True)
