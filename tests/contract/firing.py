"""Mutated bodies, fired at the application one after another, and what came of it."""

import asyncio
import resource
import signal
import time
from collections import Counter
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from pathlib import Path
from types import FrameType
from typing import Any, Final

import msgspec

from burntally.model.operations import Problem
from burntally_service.api.edge import Edge
from burntally_service.operations import OPERATIONS
from tests.contract.mutations import Mutated, mutated

__all__ = ["DEADLINE_S", "Outcome", "allowed", "fire", "resident_mib"]

DEADLINE_S: Final = 10
_ALLOWED: Final = {200: "", 400: "invalid-request", 422: "inconsistent-request uncomputable"}


@dataclass(slots=True)
class Outcome:
    """What the bodies were answered."""

    statuses: Counter[int] = field(default_factory=Counter)
    wrong: list[tuple[Mutated, int, bytes]] = field(default_factory=list)
    slowest_s: float = 0.0

    def add(self, shot: Mutated, status: int, answer: bytes, *, duration_s: float) -> None:
        """Count an answer, and keep it where it is none that is allowed."""
        self.statuses[status] += 1
        self.slowest_s = max(self.slowest_s, duration_s)
        if not allowed(status, answer):
            self.wrong.append((shot, status, answer))


class _HangError(BaseException):
    """A body kept the application busy beyond the deadline; no handler of the application may catch it."""


def fire(app: Edge, *, seed: int, count: int) -> Outcome:
    """Ask for an answer to so many bodies of a seed, one after another, in this process."""
    outcome = Outcome()
    asyncio.run(_fire_all(app, mutated(seed, count), outcome))
    return outcome


async def _fire_all(app: Edge, shots: Iterator[Mutated], outcome: Outcome) -> None:
    async with app.app.lifespan():
        for shot in shots:
            started_s = time.perf_counter()
            with _cut_off():
                status, answer = await asyncio.wait_for(_asked(app, shot), DEADLINE_S)
            outcome.add(shot, status, answer, duration_s=time.perf_counter() - started_s)


def allowed(status: int, answer: bytes) -> bool:
    """Tell whether an answer is one that a body may have: a success, or a problem that says what is wrong where."""
    if status not in _ALLOWED:
        return False
    if status == 200:
        return answer.startswith(b"{")
    problem = msgspec.json.decode(answer, type=Problem)
    return problem.status == status and problem.code in _ALLOWED[status].split() and bool(problem.errors)


def resident_mib(process: int | str = "self") -> float:
    """Memory that a process holds now."""
    pages = int(Path(f"/proc/{process}/statm").read_text(encoding="ascii").split()[1])
    return pages * resource.getpagesize() / 2**20


@contextmanager
def _cut_off() -> Iterator[None]:
    # What holds the event loop is not cut off by it.
    def hang(_number: int, _frame: FrameType | None) -> None:
        raise _HangError

    before = signal.signal(signal.SIGALRM, hang)
    signal.alarm(2 * DEADLINE_S)
    try:
        yield
    finally:
        signal.alarm(0)
        signal.signal(signal.SIGALRM, before)


async def _asked(app: Edge, shot: Mutated) -> tuple[int, bytes]:
    """Ask the application itself: a client beside it would take most of the time."""
    sent: list[Any] = []
    received = iter([{"type": "http.request", "body": shot.body, "more_body": False}])

    async def receive() -> Any:
        for message in received:
            return message
        return await asyncio.Event().wait()

    async def send(message: Any) -> None:
        sent.append(message)

    headers = [(b"content-type", shot.media_type.encode())]
    path = OPERATIONS[shot.operation_id].path
    scope: Any = {"type": "http", "method": "POST", "path": path, "query_string": b"", "headers": headers}
    await app(scope, receive, send)
    return sent[0]["status"], b"".join(message.get("body", b"") for message in sent[1:])
