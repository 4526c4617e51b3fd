"""The way in without HTTP: an installed service, found by its entry point and run on the same bytes."""

from collections.abc import Callable
from typing import Any, Final

from burntally.client.errors import InvalidRequest, NotAcceptable, ServiceMissing, UnsupportedMedia, refusal_of
from burntally.client.messages import Reply, Request
from burntally.client.retries import Outcome
from burntally.model.decode import JSON, MSGPACK, encode

__all__ = ["AnswerFunction", "AsyncInProcessSender", "InProcessSender", "installed"]

AnswerFunction = Callable[[str, bytes, str, str], bytes]
"""Takes an operation's id, the body, its media type and the one wanted; gives the answer's bytes."""

_GROUP: Final = "burntally.service"
_OK: Final = 200
_MEDIA_TYPES: Final = frozenset({JSON, MSGPACK})


def installed(name: str) -> Any:  # noqa: ANN401 -- an entry point may be anything; its user knows what
    """Load what an installed service offers under a name.

    Parameters
    ----------
    name : str
        Name in the entry point group ``burntally.service``.

    Returns
    -------
    object
        What the entry point leads to.

    Raises
    ------
    ServiceMissing
        No service is installed, or it does not offer that.
    """
    from importlib.metadata import entry_points

    found = next(iter(entry_points(group=_GROUP, name=name)), None)
    if found is None:
        raise ServiceMissing(
            f"no installed service offers `{name}`: install burntally-service beside the SDK, or give the address of "
            "a running service"
        )
    return found.load()


class InProcessSender:
    """Runs the service's one answering function in the caller's thread; there is nothing to retry.

    Parameters
    ----------
    answer : callable
        The service's function.
    """

    def __init__(self, answer: AnswerFunction) -> None:
        self._answer = answer

    def send_once(self, request: Request, timeout_s: float) -> Outcome:  # noqa: ARG002 -- see below
        """Answer one request.

        A computation in the caller's own thread cannot be cut off, so the deadline has no say here.
        """
        body = request.body if request.name is None else encode({"name": request.name})
        media_type, accept = request.headers["content-type"], request.headers["accept"]
        if media_type not in _MEDIA_TYPES:
            return UnsupportedMedia(f"{media_type} is not read", status=415, request=request)
        if accept not in _MEDIA_TYPES:
            return NotAcceptable(f"{accept} is not written", status=406, request=request)
        try:
            content = self._answer(request.operation_id, body, media_type, accept)
        except RecursionError as fault:
            return refusal_of(fault, code=InvalidRequest.code, request=request)
        except Exception as fault:  # noqa: BLE001 -- over HTTP any fault is a 500, so it is one here as well
            return refusal_of(fault, request=request)
        return Reply(status=_OK, body=content, headers={"content-type": accept})

    def close(self) -> None:
        """Do nothing: there is nothing to let go."""


class AsyncInProcessSender:
    """The same in a thread of its own, so that an event loop goes on while a design is computed.

    Parameters
    ----------
    answer : callable
        The service's function.
    """

    def __init__(self, answer: AnswerFunction) -> None:
        self._sender = InProcessSender(answer)

    async def send_once(self, request: Request, timeout_s: float) -> Outcome:
        """Answer one request."""
        import asyncio

        return await asyncio.to_thread(self._sender.send_once, request, timeout_s)

    async def close(self) -> None:
        """Do nothing: there is nothing to let go."""
