"""The server: one process that listens, found by entry point, so that the SDK need not know this package's name."""

import contextlib
import gc
import logging
import signal
from types import FrameType
from typing import Final

import uvicorn

from burntally_service.api.app import create_app
from burntally_service.api.callers import is_loopback
from burntally_service.api.connections import Bounds, bounded
from burntally_service.api.edge import Edge
from burntally_service.api.logs import configure_logging
from burntally_service.api.server import Server
from burntally_service.api.settings import Settings, settings_from

__all__ = ["serve"]


_LOG: Final = logging.getLogger("burntally.serve")
_COLLECT_AFTER: Final = 100_000


def serve(host: str | None = None, port: int | None = None) -> None:
    """Listen until a signal says stop; requests in flight are finished first.

    Parameters
    ----------
    host
        Address to listen on; None: the setting ``BURNTALLY_HOST``, which is this machine alone by default.
    port
        Port to listen on; None: the setting ``BURNTALLY_PORT``. 0: any free one, which the log tells.

    Raises
    ------
    SettingsError
        A setting cannot be read.
    """
    # There is nothing to finish before there is a server.
    signal.signal(signal.SIGTERM, _not_begun)
    settings = settings_from(host=host, port=port)
    configure_logging(settings)
    _warn(settings)
    app = create_app(settings)
    # What has been imported stays, so the collector need not look at it again; a budget makes thousands of objects and
    # no cycle, so it need not look often either.
    gc.collect()
    gc.freeze()
    gc.set_threshold(_COLLECT_AFTER)
    # The server finishes its work on SIGTERM and then raises the signal once more; by default that would end the
    # process as killed, and a stop that was asked for is no failure.
    signal.signal(signal.SIGTERM, _already_stopped)
    # An interrupt ends the server as a request to stop does, and is raised once more after that.
    with contextlib.suppress(KeyboardInterrupt):
        _server(app, settings).run()


def _server(app: Edge, settings: Settings) -> Server:
    """Put application, connections and the server's life together."""

    def drain() -> None:
        app.app.state.ready = False

    connection = bounded(Bounds(settings=settings, on_refusals=app.count_refusals))
    config = uvicorn.Config(
        app,
        host=settings.host,
        port=settings.port,
        http=connection,
        ws="none",
        log_config=None,
        log_level=settings.log_level,
        access_log=False,
        proxy_headers=False,
        server_header=False,
    )
    return Server(
        config,
        connection=connection,
        drain_timeout_s=settings.drain_timeout_s,
        on_signal=drain,
        on_late=app.app.state.turns.stop,
    )


def _warn(settings: Settings) -> None:
    """Say what an operator may have overlooked; in a container it may be as it should, so it is not refused."""
    if not settings.token and not is_loopback(settings.host):
        told = "listening beyond this machine without BURNTALLY_TOKEN: whoever reaches the port is answered"
        _LOG.warning(told, extra={"fields": {"host": settings.host}})


def _not_begun(*_: object) -> None:
    """End on a signal that comes before the server has begun."""
    raise SystemExit


def _already_stopped(number: int, frame: FrameType | None) -> None:
    """Take the signal that the server raises after it has stopped."""
