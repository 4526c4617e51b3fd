"""How many budgets a second the service answers, beside a bare echo of the same body on the same kind of server.

Run with ``pytest -m benchmark tests/benchmarks/test_http_throughput.py``; `wrk` drives it where it is installed.
"""

import http.client
import re
import shutil
import subprocess
import sys
import threading
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

import msgspec
import pytest

RUNS = 5
RUN_S = 3
CONNECTIONS = 8
ADDRESS = re.compile(r"running on http://127\.0\.0\.1:(\d+)")

SERVICE = "from burntally_service.api.serve import serve; serve(port=0)"
ECHO = """
import uvicorn
from litestar import Litestar, Request, Response, post

@post("/v1/budgets", status_code=200)
async def echo(request: Request) -> Response[bytes]:
    return Response(await request.body(), media_type="application/json")

app = Litestar([echo], openapi_config=None, logging_config=None)
uvicorn.run(app, host="127.0.0.1", port=0, access_log=False, server_header=False)
"""


def stage(name: str, scale: float, *, with_units: bool) -> dict[str, Any]:
    dry, load, thrust = 800.0 * scale, 9000.0 * scale, 40000.0 * scale
    return {
        "name": name,
        "dry_mass": f"{dry} kg" if with_units else dry,
        "propellants": [{"mass": f"{load / 1000} t" if with_units else load, "residual_fraction": 0.01}],
        "engines": [
            {
                "thrust": f"{thrust / 1000} kN" if with_units else thrust,
                "isp": "320 s" if with_units else 320.0,
                "max_ignitions": 40,
            }
        ],
    }


def design(*, with_units: bool) -> bytes:
    """Three stages and ten legs: what the throughput is promised for."""
    legs: list[dict[str, Any]] = [
        {
            "kind": "transfer",
            "name": f"burn {index}",
            "to": {"altitude": 4e5 + 5e4 * index},
            "delta_v": f"{0.2 + 0.05 * index} km/s" if with_units else 200.0 + 50.0 * index,
        }
        for index in range(10)
    ]
    return msgspec.json.encode(
        {
            "format": 1,
            "vehicle": {
                "name": "Meridian Hauler",
                "stages": [stage(f"stage {n}", 1.0 / (1 + n), with_units=with_units) for n in range(3)],
                "payloads": [{"name": "cargo", "mass": "350 kg" if with_units else 350.0}],
            },
            "mission": {
                "start": {"kind": "orbit", "body": "earth", "altitude": 4e5, "inclination": 51.6},
                "legs": legs,
            },
            "rules": {"contingency": [{"category": "deterministic", "fraction": 0.05}], "reserve": {"delta_v": 20.0}},
        }
    )


@contextmanager
def server(code: str, folder: Path) -> Iterator[int]:
    """Start a server on a free port and stop it in the end; its log goes to a file, as a pipe would fill."""
    path = folder / f"{len(list(folder.iterdir()))}.log"
    with path.open("wb") as log, subprocess.Popen([sys.executable, "-c", code], stderr=log) as process:
        try:
            while not (found := ADDRESS.search(path.read_text(encoding="utf-8"))):
                assert process.poll() is None
                time.sleep(0.05)
            yield int(found[1])
        finally:
            process.kill()


def rate(port: int, body: bytes, folder: Path) -> float:
    """Requests a second that were answered with 200."""
    return wrk_rate(port, body, folder) if shutil.which("wrk") else threaded_rate(port, body)


def wrk_rate(port: int, body: bytes, folder: Path) -> float:
    script = folder / "post.lua"
    (folder / "body.json").write_bytes(body)
    script.write_text(
        'wrk.method = "POST"\nwrk.headers["Content-Type"] = "application/json"\n'
        f'wrk.body = io.open("{folder / "body.json"}", "rb"):read("*a")\n',
        encoding="utf-8",
    )
    url = f"http://127.0.0.1:{port}/v1/budgets"
    command = ["wrk", "-t1", f"-c{CONNECTIONS}", f"-d{RUN_S}s", "-s", str(script), url]
    told = subprocess.run(command, capture_output=True, text=True, check=True).stdout
    assert "Non-2xx" not in told
    assert "Socket errors" not in told
    found = re.search(r"Requests/sec:\s+([\d.]+)", told)
    assert found is not None
    return float(found[1])


def threaded_rate(port: int, body: bytes) -> float:
    ends = time.perf_counter() + RUN_S
    counts = [0] * CONNECTIONS

    def drive(index: int) -> None:
        connection = http.client.HTTPConnection("127.0.0.1", port)
        while time.perf_counter() < ends:
            connection.request("POST", "/v1/budgets", body=body, headers={"Content-Type": "application/json"})
            response = connection.getresponse()
            response.read()
            counts[index] += response.status == http.client.OK
        connection.close()

    threads = [threading.Thread(target=drive, args=(index,)) for index in range(CONNECTIONS)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    return sum(counts) / RUN_S


@pytest.mark.benchmark
@pytest.mark.parametrize("with_units,promised", [(False, 1 / 4), (True, 1 / 8)], ids=["SI numbers", "unit strings"])
def test_a_budget_costs_a_few_echoes(
    with_units: bool, promised: float, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    body = design(with_units=with_units)
    with server(ECHO, tmp_path) as echo, server(SERVICE, tmp_path) as service:
        pairs = [(rate(service, body, tmp_path), rate(echo, body, tmp_path)) for _ in range(RUNS)]
    best, peer = max(pair[0] for pair in pairs), max(pair[1] for pair in pairs)
    with capsys.disabled():
        sys.stdout.write(f"\n{best:.0f} budgets/s, {peer:.0f} echoes/s, ratio {best / peer:.3f}, promised {promised}\n")
    assert best / peer >= promised
