"""The table of operations: one row for each thing that the service computes or tells.

Routes and the published contract are read off it, and `answer` runs any row, whichever way a request came in. The
client has a table of its own, since it must not import the service. Nothing here knows HTTP, and importing it loads
no numbers library: a row's function imports its room when it is first called.
"""

import logging
from collections.abc import Callable
from datetime import date
from types import MappingProxyType
from typing import Annotated, Any, Final, Literal

from msgspec import Struct
from msgspec.structs import replace

from burntally.model.budget import Budget
from burntally.model.decode import JSON, decode, encode
from burntally.model.design import Design
from burntally.model.errors import InconsistentError, UncomputableError, Violation
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
from burntally.model.scalars import Name, doc

__all__ = ["OPERATIONS", "Named", "Operation", "Retirement", "answer", "operation_named"]

_LOG: Final = logging.getLogger("burntally.operations")
_OUT_OF_DOMAIN: Final = "math domain error"


class Named(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """A request for the one thing that bears a name."""

    name: Annotated[Name, doc("Name of what is asked for.")]


class Retirement(Struct, frozen=True, kw_only=True):
    """How an operation goes: announced first, and gone no earlier than was said.

    Attributes
    ----------
    deprecated
        Day from which it is no longer recommended.
    sunset
        Day from which it may be gone; None: not set yet.
    successor
        Path of what to ask in its place, if there is something.
    """

    deprecated: date
    sunset: date | None = None
    successor: str | None = None


class Operation(Struct, frozen=True, kw_only=True):
    """One row of the table.

    Attributes
    ----------
    id
        Stable name; the contract's `operationId`.
    method, path
        Where HTTP finds it. A path parameter is a field of the request.
    summary, description
        What it does, in the contract's words.
    request
        Type of the request; None: there is nothing to ask.
    response
        Type of the answer.
    function
        Takes the request, or nothing; returns the answer.
    cost
        `inline`: a closed form that may run where the request arrived; `thread`: slow enough to hold up others.
    hasty
        The function for use where the request arrived, if that is another: it raises `NeedsTimeError` where only the
        function itself will do.
    retirement
        How it goes, if it is to go.
    """

    id: str
    method: Literal["GET", "POST"]
    path: str
    summary: str
    description: str
    request: type[Struct] | None
    response: type[Struct]
    function: Callable[..., Struct]
    cost: Literal["inline", "thread"] = "inline"
    hasty: Callable[..., Struct] | None = None
    retirement: Retirement | None = None

    @property
    def takes_body(self) -> bool:
        """Whether the request travels in the body, and not in the path."""
        return self.method == "POST"

    def call(self, request: Any, *, in_haste: bool = False) -> Struct:  # noqa: ANN401 - the row's own request type
        """Run the function on a decoded request, or the hasty one."""
        function = self.hasty if in_haste and self.hasty else self.function
        return function() if self.request is None else function(request)


def _create_budget(design: Design) -> Budget:
    from burntally_service.budget import draw_up
    from burntally_service.budget.work import check_work

    check_work(design)
    return draw_up(design)


def _create_budget_in_haste(design: Design) -> Budget:
    from burntally_service.budget import draw_up
    from burntally_service.budget.work import check_work

    check_work(design, in_haste=True)
    return draw_up(design, in_haste=True)


def _compute_performance(request: PerformanceRequest) -> Performance:
    from burntally_service.budget.faults import surface_gravity
    from burntally_service.budget.rules import resolve
    from burntally_service.vehicle.performance import performance_of

    resolved = replace(request, rules=resolve(request.rules))
    if request.gravity_of is None:
        return performance_of(resolved)
    return performance_of(resolved, gravity=surface_gravity(request.gravity_of))


def _plan_transfer(request: TransferRequest) -> TransferAnswer:
    from burntally_service.legs import transfer_of

    return transfer_of(request)


def _list_bodies() -> Bodies:
    from burntally_service.bodies import list_bodies

    return list_bodies()


def _get_body(request: Named) -> BodyRecord:
    from burntally_service.bodies import body_named

    return body_named(request.name)


def _list_rules() -> Presets:
    from burntally_service.budget.presets import list_presets

    return list_presets()


def _get_rules(request: Named) -> PresetRecord:
    from burntally_service.budget.presets import preset_named

    return preset_named(request.name)


_ROWS: Final = (
    Operation(
        id="create_budget",
        method="POST",
        path="/v1/budgets",
        summary="Draw up the budget of a design",
        description=(
            "Says whether every burn that the mission calls for can be paid by the stages that are attached and lit at "
            "that moment, with the reserve that the rules ask for: who pays, what is left, what breaks a rule, and "
            "what would mend it. A design that does not close is an answer with findings, not an error."
        ),
        request=Design,
        response=Budget,
        function=_create_budget,
        # The remedies of a design that does not close are each run again, and that takes its time.
        hasty=_create_budget_in_haste,
    ),
    Operation(
        id="compute_performance",
        method="POST",
        path="/v1/performance",
        summary="Tell what a vehicle gives, stage by stage",
        description="Burns the stack from the bottom, each stage until its usable propellant is spent.",
        request=PerformanceRequest,
        response=Performance,
        function=_compute_performance,
    ),
    Operation(
        id="plan_transfer",
        method="POST",
        path="/v1/transfers",
        summary="Plan one leg from a location, without a vehicle",
        description="Tells the ideal manoeuvres of the leg, what other strategies would cost, and where it ends.",
        request=TransferRequest,
        response=TransferAnswer,
        function=_plan_transfer,
    ),
    Operation(
        id="list_bodies",
        method="GET",
        path="/v1/bodies",
        summary="List the bodies of the solar catalogue",
        description="Each body with its constants and their sources.",
        request=None,
        response=Bodies,
        function=_list_bodies,
    ),
    Operation(
        id="get_body",
        method="GET",
        path="/v1/bodies/{name}",
        summary="Tell about one body of the solar catalogue",
        description="The constants of the body and their sources.",
        request=Named,
        response=BodyRecord,
        function=_get_body,
    ),
    Operation(
        id="list_rules",
        method="GET",
        path="/v1/rules",
        summary="List the presets of rules",
        description="Published margin policies, as far as rules can hold them, each with its source.",
        request=None,
        response=Presets,
        function=_list_rules,
    ),
    Operation(
        id="get_rules",
        method="GET",
        path="/v1/rules/{name}",
        summary="Tell about one preset of rules",
        description="A published margin policy as rules, with its source and what the rules cannot hold of it.",
        request=Named,
        response=PresetRecord,
        function=_get_rules,
    ),
)

OPERATIONS: Final = MappingProxyType({row.id: row for row in _ROWS})
"""Every operation by its id."""


def operation_named(operation_id: str) -> Operation:
    """Return the row of the table with this id; a LookupError tells which ids there are."""
    try:
        return OPERATIONS[operation_id]
    except KeyError:
        raise LookupError(f"no operation is called {operation_id!r}; there are {', '.join(OPERATIONS)}") from None


def answer(
    operation_id: str, body: bytes, media_type: str = JSON, accept: str = JSON, *, in_haste: bool = False
) -> bytes:
    """Answer one request: decode it, compute, encode. This is all that every way in has in common.

    Parameters
    ----------
    operation_id
        Row of the table.
    body
        The request; empty where the operation asks nothing.
    media_type
        What the body is written in: `application/json` or `application/msgpack`.
    accept
        What the answer is to be written in, one of the same two.
    in_haste
        Whether to give up where only a function that takes its time will do.

    Returns
    -------
    bytes
        The answer, the same bytes for the same request whichever way it came in.

    Raises
    ------
    ContractError
        The body breaks the contract.
    UncomputableError
        It fits the contract and cannot be computed, or a result is not finite.
    NotFoundError
        Nothing bears the name that was asked for.
    LookupError
        There is no such operation.
    NeedsTimeError
        In haste, where the answer takes its time.
    """
    operation = operation_named(operation_id)
    request: Struct | None = None
    try:
        request = None if operation.request is None else decode(operation.request, body, media_type=media_type)
        told = _computed(operation, request, in_haste=in_haste)
    except InconsistentError as error:
        raise InconsistentError(_all_faults(error.request or request, error)) from error
    except UncomputableError as error:
        raise UncomputableError(_all_faults(request, error)) from error
    try:
        return encode(told, media_type=accept)
    except UncomputableError as error:
        raise _named(request, error) from error


def _all_faults(request: object, error: InconsistentError | UncomputableError) -> list[Violation]:
    from burntally_service.budget.faults import all_faults

    return all_faults(request, error.violations)


def _computed(operation: Operation, request: Struct | None, *, in_haste: bool) -> Struct:
    """Run the operation; what is beyond arithmetic, as the speed of a stage that weighs nothing, has no answer."""
    try:
        return operation.call(request, in_haste=in_haste)
    except ArithmeticError as error:
        raise _without_end(request, error) from error
    except ValueError as error:
        if str(error) != _OUT_OF_DOMAIN:
            raise
        raise _without_end(request, error) from error


def _without_end(request: object, error: Exception) -> UncomputableError:
    message = "somewhere on the way a quantity vanishes or grows beyond all bounds, so there is no finite answer"
    wanted = "masses and thrusts above zero by more than a rounding, so that each burn ends at some speed"
    unnamed = UncomputableError([Violation(pointer="", message=message, expected=wanted)])
    named = _named(request, unnamed)
    if named is unnamed:
        # It is logged all the same: of a sane request it would be a fault of ours.
        _LOG.warning("arithmetic failed", exc_info=error)
    return named


def _named(request: object, error: UncomputableError) -> UncomputableError:
    """Name the field of the request that most likely left no finite answer, if there is one."""
    from burntally_service.budget.faults import weightless

    found = weightless(request)
    return error if found is None else UncomputableError([found])
