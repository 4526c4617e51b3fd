"""Row by row: the OWASP API Security Top 10 (2023), and what of ASVS 4.0.3, level 1, a service like this can show.

A row is a probe, and says which clauses it is for. There are no users, sessions, uploads or stored things yet, and TLS
is a proxy's business; clauses on these have no row.
"""

import json
import logging
import socket
from collections.abc import Callable
from typing import Any, NamedTuple, NoReturn

import msgspec
import pytest

from burntally_service import operations
from burntally_service.api.app import create_app
from burntally_service.api.edge import Edge
from burntally_service.api.examples import example_bytes
from burntally_service.api.openapi import document
from burntally_service.api.settings import Settings
from burntally_service.api.tokens import Tokens
from burntally_service.operations import OPERATIONS
from tests.contract.calls import call

TOKEN = "an-invented-token-of-ours"  # noqa: S105 - invented
JSON = [(b"content-type", b"application/json")]
BUDGET = example_bytes("create_budget")

OPEN = ["/", "/healthz", "/readyz", "/openapi.json", "/docs", "/docs/docs.css", "/problems", "/problems/not-found"]
CLOSED = ["/v1/bodies", "/v1/bodies/earth", "/v1/rules", "/v1/budgets", "/metrics", "/nothing", "/v1", "/docsx"]
EVERYWHERE = [*OPEN, "/v1/bodies", "/v1/bodies/earth", "/v1/bodies/nothing", "/nothing", "//", "/metrics"]


class Row(NamedTuple):
    """A promise, the clauses that ask for it, and the probe that shows it."""

    clauses: str
    probe: Callable[[Edge], None]


ROWS: list[Row] = []


def row(clauses: str) -> Callable[[Callable[[Edge], None]], Callable[[Edge], None]]:
    """Put a probe into the table."""

    def put(probe: Callable[[Edge], None]) -> Callable[[Edge], None]:
        ROWS.append(Row(clauses, probe))
        return probe

    return put


def ready(**settings: Any) -> Edge:
    app = create_app(Settings(**settings))
    app.app.state.ready = True
    return app


def guarded(**settings: Any) -> Edge:
    return ready(token=Tokens.read(TOKEN), **settings)


def bearing(value: str) -> list[tuple[bytes, bytes]]:
    return [(b"authorization", value.encode("latin-1"))]


def fail() -> NoReturn:
    raise RuntimeError("secret of the house")


@pytest.fixture(scope="module")
def app() -> Edge:
    return ready()


# --- who is let in ---


@row("API2, API5; ASVS 13.1.2, 4.1.3")
def closed_paths_want_a_token(_: Edge) -> None:
    told = [call(guarded(), path) for path in CLOSED]
    assert [answer.status for answer in told] == [401] * len(CLOSED)
    assert {answer.headers["www-authenticate"] for answer in told} == {'Bearer realm="burntally"'}


@row("API2, API5; ASVS 4.1.5")
def every_operation_wants_a_token(_: Edge) -> None:
    told = [call(guarded(), row.path, method=row.method, headers=JSON, body=b"{}") for row in OPERATIONS.values()]
    assert [answer.problem["code"] for answer in told] == ["unauthorized"] * len(OPERATIONS)


@row("API2")
def a_good_token_lets_in(_: Edge) -> None:
    service = guarded()
    told = [call(service, "/v1/bodies", headers=bearing(f"{word} {TOKEN}")) for word in ("Bearer", "bearer", "BEARER")]
    assert [answer.status for answer in told] == [200, 200, 200]


@row("API2; ASVS 2.2.1, 4.1.5")
def nothing_like_a_token_lets_in(_: Edge) -> None:
    service = guarded()
    tries = [
        "",
        "Bearer",
        "Bearer ",
        f"Basic {TOKEN}",
        TOKEN,
        f"Bearer {TOKEN}x",
        f"Bearer {TOKEN[:-1]}",
        "Bearer null",
    ]
    tries += [
        f"Bearer {TOKEN.upper()}",
        f"Bearer {TOKEN},{TOKEN}",
        "Bearer ünsafe",
        f"Bearer\t{TOKEN}",
        f"Bearer{TOKEN}",
    ]
    told = [call(service, "/v1/bodies", headers=bearing(value)) for value in tries]
    assert [answer.status for answer in told] == [401] * len(tries)
    assert {answer.headers["www-authenticate"] for answer in told} == {
        'Bearer realm="burntally", error="invalid_token"'
    }


