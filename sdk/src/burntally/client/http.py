"""The way in over HTTP. The HTTP library is imported when the first connection is wanted, not before."""

import time
from typing import TYPE_CHECKING, Final

from burntally.client.errors import ClientError, ConnectionFailed, TimedOut
from burntally.client.messages import Reply, Request
from burntally.client.retries import Outcome

if TYPE_CHECKING:
    import httpx2

__all__ = ["AsyncHttpSender", "HttpSender"]

_CONNECT_MAX_S: Final = 5.0


class HttpSender:
    """Sends requests over one kept connection.

    Parameters
    ----------
    url : str
        Address of the service.
    transport : httpx2.BaseTransport or None
        In place of the network, for tests and proxies.
    token : str or None
        Sent as a bearer token. It is added here, past everything that an error or a log may show.
    """

    def __init__(self, url: str, transport: "httpx2.BaseTransport | None", *, token: str | None = None) -> None:
        import httpx2

        self._http = httpx2.Client(base_url=url, transport=transport, headers=_authorization(token))

    def send_once(self, request: Request, timeout_s: float) -> Outcome:
        """Send once; a fault of the connection is an outcome, so that the retry rule can weigh it."""
        import httpx2

        deadline_s = time.monotonic() + timeout_s
        try:
            with self._http.stream(
                request.method,
                request.path,
                content=request.body or None,
                headers=dict(request.headers),
                timeout=_timeout(timeout_s),
            ) as response:
                # The library bounds each read; a server that trickles is bounded here.
                chunks: list[bytes] = []
                for chunk in response.iter_bytes():
                    if time.monotonic() > deadline_s:
                        return TimedOut(f"no whole answer within {timeout_s:.1f} s", request=request)
                    chunks.append(chunk)
                return _reply(response, b"".join(chunks))
        except httpx2.HTTPError as fault:
            return _fault_of(fault, request)

    def close(self) -> None:
        """Close the connection."""
        self._http.close()


class AsyncHttpSender:
    """The same for an event loop.

    Parameters
    ----------
    url : str
        Address of the service.
    transport : httpx2.AsyncBaseTransport or None
        In place of the network, for tests and proxies.
    token : str or None
        Sent as a bearer token.
    """

    def __init__(self, url: str, transport: "httpx2.AsyncBaseTransport | None", *, token: str | None = None) -> None:
        import httpx2

        self._http = httpx2.AsyncClient(base_url=url, transport=transport, headers=_authorization(token))

    async def send_once(self, request: Request, timeout_s: float) -> Outcome:
        """Send once; a fault of the connection is an outcome, so that the retry rule can weigh it."""
        import asyncio

        import httpx2

        try:
            async with asyncio.timeout(timeout_s):
                response = await self._http.request(
                    request.method,
                    request.path,
                    content=request.body or None,
                    headers=dict(request.headers),
                    timeout=_timeout(timeout_s),
                )
        except TimeoutError:
            return TimedOut(f"no whole answer within {timeout_s:.1f} s", request=request)
        except httpx2.HTTPError as fault:
            return _fault_of(fault, request)
        return _reply(response, response.content)

    async def close(self) -> None:
        """Close the connection."""
        await self._http.aclose()


def _authorization(token: str | None) -> dict[str, str]:
    if token is None:
        return {}
    # Sent as it is, it would be refused below, in words that quote it.
    if not (token.isascii() and token.isprintable() and token) or " " in token:
        raise ValueError("a token is of visible ASCII characters, without spaces")
    return {"authorization": f"Bearer {token}"}


def _timeout(timeout_s: float) -> "httpx2.Timeout":
    import httpx2

    # A host that drops packets would eat the whole deadline; a second try may reach another address.
    return httpx2.Timeout(timeout_s, connect=min(timeout_s, _CONNECT_MAX_S))


def _reply(response: "httpx2.Response", body: bytes) -> Reply:
    return Reply(
        status=response.status_code,
        body=body,
        headers={name.lower(): value for name, value in response.headers.items()},
    )


def _fault_of(fault: "httpx2.HTTPError", request: Request) -> ClientError:
    """Sort a fault of the connection: past its deadline, or failed and worth another try."""
    import httpx2

    timed_out = isinstance(fault, httpx2.TimeoutException) and not isinstance(fault, httpx2.ConnectTimeout)
    kind: type[ClientError] = TimedOut if timed_out else ConnectionFailed
    # Without user and password, which an address may carry and a log should not.
    url = fault.request.url
    error = kind(f"{url.scheme}://{url.netloc.decode()}: {type(fault).__name__}: {fault}", request=request)
    error.__cause__ = fault
    return error
