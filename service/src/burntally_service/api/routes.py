"""Routes of the operations: one for each row of their table, all made alike."""

from collections.abc import Iterable

import msgspec
from litestar.enums import HttpMethod
from litestar.handlers import HTTPRouteHandler
from litestar.types import ASGIApp, Receive, Scope, Send

from burntally_service.api.exchange import AnyRequest, open_exchange, read_body, reply
from burntally_service.api.settings import Settings
from burntally_service.api.standing import standing_headers
from burntally_service.api.turns import CallerLeftError, Turns
from burntally_service.operations import Operation

__all__ = ["operation_routes"]


def operation_routes(rows: Iterable[Operation], settings: Settings, turns: Turns) -> list[HTTPRouteHandler]:
    """Make the routes of the operations, which compute when it is their turn."""
    return [_route(row, settings, turns) for row in rows]


def _route(operation: Operation, settings: Settings, turns: Turns) -> HTTPRouteHandler:
    standing = standing_headers(operation)

    async def handle(request: AnyRequest) -> ASGIApp:
        exchange = open_exchange(request, operation)
        asked = await _asked(request, operation, settings)
        media = (exchange.media_type, exchange.accept)
        try:
            told = await turns.answer(operation, asked, media, request.receive)
        except CallerLeftError:
            return _nothing
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


async def _nothing(scope: Scope, receive: Receive, send: Send) -> None:
    """Answer a caller who has left."""


async def _asked(request: AnyRequest, operation: Operation, settings: Settings) -> bytes:
    """Return the request as the operation reads it: its body, or its path as one."""
    if operation.takes_body:
        return await read_body(request, settings.body_timeout_s)
    return msgspec.json.encode(request.path_params) if operation.request else b""
