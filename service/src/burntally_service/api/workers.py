"""Workers, seen from the server: processes that are started when first needed, and replaced when they die."""

import asyncio
import contextlib
import logging
import os
import sys
from asyncio.subprocess import PIPE, Process
from collections.abc import AsyncGenerator
from contextlib import asynccontextmanager
from typing import Final, cast

import msgspec

from burntally.model.errors import ContractError, InconsistentError, NotFoundError, UncomputableError
from burntally_service.api.problems import ProblemError
from burntally_service.worker import HEAD, STOP, Answered, Asked, Failed, Outcome, Refused, Stopped, read_outcome

__all__ = ["WorkerFailedError", "Workers", "overloaded"]

_LOG: Final = logging.getLogger("burntally.workers")
_COMMAND: Final = (sys.executable, "-P", "-m", "burntally_service.worker")
# A worker heeds its own clock; one that is late by this much is stuck in something that no signal stops.
_GRACE_S: Final = 2.0
_STOP_AGAIN_S: Final = 0.05
_RETRY_AFTER_S: Final = 1
_REFUSALS: Final[dict[str, type[ContractError | UncomputableError | NotFoundError]]] = {
    kind.code: kind for kind in (ContractError, InconsistentError, NotFoundError, UncomputableError)
}


class WorkerFailedError(Exception):
    """A fault of the service in a worker; the message is the worker's traceback."""


class _Worker:
    """One process that answers one request at a time."""

    def __init__(self, process: Process) -> None:
        self._process = process
        # Both are pipes, since they were asked for.
        self._requests = cast("asyncio.StreamWriter", process.stdin)
        self._outcomes = cast("asyncio.StreamReader", process.stdout)
        self._outcome: asyncio.Task[Outcome] | None = None
        self._is_spent = False

    @property
    def is_alive(self) -> bool:
        """Whether it can take another request."""
        return self._process.returncode is None and not self._is_spent

    async def ask(self, asked: Asked) -> Outcome:
        """Answer one request; a worker that is left in the middle of one must be calmed before the next."""
        told = msgspec.msgpack.encode(asked)
        self._requests.write(HEAD.pack(len(told)) + told)
        self._outcome = asyncio.create_task(self._read())
        async with asyncio.timeout(asked.timeout_s + _GRACE_S):
            await self._requests.drain()
            # Whoever gives up on the outcome must not cut off the reading of it halfway.
            return await asyncio.shield(self._outcome)

    async def calm(self) -> None:
        """Stop the request at hand and throw away what it ends in; kill the process if it heeds nothing."""
        if self._outcome is None:
            return
        for _ in range(round(_GRACE_S / _STOP_AGAIN_S)):
            # Once more each time: the first may come before the worker has begun.
            with contextlib.suppress(ProcessLookupError):
                self._process.send_signal(STOP)
            await asyncio.wait([self._outcome], timeout=_STOP_AGAIN_S)
            if self._outcome.done():
                break
        else:
            self._outcome.cancel()
        outcome = (await asyncio.gather(self._outcome, return_exceptions=True))[0]
        self._is_spent = self._is_spent or not isinstance(outcome, Outcome)

    async def end(self) -> None:
        """Kill the process."""
        self._is_spent = True
        with contextlib.suppress(ProcessLookupError):
            self._process.kill()
        await self._process.wait()
        self._requests.close()
        with contextlib.suppress(ConnectionError):
            await self._requests.wait_closed()

    async def _read(self) -> Outcome:
        head = await self._outcomes.readexactly(HEAD.size)
        outcome = read_outcome(await self._outcomes.readexactly(*HEAD.unpack(head)))
        self._is_spent = isinstance(outcome, Stopped) and outcome.is_last
        return outcome


