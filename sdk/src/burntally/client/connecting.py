"""The way to a client: an address, or none for the service that is installed beside the SDK."""

from typing import TYPE_CHECKING, Final

from burntally.client.clients import AsyncClient, Client
from burntally.client.http import AsyncHttpSender, HttpSender
from burntally.client.inprocess import AsyncInProcessSender, InProcessSender, installed
from burntally.client.senders import AsyncSender, Sender
from burntally.client.settings import ClientSettings
from burntally.version import __version__

if TYPE_CHECKING:
    import httpx2

__all__ = ["connect", "connect_async"]

_TIMEOUT_S: Final = 30.0
_TRIES: Final = 5
_ENTRY_POINT: Final = "inprocess"


def connect(
    url: str | None = None,
    *,
    timeout_s: float = _TIMEOUT_S,
    tries: int = _TRIES,
    transport: "httpx2.BaseTransport | None" = None,
    token: str | None = None,
) -> Client:
    """Make a client of the service at an address or, without one, of the service installed beside the SDK.

    Parameters
    ----------
    url : str or None
        Address, such as ``http://127.0.0.1:8463``; None: in-process, with no server and no HTTP.
    timeout_s : float
        Total deadline of a call, over all its tries; a computation in-process is not cut off.
    tries : int
        The most tries of a call.
    transport : httpx2.BaseTransport or None
        In place of the network, for tests and proxies.
    token : str or None
        Sent as a bearer token to this address alone, for a service that asks for one.

    Returns
    -------
    Client
        Close it, or use it in a ``with`` statement.

    Raises
    ------
    ValueError
        The address is not one of http or https, or the token holds what a header field cannot.
    ServiceMissing
        No address was given and no service is installed.

    Examples
    --------
    >>> from burntally import connect
    >>> with connect() as client:
    ...     earth = client.body("earth")
    """
    sender: Sender = (
        InProcessSender(installed(_ENTRY_POINT)) if url is None else HttpSender(_checked(url), transport, token=token)
    )
    return Client(sender, _settings(timeout_s=timeout_s, tries=tries))


def connect_async(
    url: str | None = None,
    *,
    timeout_s: float = _TIMEOUT_S,
    tries: int = _TRIES,
    transport: "httpx2.AsyncBaseTransport | None" = None,
    token: str | None = None,
) -> AsyncClient:
    """Make a client for an event loop; the parameters are those of :func:`connect`.

    Parameters
    ----------
    url : str or None
        Address; None: in-process, each request in a thread.
    timeout_s : float
        Total deadline of a call, over all its tries.
    tries : int
        The most tries of a call.
    transport : httpx2.AsyncBaseTransport or None
        In place of the network, for tests and proxies.
    token : str or None
        Sent as a bearer token.

    Returns
    -------
    AsyncClient
        Close it, or use it in an ``async with`` statement.

    Raises
    ------
    ValueError
        The address is not one of http or https, or the token holds what a header field cannot.
    ServiceMissing
        No address was given and no service is installed.
    """
    sender: AsyncSender = (
        AsyncInProcessSender(installed(_ENTRY_POINT))
        if url is None
        else AsyncHttpSender(_checked(url), transport, token=token)
    )
    return AsyncClient(sender, _settings(timeout_s=timeout_s, tries=tries))


def _checked(url: str) -> str:
    if not url.startswith(("http://", "https://")):
        raise ValueError(f"an address starts with http:// or https://, not {url!r}")
    return url


def _settings(*, timeout_s: float, tries: int) -> ClientSettings:
    return ClientSettings(timeout_s=timeout_s, tries=tries, user_agent=f"burntally/{__version__}")
