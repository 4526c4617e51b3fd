"""Calls of the application as a server makes them: quick, with any peer and any bytes in a header."""

import asyncio
from typing import Any, NamedTuple

import msgspec

from burntally_service.api.edge import Edge

PEER = ("192.0.2.7", 4711)


class Told(NamedTuple):
    """An answer."""

    status: int
    headers: dict[str, str]
    body: bytes

    @property
    def problem(self) -> Any:
        """The body, read as the problem that it is."""
        return msgspec.json.decode(self.body)


def call(
    app: Edge,
    path: str,
    *,
    method: str = "GET",
    headers: list[tuple[bytes, bytes]] | None = None,
    body: bytes = b"",
    peer: tuple[str, int] | None = PEER,
) -> Told:
    """Ask once, in an event loop of its own."""
    return asyncio.run(called(app, path, method=method, headers=headers, body=body, peer=peer))


async def called(
    app: Edge,
    path: str,
    *,
    method: str = "GET",
    headers: list[tuple[bytes, bytes]] | None = None,
    body: bytes = b"",
    peer: tuple[str, int] | None = PEER,
) -> Told:
    """Ask once; the names of the answer's headers must be distinct."""
    sent: list[Any] = []

    async def receive() -> Any:
        await asyncio.sleep(0)
        return {"type": "http.request", "body": body, "more_body": False}

    async def send(message: Any) -> None:
        await asyncio.sleep(0)
        sent.append(message)

    scope: Any = {
        "type": "http",
        "method": method,
        "path": path,
        "raw_path": path.encode(),
        "query_string": b"",
        "headers": headers or [],
        "client": peer,
        "scheme": "http",
    }
    await app(scope, receive, send)
    pairs = [(name.decode(), value.decode()) for name, value in sent[0]["headers"]]
    assert len(dict(pairs)) == len(pairs)
    return Told(sent[0]["status"], dict(pairs), b"".join(message.get("body", b"") for message in sent[1:]))
