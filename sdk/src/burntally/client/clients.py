"""The two clients: one surface, one request path; they differ in how they send and in nothing else."""

import time
from collections.abc import Mapping
from types import TracebackType
from typing import Any, Self, TypeVar

from burntally.client.errors import TimedOut
from burntally.client.exchange import Body, answer_of, decoded
from burntally.client.messages import Answer, Reply, Request
from burntally.client.operations import (
    COMPUTE_PERFORMANCE,
    CREATE_BUDGET,
    GET_BODY,
    GET_RULES,
    LIST_BODIES,
    LIST_RULES,
    OPERATIONS,
    PLAN_TRANSFER,
    Operation,
)
from burntally.client.retries import Outcome
from burntally.client.senders import AsyncSender, Sender
from burntally.client.settings import ClientSettings
from burntally.model.budget import Budget
from burntally.model.decode import JSON
from burntally.model.design import Design
from burntally.model.operations import (
    Bodies,
    BodyRecord,
    Performance,
    PerformanceRequest,
    PresetRecord,
    Presets,
    TransferAnswer,
    TransferRequest,
)

__all__ = ["AsyncClient", "Client"]

A = TypeVar("A")


class Client:
    """Asks a service, over HTTP or in-process; made by :func:`burntally.connect`.

    Every request may be a struct, builtins as JSON would give them (numbers or strings with a unit), or JSON as
    bytes. `timeout_s` is the total deadline of one call, over all tries; absent: the client's.

    Parameters
    ----------
    sender : Sender
        The way in.
    settings : ClientSettings
        Deadline, tries and header fields.
    """

    def __init__(self, sender: Sender, settings: ClientSettings) -> None:
        self._sender = sender
        self._settings = settings

    def budget(self, design: Design | Mapping[str, Any] | bytes, *, timeout_s: float | None = None) -> Budget:
        """Draw up the budget of a design."""
        return self._ask(CREATE_BUDGET, design, timeout_s=timeout_s)

    def performance(
        self, request: PerformanceRequest | Mapping[str, Any] | bytes, *, timeout_s: float | None = None
    ) -> Performance:
        """Tell what a vehicle gives, stage by stage."""
        return self._ask(COMPUTE_PERFORMANCE, request, timeout_s=timeout_s)

    def transfer(
        self, request: TransferRequest | Mapping[str, Any] | bytes, *, timeout_s: float | None = None
    ) -> TransferAnswer:
        """Plan one leg from a location, without a vehicle."""
        return self._ask(PLAN_TRANSFER, request, timeout_s=timeout_s)

    def bodies(self, *, timeout_s: float | None = None) -> Bodies:
        """List the bodies of the solar catalogue."""
        return self._ask(LIST_BODIES, None, timeout_s=timeout_s)

    def body(self, name: str, *, timeout_s: float | None = None) -> BodyRecord:
        """Tell about one body of the solar catalogue."""
        return self._ask(GET_BODY, None, name=name, timeout_s=timeout_s)

    def rules(self, *, timeout_s: float | None = None) -> Presets:
        """List the presets of rules."""
        return self._ask(LIST_RULES, None, timeout_s=timeout_s)

    def rule(self, name: str, *, timeout_s: float | None = None) -> PresetRecord:
        """Tell about one preset of rules."""
        return self._ask(GET_RULES, None, name=name, timeout_s=timeout_s)

    def call(
        self,
        operation_id: str,
        body: Body | None = None,
        *,
        name: str | None = None,
        media_type: str = JSON,
        accept: str = JSON,
        timeout_s: float | None = None,
    ) -> Answer:
        """Run one operation by its id and give the answer's bytes as they came.

        Parameters
        ----------
        operation_id : str
            Id in the OpenAPI document, such as ``create_budget``.
        body : Struct, Mapping, bytes or None
            The request's body; `media_type` says what bytes are written in.
        name : str or None
            Name in the path, where the operation has one.
        media_type, accept : str
            ``application/json`` or ``application/msgpack``.
        timeout_s : float or None
            Total deadline; absent: the client's.

        Returns
        -------
        Answer
            Bytes, status, request id and header fields.

        Raises
        ------
        LookupError
            The SDK knows no such operation.
        ClientError
            No answer, or a problem in its place.
        """
        request = self._settings.request(
            OPERATIONS[operation_id], body, name=name, media_type=media_type, accept=accept
        )
        return answer_of(request, self.send(request, timeout_s=timeout_s))

    def send(self, request: Request, *, timeout_s: float | None = None) -> Reply:
        """Send a request, again where that is safe, within one total deadline.

        Parameters
        ----------
        request : Request
            What to send.
        timeout_s : float or None
            Total deadline; absent: the client's.

        Returns
        -------
        Reply
            What came back, whatever its status.

        Raises
        ------
        ClientError
            Nothing came back.
        """
        retries = self._settings.retries(timeout_s)
        outcome: Outcome = TimedOut("no time to send", request=request)
        attempt = retries.first()
        while attempt is not None:
            time.sleep(attempt.pause_s)
            outcome = self._sender.send_once(request, attempt.timeout_s)
            attempt = retries.after(outcome)
        if isinstance(outcome, Reply):
            return outcome
        raise outcome

    def close(self) -> None:
        """Let go of the connection."""
        self._sender.close()

    def __enter__(self) -> Self:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.close()

    def _ask(
        self, operation: Operation[A], body: Body | None, *, name: str | None = None, timeout_s: float | None
    ) -> A:
        request = self._settings.request(operation, body, name=name)
        answer = answer_of(request, self.send(request, timeout_s=timeout_s))
        return decoded(operation, answer)


