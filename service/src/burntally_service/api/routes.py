"""Routes of the operations: one for each row of their table, all made alike."""

import asyncio
import contextlib
from collections.abc import Iterable
from typing import Final

import msgspec
from litestar.enums import HttpMethod
from litestar.handlers import HTTPRouteHandler
from litestar.types import ASGIApp

from burntally_service import operations
from burntally_service.api.exchange import AnyRequest, open_exchange, read_body, reply
from burntally_service.api.settings import Settings
from burntally_service.api.standing import standing_headers
from burntally_service.haste import NeedsTimeError
from burntally_service.operations import Operation

__all__ = ["operation_routes"]

# A closed form over a short body is done before a thread would have taken it over; a long body may hold up others.
_INLINE_BODY_BYTES: Final = 16 * 1024


def operation_routes(rows: Iterable[Operation], settings: Settings) -> list[HTTPRouteHandler]:
    """Make the routes of the operations."""
    return [_route(row, settings) for row in rows]


def _route(operation: Operation, settings: Settings) -> HTTPRouteHandler:
    standing = standing_headers(operation)

    async def handle(request: AnyRequest) -> ASGIApp:
        exchange = open_exchange(request, operation)
        asked = await _asked(request, operation, settings)
        told = await _told(operation, asked, (exchange.media_type, exchange.accept))
        return reply(operation, exchange, asked=asked, told=told, standing=standing)

    methods = [HttpMethod.POST] if operation.takes_body else [HttpMethod.GET, HttpMethod.HEAD]
    route = HTTPRouteHandler(
        operation.path.replace("}", ":str}"),
        http_method=methods,
        name=operation.id,
        operation_id=operation.id,
        status_code=200,
    )
    return route(handle)


async def _told(operation: Operation, asked: bytes, media: tuple[str, str]) -> bytes:
    """Answer where the request arrived if that is quick, in a thread otherwise."""
    if operation.cost == "inline" and len(asked) <= _INLINE_BODY_BYTES:
        with contextlib.suppress(NeedsTimeError):
            return operations.answer(operation.id, asked, *media, in_haste=True)
    return await asyncio.to_thread(operations.answer, operation.id, asked, *media)


async def _asked(request: AnyRequest, operation: Operation, settings: Settings) -> bytes:
    """Return the request as the operation reads it: its body, or its path as one."""
    if operation.takes_body:
        return await read_body(request, settings.body_timeout_s)
    return msgspec.json.encode(request.path_params) if operation.request else b""
