"""Connections: what a caller may do with the time and the memory of the server before there is a request at all.

The server's own protocol knows no deadline for a head, none for a body that nobody reads, none for an answer that
nobody fetches, and tells what is wrong as plain text. This one adds them, below the application, so that a flood is
refused for less than it costs to send.
"""

import asyncio
import logging
import os
from collections import Counter
from collections.abc import Callable
from dataclasses import dataclass, field
from functools import cache
from typing import Any, Final, Literal

import httptools
from uvicorn.config import Config
from uvicorn.protocols.http.httptools_impl import STATUS_LINE, HttpToolsProtocol
from uvicorn.server import ServerState

from burntally_service.api.offers import Declined
from burntally_service.api.problems import PROBLEM_JSON, ProblemError, refusal_of
from burntally_service.api.settings import Settings

__all__ = ["Bounds", "bounded"]

_LOG: Final = logging.getLogger("burntally.connections")
_MOST_HEAD_BYTES: Final = 32 * 1024
# Time for the application to refuse a late body by itself, which it does in better words.
_LATE_S: Final = 1.0
# A connection that is closed with something unread in it is reset, and the answer may be lost with it.
_LINGER_S: Final = 0.5
_FETCH_TIMEOUT_S: Final = 8.0
_TELL_EACH_S: Final = 1.0
# The event loop would make a quarter of a mebibyte anew for each read.
_BUFFER: Final = memoryview(bytearray(64 * 1024))
_NO_ID: Final = b"0" * 16

_Waits = Literal["head", "body", "nothing"]


@dataclass(slots=True, kw_only=True)
class Bounds:
    """What all connections share: their limits, and how much of them is used.

    Attributes
    ----------
    settings
        The limits.
    on_refusals
        Told of requests that were refused here: their method, the code of the problem, and how many they were.
    in_flight
        Requests that have arrived whole and are not answered yet.
    """

    settings: Settings
    on_refusals: Callable[[str, str, int], None]
    in_flight: int = 0
    refused: Counter[tuple[str, str]] = field(default_factory=Counter)

    def refuse(self, method: str, code: str, loop: asyncio.AbstractEventLoop) -> None:
        """Count a refusal; metrics and log are told of many at once, since that costs more than to refuse."""
        if not self.refused:
            loop.call_later(_TELL_EACH_S, self.tell)
        self.refused[method, code] += 1

    @property
    def is_full(self) -> bool:
        """Whether there is no room for another request."""
        return self.in_flight >= self.settings.most_in_flight

    def tell(self) -> None:
        """Tell what was refused since it was told last."""
        for (method, code), count in self.refused.items():
            self.on_refusals(method, code, count)
            _LOG.warning("requests refused", extra={"fields": {"count": count, "method": method, "problem": code}})
        self.refused.clear()


def bounded(bounds: Bounds) -> type[HttpToolsProtocol]:
    """Make the protocol of the connections that share these bounds."""
    return type("BoundedConnection", (_Connection,), {"bounds": bounds})


class _HeadTooLargeError(Exception):
    """Raised into the parser, which stops there."""


