"""Logs: one line for each event, as JSON for machines or as text for a person at a terminal.

The standard library's logging is enough: the server, the framework and the event loop speak through it, so one
formatter on its root covers them all.
"""

import logging
import logging.config
import sys
from datetime import UTC, datetime
from typing import Any, Final

import msgspec

from burntally_service.api.settings import Settings

__all__ = ["JsonFormatter", "TextFormatter", "configure_logging"]

# Line ends and terminal commands, for what others log may quote what was sent.
_ESCAPED: Final = {code: f"\\x{code:02x}" for code in (*range(32), *range(127, 160))} | {
    0x2028: "\\u2028",
    0x2029: "\\u2029",
}
_NAMES_WIDTH: Final = 8


class JsonFormatter(logging.Formatter):
    """Writes a record as one JSON object on one line; a record's ``fields`` become its own."""

    def format(self, record: logging.LogRecord) -> str:
        """Write a record."""
        told: dict[str, Any] = {
            "time": datetime.fromtimestamp(record.created, UTC),
            "level": record.levelname.lower(),
            "logger": record.name,
            "event": record.getMessage(),
            **getattr(record, "fields", {}),
        }
        if record.exc_info:
            told["exception"] = self.formatException(record.exc_info)
        return msgspec.json.encode(told).decode()


class TextFormatter(logging.Formatter):
    """Writes a record as one line of text; only a traceback takes more."""

    def format(self, record: logging.LogRecord) -> str:
        """Write a record."""
        moment = datetime.fromtimestamp(record.created, UTC).isoformat(timespec="milliseconds")
        fields = (f"{name}={value}" for name, value in getattr(record, "fields", {}).items() if value is not None)
        line = " ".join((moment, record.levelname.ljust(_NAMES_WIDTH), record.getMessage(), *fields))
        line = line.translate(_ESCAPED)
        return f"{line}\n{self.formatException(record.exc_info)}" if record.exc_info else line


def configure_logging(settings: Settings) -> None:
    """Send the logs of the whole process to its standard error, in one form.

    Parameters
    ----------
    settings
        `log_level` bounds our own events and the server's; other libraries are heard from a warning on. `log_format`
        ``auto`` is text where standard error is a terminal, and JSON elsewhere.
    """
    is_text = settings.log_format == "text" or (settings.log_format == "auto" and sys.stderr.isatty())
    level = settings.log_level.upper()
    # Nothing reads these, and each costs a call for every record.
    logging.logThreads = logging.logProcesses = logging.logMultiprocessing = False
    logging.config.dictConfig(
        {
            "version": 1,
            "disable_existing_loggers": False,
            "formatters": {"chosen": {"()": TextFormatter if is_text else JsonFormatter}},
            "handlers": {"stderr": {"class": "logging.StreamHandler", "formatter": "chosen"}},
            "root": {"level": "WARNING", "handlers": ["stderr"]},
            "loggers": {"burntally": {"level": level}, "uvicorn": {"level": level}},
        }
    )
