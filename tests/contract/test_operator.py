"""What an operator learns of each request, and that it is no more than he should."""

import asyncio
import json
import logging
import subprocess
from collections.abc import Iterator
from typing import Any

import pytest
from prometheus_client.parser import text_string_to_metric_families

from burntally_service.api.app import create_app
from burntally_service.api.callers import Networks
from burntally_service.api.edge import Edge
from burntally_service.api.examples import example_bytes
from burntally_service.api.logs import Lines
from burntally_service.api.problems import PROBLEMS
from burntally_service.api.settings import Settings
from burntally_service.operations import OPERATIONS
from tests.contract.calls import call, called

JSON = [(b"content-type", b"application/json")]
TRACE, SPAN = "4bf92f3577b34da6a3ce929d0e0e4736", "00f067aa0ba902b7"
SECRET = "secret-of-the-caller"  # noqa: S105 - invented


@pytest.fixture
def fresh() -> Edge:
    return create_app(Settings())


@pytest.fixture
def lines() -> Iterator[list[str]]:
    """Lines of our own log, as JSON, however low their level."""
    written: list[str] = []

    class Kept(logging.Handler):
        def emit(self, record: logging.LogRecord) -> None:
            written.append(form.format(record))

    form = Lines(is_text=False)
    handler, logger = Kept(), logging.getLogger("burntally.api")
    level = logger.level
    logger.addHandler(handler)
    logger.setLevel(logging.DEBUG)
    yield written
    logger.removeHandler(handler)
    logger.setLevel(level)


def samples(app: Edge) -> dict[tuple[str, frozenset[tuple[str, str]]], float]:
    """All series, by name and labels."""
    families = text_string_to_metric_families(call(app, "/metrics").body.decode())
    return {(row.name, frozenset(row.labels.items())): row.value for family in families for row in family.samples}


def value(app: Edge, name: str, **labels: str) -> float:
    return samples(app).get((name, frozenset(labels.items())), 0.0)


# --- logs ---


def test_a_request_is_one_line(fresh: Edge, lines: list[str]) -> None:
    told = call(fresh, "/v1/budgets", method="POST", headers=JSON, body=example_bytes("create_budget"))
    (line,) = map(json.loads, lines)
    drawn = {name: line.pop(name) for name in ("time", "request_id", "trace_id", "span_id", "duration_ms")}
    assert line == {
        "level": "info",
        "logger": "burntally.api",
        "event": "request",
        "parent_id": None,
        "client": "192.0.2.7",
        "scheme": "http",
        "method": "POST",
        "route": "/v1/budgets",
        "status": 200,
        "problem": None,
        "answer_bytes": len(told.body),
    }
    assert drawn["request_id"] == told.headers["x-request-id"]
    assert drawn["duration_ms"] > 0


def test_the_callers_trace_goes_on(fresh: Edge, lines: list[str]) -> None:
    call(fresh, "/v1/rules", headers=[(b"traceparent", f"00-{TRACE}-{SPAN}-01".encode())])
    line = json.loads(lines[0])
    assert (line["trace_id"], line["parent_id"]) == (TRACE, SPAN)


@pytest.mark.parametrize(
    "path,route,problem",
    [
        ("/v1/bodies/earth", "/v1/bodies/{name}", None),
        ("/v1/bodies/nothing", "/v1/bodies/{name}", "not-found"),
        ("/nothing", None, "not-found"),
        ("//", None, "not-found"),
        ("/v1/budgets", None, "method-not-allowed"),
    ],
)
def test_a_line_tells_the_route_and_never_the_path(
    path: str, route: str | None, problem: str | None, fresh: Edge, lines: list[str]
) -> None:
    call(fresh, path)
    line = json.loads(lines[0])
    assert (line["route"], line["problem"]) == (route, problem)


@pytest.mark.parametrize("path", ["/healthz", "/readyz", "/metrics"])
def test_what_machines_ask_steadily_is_logged_low(path: str, lines: list[str]) -> None:
    app = create_app(Settings())
    app.app.state.ready = True
    call(app, path)
    assert json.loads(lines[0])["level"] == "debug"


def test_what_a_caller_sends_is_not_logged(lines: list[str]) -> None:
    app = create_app(Settings(rate_per_minute=100))
    headers = [(name, SECRET.encode()) for name in (b"authorization", b"user-agent", b"cookie", b"accept", b"referer")]
    body = example_bytes("create_budget").replace(b"{", f'{{"{SECRET}":1,'.encode(), 1)
    for path in ("/v1/budgets", f"/v1/bodies/{SECRET}", f"/{SECRET}", f"/problems/{SECRET}"):
        call(app, path, method="POST", headers=[*JSON, *headers], body=body)
        call(app, path, headers=headers)
    assert len(lines) == 8
    assert SECRET not in "".join(lines)


@pytest.mark.parametrize(
    "hostile", [b"x\r\nlevel: critical", b'"}\n{"event":"forged"}', b"\x1b[2J", b"\xff\xfe", b"a" * 5000], ids=repr
)
@pytest.mark.parametrize("name", [b"x-request-id", b"traceparent", b"x-forwarded-for", b"x-forwarded-proto"])
def test_no_header_forges_a_line(name: bytes, hostile: bytes, lines: list[str]) -> None:
    app = create_app(Settings(trusted_proxies=Networks.read("192.0.2.0/24")))
    told = call(app, "/v1/rules", headers=[(name, hostile)])
    assert hostile.decode("latin-1") not in lines[0] + "".join(told.headers.values())
    assert (json.loads(lines[0])["event"], json.loads(lines[0])["client"]) == ("request", "192.0.2.7")


