"""Logs: one line for each event, whatever is in it, in the form that was asked for."""

import io
import json
import logging
import sys
from collections.abc import Iterator
from typing import Literal

import pytest

from burntally_service.api.logs import Lines, configure_logging, tell
from burntally_service.api.settings import Settings

HOSTILE = 'a\nb\r\x1b[31m"\x00\u2028\x85'
JSON, TEXT = Lines(is_text=False), Lines(is_text=True)
NAMES = ("", "burntally", "burntally.api", "uvicorn", "uvicorn.error")


class Terminal(io.StringIO):
    """A stream that a person looks at."""

    def isatty(self) -> bool:
        return True


@pytest.fixture(autouse=True)
def loggers() -> Iterator[None]:
    """Leave logging as it was found."""
    root = logging.getLogger()
    levels = {name: logging.getLogger(name).level for name in NAMES}
    flags = (logging.logThreads, logging.logProcesses, logging.logMultiprocessing)
    handlers = root.handlers[:]
    yield
    root.handlers[:] = handlers
    for name, level in levels.items():
        logging.getLogger(name).setLevel(level)
    logging.logThreads, logging.logProcesses, logging.logMultiprocessing = flags


def record(event: str, **fields: object) -> logging.LogRecord:
    made = logging.makeLogRecord({"name": "burntally.api", "levelname": "INFO", "msg": event, "created": 1.5})
    made.fields = fields
    return made


def failed() -> logging.LogRecord:
    made = record("failed")
    try:
        int(HOSTILE)
    except ValueError:
        made.exc_info = sys.exc_info()
    return made


def logged(
    monkeypatch: pytest.MonkeyPatch,
    stream: io.StringIO,
    *,
    form: Literal["auto", "json", "text"] = "auto",
    level: Literal["warning", "info"] = "info",
) -> str:
    """What two of our events and one of the server's leave on standard error."""
    monkeypatch.setattr(sys, "stderr", stream)
    configure_logging(Settings(log_format=form, log_level=level))
    logging.getLogger("burntally.api").info("one")
    logging.getLogger("burntally.api").warning("two")
    logging.getLogger("uvicorn.error").info("three")
    return stream.getvalue()


def test_a_record_is_one_json_object() -> None:
    line = JSON.format(record("request", status=200, parent_id=None))
    assert json.loads(line) == {
        "time": "1970-01-01T00:00:01.500000Z",
        "level": "info",
        "logger": "burntally.api",
        "event": "request",
        "status": 200,
        "parent_id": None,
    }


def test_a_record_is_one_line_of_text() -> None:
    line = TEXT.format(record("request", status=200, parent_id=None))
    assert line == "1970-01-01T00:00:01.500+00:00 INFO     request status=200"


@pytest.mark.parametrize("handler", [JSON, TEXT], ids=["json", "text"])
@pytest.mark.parametrize("made", [record(HOSTILE), record("e", field=HOSTILE)], ids=["event", "field"])
def test_nothing_that_is_told_breaks_the_line(handler: Lines, made: logging.LogRecord) -> None:
    line = handler.format(made)
    assert len(line.splitlines()) <= 1 or handler is JSON
    assert [character for character in "\n\r\x1b\x00" if character in line] == []


def test_a_traceback_stays_in_its_json_line() -> None:
    line = JSON.format(failed())
    assert "\n" not in line
    assert json.loads(line)["exception"].startswith("Traceback (most recent call last):\n")


def test_a_traceback_follows_its_line_of_text() -> None:
    assert TEXT.format(failed()).split("\n")[1] == "Traceback (most recent call last):"


@pytest.mark.parametrize("form,stream", [("json", Terminal()), ("json", io.StringIO()), ("auto", io.StringIO())])
def test_a_machine_gets_json(
    form: Literal["auto", "json"], stream: io.StringIO, monkeypatch: pytest.MonkeyPatch
) -> None:
    lines = logged(monkeypatch, stream, form=form).splitlines()
    assert [json.loads(line)["event"] for line in lines] == ["one", "two", "three"]


@pytest.mark.parametrize("form,stream", [("text", Terminal()), ("text", io.StringIO()), ("auto", Terminal())])
def test_a_person_gets_text(
    form: Literal["auto", "text"], stream: io.StringIO, monkeypatch: pytest.MonkeyPatch
) -> None:
    lines = logged(monkeypatch, stream, form=form).splitlines()
    assert [line.split()[-1] for line in lines] == ["one", "two", "three"]


def test_what_is_below_the_level_is_not_logged(monkeypatch: pytest.MonkeyPatch) -> None:
    lines = logged(monkeypatch, io.StringIO(), level="warning").splitlines()
    assert [json.loads(line)["event"] for line in lines] == ["two"]


@pytest.mark.parametrize("form", ["json", "text"])
def test_what_comes_often_is_the_same_line(form: Literal["json", "text"], monkeypatch: pytest.MonkeyPatch) -> None:
    stream = io.StringIO()
    logged(monkeypatch, stream, form=form)
    logger, fields = logging.getLogger("burntally.api"), {"status": 200, "parent_id": None, "client": HOSTILE}
    monkeypatch.setattr("time.time", lambda: 1.5)
    tell(logger, logging.INFO, event="request", fields=fields)
    logger.info("request", extra={"fields": fields})
    quick, slow = stream.getvalue().splitlines()[-2:] if form == "text" else stream.getvalue().split("\n")[-3:-1]
    assert quick == slow


def test_what_comes_often_is_bounded_by_the_level_too(monkeypatch: pytest.MonkeyPatch) -> None:
    stream = io.StringIO()
    logged(monkeypatch, stream, level="warning")
    told = stream.getvalue()
    tell(logging.getLogger("burntally.api"), logging.INFO, event="request", fields={})
    assert stream.getvalue() == told


def test_a_handler_of_others_is_told_what_comes_often(caplog: pytest.LogCaptureFixture) -> None:
    with caplog.at_level(logging.INFO, logger="burntally.api"):
        tell(logging.getLogger("burntally.api"), logging.INFO, event="request", fields={"status": 200})
    assert [(record.getMessage(), vars(record)["fields"]) for record in caplog.records] == [
        ("request", {"status": 200})
    ]
