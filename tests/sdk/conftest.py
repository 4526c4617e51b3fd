"""Both clients, driven alike: a call by its method's name, over a transport that never touches a network."""

import asyncio
import time
from collections.abc import Callable
from typing import Any

import httpx2
import pytest

from burntally.client import connect, connect_async

URL = "http://burntally.test"
Handler = Callable[[httpx2.Request], httpx2.Response]
Ask = Callable[..., Any]


@pytest.fixture(params=["sync", "async"])
def ask(request: pytest.FixtureRequest) -> Ask:
    """Call a method of a client whose network is a function."""

    def ask_sync(handler: Handler, method: str, *args: Any, **options: Any) -> Any:
        with connect(URL, transport=httpx2.MockTransport(handler), **options) as client:
            return getattr(client, method)(*args)

    def ask_async(handler: Handler, method: str, *args: Any, **options: Any) -> Any:
        async def run() -> Any:
            async with connect_async(URL, transport=httpx2.MockTransport(handler), **options) as client:
                return await getattr(client, method)(*args)

        return asyncio.run(run())

    return ask_sync if request.param == "sync" else ask_async


@pytest.fixture
def pauses(monkeypatch: pytest.MonkeyPatch) -> list[float]:
    """Pauses that a client would have made; the tests do not wait."""
    made: list[float] = []

    async def pause(pause_s: float) -> None:
        made.append(pause_s)

    monkeypatch.setattr(time, "sleep", made.append)
    monkeypatch.setattr("burntally.client.clients._pause", pause)
    return made
