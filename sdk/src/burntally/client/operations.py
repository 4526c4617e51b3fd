"""The operations that a client knows: id, method, path, and the types that go in and come out."""

from dataclasses import dataclass
from typing import Final, Generic, Literal, TypeVar

from msgspec import Struct

from burntally.model.budget import Budget
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

__all__ = [
    "COMPUTE_PERFORMANCE",
    "CREATE_BUDGET",
    "GET_BODY",
    "GET_RULES",
    "LIST_BODIES",
    "LIST_RULES",
    "OPERATIONS",
    "PLAN_TRANSFER",
    "Operation",
]

A_co = TypeVar("A_co", covariant=True)


@dataclass(frozen=True, slots=True, kw_only=True)
class Operation(Generic[A_co]):
    """One operation of the contract.

    Parameters
    ----------
    id : str
        Id in the OpenAPI document.
    method, path : str
        Where it is over HTTP; ``{name}`` stands for the one name that some paths hold.
    request : type or None
        Struct of the body; None where there is no body.
    answer : type
        Struct of the answer.
    """

    id: str
    method: Literal["GET", "POST"]
    path: str
    request: type[Struct] | None
    answer: type[A_co]


CREATE_BUDGET: Final = Operation(id="create_budget", method="POST", path="/v1/budgets", request=Design, answer=Budget)
COMPUTE_PERFORMANCE: Final = Operation(
    id="compute_performance", method="POST", path="/v1/performance", request=PerformanceRequest, answer=Performance
)
PLAN_TRANSFER: Final = Operation(
    id="plan_transfer", method="POST", path="/v1/transfers", request=TransferRequest, answer=TransferAnswer
)
LIST_BODIES: Final = Operation(id="list_bodies", method="GET", path="/v1/bodies", request=None, answer=Bodies)
GET_BODY: Final = Operation(id="get_body", method="GET", path="/v1/bodies/{name}", request=None, answer=BodyRecord)
LIST_RULES: Final = Operation(id="list_rules", method="GET", path="/v1/rules", request=None, answer=Presets)
GET_RULES: Final = Operation(id="get_rules", method="GET", path="/v1/rules/{name}", request=None, answer=PresetRecord)

OPERATIONS: Final[dict[str, Operation[object]]] = {
    operation.id: operation
    for operation in (
        CREATE_BUDGET,
        COMPUTE_PERFORMANCE,
        PLAN_TRANSFER,
        LIST_BODIES,
        GET_BODY,
        LIST_RULES,
        GET_RULES,
    )
}
