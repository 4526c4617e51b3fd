"""Callers: where a request came from, past the proxies that the operator trusts and no others."""

from collections.abc import Mapping
from functools import lru_cache
from ipaddress import IPv4Address, IPv4Network, IPv6Address, IPv6Network, ip_address, ip_network
from typing import Any, Final, Self

__all__ = ["Networks", "caller_of", "is_loopback", "neighbourhood", "scheme_of"]

_CACHED_ADDRESSES: Final = 1024
# Whoever has one address of IPv6 has the 2**64 of its network (RFC 4291, section 2.5.1).
_NEIGHBOURS_PREFIX: Final = 64

_Address = IPv4Address | IPv6Address


class Networks(tuple[IPv4Network | IPv6Network, ...]):
    """Networks of the proxies whose word counts; none: nobody's."""

    __slots__ = ()

    @classmethod
    def read(cls, text: str) -> Self:
        """Read addresses and networks, with commas or line ends between them.

        Raises
        ------
        ValueError
            One of them is neither an address nor a network; the message quotes it.
        """
        return cls(ip_network(part.strip()) for part in text.replace("\n", ",").split(",") if part.strip())

    def hold(self, address: _Address) -> bool:
        """Tell whether the address is in one of them."""
        return any(address in network for network in self)


def caller_of(scope: Mapping[str, Any], trusted: Networks) -> str | None:
    """Find the address that a request came from.

    Parameters
    ----------
    scope
        The request. `X-Forwarded-For` is read only where the peer is trusted, from its end, as far as trusted hops go:
        each proxy adds whom it saw, and what stands before that is the caller's own claim.
    trusted
        Networks of trusted proxies.

    Returns
    -------
    str or None
        The address; None where the server knows no peer, as on a Unix socket.
    """
    peer = _peer(scope)
    address = _address(peer) if peer and trusted else None
    if address is None or not trusted.hold(address):
        return peer
    for hop in reversed(_values(scope, b"x-forwarded-for")):
        seen = _address(hop)
        if seen is None:
            break
        address = seen
        if not trusted.hold(address):
            break
    return str(address)


def scheme_of(scope: Mapping[str, Any], trusted: Networks) -> str:
    """Tell how the caller spoke to the outermost proxy: `http` or `https`."""
    spoken: str = scope.get("scheme", "http")
    address = _address(_peer(scope) or "") if trusted else None
    if address is None or not trusted.hold(address):
        return spoken
    claimed = _values(scope, b"x-forwarded-proto")[-1:]
    return claimed[0] if claimed in (["http"], ["https"]) else spoken


@lru_cache(_CACHED_ADDRESSES)
def neighbourhood(caller: str | None) -> str:
    """Name what one caller can call from: an IPv4 address, or the whole network of an IPv6 one."""
    address = _address(caller or "")
    if isinstance(address, IPv6Address):
        return str(IPv6Network((address, _NEIGHBOURS_PREFIX), strict=False))
    return str(address or caller)


def is_loopback(host: str) -> bool:
    """Tell whether a host to listen on is this machine alone."""
    address = _address(host)
    return host == "localhost" if address is None else address.is_loopback


def _peer(scope: Mapping[str, Any]) -> str | None:
    peer: tuple[str, int] | None = scope.get("client")
    return peer[0] if peer else None


def _values(scope: Mapping[str, Any], name: bytes) -> list[str]:
    """Members of a list that may stand in several header lines (RFC 9110, section 5.3)."""
    lines = [value.decode("latin-1") for header, value in scope["headers"] if header == name]
    return [part.strip() for line in lines for part in line.split(",")]


@lru_cache(_CACHED_ADDRESSES)
def _address(text: str) -> _Address | None:
    """Read an address, with or without a port; an IPv4 address that is written as IPv6 is the IPv4 one."""
    bare = text.partition("]")[0].removeprefix("[") if text.startswith("[") else text
    if bare.count(":") == 1:
        bare = bare.partition(":")[0]
    try:
        address = ip_address(bare)
    except ValueError:
        return None
    return getattr(address, "ipv4_mapped", None) or address
