"""The edge: what holds for every request, whichever route it takes and whether or not there is one."""

import re
import secrets
from typing import Any, Final

from litestar.enums import ScopeType
from litestar.response.base import ASGIResponse
from litestar.types import ASGIApp, HTTPScope, Message, Receive, Scope, Send

from burntally.model.errors import NotFoundError
from burntally_service.api.problems import PROBLEM_JSON, Refusal, refusal_of

__all__ = ["Edge"]

_SANE_ID: Final = re.compile(rb"[A-Za-z0-9._\-]{1,64}\Z")


class Edge:
    """Wraps the application: one form of each path, one id for each request, no bodies on HEAD, no bare failure.

    Parameters
    ----------
    app
        The application. It treats paths that differ by slashes alone as the same, and answers HEAD with a body; this
        is mended here, so that no route has to.
    """

    def __init__(self, app: ASGIApp) -> None:
        self.app = app

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one connection."""
        if scope["type"] != ScopeType.HTTP:
            await self.app(scope, receive, send)
            return
        request_id = _request_id(scope)
        # The type says that servers always make this mapping; the ASGI standard does not.
        mapping: Any = scope
        mapping.setdefault("state", {})["request_id"] = request_id
        reply = _Reply(send, request_id=request_id, is_head=scope["method"] == "HEAD")
        if not _is_canonical(scope["path"]):
            await _refuse(refusal_of(NotFoundError(()), request_id), scope, receive, reply)
            return
        try:
            await self.app(scope, receive, reply)
        except Exception as error:
            if reply.started:
                raise
            await _refuse(refusal_of(error, request_id), scope, receive, reply)


class _Reply:
    """Sends an answer on, with the headers that every answer bears."""

    __slots__ = ("_headers", "_is_head", "_send", "started")

    def __init__(self, send: Send, *, request_id: str, is_head: bool) -> None:
        self._send = send
        self._is_head = is_head
        self._headers = [(b"x-request-id", request_id.encode("ascii")), (b"x-content-type-options", b"nosniff")]
        self.started = False

    async def __call__(self, message: Message) -> None:
        if message["type"] == "http.response.start":
            self.started = True
            message["headers"] = [*message["headers"], *self._headers]
        elif self._is_head and message["type"] == "http.response.body":
            message["body"] = b""
        await self._send(message)


def _request_id(scope: HTTPScope) -> str:
    """Take over the caller's id if it is a plain token, which cannot break a log line; else make one."""
    for name, value in scope["headers"]:
        if name == b"x-request-id" and _SANE_ID.match(value):
            return value.decode("ascii")
    return secrets.token_hex(8)


def _is_canonical(path: str) -> bool:
    return path == "/" or not (path.endswith("/") or "//" in path)


async def _refuse(refusal: Refusal, scope: Scope, receive: Receive, send: Send) -> None:
    response = ASGIResponse(
        body=refusal.body, status_code=refusal.status, headers=refusal.headers, media_type=PROBLEM_JSON
    )
    await response(scope, receive, send)
