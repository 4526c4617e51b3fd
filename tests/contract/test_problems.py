"""Every way to be refused, and what comes back: a problem by RFC 9457, with a pointer to each thing that is wrong."""

import asyncio
import logging
from collections.abc import Iterator
from typing import Any, NamedTuple

import msgspec
import pytest
from litestar.testing import TestClient

from burntally.model.operations import Problem
from burntally_service import operations
from burntally_service.api.app import create_app
from burntally_service.api.edge import Edge
from burntally_service.api.examples import example_bytes
from burntally_service.api.problems import PROBLEMS
from burntally_service.api.settings import Settings
from burntally_service.operations import OPERATIONS
from tests.contract.conftest import MAX_BODY_BYTES

Client = TestClient[Any]

JSON = {"Content-Type": "application/json"}
MSGPACK = {"Content-Type": "application/msgpack"}
DESIGN = msgspec.json.decode(example_bytes("create_budget"))


def changed(pointer: str, value: object) -> bytes:
    """The example design with another value at one place."""
    design = msgspec.json.decode(example_bytes("create_budget"))
    *path, last = [int(part) if part.isdigit() else part for part in pointer.split("/")[1:]]
    place = design
    for part in path:
        place = place[part]
    place[last] = value
    return msgspec.json.encode(design)


STAGE = "/vehicle/stages/0"
THRUST = STAGE + "/engines/0/thrust"
NAN = msgspec.msgpack.encode({"format": 1, "vehicle": float("nan"), "mission": None})


class Probe(NamedTuple):
    """A request, and what it is refused with."""

    method: str
    path: str
    headers: dict[str, str]
    body: bytes | None
    status: int
    code: str
    pointers: list[str]


