"""Requests built and replies read, without any I/O: both clients and both ways in share every line of it."""

from collections.abc import Mapping
from datetime import date, datetime
from typing import Any, Final, TypeVar
from urllib.parse import quote

import msgspec

from burntally.client.errors import ContractError, DecodingError, UncomputableError, refusal_of, status_error
from burntally.client.lenient import read_leniently
from burntally.client.messages import Answer, Reply, Request
from burntally.client.operations import Operation
from burntally.model.decode import decode_builtins, encode
from burntally.model.operations import Problem

__all__ = ["Body", "answer_of", "decoded", "request_for"]

Body = msgspec.Struct | Mapping[str, Any] | bytes
"""What a request may be given as: a struct, builtins as JSON would give them, or bytes as they stand."""

A = TypeVar("A")

_REQUEST_ID: Final = "x-request-id"
_FIRST_STATUS_BEYOND_SUCCESS: Final = 300


def request_for(
    operation: Operation[A], body: Body | None = None, *, name: str | None = None, headers: Mapping[str, str]
) -> Request:
    """Build the request of one operation.

    Builtins are held against the contract here, so that a wrong dimension fails before anything is sent. Bytes go as
    they are.

    Parameters
    ----------
    operation : Operation
        What is asked for.
    body : Struct, Mapping, bytes or None
        The request's body.
    name : str or None
        Name in the path.
    headers : Mapping
        Header fields to send, names in lower case.

    Returns
    -------
    Request
        Ready to send.

    Raises
    ------
    InvalidRequest
        The body breaks the contract.
    """
    path = operation.path if name is None else operation.path.replace("{name}", quote(name, safe=""))
    try:
        content = _content(operation, body, headers["content-type"])
    except ContractError as fault:
        raise refusal_of(fault) from fault
    except UncomputableError as fault:
        # A number that is not finite is so called in an answer; in a request it breaks the contract.
        raise refusal_of(fault, code=ContractError.code) from fault
    return Request(
        operation_id=operation.id, method=operation.method, path=path, body=content, name=name, headers=headers
    )


def _content(operation: Operation[A], body: Body | None, media_type: str) -> bytes:
    if body is None or isinstance(body, bytes):
        return body or b""
    if isinstance(body, msgspec.Struct):
        return encode(body, media_type=media_type)
    # Dates stay dates: the border knows which of them are epochs.
    plain = msgspec.to_builtins(body, builtin_types=(date, datetime), enc_hook=_with_unit)
    value = plain if operation.request is None else decode_builtins(operation.request, plain)
    return encode(value, media_type=media_type)


def _with_unit(quantity: Any) -> str:  # noqa: ANN401 -- whatever the caller put into the mapping
    """Write a quantity as a string with its unit.

    Told by its two attributes, so that the SDK need not import the library that made it.
    """
    if not hasattr(quantity, "unit"):
        raise TypeError(f"a request cannot hold {type(quantity).__name__}")
    return f"{float(quantity.value)!r} {quantity.unit}"


def answer_of(request: Request, reply: Reply) -> Answer:
    """Read a reply: an answer, or the error that its status stands for.

    Parameters
    ----------
    request : Request
        What was sent.
    reply : Reply
        What came back.

    Returns
    -------
    Answer
        Of a status below 300.

    Raises
    ------
    StatusError
        Of the class that the problem's code or status stands for.
    """
    request_id = reply.headers.get(_REQUEST_ID)
    if reply.status < _FIRST_STATUS_BEYOND_SUCCESS:
        return Answer(
            request=request, body=reply.body, status=reply.status, request_id=request_id, headers=reply.headers
        )
    problem = _problem_of(reply)
    raise status_error(code=problem.code, status=reply.status)(
        _in_words(problem),
        status=reply.status,
        problem_code=problem.code,
        violations=problem.errors,
        request=request,
        response=reply,
        request_id=problem.request_id or request_id,
    )


def _problem_of(reply: Reply) -> Problem:
    """Read the problem; a proxy in between may answer with a page of its own, which then has no code."""
    try:
        return read_leniently(reply.body, Problem)
    except (msgspec.DecodeError, UnicodeDecodeError):
        title = f"HTTP status {reply.status}"
        return Problem(type="about:blank", title=title, status=reply.status, code="", errors=[])


def _in_words(problem: Problem) -> str:
    rows = [f"{row.pointer or '/'}: {row.message}" for row in problem.errors]
    return "; ".join(rows) or problem.detail or problem.title


def decoded(operation: Operation[A], answer: Answer) -> A:
    """Decode the body of an answer into its struct; unknown fields are passed over.

    Parameters
    ----------
    operation : Operation
        What was asked for.
    answer : Answer
        What came back.

    Returns
    -------
    Struct
        The operation's answer.

    Raises
    ------
    DecodingError
        No JSON, or of another shape.
    """
    try:
        return read_leniently(answer.body, operation.answer)
    except (msgspec.DecodeError, UnicodeDecodeError) as fault:
        reply = Reply(status=answer.status, body=answer.body, headers=answer.headers)
        raise DecodingError(
            f"the answer to {operation.id} cannot be read: {fault}",
            request=answer.request,
            response=reply,
            request_id=answer.request_id,
        ) from fault