class _Connection(asyncio.BufferedProtocol, HttpToolsProtocol):
    """One connection, within bounds."""

    bounds: Bounds

    def __init__(
        self,
        config: Config,
        server_state: ServerState,
        app_state: dict[str, Any],
        _loop: asyncio.AbstractEventLoop | None = None,
    ) -> None:
        super().__init__(config, server_state, app_state, _loop)
        self._waits: _Waits = "nothing"
        self._armed: _Waits = "nothing"
        self._deadline: asyncio.TimerHandle | None = None
        self._fetching: asyncio.TimerHandle | None = None
        self._head_bytes = 0
        self._is_counted = False
        self._is_refused = False
        self._is_over = False

    def connection_made(self, transport: asyncio.Transport) -> None:  # type: ignore[override]  # as in the base
        """Take a connection, or refuse it where there are too many."""
        super().connection_made(transport)
        if len(self.connections) > self.bounds.settings.most_connections:
            self.connections.discard(self)
            self._refuse("GET", "overloaded", "as many connections are open as may be")
            self._linger()
        else:
            self._arm("head", self.bounds.settings.head_timeout_s)

    def connection_lost(self, exc: Exception | None) -> None:
        """Forget all that was to come of it."""
        self._disarm()
        self._unset_keepalive_if_required()
        if self._fetching is not None:
            self._fetching.cancel()
        self._count_out()
        super().connection_lost(exc)

    def get_buffer(self, sizehint: int) -> memoryview:  # noqa: ARG002 - as the event loop asks
        """Lend the one buffer that all connections read into; what came is taken out of it before another reads."""
        return _BUFFER

    def buffer_updated(self, nbytes: int) -> None:
        """Take what came out of the buffer."""
        self.data_received(bytes(_BUFFER[:nbytes]))

    def eof_received(self) -> None:
        """Let a connection end that its caller has closed."""

    def data_received(self, data: bytes) -> None:
        """Read on, and see that what is still missing comes in time."""
        if self._is_over:
            return
        self._unset_keepalive_if_required()
        try:
            self._feed(data)
        except httptools.HttpParserError:
            self.send_400_response("this is no HTTP request")
        self._watch()

    def on_message_begin(self) -> None:
        """Begin a head."""
        self._waits = "head"
        self._head_bytes = 0
        super().on_message_begin()

    def on_url(self, url: bytes) -> None:
        """Read a piece of the target."""
        self._grow(len(url))
        super().on_url(url)

    def on_header(self, name: bytes, value: bytes) -> None:
        """Read a field of the head."""
        self._grow(len(name) + len(value) + len(b": \r\n"))
        super().on_header(name, value)

    def on_headers_complete(self) -> None:
        """Begin to answer, or refuse where too many are answered already; the body may still be on its way."""
        self._waits = "body"
        self._is_refused = not self._is_counted and self.bounds.is_full
        if self._is_refused:
            self._turn_away()
        else:
            super().on_headers_complete()

    def on_body(self, body: bytes) -> None:
        """Take a piece of the body; nobody reads that of a request that was refused."""
        if not self._is_refused:
            super().on_body(body)

    def on_message_complete(self) -> None:
        """Count a request that is whole."""
        if self.parser.should_upgrade():
            # Its body, if it has one, is still to come: see `offers`.
            return
        self._waits = "nothing"
        if self._is_refused:
            return
        if not self._is_counted and not self.cycle.response_complete:
            self._is_counted = True
            self.bounds.in_flight += 1
        super().on_message_complete()

    def on_response_complete(self) -> None:
        """Make room for the next one, unless it has been sent already: then that one is answered in the same place."""
        if not self.pipeline:
            self._count_out()
        super().on_response_complete()
        if self._waits == "head":
            self._unset_keepalive_if_required()
        self._watch()

    def send_400_response(self, msg: str) -> None:
        """Tell what is no HTTP request as every other problem is told; `msg` is the server's own word for it."""
        if self._is_counted:
            # What is odd follows a request that is being answered: that answer comes first, and is the last.
            self.cycle.keep_alive = False
            self._is_over = True
            return
        is_large = self._head_bytes > _MOST_HEAD_BYTES
        code = "header-too-large" if is_large else "invalid-request"
        self._refuse("other", code, f"the head is larger than {_MOST_HEAD_BYTES} bytes" if is_large else msg)
        self._linger()

    def pause_writing(self) -> None:
        """Wait for the caller to fetch what was answered, but not for ever."""
        super().pause_writing()
        if self._fetching is None:
            self._fetching = self.loop.call_later(_FETCH_TIMEOUT_S, self.transport.abort)

    def resume_writing(self) -> None:
        """Go on answering."""
        super().resume_writing()
        if self._fetching is not None:
            self._fetching.cancel()
            self._fetching = None

    def timeout_keep_alive_handler(self) -> None:
        """Close a connection that has been idle, with what is left to fetch if it is fetched soon."""
        super().timeout_keep_alive_handler()
        self._fetching = self._fetching or self.loop.call_later(_FETCH_TIMEOUT_S, self.transport.abort)

    def _turn_away(self) -> None:
        """Refuse a request by its head alone."""
        # There is one, since it has just called; its type in the base says that there may be none.
        parser: Any = self.parser
        stays = parser.should_keep_alive() and parser.get_http_version() == "1.1"
        method = parser.get_method().decode("ascii")
        self._refuse(method, "overloaded", "as many requests are in flight as may be", closes=not stays)
        if stays:
            super().on_response_complete()
        else:
            self._linger()

    def _should_upgrade(self) -> bool:
        return False

    def _feed(self, data: bytes) -> None:
        """Read on, past offers to go on in another protocol."""
        while data:
            try:
                self.parser.feed_data(data)
            except httptools.HttpParserUpgrade as offer:
                data = data[offer.args[0] :]
            else:
                return
            declined = Declined(self)
            self.parser = httptools.HttpRequestParser(declined)
            declined.go_on(self.parser, self.headers)

    def _watch(self) -> None:
        """Set the deadline of what is missing; what follows a request that is being answered may take its time."""
        if self.transport.is_closing() or self._is_over or self._is_counted:
            self._disarm()
        elif self._waits == "body":
            self._arm("body", self.bounds.settings.body_timeout_s + _LATE_S)
        elif self._waits == "head" or (self._is_idle() and self.timeout_keep_alive_task is None):
            # Line ends before a request are no request, and keep nothing open.
            self._arm("head", self.bounds.settings.head_timeout_s)
        else:
            self._disarm()

    def _is_idle(self) -> bool:
        return self._waits == "nothing" and not self._is_counted

    def _grow(self, size: int) -> None:
        self._head_bytes += size
        if self._head_bytes > _MOST_HEAD_BYTES:
            raise _HeadTooLargeError

    def _count_out(self) -> None:
        if self._is_counted:
            self._is_counted = False
            self.bounds.in_flight -= 1

    def _arm(self, waits: _Waits, timeout_s: float) -> None:
        """Set the deadline of what is waited for, unless it is set."""
        if self._deadline is None or self._armed != waits:
            self._disarm()
            self._armed = waits
            self._deadline = self.loop.call_later(timeout_s, self._cut_off)

    def _disarm(self) -> None:
        if self._deadline is not None:
            self._deadline.cancel()
            self._deadline = None

    def _cut_off(self) -> None:
        """End a connection on which nothing came in time."""
        self._deadline = None
        if self._waits == "head":
            self._refuse("other", "request-timeout", "the head did not arrive in time")
            self._linger()
        else:
            self.transport.abort()

    def _refuse(self, method: str, code: str, detail: str, *, closes: bool = True) -> None:
        """Write a refusal without asking the application, unless the last word has been said."""
        if self._is_over:
            return
        self.bounds.refuse(method, code, self.loop)
        head, body = _refusal(code, detail, closes=closes)
        fields = b"".join(b"%s: %s\r\n" % field for field in self.server_state.default_headers)
        told = b"".join((head, fields, b"\r\n", b"" if method == "HEAD" else body))
        self.transport.write(told.replace(_NO_ID, os.urandom(len(_NO_ID) // 2).hex().encode()))

    def _linger(self) -> None:
        """Close once the caller has, or soon, and throw away what still comes."""
        self._is_over = True
        self._disarm()
        if self.transport.can_write_eof():
            self.transport.write_eof()
        self.loop.call_later(_LINGER_S, self.transport.abort)


@cache
def _refusal(code: str, detail: str, *, closes: bool) -> tuple[bytes, bytes]:
    """Write the head of a refusal, without its end, and the body; both wait for the id of the request."""
    headers = {"Retry-After": "1"} if code == "overloaded" else {}
    refusal = refusal_of(ProblemError(code, detail, headers=headers), _NO_ID.decode())
    fields = {
        **refusal.headers,
        "Content-Type": PROBLEM_JSON,
        "Content-Length": str(len(refusal.body)),
        "X-Request-Id": _NO_ID.decode(),
        "X-Content-Type-Options": "nosniff",
    }
    if closes:
        fields["Connection"] = "close"
    lines = (f"{name.lower()}: {value}\r\n".encode("latin-1") for name, value in fields.items())
    return b"".join((STATUS_LINE[refusal.status], *lines)), refusal.body
