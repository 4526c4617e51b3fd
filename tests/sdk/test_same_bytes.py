"""One client, three ways in: the same bytes for the same request, and the same error for the same fault."""

import asyncio
import json
from collections.abc import Callable, Iterator
from typing import Any

import httpx2
import msgspec
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from burntally.client import Answer, connect, connect_async, errors
from burntally_service.api.app import create_app
from burntally_service.api.examples import requests_of
from burntally_service.operations import OPERATIONS

URL = "http://burntally.test"
Way = Callable[..., Answer]


class Loop(httpx2.BaseTransport):
    """Reaches the application from a synchronous client: the library's own transport to it is asynchronous only."""

    def __init__(self, app: Any, runner: asyncio.Runner) -> None:
        self._transport = httpx2.ASGITransport(app)
        self._runner = runner

    def handle_request(self, request: httpx2.Request) -> httpx2.Response:
        async def send() -> httpx2.Response:
            async with httpx2.AsyncClient(transport=self._transport) as client:
                return await client.request(
                    request.method, request.url, content=request.read(), headers=request.headers
                )

        reply = self._runner.run(send())
        return httpx2.Response(reply.status_code, headers=reply.headers, content=reply.content)


@pytest.fixture(scope="module")
def runner() -> Iterator[asyncio.Runner]:
    """One event loop for all requests, as a server has it: its workers live in it."""
    with asyncio.Runner() as runner:
        yield runner


@pytest.fixture(scope="module")
def app(runner: asyncio.Runner) -> Iterator[Any]:
    app = create_app()
    yield app
    runner.run(app.app.state.turns.close())


@pytest.fixture(scope="module")
def inprocess() -> Iterator[Way]:
    with connect() as client:
        yield client.call


@pytest.fixture(scope="module")
def over_http(app: Any, runner: asyncio.Runner) -> Iterator[Way]:
    with connect(URL, transport=Loop(app, runner), tries=1) as client:
        yield client.call


def call_async(app: Any, runner: asyncio.Runner, /, *args: Any, **options: Any) -> Answer:
    async def call() -> Answer:
        async with connect_async(URL, transport=httpx2.ASGITransport(app), tries=1) as client:
            return await client.call(*args, **options)

    return runner.run(call())


def examples() -> list[Any]:
    named = [
        pytest.param(operation, example["value"], id=f"{operation}-{name}")
        for operation in OPERATIONS
        for name, example in requests_of(operation).items()
    ]
    lists = [pytest.param(row.id, None, id=row.id) for row in OPERATIONS.values() if row.request is None]
    return [*named, *lists]


def arguments(operation: str, value: Any) -> tuple[tuple[Any, ...], dict[str, Any]]:
    """Take a name out of the request where it travels in the path, and write a body as it stands."""
    if value is None:
        return (operation,), {}
    if not OPERATIONS[operation].takes_body:
        return (operation,), {"name": value["name"]}
    return (operation, json.dumps(value).encode()), {}


@pytest.mark.parametrize("operation,value", examples())
def test_http_gives_the_bytes_of_the_installed_service(
    operation: str, value: Any, inprocess: Way, over_http: Way
) -> None:
    args, options = arguments(operation, value)
    assert over_http(*args, **options).body == inprocess(*args, **options).body


@pytest.mark.parametrize("operation,value", examples())
def test_the_asynchronous_client_gives_them_too(
    operation: str, value: Any, inprocess: Way, app: Any, runner: asyncio.Runner
) -> None:
    args, options = arguments(operation, value)
    assert call_async(app, runner, *args, **options).body == inprocess(*args, **options).body


METHODS = {
    "create_budget": "budget",
    "compute_performance": "performance",
    "plan_transfer": "transfer",
    "list_bodies": "bodies",
    "get_body": "body",
    "list_rules": "rules",
    "get_rules": "rule",
}


def typed(method: Any, operation: str, value: Any) -> Any:
    """Call a method with the request as a person has it: nothing, a name, or plain values."""
    if value is None:
        return method()
    return method(value if OPERATIONS[operation].takes_body else value["name"])


@pytest.mark.parametrize("operation,value", examples())
def test_a_method_gives_what_its_operation_gives(operation: str, value: Any) -> None:
    with connect() as client:
        told = typed(getattr(client, METHODS[operation]), operation, value)
        args, options = arguments(operation, value)
        assert told == decode_answer(client.call(*args, **options), type(told))


@pytest.mark.parametrize("operation,value", examples())
def test_an_awaited_method_gives_the_same(operation: str, value: Any) -> None:
    async def ask() -> Any:
        async with connect_async() as client:
            return await typed(getattr(client, METHODS[operation]), operation, value)

    with connect() as client:
        assert asyncio.run(ask()) == typed(getattr(client, METHODS[operation]), operation, value)


def decode_answer(answer: Answer, kind: Any) -> Any:
    return msgspec.json.decode(answer.body, type=kind)


@given(mass=st.floats(0.0, 1e6), isp=st.floats(150.0, 500.0), altitude=st.floats(2e5, 1e7))
@settings(max_examples=25)
def test_any_design_has_one_budget(mass: float, isp: float, altitude: float, inprocess: Way, over_http: Way) -> None:
    design = {
        "format": 1,
        "vehicle": {
            "name": "Meridian tug",
            "stages": [
                {
                    "name": "tug",
                    "dry_mass": 420.0,
                    "propellants": [{"mass": mass}],
                    "engines": [{"thrust": 2000.0, "isp": isp}],
                }
            ],
        },
        "mission": {
            "start": {"kind": "orbit", "body": "earth", "altitude": 400e3},
            "legs": [{"kind": "transfer", "to": {"altitude": altitude}}],
        },
    }
    assert over_http("create_budget", design).body == inprocess("create_budget", design).body


WRONG = [
    pytest.param(("create_budget", b""), {}, id="empty"),
    pytest.param(("create_budget", b"{"), {}, id="no JSON"),
    pytest.param(("create_budget", b"{}"), {}, id="nothing in it"),
    pytest.param(("create_budget", b'{"format":1,"format":1}'), {}, id="twice"),
    pytest.param(("create_budget", b"[" * 100_000), {}, id="too deep"),
    pytest.param(("create_budget", b"{}"), {"media_type": "text/plain"}, id="media type"),
    pytest.param(("create_budget", b"{}"), {"accept": "text/plain"}, id="accept"),
    pytest.param(("get_body",), {"name": "nowhere"}, id="no body"),
    pytest.param(("get_body",), {"name": "?"}, id="no name"),
    pytest.param(("get_rules",), {"name": "nobodys"}, id="no rules"),
]


def error_of(way: Way, *args: Any, **options: Any) -> tuple[Any, ...]:
    with pytest.raises(errors.StatusError) as caught:
        way(*args, **options)
    error = caught.value
    return type(error), error.status, error.problem_code, error.violations


@pytest.mark.parametrize("args,options", WRONG)
def test_a_fault_is_the_same_error(
    args: tuple[Any, ...], options: dict[str, Any], inprocess: Way, over_http: Way
) -> None:
    assert error_of(over_http, *args, **options) == error_of(inprocess, *args, **options)


def test_an_answer_over_http_has_an_id(over_http: Way) -> None:
    assert over_http("list_bodies").request_id
