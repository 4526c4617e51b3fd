"""Problems: every answer that is not a success, by RFC 9457, mapped from exceptions in this one place."""

import logging
from collections.abc import Sequence
from dataclasses import dataclass
from types import MappingProxyType
from typing import Any, Final

import msgspec
from litestar import Request, Response
from litestar.exceptions import HTTPException

from burntally.model.errors import (
    ContractError,
    InconsistentError,
    NotFoundError,
    UncomputableError,
    Violation,
)
from burntally.model.operations import Problem

__all__ = ["PROBLEMS", "PROBLEM_JSON", "ProblemError", "ProblemType", "Refusal", "problem_response", "refusal_of"]

PROBLEM_JSON: Final = "application/problem+json"
_LOG: Final = logging.getLogger("burntally.api")


@dataclass(frozen=True, slots=True, kw_only=True)
class ProblemType:
    """One kind of problem: what its `type` leads to."""

    code: str
    status: int
    title: str
    description: str

    @property
    def uri(self) -> str:
        """The problem's `type`, a reference that resolves at the service itself."""
        return f"/problems/{self.code}"


_TYPES: Final = (
    ProblemType(
        code=ContractError.code,
        status=400,
        title="The request breaks the contract",
        description=(
            "A field is missing, unknown, of another type, in another dimension or out of bounds, or the body cannot "
            "be read at all. `errors` names every field at fault, with what was read there and what was expected; the "
            "published OpenAPI document holds the schema. Change these fields and send the request again."
        ),
    ),
    ProblemType(
        code="unauthorized",
        status=401,
        title="A token is asked for",
        description=(
            "Send `Authorization: Bearer` with a token that the operator of the service gave out (RFC 6750). Health, "
            "the contract and its documentation want none."
        ),
    ),
    ProblemType(
        code=NotFoundError.code,
        status=404,
        title="Nothing is there",
        description="No path, body or preset of this name. Paths have one form, without a slash at the end.",
    ),
    ProblemType(
        code="method-not-allowed",
        status=405,
        title="The path does not take this method",
        description="The `Allow` header lists the methods that it takes.",
    ),
    ProblemType(
        code="not-acceptable",
        status=406,
        title="No answer in an accepted media type",
        description="Answers are written in `application/json` or `application/msgpack`; `Accept` must allow one.",
    ),
    ProblemType(
        code="request-timeout",
        status=408,
        title="The request took too long to arrive",
        description="The connection is closed. Send head and body at once.",
    ),
    ProblemType(
        code="precondition-failed",
        status=412,
        title="The answer is the one that you have",
        description=(
            "`If-None-Match` named the entity tag of this very answer: the request was computed again and nothing "
            "changed. A GET is answered with 304 in its place."
        ),
    ),
    ProblemType(
        code="payload-too-large",
        status=413,
        title="The body is too large",
        description="The setting `max_body_bytes` of the service bounds the body, sent in one piece or in chunks.",
    ),
    ProblemType(
        code="unsupported-media-type",
        status=415,
        title="The body is in a media type that is not read",
        description=(
            "Bodies are read in `application/json` (UTF-8) and `application/msgpack`, without a content encoding."
        ),
    ),
    ProblemType(
        code=InconsistentError.code,
        status=422,
        title="The fields do not fit together",
        description=(
            "Every field fits its schema, and together they break a rule that a schema cannot state: a name that "
            "refers to nothing, two names that are the same, two fields of which exactly one must be given. `errors` "
            "names each of them."
        ),
    ),
    ProblemType(
        code=UncomputableError.code,
        status=422,
        title="The request cannot be computed",
        description=(
            "The request keeps to the contract, and no finite answer exists for it. `errors` says where it failed. "
            "A design that does not close is no such case: it has a budget, with findings. A request for more "
            "work than one may ask is one."
        ),
    ),
    ProblemType(
        code="rate-limited",
        status=429,
        title="Too many requests",
        description=(
            "You have made as many requests as the operator of the service lets one caller make in a minute. Try again "
            "after the time in `Retry-After`; `RateLimit` tells with each answer how many are left."
        ),
    ),
    ProblemType(
        code="header-too-large",
        status=431,
        title="The head of the request is too large",
        description="Target and header fields together take at most 32 KiB. The connection is closed.",
    ),
    ProblemType(
        code="internal-error",
        status=500,
        title="The service failed",
        description="The failure is in the service and was logged under the request's id. Please report it.",
    ),
    ProblemType(
        code="overloaded",
        status=503,
        title="The service has enough to do",
        description=(
            "As many requests are in flight, or wait to be computed, or as many connections are open, as the settings "
            "of the service let be. Try again after the time in `Retry-After`."
        ),
    ),
    ProblemType(
        code="took-too-long",
        status=503,
        title="The answer takes too long to compute",
        description=(
            "The computation was stopped at the bound that the setting `compute_timeout_s` sets. On a service that has "
            "less to do it may fit in; a design of fewer legs, splits or branches surely computes faster."
        ),
    ),
    ProblemType(
        code="worker-lost",
        status=503,
        title="The process that computed the answer ended",
        description="Another takes its place. Try again after the time in `Retry-After`.",
    ),
    ProblemType(
        code="not-ready",
        status=503,
        title="The service is not ready",
        description="It is starting or stopping. Try again after the time in `Retry-After`.",
    ),
)