@row("API2")
def two_tokens_are_none(_: Edge) -> None:
    assert call(guarded(), "/v1/bodies", headers=bearing(f"Bearer {TOKEN}") * 2).status == 401


@row("API2; ASVS 13.1.3")
def a_token_in_an_address_is_not_read(_: Edge) -> None:
    assert call(guarded(), f"/v1/bodies?access_token={TOKEN}").status == 401


@row("API5")
def no_spelling_of_a_path_goes_round_the_guard(_: Edge) -> None:
    service = guarded()
    spellings = ["/docs/../v1/bodies", "//v1/bodies", "/v1/bodies/", "/docs//v1/bodies", "/./v1/bodies", "/V1/bodies"]
    spellings += ["/problems/../v1/bodies", "/docs/..;/v1/bodies", "/healthz/../v1/bodies", "/v1/bodies\x00", ""]
    told = [call(service, path) for path in spellings]
    assert {answer.status for answer in told} <= {401, 404}


@row("API2")
def health_and_contract_stay_open(_: Edge) -> None:
    assert {call(guarded(), path).status for path in OPEN} == {200, 307}


@row("API2; ASVS 7.1.1")
def a_refused_token_is_not_repeated(_: Edge) -> None:
    told = call(guarded(), "/v1/bodies", headers=bearing("Bearer a-wrong-token-of-theirs"))
    assert "a-wrong-token" not in f"{told.headers}{told.body!r}"


# --- how often, and how much ---


@row("API4, API6; ASVS 11.1.4")
def whoever_asks_too_often_waits(_: Edge) -> None:
    service = ready(rate_per_minute=3)
    told = [call(service, "/v1/rules") for _ in range(4)]
    assert [answer.status for answer in told] == [200, 200, 200, 429]
    assert [answer.headers["ratelimit"] for answer in told[:3]] == [f'"default";r={left};t=20' for left in (2, 1, 0)]
    assert (told[3].problem["code"], told[3].headers["retry-after"]) == ("rate-limited", "20")


@row("API4")
def one_caller_does_not_use_up_anothers_share(_: Edge) -> None:
    service = ready(rate_per_minute=1)
    peers = [("192.0.2.7", 1), ("192.0.2.7", 2), ("192.0.2.8", 1), ("2001:db8::1", 1), ("2001:db8::2", 1)]
    assert [call(service, "/v1/rules", peer=peer).status for peer in peers] == [200, 429, 200, 200, 429]


@row("API4")
def a_claimed_address_gives_no_new_share(_: Edge) -> None:
    service = ready(rate_per_minute=1)
    claims = [[(b"x-forwarded-for", f"198.51.100.{number}".encode())] for number in range(5)]
    assert [call(service, "/v1/rules", headers=claim).status for claim in claims] == [200, 429, 429, 429, 429]


@row("API2, API4; ASVS 2.2.1")
def guessing_tokens_is_counted(_: Edge) -> None:
    service = guarded(rate_per_minute=3)
    told = [call(service, "/v1/rules", headers=bearing(f"Bearer guess-{number}-of-many")) for number in range(5)]
    assert [answer.status for answer in told] == [401, 401, 401, 429, 429]
    assert call(service, "/v1/rules", headers=bearing(f"Bearer {TOKEN}")).status == 200


@row("API4")
def health_is_told_however_often(_: Edge) -> None:
    service = ready(rate_per_minute=1)
    assert {call(service, path).status for path in ("/healthz", "/readyz", "/metrics") for _ in range(5)} == {200}


@row("API4; ASVS 5.1.4")
def a_body_is_bounded(_: Edge) -> None:
    service = ready(max_body_bytes=2048)
    assert call(service, "/v1/budgets", method="POST", headers=JSON, body=b" " * 2049).status == 413


# --- what is taken ---


@row("API3; ASVS 5.1.2, 5.1.3, 13.2.2")
def unknown_fields_are_refused(app: Edge) -> None:
    body = BUDGET.replace(b"{", b'{"is_admin":true,', 1)
    told = call(app, "/v1/budgets", method="POST", headers=JSON, body=body)
    assert (told.status, [error["pointer"] for error in told.problem["errors"]]) == (400, ["/is_admin"])


@row("API3; ASVS 5.5.2, 5.5.3, 5.5.4")
def nothing_but_the_two_formats_is_parsed(app: Edge) -> None:
    kinds = [b"application/xml", b"text/xml", b"application/x-yaml", b"application/x-www-form-urlencoded"]
    kinds += [b"multipart/form-data; boundary=x", b"application/x-python-pickle", b"text/plain"]
    told = [call(app, "/v1/budgets", method="POST", headers=[(b"content-type", kind)], body=BUDGET) for kind in kinds]
    assert [answer.status for answer in told] == [415] * len(kinds)


