# ruff: noqa: N818 -- `except InvalidRequest` says what happened; the tree below says that it is an error
"""Everything that a client raises, one tree over HTTP and in-process alike.

::

    BurntallyError
    └── ClientError
        ├── ServiceMissing        no address was given and no service is installed
        ├── ConnectionFailed      no connection, or one that was dropped
        ├── TimedOut              the total deadline passed
        ├── DecodingError         an answer that could not be read
        └── StatusError           the service answered with a problem
            ├── InvalidRequest      400: breaks the contract; `violations` names every field at fault
            │   └── InconsistentRequest  422: each field fits, and together they break a rule
            ├── Unauthorized        401: no token that lets in
            ├── NotFound            404
            ├── MethodNotAllowed    405
            ├── NotAcceptable       406
            ├── BodyTooSlow         408
            ├── PreconditionFailed  412
            ├── TooLarge            413
            ├── UnsupportedMedia    415
            ├── Uncomputable        422: fits the contract and cannot be computed
            ├── RateLimited         429
            ├── HeaderTooLarge      431
            ├── Unavailable         503: starting or stopping
            │   ├── Overloaded        503: enough to do
            │   ├── TookTooLong       503: the computation was stopped
            │   └── WorkerLost        503: the process that computed ended
            └── ServerFault         any other 5xx, and a fault of an installed service

A design that does not close is a result, never an error.
"""

from collections.abc import Sequence
from typing import ClassVar, Final

from burntally.client.messages import Reply, Request
from burntally.model.errors import BurntallyError, ContractError, UncomputableError, Violation

__all__ = [
    "BodyTooSlow",
    "BurntallyError",
    "ClientError",
    "ConnectionFailed",
    "ContractError",
    "DecodingError",
    "HeaderTooLarge",
    "InconsistentRequest",
    "InvalidRequest",
    "MethodNotAllowed",
    "NotAcceptable",
    "NotFound",
    "Overloaded",
    "PreconditionFailed",
    "RateLimited",
    "ServerFault",
    "ServiceMissing",
    "StatusError",
    "TimedOut",
    "TooLarge",
    "TookTooLong",
    "Unauthorized",
    "Unavailable",
    "Uncomputable",
    "UncomputableError",
    "UnsupportedMedia",
    "Violation",
    "WorkerLost",
    "refusal_of",
    "status_error",
]


class ClientError(BurntallyError):
    """Root of what a client raises."""

    code: ClassVar[str] = "client-error"

    def __init__(self, message: str, *, request: Request | None = None) -> None:
        super().__init__(message)
        self.request = request


class ServiceMissing(ClientError):
    """No address was given, and no service is installed beside the SDK."""

    code: ClassVar[str] = "service-missing"


class ConnectionFailed(ClientError):
    """No connection to the service could be made, or it was dropped."""

    code: ClassVar[str] = "connection-failed"


class TimedOut(ClientError):
    """The total deadline passed before an answer was complete."""

    code: ClassVar[str] = "timed-out"


class DecodingError(ClientError):
    """An answer that is no JSON, or not of the shape that the contract gives it."""

    code: ClassVar[str] = "undecodable-answer"

    def __init__(self, message: str, *, request: Request, response: Reply, request_id: str | None = None) -> None:
        super().__init__(message, request=request)
        self.response = response
        self.request_id = request_id


class StatusError(ClientError):
    """The service answered with a problem.

    Parameters
    ----------
    message : str
        The problem in words.
    status : int
        HTTP status; the same in-process.
    problem_code : str
        Stable code of the problem.
    violations : sequence of Violation
        Everything that is wrong, each with its JSON Pointer.
    request, response : Request, Reply or None
        What was sent and what came back; no response where the fault was found before sending, or in-process.
    request_id : str or None
        Id of the request in the service's log.
    """

    code: ClassVar[str] = "status-error"
    status: int

    def __init__(
        self,
        message: str,
        *,
        status: int,
        problem_code: str | None = None,
        violations: Sequence[Violation] = (),
        request: Request | None = None,
        response: Reply | None = None,
        request_id: str | None = None,
    ) -> None:
        super().__init__(message, request=request)
        self.status = status
        self.problem_code: str = problem_code or self.code
        self.violations: tuple[Violation, ...] = tuple(violations)
        self.response = response
        self.request_id = request_id


class InvalidRequest(StatusError):
    """The request breaks the contract."""

    code: ClassVar[str] = "invalid-request"


class InconsistentRequest(InvalidRequest):
    """Every field fits its schema, and together they break a rule that no schema can state."""

    code: ClassVar[str] = "inconsistent-request"


