"""The way in without HTTP raises what HTTP raises."""

import asyncio
from collections.abc import Callable
from importlib import metadata
from typing import Any

import pytest

from burntally.client import connect, connect_async, errors
from burntally.client.clients import AsyncClient, Client
from burntally.client.inprocess import AsyncInProcessSender, InProcessSender
from burntally.client.settings import ClientSettings
from burntally.model.errors import (
    BurntallyError,
    ContractError,
    InconsistentError,
    NotFoundError,
    UncomputableError,
    Violation,
)
from burntally.model.operations import Bodies

Ask = Callable[..., Any]

SETTINGS = ClientSettings(timeout_s=30.0, tries=5, user_agent="test")
WRONG = [Violation(pointer="/name", message="is odd")]


@pytest.fixture(params=["sync", "async"])
def ask_installed(request: pytest.FixtureRequest) -> Ask:
    """Call a method of a client whose installed service is a function."""

    def ask_sync(answer: Ask, method: str, *args: Any, **options: Any) -> Any:
        return getattr(Client(InProcessSender(answer), SETTINGS), method)(*args, **options)

    def ask_async(answer: Ask, method: str, *args: Any, **options: Any) -> Any:
        return asyncio.run(getattr(AsyncClient(AsyncInProcessSender(answer), SETTINGS), method)(*args, **options))

    return ask_sync if request.param == "sync" else ask_async


def failing(error: Exception) -> Ask:
    def answer(*_: Any) -> bytes:
        raise error

    return answer


@pytest.mark.parametrize(
    "fault,kind,status",
    [
        (ContractError(WRONG), errors.InvalidRequest, 400),
        (InconsistentError(WRONG), errors.InconsistentRequest, 422),
        (UncomputableError(WRONG), errors.Uncomputable, 422),
        (NotFoundError(WRONG), errors.NotFound, 404),
        (RecursionError(), errors.InvalidRequest, 400),
        (ZeroDivisionError(), errors.ServerFault, 500),
        (BurntallyError("odd"), errors.ServerFault, 500),
    ],
    ids=repr,
)
def test_a_fault_has_the_class_that_it_has_over_http(
    fault: Exception, kind: type[errors.StatusError], status: int, ask_installed: Ask
) -> None:
    with pytest.raises(errors.StatusError) as caught:
        ask_installed(failing(fault), "bodies")
    assert (type(caught.value), caught.value.status, caught.value.__cause__) == (kind, status, fault)


def test_violations_arrive(ask_installed: Ask) -> None:
    with pytest.raises(errors.Uncomputable) as caught:
        ask_installed(failing(UncomputableError(WRONG)), "bodies")
    assert caught.value.violations == tuple(WRONG)


def test_the_service_is_asked_once_and_gets_the_bytes_as_they_are(ask_installed: Ask) -> None:
    asked: list[tuple[Any, ...]] = []

    def answer(*request: Any) -> bytes:
        asked.append(request)
        return b'{"bodies":[]}'

    ask_installed(answer, "call", "create_budget", b" {} ")
    assert asked == [("create_budget", b" {} ", "application/json", "application/json")]


def test_a_name_travels_as_a_field(ask_installed: Ask) -> None:
    asked: list[bytes] = []

    def answer(_: str, body: bytes, *__: str) -> bytes:
        asked.append(body)
        return b"{}"

    ask_installed(answer, "call", "get_body", name="Tessaly")
    assert asked == [b'{"name":"Tessaly"}']


def test_an_answer_is_read(ask_installed: Ask) -> None:
    assert ask_installed(lambda *_: b'{"bodies":[]}', "bodies") == Bodies(bodies=[])


@pytest.mark.parametrize(
    "option,kind",
    [({"media_type": "text/plain"}, errors.UnsupportedMedia), ({"accept": "text/plain"}, errors.NotAcceptable)],
)
def test_another_media_type_is_refused_as_over_http(
    option: dict[str, str], kind: type[Exception], ask_installed: Ask
) -> None:
    with pytest.raises(kind):
        ask_installed(lambda *_: b"", "call", "create_budget", b"{}", **option)


@pytest.mark.parametrize("connecting", [connect, connect_async])
def test_without_a_service_the_way_to_one_is_told(connecting: Ask, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(metadata, "entry_points", lambda **_: ())
    with pytest.raises(errors.ServiceMissing, match="burntally-service"):
        connecting()