class Workers:
    """So many workers at most, each asked for one answer at a time, and a queue before them that is bounded too.

    Parameters
    ----------
    most : int
        Workers at most.
    most_waiting : int
        Requests that may wait for one.
    timeout_s : float
        Longest that a request may compute, and the longest that it waits for its turn.
    """

    def __init__(self, *, most: int, most_waiting: int, timeout_s: float) -> None:
        self._turns = asyncio.Semaphore(most)
        self._most_held = most + most_waiting
        self._held = 0
        self._timeout_s = timeout_s
        self._idle: list[_Worker] = []
        self._calming: set[asyncio.Task[None]] = set()

    async def answer(self, operation_id: str, body: bytes, media_type: str, accept: str) -> bytes:
        """Answer a request, as `operations.answer` does.

        Raises
        ------
        ContractError, UncomputableError, NotFoundError
            As that does.
        ProblemError
            `overloaded`: too many wait already; `took-too-long`; `worker-lost`.
        WorkerFailedError
            The service is at fault.
        """
        asked = Asked(
            operation_id=operation_id, body=body, media_type=media_type, accept=accept, timeout_s=self._timeout_s
        )
        async with self._turn():
            try:
                outcome = await self._asked(asked)
            except (TimeoutError, OSError, asyncio.IncompleteReadError) as error:
                _LOG.warning("a worker was lost", extra={"fields": {"operation": operation_id, "why": repr(error)}})
                detail = "the process that computed the answer ended"
                raise ProblemError("worker-lost", detail, headers=_retry_after(_RETRY_AFTER_S)) from None
        if isinstance(outcome, Refused):
            for line in outcome.logged:
                _LOG.warning(line, extra={"fields": {"operation": operation_id}})
        return self._read(outcome)

    async def close(self) -> None:
        """End all workers; what they compute is lost."""
        while self._calming:
            await asyncio.gather(*self._calming)
        for worker in self._idle:
            await worker.end()
        self._idle.clear()

    @asynccontextmanager
    async def _turn(self) -> AsyncGenerator[None, None]:
        """Wait for a worker to be free, first come, first served."""
        if self._held >= self._most_held:
            raise overloaded("as many requests wait to be computed as may")
        self._held += 1
        try:
            try:
                async with asyncio.timeout(self._timeout_s):
                    await self._turns.acquire()
            except TimeoutError:
                raise overloaded("no worker was free in time") from None
            yield
        finally:
            self._held -= 1

    async def _asked(self, asked: Asked) -> Outcome:
        """Ask a worker; its turn ends when it is free again, which may be after the caller has left."""
        worker: _Worker | None = None
        try:
            worker = await self._free_worker()
            outcome = await worker.ask(asked)
        except BaseException:
            task = asyncio.ensure_future(self._calmed(worker))
            self._calming.add(task)
            task.add_done_callback(self._calming.discard)
            raise
        await self._freed(worker)
        return outcome

    async def _free_worker(self) -> _Worker:
        while self._idle:
            worker = self._idle.pop()
            if worker.is_alive:
                return worker
            await worker.end()
        return _Worker(
            await asyncio.create_subprocess_exec(*_COMMAND, str(os.getpid()), stdin=PIPE, stdout=PIPE, stderr=None)
        )

    async def _calmed(self, worker: _Worker | None) -> None:
        if worker is not None:
            await worker.calm()
        await self._freed(worker)

    async def _freed(self, worker: _Worker | None) -> None:
        self._turns.release()
        if worker is not None and worker.is_alive:
            self._idle.append(worker)
        elif worker is not None:
            await worker.end()

    def _read(self, outcome: Outcome) -> bytes:
        if isinstance(outcome, Answered):
            return outcome.body
        if isinstance(outcome, Refused):
            raise _REFUSALS[outcome.code](outcome.violations)
        if isinstance(outcome, Failed):
            raise WorkerFailedError(outcome.traceback)
        detail = f"the answer takes longer to compute than {self._timeout_s:g} s"
        # To come back sooner than it took would keep the workers from others.
        raise ProblemError("took-too-long", detail, headers=_retry_after(round(self._timeout_s) + 1))


def overloaded(detail: str) -> ProblemError:
    """Refuse for want of a turn."""
    return ProblemError("overloaded", detail, headers=_retry_after(_RETRY_AFTER_S))


def _retry_after(seconds: int) -> dict[str, str]:
    return {"Retry-After": str(seconds)}
