"""Turns: who computes when, so that small requests stay quick beside large ones, and all of them beside a flood."""

import asyncio
import contextlib
from collections import deque
from collections.abc import Awaitable, Callable
from typing import Any, Final

from burntally_service import operations
from burntally_service.api.problems import ProblemError
from burntally_service.api.settings import Settings
from burntally_service.api.workers import Workers, overloaded
from burntally_service.haste import NeedsTimeError
from burntally_service.operations import Operation

__all__ = ["CallerLeftError", "Turns", "stopping"]

# A closed form over a short body is done before a worker would have taken it over; a long body may hold up others.
_INLINE_BODY_BYTES: Final = 16 * 1024

# A few milliseconds of computing; fewer would starve those who were let in where many are refused.
_TURNS_PER_PASS: Final = 6

_Receive = Callable[[], Awaitable[Any]]


class CallerLeftError(Exception):
    """Nobody is there any more to be answered."""


class Turns:
    """Computes answers: quick ones one by one where they arrived, the others in workers.

    Parameters
    ----------
    settings : Settings
        How many workers there are, how many requests may wait, and how long one may compute.
    """

    def __init__(self, settings: Settings) -> None:
        self._settings = settings
        self.begin()

    def begin(self) -> None:
        """Begin, or begin again after `close`; the event loop may be another one then."""
        settings = self._settings
        self._workers = Workers(
            most=settings.workers, most_waiting=settings.most_waiting, timeout_s=settings.compute_timeout_s
        )
        self._line = _Line(settings.most_in_flight)
        self._stopping = asyncio.Event()

    async def answer(self, operation: Operation, asked: bytes, media: tuple[str, str], receive: _Receive) -> bytes:
        """Answer a request, as `operations.answer` does.

        Parameters
        ----------
        operation : Operation
            Row of the table.
        asked : bytes
            The request.
        media : (str, str)
            What it is written in, and what the answer is to be.
        receive : callable
            What the caller sends after the body: that he has left.

        Raises
        ------
        CallerLeftError
            He has, and the computation was stopped.
        ProblemError
            Others are before it, it took too long, its worker died, or the server stops.
        """
        if operation.cost == "inline" and len(asked) <= _INLINE_BODY_BYTES:
            await self._line.turn()
            with contextlib.suppress(NeedsTimeError):
                return operations.answer(operation.id, asked, *media, in_haste=True)
        return await self._attended(self._workers.answer(operation.id, asked, *media), receive)

    def stop(self) -> None:
        """Stop what is computed, and refuse what waits; its callers are told to come back."""
        self._stopping.set()

    async def close(self) -> None:
        """Stop, and end the workers."""
        self.stop()
        await self._workers.close()

    async def _attended(self, answer: Awaitable[bytes], receive: _Receive) -> bytes:
        """Wait for an answer as long as there is somebody to give it to, and a server to give it."""
        computed = asyncio.ensure_future(answer)
        left = asyncio.ensure_future(_left(receive))
        stopped = asyncio.ensure_future(self._stopping.wait())
        tasks = (computed, left, stopped)
        try:
            await asyncio.wait(tasks, return_when=asyncio.FIRST_COMPLETED)
            if computed.done():
                return computed.result()
        finally:
            for task in tasks:
                task.cancel()
            await asyncio.gather(*tasks, return_exceptions=True)
        if left.done() and not left.cancelled():
            raise CallerLeftError
        raise stopping()


class _Line:
    """Lets a few computations run in each pass of the event loop, so that others are heard, or refused, in between.

    Parameters
    ----------
    most : int
        How many may wait in it.
    """

    def __init__(self, most: int) -> None:
        self._most = most
        self._waiting: deque[asyncio.Future[None]] = deque()
        self._left = _TURNS_PER_PASS
        self._has_begun = False

    async def turn(self) -> None:
        """Wait for one's turn, and take it: what is computed next, without waiting, belongs to it."""
        if self._left == 0 or self._waiting:
            if len(self._waiting) >= self._most:
                raise overloaded("as many requests wait for their turn as may")
            self._waiting.append(place := asyncio.get_running_loop().create_future())
            await place
            return
        self._left -= 1
        self._begin()

    def _begin(self) -> None:
        if not self._has_begun:
            self._has_begun = True
            asyncio.get_running_loop().call_soon(self._next)

    def _next(self) -> None:
        """Begin another pass: who waits goes first."""
        self._has_begun = False
        self._left = _TURNS_PER_PASS
        while self._waiting and self._left:
            place = self._waiting.popleft()
            if not place.done():
                place.set_result(None)
                self._left -= 1
        if self._left < _TURNS_PER_PASS:
            self._begin()


def stopping() -> ProblemError:
    """Refuse what will not be answered before the server ends."""
    return ProblemError("not-ready", "the service is stopping", headers={"Retry-After": "1"})


async def _left(receive: _Receive) -> None:
    """Wait until the caller has hung up."""
    while (await receive())["type"] != "http.disconnect":
        pass
