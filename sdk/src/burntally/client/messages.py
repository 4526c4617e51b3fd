"""What goes to a service and what comes back, as values: no client, no connection."""

from collections.abc import Mapping
from dataclasses import dataclass, field

__all__ = ["Answer", "Reply", "Request"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Request:
    """One request, as it goes to a service.

    Parameters
    ----------
    operation_id : str
        Id of the operation, as the OpenAPI document has it.
    method, path : str
        Where it goes over HTTP.
    body : bytes
        Encoded body; empty where the operation takes none.
    name : str or None
        Name in the path, where the operation has one.
    headers : Mapping
        Header fields, names in lower case.
    """

    operation_id: str
    method: str
    path: str
    body: bytes = b""
    name: str | None = None
    headers: Mapping[str, str] = field(default_factory=dict[str, str])


@dataclass(frozen=True, slots=True, kw_only=True)
class Reply:
    """What came back, as it came: status, header fields (names in lower case) and body."""

    status: int
    body: bytes
    headers: Mapping[str, str] = field(default_factory=dict[str, str])


@dataclass(frozen=True, slots=True, kw_only=True)
class Answer:
    """A successful reply with its raw bytes.

    Parameters
    ----------
    request : Request
        What was asked.
    body : bytes
        The answer exactly as the service gave it.
    status : int
        HTTP status; 200 in-process.
    request_id : str or None
        Id of the request in the service's log; absent in-process.
    headers : Mapping
        Header fields, names in lower case.
    """

    request: Request
    body: bytes
    status: int
    request_id: str | None = None
    headers: Mapping[str, str] = field(default_factory=dict[str, str])
