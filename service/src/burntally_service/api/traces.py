"""Identities of a request: its id, and its place in a distributed trace (W3C Trace Context)."""

import os
import re
from dataclasses import dataclass
from typing import Final

from litestar.types import HTTPScope

__all__ = ["Identity", "identity_of"]

_SANE_ID: Final = re.compile(rb"[A-Za-z0-9._\-]{1,64}\Z")
# No id is all zeros and no version is ff; version 00 ends behind the flags, a later one may go on behind a dash.
_PARENT: Final = re.compile(
    rb"(?!ff)[0-9a-f]{2}-(?!0{32})([0-9a-f]{32})-(?!0{16})([0-9a-f]{16})-[0-9a-f]{2}(-.*)?\Z", re.DOTALL
)
_REQUEST_DIGITS: Final = 16
_TRACE_DIGITS: Final = 32
_ALL_BYTES: Final = 32


@dataclass(slots=True, kw_only=True)
class Identity:
    """What a request is called: its id, its trace, its own span, and the caller's span where there is one."""

    request_id: str
    trace_id: str
    span_id: str
    parent_id: str | None = None


def identity_of(scope: HTTPScope) -> Identity:
    """Name a request, by the caller's own names where they are written as they should be.

    An id is taken over if it is a plain token, which cannot break a log line. A `traceparent` is taken over if it is
    the only one and valid; otherwise the trace starts here.
    """
    drawn = os.urandom(_ALL_BYTES).hex()
    identity = Identity(
        request_id=drawn[:_REQUEST_DIGITS],
        trace_id=drawn[_REQUEST_DIGITS : _REQUEST_DIGITS + _TRACE_DIGITS],
        span_id=drawn[_REQUEST_DIGITS + _TRACE_DIGITS :],
    )
    parents: list[bytes] = []
    for name, value in scope["headers"]:
        if name == b"x-request-id" and _SANE_ID.match(value):
            identity.request_id = value.decode("ascii")
        elif name == b"traceparent":
            parents.append(value)
    _join(identity, parents)
    return identity


def _join(identity: Identity, parents: list[bytes]) -> None:
    """Make the request part of the caller's trace."""
    found = _PARENT.match(parents[0]) if len(parents) == 1 else None
    if found and not (found[3] and found[0].startswith(b"00")):
        identity.trace_id, identity.parent_id = found[1].decode("ascii"), found[2].decode("ascii")