ROWS: list[tuple[str, str, dict[str, str], bytes | None, int, str, list[str]]] = [
    # what is not there
    ("GET", "/nothing", {}, None, 404, "not-found", []),
    ("GET", "/v1", {}, None, 404, "not-found", []),
    ("GET", "/v2/bodies", {}, None, 404, "not-found", []),
    ("GET", "/v1/bodies/", {}, None, 404, "not-found", []),
    ("GET", "/v1//bodies", {}, None, 404, "not-found", []),
    ("POST", "/v1/budgets/", JSON, b"{}", 404, "not-found", []),
    ("GET", "/v1/bodies/tessaly", {}, None, 404, "not-found", ["/name"]),
    ("GET", "/v1/rules/none", {}, None, 404, "not-found", ["/name"]),
    ("GET", "/v1/bodies/earth/moon", {}, None, 404, "not-found", []),
    ("GET", "/v1/bodies/a%2Fb", {}, None, 404, "not-found", []),
    ("GET", "/problems/none", {}, None, 404, "not-found", []),
    # methods
    ("GET", "/v1/budgets", {}, None, 405, "method-not-allowed", []),
    ("PUT", "/v1/performance", JSON, b"{}", 405, "method-not-allowed", []),
    ("DELETE", "/v1/bodies", {}, None, 405, "method-not-allowed", []),
    ("POST", "/v1/bodies/earth", JSON, b"{}", 405, "method-not-allowed", []),
    ("TRACE", "/v1/rules", {}, None, 405, "method-not-allowed", []),
    ("POST", "/openapi.json", JSON, b"{}", 405, "method-not-allowed", []),
    # what the answer may be
    ("POST", "/v1/budgets", JSON | {"Accept": "text/html"}, b"{}", 406, "not-acceptable", []),
    ("GET", "/v1/bodies", {"Accept": "application/xml"}, None, 406, "not-acceptable", []),
    ("GET", "/v1/bodies", {"Accept": "*/*;q=0"}, None, 406, "not-acceptable", []),
    # what the body is
    ("POST", "/v1/budgets", {}, b"{}", 415, "unsupported-media-type", []),
    ("POST", "/v1/budgets", {"Content-Type": "text/plain"}, b"{}", 415, "unsupported-media-type", []),
    ("POST", "/v1/budgets", {"Content-Type": "application/xml"}, b"<a/>", 415, "unsupported-media-type", []),
    (
        "POST",
        "/v1/budgets",
        {"Content-Type": "application/json; charset=latin-1"},
        b"{}",
        415,
        "unsupported-media-type",
        [],
    ),
    ("POST", "/v1/budgets", JSON | {"Content-Encoding": "gzip"}, b"{}", 415, "unsupported-media-type", []),
    ("POST", "/v1/budgets", JSON | {"Content-Encoding": "identity, br"}, b"{}", 415, "unsupported-media-type", []),
    ("POST", "/v1/budgets", {"Content-Type": ";;=;"}, b"{}", 415, "unsupported-media-type", []),
    ("POST", "/v1/budgets", {"Content-Type": "application/json, text/plain"}, b"{}", 415, "unsupported-media-type", []),
    ("POST", "/v1/budgets", {"Content-Type": "application/problem+json"}, b"{}", 415, "unsupported-media-type", []),
    (
        "POST",
        "/v1/budgets",
        {"Content-Type": "application/msgpack; charset=latin-1"},
        b"\x80",
        415,
        "unsupported-media-type",
        [],
    ),
    ("POST", "/v1/budgets", JSON, b" " * (MAX_BODY_BYTES + 1), 413, "payload-too-large", []),
    # bodies that cannot be read
    ("POST", "/v1/budgets", JSON, b"", 400, "invalid-request", [""]),
    ("POST", "/v1/budgets", JSON, b"{", 400, "invalid-request", [""]),
    ("POST", "/v1/budgets", JSON, b"\xff{}", 400, "invalid-request", [""]),
    ("POST", "/v1/budgets", JSON, b"null", 400, "invalid-request", [""]),
    ("POST", "/v1/budgets", JSON, b"[]", 400, "invalid-request", [""]),
    ("POST", "/v1/budgets", JSON, b"[" * 100_000, 400, "invalid-request", [""]),
    ("POST", "/v1/budgets", JSON, b'{"a":' * 30_000 + b"1" + b"}" * 30_000, 400, "invalid-request", [""]),
    ("POST", "/v1/budgets", MSGPACK, b"\x91" * 100_000, 400, "invalid-request", [""]),
    ("POST", "/v1/budgets", MSGPACK, b"\xc1", 400, "invalid-request", [""]),
    ("POST", "/v1/budgets", MSGPACK, NAN, 400, "invalid-request", ["/vehicle", "/mission"]),
    # fields
    ("POST", "/v1/budgets", JSON, b"{}", 400, "invalid-request", ["/format", "/vehicle", "/mission"]),
    ("POST", "/v1/budgets", JSON, changed("/format", 2), 400, "invalid-request", ["/format"]),
    ("POST", "/v1/budgets", JSON, changed("/surprise", 1), 400, "invalid-request", ["/surprise"]),
    ("POST", "/v1/budgets", JSON, changed(THRUST, -1.0), 400, "invalid-request", [THRUST]),
    ("POST", "/v1/budgets", JSON, changed(THRUST, "4200"), 400, "invalid-request", [THRUST]),
    ("POST", "/v1/budgets", JSON, changed(THRUST, "4.2 kg"), 400, "invalid-request", [THRUST]),
    ("POST", "/v1/budgets", JSON, changed(THRUST, "4.2 parsnips"), 400, "invalid-request", [THRUST]),
    ("POST", "/v1/budgets", JSON, changed(THRUST, "1e9 kN"), 400, "invalid-request", [THRUST]),
    ("POST", "/v1/budgets", JSON, changed(THRUST, True), 400, "invalid-request", [THRUST]),
    ("POST", "/v1/budgets", JSON, changed(THRUST, None), 400, "invalid-request", [THRUST]),
    (
        "POST",
        "/v1/budgets",
        JSON,
        changed("/mission/legs/0/kind", "teleport"),
        400,
        "invalid-request",
        ["/mission/legs/0/kind"],
    ),
    ("POST", "/v1/budgets", JSON, changed("/mission/legs", []), 400, "invalid-request", ["/mission/legs"]),
    ("POST", "/v1/budgets?trace=true", JSON, b"{}", 400, "invalid-request", [""]),
    ("GET", "/v1/bodies?a=1&b=2", {}, None, 400, "invalid-request", ["", ""]),
    ("GET", "/v1/bodies/a%00b", {}, None, 400, "invalid-request", ["/name"]),
    ("GET", "/v1/bodies/" + "a" * 65, {}, None, 400, "invalid-request", ["/name"]),
    ("GET", "/v1/bodies/%FF", {}, None, 400, "invalid-request", ["/name"]),
    ("GET", "/v1/bodies?%FF=%FE", {}, None, 400, "invalid-request", [""]),
    # fields that do not fit together
    (
        "POST",
        "/v1/budgets",
        JSON,
        changed("/vehicle/payloads/0/on", "nowhere"),
        422,
        "inconsistent-request",
        ["/vehicle/payloads/0/on"],
    ),
    (
        "POST",
        "/v1/performance",
        JSON,
        msgspec.json.encode({"vehicle": DESIGN["vehicle"], "gravity_of": "tessaly"}),
        422,
        "inconsistent-request",
        ["/gravity_of"],
    ),
    (
        "POST",
        "/v1/transfers",
        JSON,
        b'{"start":{"kind":"orbit","body":"tessaly","altitude":4e5},"leg":{"kind":"deorbit","periapsis":1e4}}',
        422,
        "uncomputable",
        ["/start/body"],
    ),
]
PROBES = [Probe(*row) for row in ROWS]