def test_a_method_of_nobody_is_no_word_in_the_log(fresh: Edge, lines: list[str]) -> None:
    call(fresh, "/v1/rules", method="BREW\n")
    assert json.loads(lines[0])["method"] == "other"


def test_a_trusted_proxy_tells_the_caller(lines: list[str]) -> None:
    app = create_app(Settings(trusted_proxies=Networks.read("192.0.2.7")))
    call(app, "/v1/rules", headers=[(b"x-forwarded-for", b"203.0.113.9"), (b"x-forwarded-proto", b"https")])
    line = json.loads(lines[0])
    assert (line["client"], line["scheme"]) == ("203.0.113.9", "https")


def test_a_request_that_a_stopping_server_cuts_off_is_refused_and_counted_out(fresh: Edge, lines: list[str]) -> None:
    async def cut_off() -> None:
        async def receive() -> Any:
            return await asyncio.Event().wait()

        async def send(_: Any) -> None:
            await asyncio.sleep(0)

        scope: Any = {"type": "http", "method": "POST", "path": "/v1/budgets", "query_string": b"", "headers": JSON}
        task = asyncio.ensure_future(fresh(scope, receive, send))
        await asyncio.sleep(0.05)
        task.cancel()
        await asyncio.gather(task, return_exceptions=True)

    asyncio.run(cut_off())
    line = json.loads(lines[0])
    assert (line["status"], line["problem"]) == (503, "not-ready")
    # The one who asks for the metrics is in flight himself.
    assert value(fresh, "burntally_http_requests_in_flight") == 1


# --- metrics ---


def test_each_answer_is_counted(fresh: Edge) -> None:
    for _ in range(3):
        call(fresh, "/v1/bodies/earth")
    call(fresh, "/v1/bodies/nothing")
    counted = [
        value(fresh, "burntally_http_requests_total", operation="get_body", method="GET", status=status)
        for status in ("2xx", "4xx", "5xx")
    ]
    assert counted == [3, 1, 0]


def test_each_duration_is_in_the_histogram(fresh: Edge) -> None:
    call(fresh, "/v1/rules")
    names = ("_count", "_sum")
    count, total = (
        value(fresh, f"burntally_http_request_duration_seconds{name}", operation="list_rules") for name in names
    )
    assert count == 1
    assert 0 < total < 60


def test_each_refusal_is_counted_by_its_problem(fresh: Edge) -> None:
    call(fresh, "/v1/budgets", method="POST", headers=JSON, body=b"{}")
    call(fresh, "/nothing")
    codes = ("invalid-request", "not-found", "internal-error")
    assert [value(fresh, "burntally_refusals_total", problem=code) for code in codes] == [1, 1, 0]


def test_it_tells_version_and_memory(fresh: Edge) -> None:
    names = {name for name, _ in samples(fresh)}
    assert {"burntally_build_info", "process_resident_memory_bytes", "process_open_fds"} <= names


def test_random_paths_add_no_series(fresh: Edge) -> None:
    async def wander(count: int) -> None:
        for number in range(count):
            for path in (f"/{number}", f"/v1/bodies/{number}", f"/problems/{number}", f"/v1/{number}/x"):
                await called(fresh, path, method=("GET", "BREW", "PUT", f"M{number}")[number % 4])

    asyncio.run(wander(8))
    call(fresh, "/metrics")
    before = set(samples(fresh))
    asyncio.run(wander(2500))
    assert set(samples(fresh)) == before


def test_labels_are_operations_methods_and_problems(fresh: Edge) -> None:
    for path in ("/", "/nothing", "/docs", "/v1/rules", "/v1/bodies/nothing"):
        for method in ("GET", "HEAD", "OPTIONS", "TRACE", "BREW"):
            call(fresh, path, method=method)
    told: dict[str, set[str]] = {}
    for _, labels in samples(fresh):
        for name, label in labels:
            told.setdefault(name, set()).add(label)
    assert told["operation"] & set(OPERATIONS) == {"list_rules", "get_body"}
    assert told["method"] <= {"GET", "HEAD", "OPTIONS", "TRACE", "other"}
    assert told["problem"] <= set(PROBLEMS)


def test_metrics_are_in_the_text_form(fresh: Edge) -> None:
    headers = call(fresh, "/metrics").headers
    assert headers["content-type"] == "text/plain; version=0.0.4; charset=utf-8"
    assert headers["cache-control"] == "no-store"


def test_metrics_may_be_left_out() -> None:
    assert call(create_app(Settings(metrics=False)), "/metrics").status == 404


# --- readiness ---


@pytest.mark.parametrize("ready,status", [(True, 200), (False, 503)])
def test_a_service_that_starts_or_drains_lives_and_is_not_ready(ready: bool, status: int, fresh: Edge) -> None:
    fresh.app.state.ready = ready
    told = call(fresh, "/readyz")
    assert (told.status, call(fresh, "/healthz").status) == (status, 200)
    assert told.headers.get("retry-after") == (None if ready else "1")


@pytest.mark.release
def test_prometheus_own_linter_has_nothing_to_say(fresh: Edge) -> None:
    """`promtool` comes with Debian's package `prometheus`; it has to be on the path."""
    for path in ("/v1/rules", "/v1/budgets", "/nothing"):
        call(fresh, path)
    exposed = call(fresh, "/metrics").body
    done = subprocess.run(["promtool", "check", "metrics"], input=exposed, capture_output=True, check=False)
    assert (done.returncode, done.stdout + done.stderr) == (0, b"")