class AsyncClient:
    """The same surface for an event loop; every method is awaited.

    Every request may be a struct, builtins as JSON would give them (numbers or strings with a unit), or JSON as
    bytes. `timeout_s` is the total deadline of one call, over all tries; absent: the client's.

    Parameters
    ----------
    sender : AsyncSender
        The way in.
    settings : ClientSettings
        Deadline, tries and header fields.
    """

    def __init__(self, sender: AsyncSender, settings: ClientSettings) -> None:
        self._sender = sender
        self._settings = settings

    async def budget(self, design: Design | Mapping[str, Any] | bytes, *, timeout_s: float | None = None) -> Budget:
        """Draw up the budget of a design."""
        return await self._ask(CREATE_BUDGET, design, timeout_s=timeout_s)

    async def performance(
        self, request: PerformanceRequest | Mapping[str, Any] | bytes, *, timeout_s: float | None = None
    ) -> Performance:
        """Tell what a vehicle gives, stage by stage."""
        return await self._ask(COMPUTE_PERFORMANCE, request, timeout_s=timeout_s)

    async def transfer(
        self, request: TransferRequest | Mapping[str, Any] | bytes, *, timeout_s: float | None = None
    ) -> TransferAnswer:
        """Plan one leg from a location, without a vehicle."""
        return await self._ask(PLAN_TRANSFER, request, timeout_s=timeout_s)

    async def bodies(self, *, timeout_s: float | None = None) -> Bodies:
        """List the bodies of the solar catalogue."""
        return await self._ask(LIST_BODIES, None, timeout_s=timeout_s)

    async def body(self, name: str, *, timeout_s: float | None = None) -> BodyRecord:
        """Tell about one body of the solar catalogue."""
        return await self._ask(GET_BODY, None, name=name, timeout_s=timeout_s)

    async def rules(self, *, timeout_s: float | None = None) -> Presets:
        """List the presets of rules."""
        return await self._ask(LIST_RULES, None, timeout_s=timeout_s)

    async def rule(self, name: str, *, timeout_s: float | None = None) -> PresetRecord:
        """Tell about one preset of rules."""
        return await self._ask(GET_RULES, None, name=name, timeout_s=timeout_s)

    async def call(
        self,
        operation_id: str,
        body: Body | None = None,
        *,
        name: str | None = None,
        media_type: str = JSON,
        accept: str = JSON,
        timeout_s: float | None = None,
    ) -> Answer:
        """Run one operation by its id and give the answer's bytes as they came.

        Parameters
        ----------
        operation_id : str
            Id in the OpenAPI document, such as ``create_budget``.
        body : Struct, Mapping, bytes or None
            The request's body; `media_type` says what bytes are written in.
        name : str or None
            Name in the path, where the operation has one.
        media_type, accept : str
            ``application/json`` or ``application/msgpack``.
        timeout_s : float or None
            Total deadline; absent: the client's.

        Returns
        -------
        Answer
            Bytes, status, request id and header fields.

        Raises
        ------
        LookupError
            The SDK knows no such operation.
        ClientError
            No answer, or a problem in its place.
        """
        request = self._settings.request(
            OPERATIONS[operation_id], body, name=name, media_type=media_type, accept=accept
        )
        return answer_of(request, await self.send(request, timeout_s=timeout_s))

    async def send(self, request: Request, *, timeout_s: float | None = None) -> Reply:
        """Send a request, again where that is safe, within one total deadline.

        Parameters
        ----------
        request : Request
            What to send.
        timeout_s : float or None
            Total deadline; absent: the client's.

        Returns
        -------
        Reply
            What came back, whatever its status.

        Raises
        ------
        ClientError
            Nothing came back.
        """
        retries = self._settings.retries(timeout_s)
        outcome: Outcome = TimedOut("no time to send", request=request)
        attempt = retries.first()
        while attempt is not None:
            await _pause(attempt.pause_s)
            outcome = await self._sender.send_once(request, attempt.timeout_s)
            attempt = retries.after(outcome)
        if isinstance(outcome, Reply):
            return outcome
        raise outcome

    async def close(self) -> None:
        """Let go of the connection."""
        await self._sender.close()

    async def __aenter__(self) -> Self:
        return self

    async def __aexit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        await self.close()

    async def _ask(
        self, operation: Operation[A], body: Body | None, *, name: str | None = None, timeout_s: float | None
    ) -> A:
        request = self._settings.request(operation, body, name=name)
        answer = answer_of(request, await self.send(request, timeout_s=timeout_s))
        return decoded(operation, answer)


async def _pause(pause_s: float) -> None:
    import asyncio  # costs more than the rest of this module, and a synchronous client has no use for it

    await asyncio.sleep(pause_s)