@pytest.fixture
def failing(monkeypatch: pytest.MonkeyPatch) -> Iterator[None]:
    """A service with a fault of its own."""

    def fail() -> Any:
        raise AttributeError("secret of the house")

    rows = dict(OPERATIONS) | {"list_bodies": msgspec.structs.replace(OPERATIONS["list_bodies"], function=fail)}
    monkeypatch.setattr(operations, "OPERATIONS", rows)
    # The log is what tells the fault; here it is what was asked for.
    logging.getLogger("burntally.api").disabled = True
    yield
    logging.getLogger("burntally.api").disabled = False


@pytest.mark.parametrize("probe", PROBES, ids=[f"{index}-{probe.code}" for index, probe in enumerate(PROBES)])
def test_a_refusal_says_what_is_wrong(probe: Probe, client: Client) -> None:
    response = client.request(probe.method, probe.path, headers=probe.headers, content=probe.body)
    problem = msgspec.json.decode(response.content, type=Problem)
    told = (response.status_code, problem.status, problem.code, [error.pointer for error in problem.errors])
    assert told == (probe.status, probe.status, probe.code, probe.pointers)
    assert response.headers["content-type"] == "application/problem+json"
    assert (problem.type, problem.title) == (f"/problems/{probe.code}", PROBLEMS[probe.code].title)


@pytest.mark.parametrize("probe", PROBES, ids=[f"{index}-{probe.code}" for index, probe in enumerate(PROBES)])
def test_a_refusal_says_in_words_what_to_do_and_where_to_read_on(probe: Probe, client: Client) -> None:
    problem = client.request(probe.method, probe.path, headers=probe.headers, content=probe.body).json()
    assert problem["detail"]
    assert all(error["message"] for error in problem["errors"])
    assert client.get(problem["type"]).json()["title"] == problem["title"]


def test_the_detail_of_one_violation_names_its_field(client: Client) -> None:
    assert client.post("/v1/performance", headers=JSON, content=b"{}").json()["detail"] == "/vehicle is missing"


def test_a_missing_content_type_is_told_to_be_missing(client: Client) -> None:
    assert client.post("/v1/budgets").json()["detail"].startswith("Content-Type is missing; ")


def test_a_content_type_that_is_not_read_is_told_as_it_was_sent(client: Client) -> None:
    problem = client.post("/v1/budgets", headers={"Content-Type": "application/yaml"}).json()
    assert problem["detail"].startswith("Content-Type is 'application/yaml'; ")