PROBLEMS: Final = MappingProxyType({kind.code: kind for kind in _TYPES})
"""Every type of problem by its code."""

_CODE_OF_STATUS: Final = {
    400: ContractError.code,
    404: NotFoundError.code,
    405: "method-not-allowed",
    408: "request-timeout",
    413: "payload-too-large",
}
_DETAILS: Final = {
    NotFoundError.code: "nothing is at this path; /openapi.json lists every path that there is",
    "method-not-allowed": "this path takes other methods; Allow lists them",
}
# The rest of a body that was refused half read would be taken for the next request.
_CLOSES_CONNECTION: Final = frozenset({408, 413})


class ProblemError(Exception):
    """A refusal that concerns HTTP alone, raised by a handler."""

    def __init__(
        self, code: str, detail: str, violations: Sequence[Violation] = (), headers: dict[str, str] | None = None
    ) -> None:
        super().__init__(detail)
        self.code = code
        self.detail = detail
        self.violations = tuple(violations)
        self.headers = headers or {}


@dataclass(frozen=True, slots=True, kw_only=True)
class Refusal:
    """A problem, ready to be sent."""

    code: str
    status: int
    body: bytes
    headers: dict[str, str]


def refusal_of(error: Exception, request_id: str) -> Refusal:
    """Map an exception to its problem; the only way that an error leaves the service."""
    code, detail, violations, headers = _read(error)
    kind = PROBLEMS[code]
    if code == "internal-error":
        _LOG.error("request failed", extra={"fields": {"request_id": request_id}}, exc_info=error)
    if kind.status in _CLOSES_CONNECTION:
        headers = {**headers, "Connection": "close"}
    problem = Problem(
        type=kind.uri,
        title=kind.title,
        status=kind.status,
        detail=detail,
        code=code,
        errors=list(violations),
        request_id=request_id,
    )
    body = msgspec.json.encode(problem)
    return Refusal(code=code, status=kind.status, body=body, headers={**headers, "Cache-Control": "no-store"})


def problem_response(request: Request[Any, Any, Any], error: Exception) -> Response[bytes]:
    """Answer an exception that came out of a route, in the shape that the framework's exception handlers have."""
    refusal = refusal_of(error, request.scope["state"]["request_id"])
    request.scope["state"]["problem"] = refusal.code
    return Response(content=refusal.body, status_code=refusal.status, media_type=PROBLEM_JSON, headers=refusal.headers)


def _read(error: Exception) -> tuple[str, str | None, Sequence[Violation], dict[str, str]]:
    """Read code, detail, violations and headers out of an exception."""
    if isinstance(error, ProblemError):
        return error.code, error.detail, error.violations, error.headers
    if isinstance(error, ContractError | UncomputableError | NotFoundError):
        return error.code, _count(error.violations) or _DETAILS.get(error.code), error.violations, {}
    if isinstance(error, RecursionError):
        return ContractError.code, "the body is nested too deeply", (), {}
    if isinstance(error, HTTPException) and error.status_code in _CODE_OF_STATUS:
        # The framework's own words may quote what was sent, so they stay inside.
        code = _CODE_OF_STATUS[error.status_code]
        return code, _DETAILS.get(code), (), _kept_headers(error)
    return "internal-error", None, (), {}


def _count(violations: Sequence[Violation]) -> str | None:
    if not violations:
        return None
    if len(violations) > 1:
        return f"{len(violations)} violations; errors names each"
    return f"{violations[0].pointer} {violations[0].message}".lstrip()


def _kept_headers(error: HTTPException) -> dict[str, str]:
    allowed = (error.headers or {}).get("allow")
    return {"Allow": ", ".join(sorted(allowed.split(", ")))} if allowed else {}
