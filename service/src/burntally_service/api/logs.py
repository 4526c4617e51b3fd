"""Logs: one line for each event, as JSON for machines or as text for a person at a terminal.

The standard library's logging is enough: the server, the framework and the event loop speak through it, so one handler
at its root covers them all.
"""

import logging
import sys
import time
from collections.abc import Mapping
from datetime import UTC, datetime
from typing import Any, Final, TextIO

import msgspec

from burntally_service.api.settings import Settings

__all__ = ["Lines", "configure_logging", "tell"]

# Line ends and terminal commands, for what others log may quote what was sent.
_ESCAPED: Final = {code: f"\\x{code:02x}" for code in (*range(32), *range(127, 160))} | {
    0x2028: "\\u2028",
    0x2029: "\\u2029",
}
_LEVEL_WIDTH: Final = 8
_TRACEBACKS: Final = logging.Formatter()


class Lines(logging.StreamHandler[TextIO]):
    """Writes events to standard error, one a line.

    Parameters
    ----------
    is_text : bool
        Whether a line is text, or a JSON object.
    """

    def __init__(self, *, is_text: bool) -> None:
        super().__init__(sys.stderr)
        self._is_text = is_text

    def format(self, record: logging.LogRecord) -> str:
        """Write a record; its ``fields`` become the line's own, and only a traceback in text takes more lines."""
        fields: dict[str, Any] = getattr(record, "fields", {})
        trace = _TRACEBACKS.formatException(record.exc_info) if record.exc_info else ""
        if self._is_text:
            line = _text_line(record.created, record.levelname, event=record.getMessage(), fields=fields)
            return f"{line}\n{trace}" if trace else line
        fields = (
            {"logger": record.name, "event": record.getMessage()} | fields | ({"exception": trace} if trace else {})
        )
        return _json_line(record.created, record.levelname, fields=fields)

    def tell(self, name: str, level: str, *, event: str, fields: Mapping[str, Any]) -> None:
        """Write an event of a logger without making a record of it."""
        now_s = time.time()
        if self._is_text:
            line = _text_line(now_s, level, event=event, fields=fields)
        else:
            line = _json_line(now_s, level, fields={"logger": name, "event": event, **fields})
        # One write for each line, so that lines of several threads do not mix.
        self.stream.write(line + self.terminator)
        self.flush()


def tell(logger: logging.Logger, level: int, *, event: str, fields: Mapping[str, Any]) -> None:
    """Log an event that comes with every request.

    To make a record and pass it on takes several times as long as to write the line: it is a good deal of code, which
    computations have pushed out of the processor's caches. So it is done only where a handler of others listens.
    """
    if not logger.isEnabledFor(level):
        return
    match logging.root.handlers:
        case [Lines() as lines] if not logger.handlers:
            lines.tell(logger.name, logging.getLevelName(level), event=event, fields=fields)
        case _:
            logger.log(level, event, extra={"fields": fields})


def configure_logging(settings: Settings) -> None:
    """Send the logs of the whole process to its standard error, in one form.

    Parameters
    ----------
    settings
        `log_level` bounds our own events and the server's; other libraries are heard from a warning on. `log_format`
        ``auto`` is text where standard error is a terminal, and JSON elsewhere.
    """
    is_text = settings.log_format == "text" or (settings.log_format == "auto" and sys.stderr.isatty())
    # Nothing reads these, and each costs a call for every record.
    logging.logThreads = logging.logProcesses = logging.logMultiprocessing = False
    logging.basicConfig(level=logging.WARNING, handlers=[Lines(is_text=is_text)], force=True)
    for name in ("burntally", "uvicorn"):
        logging.getLogger(name).setLevel(settings.log_level.upper())


def _json_line(created_s: float, level: str, *, fields: Mapping[str, Any]) -> str:
    moment = datetime.fromtimestamp(created_s, UTC)
    return msgspec.json.encode({"time": moment, "level": level.lower(), **fields}).decode()


def _text_line(created_s: float, level: str, *, event: str, fields: Mapping[str, Any]) -> str:
    moment = datetime.fromtimestamp(created_s, UTC).isoformat(timespec="milliseconds")
    told = (f"{name}={value}" for name, value in fields.items() if value is not None)
    return " ".join((moment, level.ljust(_LEVEL_WIDTH), event, *told)).translate(_ESCAPED)
