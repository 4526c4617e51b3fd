"""What a caller's type checker sees; read by mypy with the rest of the tests, never run."""

from collections.abc import Mapping
from typing import assert_type

from burntally import (
    Answer,
    AsyncClient,
    Bodies,
    BodyRecord,
    BranchBook,
    Budget,
    Client,
    Design,
    Finding,
    Performance,
    PerformanceRequest,
    PresetRecord,
    Presets,
    TransferAnswer,
    TransferRequest,
    connect,
    connect_async,
    errors,
)


def connecting() -> None:
    assert_type(connect(), Client)
    assert_type(connect("http://127.0.0.1:8463", timeout_s=5.0, tries=2, token="t"), Client)  # noqa: S106 -- invented
    assert_type(connect_async(), AsyncClient)


def synchronous(client: Client, design: Design, plain: dict[str, object], raw: bytes) -> None:
    assert_type(client.budget(design), Budget)
    assert_type(client.budget(plain), Budget)
    assert_type(client.budget(raw, timeout_s=1.0), Budget)
    assert_type(client.bodies(), Bodies)
    assert_type(client.body("tessaly"), BodyRecord)
    assert_type(client.rules(), Presets)
    assert_type(client.rule("house"), PresetRecord)
    assert_type(client.call("create_budget", design), Answer)
    assert_type(client.call("create_budget", design).body, bytes)
    with client as same:
        assert_type(same, Client)


def the_other_requests(client: Client, vehicle: PerformanceRequest, leg: TransferRequest) -> None:
    assert_type(client.performance(vehicle), Performance)
    assert_type(client.transfer(leg), TransferAnswer)


async def asynchronous(client: AsyncClient, design: Design) -> None:
    assert_type(await client.budget(design), Budget)
    assert_type(await client.bodies(), Bodies)
    assert_type(await client.call("list_bodies"), Answer)
    async with client as same:
        assert_type(same, AsyncClient)


def reading(budget: Budget) -> None:
    assert_type(budget.closes, bool)
    assert_type(budget.margin, float | None)
    assert_type(budget.branches[0], BranchBook)
    assert_type(budget.findings[0], Finding)


def failing(error: errors.StatusError, answer: Answer) -> None:
    assert_type(error.status, int)
    assert_type(error.violations, tuple[errors.Violation, ...])
    assert_type(error.request_id, str | None)
    assert_type(answer.headers, Mapping[str, str])


def a_wrong_request_is_refused(client: Client, leg: TransferRequest) -> None:
    client.budget(leg)  # type: ignore[arg-type] # strict mypy tells if this ever passes
