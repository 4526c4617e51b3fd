"""The server: one process that listens, found by entry point, so that the SDK need not know this package's name."""

import gc
import logging
import signal
import sys
from types import FrameType
from typing import Final

import uvicorn

from burntally_service.api.app import create_app
from burntally_service.api.callers import is_loopback
from burntally_service.api.logs import configure_logging
from burntally_service.api.settings import Settings, settings_from

__all__ = ["serve"]


_LOG: Final = logging.getLogger("burntally.serve")
_SWITCH_INTERVAL_S: Final = 5e-4
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
    settings = settings_from(host=host, port=port)
    configure_logging(settings)
    _warn(settings)
    # The server finishes its work on SIGTERM and then raises the signal once more; by default that would end the
    # process as killed, and a stop that was asked for is no failure.
    signal.signal(signal.SIGTERM, _already_stopped)
    app = create_app(settings)
    # What has been imported stays, so the collector need not look at it again; a budget makes thousands of objects and
    # no cycle, so it need not look often either; and a request that computes in a thread gives way to the event loop
    # ten times as often as by default, since each wait for it costs a whole interval.
    gc.collect()
    gc.freeze()
    gc.set_threshold(_COLLECT_AFTER)
    sys.setswitchinterval(_SWITCH_INTERVAL_S)
    uvicorn.run(
        app,
        host=settings.host,
        port=settings.port,
        log_config=None,
        log_level=settings.log_level,
        access_log=False,
        proxy_headers=False,
        server_header=False,
        timeout_graceful_shutdown=round(settings.drain_timeout_s),
    )


def _warn(settings: Settings) -> None:
    """Say what an operator may have overlooked; in a container it may be as it should, so it is not refused."""
    if not settings.token and not is_loopback(settings.host):
        told = "listening beyond this machine without BURNTALLY_TOKEN: whoever reaches the port is answered"
        _LOG.warning(told, extra={"fields": {"host": settings.host}})


def _already_stopped(number: int, frame: FrameType | None) -> None:
    """Take the signal that the server raises after it has stopped."""