@row("API8; ASVS 13.2.1, 14.5.1")
def methods_that_nobody_needs_are_refused(app: Edge) -> None:
    told = {method: call(app, "/v1/bodies", method=method) for method in ("TRACE", "PUT", "DELETE", "PATCH", "BREW")}
    assert {method: answer.status for method, answer in told.items()} == dict.fromkeys(told, 405)
    assert {answer.headers["allow"] for answer in told.values()} == {"GET, HEAD, OPTIONS"}


@row("API8; ASVS 14.5.1")
def a_method_in_a_header_is_not_read(app: Edge) -> None:
    headers = [(b"x-http-method-override", b"POST"), (b"x-method-override", b"DELETE")]
    assert call(app, "/v1/budgets", headers=headers).status == 405


@row("API8; ASVS 14.5.1")
def options_tell_what_is_allowed(app: Edge) -> None:
    told = call(app, "/v1/budgets", method="OPTIONS")
    assert (told.status // 100, told.headers["allow"]) == (2, "OPTIONS, POST")


@row("API8; ASVS 5.2.5")
def a_host_that_is_no_host_is_refused(app: Edge) -> None:
    told = [call(app, "/v1/rules", headers=[(b"host", host)]) for host in (b"a b", b"<script>", b"a\r\nb", b"a/../b")]
    assert [answer.status for answer in told] == [400] * 4


@row("API8")
def no_answer_depends_on_the_host(app: Edge) -> None:
    hosts = [b"127.0.0.1", b"evil.example", b"evil.example:80"]
    for path in ("/", "/docs", "/v1/rules", "/nothing"):
        answers = [call(app, path, headers=[(b"host", host), (b"x-forwarded-host", host)]) for host in hosts]
        assert not any("evil" in f"{answer.headers}{answer.body!r}" for answer in answers)


# --- what is told ---


@row("API8; ASVS 7.4.1, 14.3.1, 14.3.2")
def a_failure_tells_nothing_of_the_inside(app: Edge) -> None:
    row = msgspec.structs.replace(OPERATIONS["list_bodies"], function=fail)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(operations, "OPERATIONS", dict(OPERATIONS) | {"list_bodies": row})
        patch.setattr(logging.getLogger("burntally.api"), "disabled", True)
        told = call(app, "/v1/bodies")
    assert (told.status, told.problem["code"]) == (500, "internal-error")
    assert [
        word for word in ("secret", "Traceback", "ZeroDivision", ".py", "line ") if word in told.body.decode()
    ] == []


@row("API8; ASVS 14.3.3")
def no_header_names_the_software(app: Edge) -> None:
    names = {name for path in EVERYWHERE for name in call(app, path).headers}
    assert names & {"server", "x-powered-by", "via", "x-runtime", "x-aspnet-version"} == set()


@row("API8; ASVS 14.4.4")
def no_media_type_is_guessed(app: Edge) -> None:
    assert {call(app, path).headers["x-content-type-options"] for path in EVERYWHERE} == {"nosniff"}


@row("API8; ASVS 14.4.1")
def every_answer_names_its_media_type(app: Edge) -> None:
    told = {path: call(app, path) for path in EVERYWHERE if path != "/"}
    assert [path for path, answer in told.items() if not answer.headers.get("content-type")] == []
    texts = {answer.headers["content-type"] for answer in told.values()}
    assert {kind for kind in texts if kind.startswith("text/")} == {kind for kind in texts if "charset=utf-8" in kind}


@row("API8; ASVS 14.4.3, 14.4.7")
def no_answer_is_framed_or_runs_what_is_not_ours(app: Edge) -> None:
    policies = {path: call(app, path, headers=[(b"accept", b"text/html,*/*")]) for path in EVERYWHERE}
    told = {path: answer.headers["content-security-policy"] for path, answer in policies.items()}
    assert [path for path, policy in told.items() if "frame-ancestors 'none'" not in policy] == []
    assert [path for path, policy in told.items() if "unsafe" in policy or "*" in policy or "http" in policy] == []
    assert told["/v1/bodies"].startswith("default-src 'none'")
    assert told["/docs"].startswith("default-src 'self'")


@row("API8; ASVS 14.4.6")
def pages_tell_nobody_where_they_were_left_from(app: Edge) -> None:
    told = [call(app, path, headers=[(b"accept", b"text/html")]) for path in ("/docs", "/problems")]
    assert [answer.headers["referrer-policy"] for answer in told] == ["no-referrer"] * 2


@row("API8; ASVS 8.2.1")
def no_shared_cache_keeps_what_was_computed(app: Edge) -> None:
    told = [call(app, path) for path in EVERYWHERE if path != "/"]
    told.append(call(app, "/v1/budgets", method="POST", headers=JSON, body=BUDGET))
    assert {answer.headers["cache-control"] for answer in told} <= {"no-store", "no-cache", "private, no-cache"}
    assert told[-1].headers["cache-control"] == "private, no-cache"


@row("API8; ASVS 14.5.2, 14.5.3")
def no_other_sites_page_reads_an_answer(app: Edge) -> None:
    headers = [(b"origin", b"https://evil.example"), (b"access-control-request-method", b"POST")]
    for method, path in (("OPTIONS", "/v1/budgets"), ("GET", "/v1/bodies"), ("GET", "/nothing")):
        with_origin, without = (call(app, path, method=method, headers=sent) for sent in (headers, []))
        assert not any(name.startswith("access-control-") for name in with_origin.headers)
        assert (with_origin.status, with_origin.headers["cross-origin-resource-policy"]) == (
            without.status,
            "same-origin",
        )


@row("API8; ASVS 3.4.1, 13.2.3")
def no_cookie_is_set_or_read(app: Edge) -> None:
    told = [call(app, path, headers=[(b"cookie", f"token={TOKEN}".encode())]) for path in EVERYWHERE]
    assert not any("set-cookie" in answer.headers for answer in told)
    assert call(guarded(), "/v1/bodies", headers=[(b"cookie", f"token={TOKEN}".encode())]).status == 401


@row("API8; ASVS 5.3.1, 5.3.3")
def what_is_quoted_is_no_markup_and_no_header(app: Edge) -> None:
    hostile = "<script>alert(1)</script>\r\nset-cookie: a=b"
    body = json.dumps({"vehicle": {"name": hostile, hostile: 1}}).encode()
    told = call(app, "/v1/performance", method="POST", headers=[*JSON, (b"x-request-id", hostile.encode())], body=body)
    assert told.headers["content-type"] == "application/problem+json"
    assert "script" not in str(told.headers)
    assert b"\r\n" not in told.body


# --- what is reached, and what is there ---


@row("API7, API10; ASVS 5.2.6")
def nothing_that_is_sent_makes_the_service_call_elsewhere(app: Edge) -> None:
    reached: list[object] = []
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(socket.socket, "connect", lambda _, address: reached.append(address))
        for url in ("http://127.0.0.1:9/", "file:///etc/passwd", "//127.0.0.1/x"):
            body = BUDGET.replace(b'"earth"', json.dumps(url).encode())
            call(app, "/v1/budgets", method="POST", headers=JSON, body=body)
            call(app, f"/v1/bodies/{url}")
    assert reached == []


@row("API9")
def every_route_is_in_the_contract_or_a_page_that_is_named(app: Edge) -> None:
    paths = {route.path_format for route in app.app.routes}
    pages = {"/", "/healthz", "/readyz", "/metrics", "/openapi.json", "/problems", "/problems/{code}"}
    pages |= {"/docs", "/docs/docs.css", "/docs/docs.js", "/docs/icon.svg"}
    assert paths == pages | set(document()["paths"])


@row("API9")
def no_other_version_answers(app: Edge) -> None:
    assert {call(app, f"/{version}/bodies").status for version in ("v0", "v2", "beta", "internal", "admin")} == {404}


@row("API9; ASVS 14.2.2")
def the_contract_tells_of_the_token(_: Edge) -> None:
    told = document()
    assert told["security"] == [{}, {"bearer": []}]
    assert {"401", "429"} <= set.intersection(
        *(set(node["responses"]) for methods in told["paths"].values() for node in methods.values())
    )


@pytest.mark.parametrize("probe", [row.probe for row in ROWS], ids=lambda probe: probe.__name__)
def test_the_row_holds(probe: Callable[[Edge], None], app: Edge) -> None:
    probe(app)


# Nothing is stored, so that there is no object of somebody else's: this row comes with stored designs.
NOT_YET = {"API1"}


def test_every_risk_of_the_ten_has_a_row() -> None:
    told = {word.strip(",;") for row in ROWS for word in row.clauses.split() if word.startswith("API")}
    assert told | NOT_YET == {f"API{number}" for number in range(1, 11)}