class Unauthorized(StatusError):
    """The service asks for a token, and was shown none that lets in."""

    code: ClassVar[str] = "unauthorized"


class NotFound(StatusError):
    """Nothing of that name is there."""

    code: ClassVar[str] = "not-found"


class MethodNotAllowed(StatusError):
    """The path does not take this method."""

    code: ClassVar[str] = "method-not-allowed"


class NotAcceptable(StatusError):
    """The service cannot answer in the media type asked for."""

    code: ClassVar[str] = "not-acceptable"


class BodyTooSlow(StatusError):
    """The body took too long to arrive."""

    code: ClassVar[str] = "request-timeout"


class PreconditionFailed(StatusError):
    """The answer is the one that the request said to have."""

    code: ClassVar[str] = "precondition-failed"


class TooLarge(StatusError):
    """The body passes the service's bound."""

    code: ClassVar[str] = "payload-too-large"


class UnsupportedMedia(StatusError):
    """The service does not read the media type sent."""

    code: ClassVar[str] = "unsupported-media-type"


class Uncomputable(StatusError):
    """The request fits the contract and cannot be computed."""

    code: ClassVar[str] = "uncomputable"


class RateLimited(StatusError):
    """Too many requests from this client."""

    code: ClassVar[str] = "rate-limited"


class Unavailable(StatusError):
    """The service is starting, stopping, or has more work than it takes at once."""

    code: ClassVar[str] = "not-ready"


class Overloaded(Unavailable):
    """The service has as much to do as it takes at once."""

    code: ClassVar[str] = "overloaded"


class TookTooLong(Unavailable):
    """The service gave up on the computation."""

    code: ClassVar[str] = "took-too-long"


class WorkerLost(Unavailable):
    """The process that computed the answer ended."""

    code: ClassVar[str] = "worker-lost"


class HeaderTooLarge(StatusError):
    """The head of the request passes the service's bound."""

    code: ClassVar[str] = "header-too-large"


class ServerFault(StatusError):
    """A fault of the service, not of the request."""

    code: ClassVar[str] = "internal-error"


_BY_CODE: Final[dict[str, type[StatusError]]] = {
    kind.code: kind
    for kind in (
        InvalidRequest,
        InconsistentRequest,
        Unauthorized,
        NotFound,
        MethodNotAllowed,
        NotAcceptable,
        BodyTooSlow,
        PreconditionFailed,
        TooLarge,
        UnsupportedMedia,
        Uncomputable,
        RateLimited,
        Unavailable,
        Overloaded,
        TookTooLong,
        WorkerLost,
        HeaderTooLarge,
        ServerFault,
    )
}
_BY_STATUS: Final[dict[int, type[StatusError]]] = {
    400: InvalidRequest,
    401: Unauthorized,
    404: NotFound,
    405: MethodNotAllowed,
    406: NotAcceptable,
    408: BodyTooSlow,
    412: PreconditionFailed,
    413: TooLarge,
    415: UnsupportedMedia,
    422: Uncomputable,
    429: RateLimited,
    431: HeaderTooLarge,
    503: Unavailable,
}
_FIRST_SERVER_STATUS: Final = 500


_STATUS_BY_CODE: Final = {
    "invalid-request": 400,
    "not-found": 404,
    "inconsistent-request": 422,
    "uncomputable": 422,
}
_INTERNAL: Final = 500


def status_error(*, code: str | None, status: int) -> type[StatusError]:
    """Find the class of a problem: by its code, and by its status where a newer service has a newer code."""
    fallback = ServerFault if status >= _FIRST_SERVER_STATUS else StatusError
    return _BY_CODE.get(code or "") or _BY_STATUS.get(status, fallback)


def refusal_of(fault: Exception, *, code: str | None = None, request: Request | None = None) -> StatusError:
    """Find the error that a fault would be over HTTP.

    Parameters
    ----------
    fault : Exception
        Raised by the contract's border or by an installed service.
    code : str or None
        Code of the problem; absent: the fault's own.
    request : Request or None
        What was asked, where it got that far.

    Returns
    -------
    StatusError
        Of the class that the code stands for, with the fault as its cause; a fault that was not raised on purpose
        is the service's.
    """
    own = fault.code if isinstance(fault, BurntallyError) else ServerFault.code
    code = code or own
    status = _STATUS_BY_CODE.get(code, _INTERNAL)
    violations: Sequence[Violation] = getattr(fault, "violations", ())
    message = f"the installed service failed: {fault!r}" if status == _INTERNAL else str(fault)
    error = status_error(code=code, status=status)(
        message, status=status, problem_code=code, violations=violations, request=request
    )
    error.__cause__ = fault
    return error
