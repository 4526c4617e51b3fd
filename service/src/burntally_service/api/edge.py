"""The edge: what holds for every request, whichever route it takes and whether or not there is one."""

import asyncio
import logging
import time
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, Final

from litestar import Litestar
from litestar.enums import ScopeType
from litestar.response.base import ASGIResponse
from litestar.types import HTTPScope, Message, Receive, Scope, Send

from burntally.model.errors import NotFoundError
from burntally_service.api.callers import caller_of, scheme_of
from burntally_service.api.guard import Guard
from burntally_service.api.logs import tell
from burntally_service.api.metrics import Metrics
from burntally_service.api.problems import PROBLEM_JSON, PROBLEMS, Refusal, refusal_of
from burntally_service.api.settings import Settings
from burntally_service.api.traces import Identity, identity_of
from burntally_service.api.turns import stopping

__all__ = ["Edge"]

_LOG: Final = logging.getLogger("burntally.api")
_METHODS: Final = frozenset({"GET", "HEAD", "POST", "PUT", "PATCH", "DELETE", "OPTIONS", "TRACE", "CONNECT"})
# Machines ask these every few seconds; a log of them would hide the rest.
_QUIET: Final = frozenset({"check_health", "check_readiness", "show_metrics"})
_FIRST_FAILURE: Final = 400
_POLICY: Final = b"content-security-policy"
# An answer is data: no page may frame it, and no other site may load it.
_ALWAYS: Final = ((b"x-content-type-options", b"nosniff"), (b"cross-origin-resource-policy", b"same-origin"))
_NO_PAGE: Final = (_POLICY, b"default-src 'none'; frame-ancestors 'none'")


@dataclass(slots=True, kw_only=True)
class _Visit:
    """One request, from its head to the end of its answer."""

    identity: Identity
    method: str
    caller: str | None
    scheme: str
    started_s: float


class Edge:
    """Wraps the application: one form of each path, one id, count and log line for each request, no bare failure.

    Parameters
    ----------
    app
        The application. It treats paths that differ by slashes alone as the same, and answers HEAD with a body; this
        is mended here, so that no route has to.
    settings
        Who is let in, and whose word counts on where a request came from.
    metrics
        Where requests are counted.
    """

    def __init__(self, app: Litestar, *, settings: Settings, metrics: Metrics) -> None:
        self.app = app
        self._guard = Guard(settings)
        self._proxies = settings.trusted_proxies
        self._metrics = metrics

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one connection."""
        if scope["type"] != ScopeType.HTTP:
            await self.app(scope, receive, send)
            return
        visit = self._visit(scope)
        reply = _Reply(send, request_id=visit.identity.request_id, is_head=scope["method"] == "HEAD")
        self._metrics.begin()
        try:
            await self._answer(scope, receive, reply, visit=visit)
        finally:
            self._record(scope, visit, reply)

    def count_refusals(self, method: str, problem: str, count: int) -> None:
        """Count requests that were refused before they came here."""
        told = method if method in _METHODS else "other"
        self._metrics.refuse(told, status=PROBLEMS[problem].status, problem=problem, count=count)

    def _visit(self, scope: HTTPScope) -> _Visit:
        identity = identity_of(scope)
        # The type says that servers always make this mapping; the ASGI standard does not.
        mapping: Any = scope
        mapping.setdefault("state", {})["request_id"] = identity.request_id
        return _Visit(
            identity=identity,
            method=scope["method"] if scope["method"] in _METHODS else "other",
            caller=caller_of(scope, self._proxies),
            scheme=scheme_of(scope, self._proxies),
            started_s=time.perf_counter(),
        )

    async def _answer(self, scope: HTTPScope, receive: Receive, reply: "_Reply", *, visit: _Visit) -> None:
        try:
            reply.add(self._guard.admit(scope, visit.caller))
            if not _is_canonical(scope["path"]):
                raise NotFoundError(())  # noqa: TRY301 - every refusal takes the one way out
            await self.app(scope, receive, reply)
        except asyncio.CancelledError:
            # A server whose time to stop is over cancels what is left, as a body that is still on its way.
            if reply.status is None:
                await _refuse(stopping(), scope, receive, reply)
            raise
        except Exception as error:
            if reply.status is not None:
                raise
            await _refuse(error, scope, receive, reply)

    def _record(self, scope: Mapping[str, Any], visit: _Visit, reply: "_Reply") -> None:
        """Count the request and log it: where it was routed to, never what it was sent to or with."""
        duration_s = time.perf_counter() - visit.started_s
        operation: str = getattr(scope.get("route_handler"), "name", None) or "none"
        problem = scope["state"].get("problem")
        self._metrics.end(operation, visit.method, status=reply.status, duration_s=duration_s, problem=problem)
        is_quiet = operation in _QUIET and reply.status is not None and reply.status < _FIRST_FAILURE
        level = logging.DEBUG if is_quiet else logging.INFO
        fields = {
            "request_id": visit.identity.request_id,
            "trace_id": visit.identity.trace_id,
            "span_id": visit.identity.span_id,
            "parent_id": visit.identity.parent_id,
            "client": visit.caller,
            "scheme": visit.scheme,
            "method": visit.method,
            "route": scope.get("path_template"),
            "status": reply.status,
            "problem": problem,
            "duration_ms": round(duration_s * 1e3, 3),
            "answer_bytes": reply.body_bytes,
        }
        tell(_LOG, level, event="request", fields=fields)


class _Reply:
    """Sends an answer on, with the headers that every answer bears, and remembers what it was."""

    __slots__ = ("_headers", "_is_head", "_send", "body_bytes", "status")

    def __init__(self, send: Send, *, request_id: str, is_head: bool) -> None:
        self._send = send
        self._is_head = is_head
        self._headers = [(b"x-request-id", request_id.encode("ascii")), *_ALWAYS]
        self.status: int | None = None
        self.body_bytes = 0

    def add(self, headers: dict[str, str]) -> None:
        """Let the answer bear these too."""
        self._headers += [(name.lower().encode("ascii"), value.encode("ascii")) for name, value in headers.items()]

    async def __call__(self, message: Message) -> None:
        if message["type"] == "http.response.start":
            self.status = message["status"]
            sent = [*message["headers"], *self._headers]
            if not any(name == _POLICY for name, _ in sent):
                sent.append(_NO_PAGE)
            message["headers"] = sent
        elif message["type"] == "http.response.body":
            if self._is_head:
                message["body"] = b""
            self.body_bytes += len(message.get("body", b""))
        await self._send(message)


def _is_canonical(path: str) -> bool:
    return path == "/" or not (path.endswith("/") or "//" in path)


async def _refuse(error: Exception, scope: HTTPScope, receive: Receive, send: Send) -> None:
    refusal: Refusal = refusal_of(error, scope["state"]["request_id"])
    scope["state"]["problem"] = refusal.code
    response = ASGIResponse(
        body=refusal.body, status_code=refusal.status, headers=refusal.headers, media_type=PROBLEM_JSON
    )
    await response(scope, receive, send)