@pytest.mark.parametrize(
    "pointer, name, near",
    [("/mission/start/body", "erth", "earth"), ("/rules/preset", "esa-2021", "esa-2012")],
)
def test_a_name_that_leads_nowhere_is_told_with_the_nearest_one(
    pointer: str, name: str, near: str, client: Client
) -> None:
    problem = client.post("/v1/budgets", headers=JSON, content=changed(pointer, name)).json()
    assert problem["detail"].startswith(f"{pointer} is no ")
    assert problem["detail"].endswith(f"that is known; did you mean '{near}'?")
    assert problem["errors"][0]["read"] == f'"{name}"'


@pytest.mark.usefixtures("failing")
def test_a_failure_tells_nothing_of_the_inside(client: Client) -> None:
    response = client.get("/v1/bodies")
    assert (response.status_code, response.json()["code"]) == (500, "internal-error")
    assert b"secret" not in response.content
    assert b"Traceback" not in response.content


def test_a_service_that_has_not_started_is_not_ready() -> None:
    status, headers, body = asyncio.run(asked(create_app(Settings()), "GET", "/readyz"))
    assert (status, body["code"]) == (503, "not-ready")
    assert headers[b"retry-after"] == b"1"


def test_a_body_that_trickles_is_cut_off(app: Edge) -> None:
    status, headers, body = asyncio.run(asked(app, "POST", "/v1/budgets", ends=False))
    assert (status, body["code"]) == (408, "request-timeout")
    assert headers[b"connection"] == b"close"


def test_a_body_without_an_announced_length_is_bounded_too(client: Client) -> None:
    chunks = (b" " * 1000 for _ in range(MAX_BODY_BYTES // 1000 + 1))
    response = client.post("/v1/budgets", headers=JSON, content=chunks)
    assert (response.status_code, response.json()["detail"]) == (413, f"the body is larger than {MAX_BODY_BYTES} bytes")


def test_a_body_at_the_bound_is_read(client: Client) -> None:
    response = client.post("/v1/budgets", headers=JSON, content=example_bytes("create_budget").ljust(MAX_BODY_BYTES))
    assert response.status_code == 200


@pytest.mark.parametrize("path,allow", [("/v1/budgets", "OPTIONS, POST"), ("/v1/bodies/earth", "GET, HEAD, OPTIONS")])
def test_a_refused_method_is_told_the_others(path: str, allow: str, client: Client) -> None:
    assert client.delete(path).headers["allow"] == client.options(path).headers["allow"] == allow


@pytest.mark.parametrize("code", PROBLEMS)
def test_a_type_of_problem_leads_to_its_description(code: str, client: Client) -> None:
    told = client.get(f"/problems/{code}").json()
    kind = PROBLEMS[code]
    assert told == {
        "type": f"/problems/{code}",
        "code": code,
        "status": kind.status,
        "title": kind.title,
        "description": kind.description,
    }


@pytest.mark.parametrize("code", PROBLEMS)
def test_a_browser_reads_it_as_a_page(code: str, client: Client) -> None:
    response = client.get(f"/problems/{code}", headers={"Accept": "text/html,*/*;q=0.8"})
    assert response.headers["content-type"] == "text/html; charset=utf-8"
    assert PROBLEMS[code].title in response.text


def test_all_types_are_listed(client: Client) -> None:
    assert [kind["code"] for kind in client.get("/problems").json()["problems"]] == list(PROBLEMS)


async def asked(app: Edge, method: str, path: str, *, ends: bool = True) -> tuple[int, dict[bytes, bytes], Any]:
    """Ask without starting the application, with a body that may never end."""
    sent: list[Any] = []
    received = iter([{"type": "http.request", "body": b"{", "more_body": not ends}])

    async def receive() -> Any:
        for message in received:
            return message
        return await asyncio.Event().wait()

    async def send(message: Any) -> None:
        await asyncio.sleep(0)
        sent.append(message)

    headers = [(b"content-type", b"application/json")]
    scope: Any = {"type": "http", "method": method, "path": path, "query_string": b"", "headers": headers}
    await app(scope, receive, send)
    body = b"".join(message["body"] for message in sent[1:])
    return sent[0]["status"], dict(sent[0]["headers"]), msgspec.json.decode(body)
