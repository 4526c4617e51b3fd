"""Callers: whose word counts on where a request came from."""

from typing import Any

import pytest

from burntally_service.api.callers import Networks, caller_of, is_loopback, neighbourhood, scheme_of

PROXIES = Networks.read("10.0.0.0/8\n2001:db8:aaaa::/48, ::1")


def scope(peer: str | None, *headers: tuple[str, str]) -> dict[str, Any]:
    fields = [(name.encode(), value.encode("latin-1")) for name, value in headers]
    return {"client": (peer, 1) if peer else None, "headers": fields, "scheme": "http"}


FORWARDED = [
    # the proxy names whom it saw
    ("10.0.0.1", ["203.0.113.9"], "203.0.113.9"),
    ("::1", ["2001:db8:1::5"], "2001:db8:1::5"),
    ("::ffff:10.0.0.1", ["203.0.113.9"], "203.0.113.9"),
    # with a port, as some write it
    ("10.0.0.1", ["203.0.113.9:55123"], "203.0.113.9"),
    ("10.0.0.1", ["[2001:db8:1::5]:443"], "2001:db8:1::5"),
    # what a caller claims stands before that and is not believed
    ("10.0.0.1", ["198.51.100.1, 203.0.113.9"], "203.0.113.9"),
    ("10.0.0.1", ["198.51.100.1", "203.0.113.9"], "203.0.113.9"),
    # through several trusted hops
    ("10.0.0.1", ["198.51.100.1, 203.0.113.9, 2001:db8:aaaa::2, 10.9.9.9"], "203.0.113.9"),
    ("10.0.0.1", ["10.3.3.3, 10.2.2.2"], "10.3.3.3"),
    # what cannot be read ends the chain
    ("10.0.0.1", ["203.0.113.9, unknown"], "10.0.0.1"),
    ("10.0.0.1", ["203.0.113.9, <script>, 10.2.2.2"], "10.2.2.2"),
    ("10.0.0.1", [""], "10.0.0.1"),
    ("10.0.0.1", [], "10.0.0.1"),
    # a peer that is not trusted is the caller, whatever it says
    ("192.0.2.7", ["203.0.113.9"], "192.0.2.7"),
    ("no-address", ["203.0.113.9"], "no-address"),
    (None, ["203.0.113.9"], None),
]


@pytest.mark.parametrize("peer,forwarded,caller", FORWARDED)
def test_only_a_trusted_proxy_is_believed(peer: str | None, forwarded: list[str], caller: str | None) -> None:
    assert caller_of(scope(peer, *(("x-forwarded-for", value) for value in forwarded)), PROXIES) == caller


def test_without_trusted_proxies_nobody_is_believed() -> None:
    assert caller_of(scope("127.0.0.1", ("x-forwarded-for", "203.0.113.9")), Networks()) == "127.0.0.1"


@pytest.mark.parametrize(
    "peer,claimed,scheme",
    [
        ("10.0.0.1", "https", "https"),
        ("10.0.0.1", "http, https", "https"),
        ("10.0.0.1", "gopher", "http"),
        ("192.0.2.7", "https", "http"),
        (None, "https", "http"),
    ],
)
def test_the_scheme_is_believed_alike(peer: str | None, claimed: str, scheme: str) -> None:
    assert scheme_of(scope(peer, ("x-forwarded-proto", claimed)), PROXIES) == scheme


@pytest.mark.parametrize(
    "caller,name",
    [
        ("192.0.2.7", "192.0.2.7"),
        ("2001:db8:1:2:3:4:5:6", "2001:db8:1:2::/64"),
        ("::1", "::/64"),
        ("::ffff:192.0.2.7", "192.0.2.7"),
        ("a socket", "a socket"),
    ],
)
def test_a_network_of_one_caller_is_one_caller(caller: str, name: str) -> None:
    assert neighbourhood(caller) == name


@pytest.mark.parametrize(
    "host,alone",
    [
        ("127.0.0.1", True),
        ("127.8.8.8", True),
        ("::1", True),
        ("localhost", True),
        ("0.0.0.0", False),  # noqa: S104 - told apart, not listened to
        ("::", False),
        ("192.0.2.7", False),
        ("tug.example", False),
    ],
)
def test_this_machine_alone_is_told_apart(host: str, alone: bool) -> None:
    assert is_loopback(host) is alone
