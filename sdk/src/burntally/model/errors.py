"""The errors of a request: what breaks the contract, and what fits it and cannot be computed."""

from collections.abc import Sequence
from typing import Annotated, ClassVar

from msgspec import Struct

from burntally.model.scalars import doc

__all__ = [
    "BurntallyError",
    "ContractError",
    "InconsistentError",
    "NotFoundError",
    "UncomputableError",
    "Violation",
]


class Violation(Struct, frozen=True, kw_only=True, omit_defaults=True):
    """One thing that is wrong with a request."""

    pointer: Annotated[str, doc("JSON Pointer (RFC 6901) to the field.")]
    message: Annotated[str, doc("What is wrong, in one sentence.")]
    read: Annotated[str | None, doc("What was read there.")] = None
    expected: Annotated[str | None, doc("What was expected there.")] = None


class BurntallyError(Exception):
    """Root of every error that this package raises on purpose."""

    code: ClassVar[str] = "error"


class _ViolationsError(BurntallyError, ValueError):
    def __init__(self, violations: Sequence[Violation]) -> None:
        super().__init__("; ".join(f"{v.pointer or '/'}: {v.message}" for v in violations))
        self.violations: tuple[Violation, ...] = tuple(violations)


class ContractError(_ViolationsError):
    """The request breaks the contract; `violations` names every field at fault."""

    code: ClassVar[str] = "invalid-request"


class UncomputableError(_ViolationsError):
    """The request fits the contract and cannot be computed."""

    code: ClassVar[str] = "uncomputable"


class InconsistentError(ContractError):
    """Every field fits its schema, and together they break a rule that no schema can state.

    An error of its own, so that whoever knows the published schema alone can count on it: what fits the schema is
    never answered with `invalid-request`.

    Parameters
    ----------
    violations : sequence of Violation
        What is wrong.
    request : object, optional
        The request as it was read, for whoever knows more about it that may be wrong.
    """

    code: ClassVar[str] = "inconsistent-request"

    def __init__(self, violations: Sequence[Violation], *, request: object = None) -> None:
        super().__init__(violations)
        self.request = request


class NotFoundError(_ViolationsError):
    """Nothing bears the name that was asked for."""

    code: ClassVar[str] = "not-found"
