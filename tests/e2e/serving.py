"""A server of a test's own, with settings of its own, and raw connections to it."""

import http.client
import os
import re
import socket
import subprocess
import sys
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import msgspec

_ADDRESS = re.compile(r"running on http://127\.0\.0\.1:(\d+)")
_SERVE = "from burntally_service.api.serve import serve; serve(port=0)"
_WAIT_S = 30.0
_TICKS_PER_S = os.sysconf("SC_CLK_TCK")


@dataclass(frozen=True, kw_only=True)
class Reply:
    """What came back."""

    status: int
    headers: dict[str, str]
    content: bytes

    @property
    def code(self) -> str | None:
        """Code of the problem; None where it is none."""
        told: dict[str, Any] = msgspec.json.decode(self.content)
        return told.get("code") if self.status >= http.client.BAD_REQUEST else None


@dataclass(frozen=True, kw_only=True)
class Served:
    """A server that runs."""

    process: subprocess.Popen[str]
    port: int

    def ask(self, body: bytes, path: str = "/v1/budgets") -> Reply:
        """Ask for one answer on a connection of its own."""
        connection = http.client.HTTPConnection("127.0.0.1", self.port, timeout=_WAIT_S)
        try:
            connection.request("POST", path, body=body, headers={"Content-Type": "application/json"})
            return reply_of(connection.getresponse())
        finally:
            connection.close()

    def connect(self) -> socket.socket:
        """Open a connection."""
        return socket.create_connection(("127.0.0.1", self.port), timeout=_WAIT_S)

    def workers(self) -> list[int]:
        """Process ids of the workers."""
        children = Path(f"/proc/{self.process.pid}/task/{self.process.pid}/children").read_text(encoding="ascii")
        return [int(child) for child in children.split()]


def reply_of(response: http.client.HTTPResponse) -> Reply:
    headers = {name.lower(): value for name, value in response.getheaders()}
    return Reply(status=response.status, headers=headers, content=response.read())


def rest_of(connection: socket.socket) -> bytes:
    """Read what comes until the server ends the connection."""
    told = b""
    try:
        while piece := connection.recv(65536):
            told += piece
    except ConnectionResetError:
        pass
    return told


def head_of(body: bytes, path: str = "/v1/budgets") -> bytes:
    """Write the head of a request."""
    fields = f"POST {path} HTTP/1.1\r\nHost: x\r\nContent-Type: application/json\r\nContent-Length: {len(body)}\r\n\r\n"
    return fields.encode("ascii")


def cpu_s(pid: int) -> float:
    """Processor time that a process has taken [s]."""
    fields = Path(f"/proc/{pid}/stat").read_text(encoding="ascii").rpartition(")")[2].split()
    return (int(fields[11]) + int(fields[12])) / _TICKS_PER_S


@contextmanager
def serving(**settings: object) -> Iterator[Served]:
    """Start a server, and end it."""
    given = {f"BURNTALLY_{name.upper()}": str(value) for name, value in settings.items()}
    with subprocess.Popen(
        [sys.executable, "-c", _SERVE],
        stderr=subprocess.PIPE,
        stdout=subprocess.DEVNULL,
        text=True,
        env={**os.environ, **given},
    ) as process:
        try:
            stderr = process.stderr
            assert stderr is not None
            port = next(int(found[1]) for line in stderr if (found := _ADDRESS.search(line)))
            # A pipe that nobody reads fills up, and the server would wait for it.
            reader = threading.Thread(target=stderr.read, daemon=True)
            reader.start()
            yield Served(process=process, port=port)
        finally:
            process.kill()
            process.wait()
            reader.join()


def long_design(*, legs: int = 200, splits: int = 50) -> bytes:
    """A design that keeps to every bound and computes for minutes: slack is searched for over a crowd of ignitions."""
    stages = [
        {
            "name": f"stage {n}",
            "dry_mass": 800.0,
            "propellants": [{"mass": 9000.0, "boiloff_per_day": 0.01}],
            "engines": [{"thrust": 4e4, "isp": 320.0}],
        }
        for n in range(12)
    ]
    leg = {"kind": "flyby", "delta_v": 1.0, "splits": splits}
    start = {"kind": "orbit", "body": "earth", "altitude": 4e5}
    mission = {"start": start, "legs": [leg] * legs}
    return msgspec.json.encode({"format": 1, "vehicle": {"name": "Meridian", "stages": stages}, "mission": mission})
