"""The exchange of one request for one answer: what HTTP demands before a computation and after it."""

import asyncio
import hashlib
import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from importlib.metadata import version
from typing import Any, Final

from litestar import Request
from litestar.exceptions import InternalServerException
from litestar.exceptions.http_exceptions import RequestEntityTooLarge
from litestar.response.base import ASGIResponse

from burntally.model.decode import JSON
from burntally.model.errors import ContractError, Violation
from burntally_service.api.media import body_media_type, chosen_media_type
from burntally_service.api.problems import ProblemError
from burntally_service.operations import Operation

__all__ = ["AnyRequest", "Exchange", "entity_tag", "is_known", "open_exchange", "read_body", "reply"]

AnyRequest = Request[Any, Any, Any]

VERSION: Final = version("burntally-service")
_NOT_MODIFIED: Final = 304
_TAG_DIGITS: Final = 32
_LONGEST_READ: Final = 60
_NO_QUERY: Final = "a path without a query: what an operation is asked stands in its body or path"
_ANY_TAG: Final = "*"
_TAG: Final = re.compile(r'"[^"]*"')


@dataclass(frozen=True, slots=True, kw_only=True)
class Exchange:
    """What a request says of itself, once it was found acceptable."""

    media_type: str
    accept: str
    known_tags: str


def open_exchange(request: AnyRequest, operation: Operation) -> Exchange:
    """Check all that HTTP lets a request say before its body is read."""
    headers = _headers(request)
    if request.scope["query_string"]:
        raise _unknown_parameters(request)
    accept = chosen_media_type(headers.get(b"accept", ""))
    if accept is None:
        raise ProblemError("not-acceptable", "Accept allows none of application/json and application/msgpack")
    media_type = _body_media_type(headers) if operation.takes_body else JSON
    return Exchange(media_type=media_type, accept=accept, known_tags=headers.get(b"if-none-match", "").strip())


async def read_body(request: AnyRequest, timeout_s: float) -> bytes:
    """Read the whole body, within the bound on its size that the application sets, and within the time given."""
    try:
        async with asyncio.timeout(timeout_s):
            return await request.body()
    except TimeoutError:
        raise ProblemError("request-timeout", f"the body did not arrive within {timeout_s:g} s") from None
    except RequestEntityTooLarge:
        bound = request.app.request_max_body_size
        raise ProblemError("payload-too-large", f"the body is larger than {bound} bytes") from None
    except InternalServerException:
        # The framework's word for a caller who hung up; nobody reads the answer, and it is no failure of ours.
        raise ProblemError("invalid-request", "the body ended before it was complete") from None


def reply(
    operation: Operation, exchange: Exchange, *, asked: bytes, told: bytes, standing: Mapping[str, str]
) -> ASGIResponse:
    """Answer, or tell that the caller has this answer already (RFC 9110, section 13.1.2)."""
    tag = entity_tag((operation.id, exchange.accept), asked, told)
    headers = {**standing, "ETag": tag, "Cache-Control": _cache_control(operation), "Vary": "Accept"}
    # Before it was asked for, an answer to a POST is nowhere to be found, so no `*` stands for it.
    if is_known(tag, exchange.known_tags) and not (operation.takes_body and exchange.known_tags == _ANY_TAG):
        if operation.takes_body:
            raise ProblemError("precondition-failed", "the answer has not changed", headers=headers)
        return ASGIResponse(status_code=_NOT_MODIFIED, headers=headers)
    return ASGIResponse(body=told, media_type=exchange.accept, headers=headers)


def entity_tag(names: Iterable[str], *parts: bytes) -> str:
    """Digest of a request and its answer: strong, since both are the same bytes wherever they were computed."""
    # Common processors have instructions for it, which makes it the quickest by far.
    digest = hashlib.sha256("\n".join((VERSION, *names)).encode())
    for part in parts:
        # Lengths keep apart what differs only in where one part ends.
        digest.update(b"%d:" % len(part))
        digest.update(part)
    return f'"{digest.hexdigest()[:_TAG_DIGITS]}"'


def is_known(tag: str, known_tags: str) -> bool:
    """Tell whether `If-None-Match` holds the tag; the weak comparison of RFC 9110, section 8.8.3.2."""
    return bool(known_tags) and (known_tags.strip() == _ANY_TAG or tag in _TAG.findall(known_tags))


def _headers(request: AnyRequest) -> dict[bytes, str]:
    """Headers by lower-case name; one sent in several lines is joined, as RFC 9110 (section 5.2) reads it."""
    joined: dict[bytes, str] = {}
    for name, value in request.scope["headers"]:
        text = value.decode("latin-1")
        joined[name] = f"{joined[name]}, {text}" if name in joined else text
    return joined


def _body_media_type(headers: dict[bytes, str]) -> str:
    encoding = headers.get(b"content-encoding", "identity")
    if encoding.lower() != "identity":
        raise ProblemError("unsupported-media-type", "a body with a content encoding is not read")
    sent = headers.get(b"content-type", "")
    media_type = body_media_type(sent)
    if media_type is None:
        read = f"is {sent[:_LONGEST_READ]!r}" if sent else "is missing"
        raise ProblemError(
            "unsupported-media-type", f"Content-Type {read}; it must be application/json (UTF-8) or application/msgpack"
        )
    return media_type


def _unknown_parameters(request: AnyRequest) -> ContractError:
    return ContractError(
        [
            Violation(pointer="", message=f"there is no query parameter {name!r}", read=name, expected=_NO_QUERY)
            for name in request.query_params
        ]
        or [Violation(pointer="", message="there are no query parameters", expected=_NO_QUERY)]
    )


def _cache_control(operation: Operation) -> str:
    # Designs are their owners' business; catalogues change with the release alone, and a tag tells when.
    return "private, no-cache" if operation.takes_body else "no-cache"
