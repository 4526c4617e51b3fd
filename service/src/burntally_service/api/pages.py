"""Pages about the service: its contract, its documentation, its problems, and whether it is well."""

from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Final

import msgspec
from litestar.enums import HttpMethod
from litestar.exceptions import NotFoundException
from litestar.handlers import HTTPRouteHandler
from litestar.params import FromPath
from litestar.response.base import ASGIResponse
from litestar.types import ASGIApp

from burntally.model.decode import JSON
from burntally_service.api import docs, openapi
from burntally_service.api.exchange import AnyRequest, entity_tag, is_known
from burntally_service.api.media import chosen_media_type
from burntally_service.api.metrics import EXPOSITION, Metrics
from burntally_service.api.problems import PROBLEMS, ProblemError, ProblemType
from burntally_service.api.standing import SERVICE_LINKS

__all__ = ["page_routes"]

HTML: Final = "text/html"
_HTML_HEADERS: Final = {
    "Content-Security-Policy": "default-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'",
    "Referrer-Policy": "no-referrer",
}
_RETRY_AFTER_S: Final = 1


@dataclass(frozen=True, slots=True, kw_only=True)
class _Page:
    """A page whose bytes are made once."""

    path: str
    media_type: str
    content: Callable[[], bytes]


def _asset(name: str) -> Callable[[], bytes]:
    return cache((files("burntally_service.api") / "assets" / name).read_bytes)


_PAGES: Final = (
    _Page(path="/openapi.json", media_type=JSON, content=openapi.encoded_document),
    _Page(path="/docs", media_type=HTML, content=docs.page),
    _Page(path="/docs/docs.css", media_type="text/css", content=_asset("docs.css")),
    _Page(path="/docs/docs.js", media_type="text/javascript", content=_asset("docs.js")),
    _Page(path="/docs/icon.svg", media_type="image/svg+xml", content=_asset("icon.svg")),
)


def page_routes(metrics: Metrics | None = None) -> list[HTTPRouteHandler]:
    """Make the routes of the pages.

    Parameters
    ----------
    metrics : Metrics or None
        What `/metrics` tells; None: there is no such page.
    """
    told: list[tuple[str, str, Callable[..., ASGIApp]]] = [
        ("/", "show_index", _index),
        ("/healthz", "check_health", _health),
        ("/readyz", "check_readiness", _readiness),
        ("/problems", "list_problems", _problem_list),
        ("/problems/{code:str}", "get_problem", _problem_page),
    ]
    if metrics is not None:
        told.append(("/metrics", "show_metrics", _metrics_page(metrics)))
    return [_page_route(page) for page in _PAGES] + [_route(path, name, handle) for path, name, handle in told]


def _route(path: str, name: str, handle: Callable[..., ASGIApp]) -> HTTPRouteHandler:
    route = HTTPRouteHandler(
        path,
        http_method=[HttpMethod.GET, HttpMethod.HEAD],
        name=name,
        operation_id=name,
        status_code=200,
        sync_to_thread=False,
    )
    return route(handle)


def _page_route(page: _Page) -> HTTPRouteHandler:
    def handle(request: AnyRequest) -> ASGIApp:
        content = page.content()
        headers = {"ETag": entity_tag((page.path,), content), "Cache-Control": "no-cache"}
        if is_known(headers["ETag"], request.headers.get("if-none-match", "")):
            return ASGIResponse(status_code=304, headers=headers)
        if page.media_type == HTML:
            headers |= _HTML_HEADERS
        return ASGIResponse(body=content, media_type=page.media_type, headers=headers)

    return _route(page.path, page.path.strip("/").replace("/", "_").replace(".", "_"), handle)


def _index(request: AnyRequest) -> ASGIApp:  # noqa: ARG001 - every handler has this one shape
    return ASGIResponse(status_code=307, headers={"Location": "/docs", "Link": SERVICE_LINKS})


def _health(request: AnyRequest) -> ASGIApp:  # noqa: ARG001 - as above
    return _uncached({"status": "ok"})


def _readiness(request: AnyRequest) -> ASGIApp:
    if not request.app.state.ready:
        raise ProblemError("not-ready", "the service is starting or stopping", headers=_retry_after())
    return _uncached({"status": "ready"})


def _metrics_page(metrics: Metrics) -> Callable[[AnyRequest], ASGIApp]:
    def handle(request: AnyRequest) -> ASGIApp:  # noqa: ARG001 - as above
        return ASGIResponse(
            body=metrics.exposition(), headers={"Content-Type": EXPOSITION, "Cache-Control": "no-store"}
        )

    return handle


def _problem_list(request: AnyRequest) -> ASGIApp:
    if _wants_html(request):
        return _html(docs.problem_list(PROBLEMS.values()))
    return _uncached({"problems": [_told(kind) for kind in PROBLEMS.values()]})


def _problem_page(request: AnyRequest, code: FromPath[str]) -> ASGIApp:
    kind = PROBLEMS.get(code)
    if kind is None:
        raise NotFoundException
    return _html(docs.problem_list([kind])) if _wants_html(request) else _uncached(_told(kind))


def _wants_html(request: AnyRequest) -> bool:
    return chosen_media_type(request.headers.get("accept", ""), (JSON, HTML)) == HTML


def _told(kind: ProblemType) -> dict[str, str | int]:
    return {
        "type": kind.uri,
        "code": kind.code,
        "status": kind.status,
        "title": kind.title,
        "description": kind.description,
    }


def _uncached(content: object) -> ASGIResponse:
    return ASGIResponse(
        body=msgspec.json.encode(content),
        media_type=JSON,
        headers={"Cache-Control": "no-store", "Vary": "Accept"},
    )


def _html(content: bytes) -> ASGIResponse:
    return ASGIResponse(
        body=content, media_type=HTML, headers={**_HTML_HEADERS, "Cache-Control": "no-store", "Vary": "Accept"}
    )


def _retry_after() -> dict[str, str]:
    return {"Retry-After": str(_RETRY_AFTER_S)}
