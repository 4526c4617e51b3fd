"""How quick the service stays under load: small requests beside long ones, a crowd, and a flood.

Run with ``pytest -m benchmark -s tests/benchmarks/test_load.py``, with `wrk` installed and nothing else running.
"""

import http.client
import os
import re
import signal
import subprocess
import sys
import time
from collections import defaultdict
from collections.abc import Iterator
from contextlib import ExitStack
from pathlib import Path

import pytest

from tests.benchmarks.test_http_throughput import design
from tests.e2e.serving import Served, head_of, long_design, reply_of, serving

pytestmark = pytest.mark.benchmark

SMALL = design(with_units=False)
LONG = long_design()
QUANTILE = 0.99
RUNS = 5
PROBES = 300
LOAD_S = 4


@pytest.fixture
def served() -> Iterator[Served]:
    with serving(log_level="info", compute_timeout_s=60) as served:
        latencies(served, PROBES)
        yield served


@pytest.fixture
def script(tmp_path: Path) -> Path:
    """What makes wrk post the design."""
    body, script = tmp_path / "body.json", tmp_path / "post.lua"
    body.write_bytes(SMALL)
    script.write_text(
        'wrk.method = "POST"\nwrk.headers["Content-Type"] = "application/json"\n'
        f'wrk.body = io.open("{body}", "rb"):read("*a")\n',
        encoding="utf-8",
    )
    return script


def flood(served: Served, script: Path, connections: int) -> subprocess.Popen[str]:
    url = f"http://127.0.0.1:{served.port}/v1/budgets"
    command = [
        "wrk",
        "-t1",
        f"-c{connections}",
        f"-d{LOAD_S}s",
        "--timeout",
        "10s",
        "--latency",
        "-s",
        str(script),
        url,
    ]
    return subprocess.Popen(command, stdout=subprocess.PIPE, text=True)


def milliseconds(told: str) -> float:
    """The highest quantile that wrk tells, its 99th in the hundred [ms]."""
    found = re.search(r"99%\s+([\d.]+)(us|ms|s)\b", told)
    assert found is not None
    return float(found[1]) * {"us": 1e-3, "ms": 1.0, "s": 1e3}[found[2]]


def latencies(served: Served, count: int, pause_s: float = 0.005) -> dict[int, list[float]]:
    """Ask so often on one connection; times by status, sorted [s]."""
    connection = http.client.HTTPConnection("127.0.0.1", served.port, timeout=30)
    times: dict[int, list[float]] = defaultdict(list)
    for _ in range(count):
        begins = time.perf_counter()
        connection.request("POST", "/v1/budgets", body=SMALL, headers={"Content-Type": "application/json"})
        status = reply_of(connection.getresponse()).status
        times[status].append(time.perf_counter() - begins)
        time.sleep(pause_s)
    connection.close()
    return {status: sorted(spent) for status, spent in times.items()}


def quantile(times: list[float]) -> float:
    return times[int(QUANTILE * len(times))]


def tell(capsys: pytest.CaptureFixture[str], text: str) -> None:
    with capsys.disabled():
        sys.stdout.write(f"\n{text}\n")


def test_small_requests_stay_quick_beside_long_ones(served: Served, capsys: pytest.CaptureFixture[str]) -> None:
    ratios = []
    for _ in range(RUNS):
        idle = latencies(served, PROBES)
        with ExitStack() as opened:
            for _ in range(4):
                opened.enter_context(served.connect()).sendall(head_of(LONG) + LONG)
            time.sleep(1.0)
            beside = latencies(served, PROBES)
        assert set(idle) == set(beside) == {200}
        ratios.append(quantile(beside[200]) / quantile(idle[200]))
        time.sleep(0.5)
    tell(capsys, f"p99 beside 4 long requests over p99 idle: {', '.join(f'{ratio:.2f}' for ratio in sorted(ratios))}")
    assert min(ratios) <= 3.0


def test_a_crowd_of_16_is_answered_in_time(served: Served, script: Path, capsys: pytest.CaptureFixture[str]) -> None:
    told = [flood(served, script, 16).communicate()[0] for _ in range(RUNS)]
    best = min(map(milliseconds, told))
    tell(capsys, f"p99 at 16 connections: {best:.1f} ms")
    assert not any("Non-2xx" in text or "Socket errors" in text for text in told)
    assert best <= 25.0


def test_a_flood_is_refused_at_once_and_leaves_nothing(script: Path, capsys: pytest.CaptureFixture[str]) -> None:
    refused, recovered = [], []
    with serving(log_level="info", most_in_flight=1, compute_timeout_s=60, workers=1) as served:
        for _ in range(RUNS):
            # One long request fills the service, so that wrk's figures are of refusals alone; its worker sleeps.
            with served.connect() as full:
                full.sendall(head_of(LONG) + LONG)
                time.sleep(1.0)
                for pid in served.workers():
                    os.kill(pid, signal.SIGSTOP)
                told = flood(served, script, 500).communicate()[0]
                for pid in served.workers():
                    os.kill(pid, signal.SIGCONT)
            refused.append(milliseconds(told))
            begins = time.perf_counter()
            while served.ask(SMALL).status != 200:
                time.sleep(0.02)
            recovered.append(time.perf_counter() - begins)
    tell(capsys, f"500 connections: p99 of refusals {min(refused):.0f} ms, recovered in {max(recovered):.2f} s")
    assert max(recovered) < 2.0
    assert min(refused) < 50.0
