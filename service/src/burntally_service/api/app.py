"""The application: the one place where settings, operations, pages and problems are put together."""

import asyncio
from collections.abc import AsyncGenerator
from contextlib import asynccontextmanager

from litestar import Litestar
from litestar.datastructures import State
from litestar.exceptions import HTTPException

from burntally_service import operations
from burntally_service.api.edge import Edge
from burntally_service.api.examples import example_bytes
from burntally_service.api.metrics import Metrics
from burntally_service.api.pages import page_routes
from burntally_service.api.problems import problem_response
from burntally_service.api.routes import operation_routes
from burntally_service.api.settings import Settings, settings_from
from burntally_service.api.turns import Turns

__all__ = ["create_app"]


def create_app(settings: Settings | None = None) -> Edge:
    """Make the application, an ASGI callable.

    Parameters
    ----------
    settings
        The settings; None: the environment's.

    Returns
    -------
    Edge
        The application behind its edge. It is ready once its lifespan has started.
    """
    settings = settings_from() if settings is None else settings
    metrics = Metrics()
    turns = Turns(settings)
    application = Litestar(
        route_handlers=[
            *operation_routes(operations.OPERATIONS.values(), settings, turns),
            *page_routes(metrics if settings.metrics else None),
        ],
        exception_handlers={HTTPException: problem_response, Exception: problem_response},
        lifespan=[_ready],
        logging_config=None,
        openapi_config=None,
        request_max_body_size=settings.max_body_bytes,
        state=State({"ready": False, "turns": turns}),
    )
    return Edge(application, settings=settings, metrics=metrics)


@asynccontextmanager
async def _ready(application: Litestar) -> AsyncGenerator[None, None]:
    """Answer one budget before calling the service ready, so that the first caller waits for no import."""
    application.state.turns.begin()
    await asyncio.to_thread(operations.answer, "create_budget", example_bytes("create_budget"))
    application.state.ready = True
    try:
        yield
    finally:
        application.state.ready = False
        await application.state.turns.close()
