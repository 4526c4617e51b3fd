"""A worker: a process of its own that answers one request after another, and can be stopped in any of them.

What computes long is pure Python, which holds the interpreter: in a thread it would hold up every other request, and
nothing could stop it. In the main thread of a process of its own a signal can, between any two instructions, so that
no computation need ask whether it should go on.

It reads requests from its standard input and writes answers to its standard output, each as a length and MessagePack.
"""

import importlib
import logging
import os
import signal
import struct
import sys
import traceback
from dataclasses import dataclass
from types import FrameType
from typing import BinaryIO, Final

import msgspec
from msgspec import Struct

from burntally.model.errors import ContractError, NotFoundError, UncomputableError, Violation
from burntally_service.operations import answer

__all__ = ["HEAD", "STOP", "Answered", "Asked", "Failed", "Outcome", "Refused", "Stopped", "main", "read_outcome"]

HEAD: Final = struct.Struct(">I")
"""Length of what follows [B]."""

STOP: Final = signal.SIGUSR1
"""Stops the computation at hand; between two of them it does nothing."""

# Loaded lazily elsewhere; whatever is forgotten here costs a worker that is stopped while it loads that.
_LOADED: Final = (
    "burntally.model._part_checks",
    "burntally.model._walker",
    "burntally.model._units",
    "burntally.model.names",
    "burntally.model.quantity",
    "burntally_service.budget.faults",
    "burntally_service.budget.work",
    "burntally_service.legs",
    "burntally_service.vehicle.performance",
)

# From Linux' <sys/prctl.h>; elsewhere a worker ends once it has computed, and finds nobody to tell.
_SET_PARENT_DEATH_SIGNAL: Final = 1

# The event loop goes first where there are more processes than cores.
_NICER_BY: Final = 10


class Asked(Struct, frozen=True, kw_only=True, array_like=True):
    """One request, as `answer` takes it, and how long it may compute [s]."""

    operation_id: str
    body: bytes
    media_type: str
    accept: str
    timeout_s: float


class Answered(Struct, frozen=True, kw_only=True, array_like=True, tag=1):
    """The answer."""

    body: bytes


class Refused(Struct, frozen=True, kw_only=True, array_like=True, tag=2):
    """The request was at fault; `logged` is what the server should log of it, who knows how."""

    code: str
    violations: list[Violation]
    logged: list[str] = []


class Failed(Struct, frozen=True, kw_only=True, array_like=True, tag=3):
    """The service was at fault; for the log alone."""

    traceback: str


class Stopped(Struct, frozen=True, kw_only=True, array_like=True, tag=4):
    """The time was over, or nobody wants the answer any more; `is_last`: the worker ends with it."""

    is_last: bool


Outcome = Answered | Refused | Failed | Stopped
"""What one request ends in."""


class _Notebook(logging.Handler):
    """Keeps what is logged until the server can be told: its log has a form, and one writer."""

    def __init__(self) -> None:
        super().__init__(logging.WARNING)
        self._lines: list[str] = []

    def emit(self, record: logging.LogRecord) -> None:
        """Keep a record."""
        self._lines.append(self.format(record))

    def torn_off(self) -> list[str]:
        """Hand over what was kept, and begin anew."""
        lines, self._lines = self._lines, []
        return lines


_NOTEBOOK: Final = _Notebook()


class _StoppedError(BaseException):
    """Raised wherever the computation is; no ``except Exception`` on the way may swallow it."""


@dataclass(slots=True)
class _Desk:
    """Whether there is anything to stop."""

    is_computing: bool = False

    def stop(self, number: int, frame: FrameType | None) -> None:  # noqa: ARG002 - a signal handler has this shape
        """Stop the computation at hand."""
        if self.is_computing:
            self.is_computing = False
            raise _StoppedError


def main(server: int) -> None:
    """Answer requests until there are no more of them.

    Parameters
    ----------
    server
        Process id of who asks.
    """
    desk = _Desk()
    # An interrupt typed at a terminal reaches the whole group; the server decides when its workers end.
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    signal.signal(STOP, desk.stop)
    signal.signal(signal.SIGALRM, desk.stop)
    _end_with_server(server)
    logging.basicConfig(handlers=[_NOTEBOOK], force=True)
    os.nice(_NICER_BY)
    _load()
    source = os.fdopen(os.dup(0), "rb")
    sink = os.fdopen(os.dup(1), "wb")
    # Whatever prints by mistake must not be taken for an answer.
    os.dup2(2, 1)
    with source, sink:
        _serve(desk, source, sink)


def _end_with_server(server: int) -> None:
    """End when the server is killed, which would otherwise leave this process computing for nobody."""
    if sys.platform == "linux":
        import ctypes

        ctypes.CDLL(None).prctl(_SET_PARENT_DEATH_SIGNAL, signal.SIGKILL)
    if os.getppid() != server:
        # It was killed before the signal was asked for.
        raise SystemExit


def _load() -> None:
    """Load what answers are computed with, which is not to count as computing."""
    for name in _LOADED:
        importlib.import_module(name)
    for operation_id in ("list_bodies", "list_rules"):
        answer(operation_id, b"")


def _serve(desk: _Desk, source: BinaryIO, sink: BinaryIO) -> None:
    decoder = msgspec.msgpack.Decoder(Asked)
    while len(head := source.read(HEAD.size)) == HEAD.size:
        outcome = _outcome(desk, decoder.decode(source.read(*HEAD.unpack(head))))
        told = msgspec.msgpack.encode(outcome)
        try:
            sink.write(HEAD.pack(len(told)) + told)
            sink.flush()
        except BrokenPipeError:
            # The server is gone, and so is whoever asked.
            os._exit(0)
        if isinstance(outcome, Stopped) and outcome.is_last:
            return


def _outcome(desk: _Desk, asked: Asked) -> Outcome:
    """Answer one request within its time."""
    modules = len(sys.modules)
    _NOTEBOOK.torn_off()
    try:
        try:
            desk.is_computing = True
            signal.setitimer(signal.ITIMER_REAL, asked.timeout_s)
            return _told(asked)
        finally:
            desk.is_computing = False
            signal.setitimer(signal.ITIMER_REAL, 0.0)
    except _StoppedError:
        # An import that was cut off may have left half a module behind, and nothing here can tell.
        return Stopped(is_last=len(sys.modules) != modules)


def _told(asked: Asked) -> Outcome:
    try:
        return Answered(body=answer(asked.operation_id, asked.body, asked.media_type, asked.accept))
    except (ContractError, UncomputableError, NotFoundError) as error:
        return Refused(code=error.code, violations=list(error.violations), logged=_NOTEBOOK.torn_off())
    except RecursionError:
        return Refused(
            code=ContractError.code,
            violations=[Violation(pointer="", message="the body is nested too deeply", expected="fewer levels")],
        )
    except Exception:  # noqa: BLE001 - whatever it is, the one who asked is told and the next one is served
        return Failed(traceback=traceback.format_exc())


_OUTCOMES: Final = msgspec.msgpack.Decoder(Outcome)


def read_outcome(told: bytes) -> Outcome:
    """Read what a worker wrote."""
    outcome: Outcome = _OUTCOMES.decode(told)
    return outcome


if __name__ == "__main__":
    main(int(sys.argv[1]))
