"""Answers: their media type, their tag, their headers, and that both ways in give the same bytes."""

from typing import Any

import msgspec
import pytest
from litestar.testing import TestClient

from burntally_service.api.app import create_app
from burntally_service.api.examples import example_bytes
from burntally_service.api.settings import Settings
from burntally_service.operations import OPERATIONS, answer

Client = TestClient[Any]

JSON = "application/json"
MSGPACK = "application/msgpack"
PACKED = msgspec.msgpack.encode(msgspec.json.decode(example_bytes("create_budget")))


def path_of(operation_id: str) -> str:
    name = msgspec.json.decode(example_bytes(operation_id) or b"{}").get("name", "")
    return OPERATIONS[operation_id].path.format(name=name)


def ask(client: Client, operation_id: str, **headers: str) -> Any:
    row = OPERATIONS[operation_id]
    content = example_bytes(operation_id) if row.takes_body else None
    named = {name.replace("_", "-"): value for name, value in headers.items()}
    kind = {"Content-Type": JSON} if row.takes_body else {}
    return client.request(row.method, path_of(operation_id), headers=kind | named, content=content)


@pytest.mark.parametrize("operation_id", OPERATIONS)
def test_an_answer_is_the_same_bytes_as_without_http(operation_id: str, client: Client) -> None:
    response = ask(client, operation_id)
    assert (response.status_code, response.headers["content-type"]) == (200, JSON)
    assert response.content == answer(operation_id, example_bytes(operation_id))


@pytest.mark.parametrize("operation_id", OPERATIONS)
def test_an_answer_says_the_same_in_messagepack(operation_id: str, client: Client) -> None:
    response = ask(client, operation_id, Accept=MSGPACK)
    assert response.headers["content-type"] == MSGPACK
    assert msgspec.msgpack.decode(response.content) == ask(client, operation_id).json()


@pytest.mark.parametrize("name", [MSGPACK, "application/x-msgpack", "application/vnd.msgpack"])
def test_a_request_in_messagepack_is_read(name: str, client: Client) -> None:
    response = client.post("/v1/budgets", headers={"Content-Type": name}, content=PACKED)
    assert response.json() == ask(client, "create_budget").json()


@pytest.mark.parametrize("operation_id", [row.id for row in OPERATIONS.values() if not row.takes_body])
def test_a_known_answer_is_not_sent_again(operation_id: str, client: Client) -> None:
    tag = ask(client, operation_id).headers["etag"]
    response = ask(client, operation_id, If_None_Match=f'"other", W/{tag}')
    assert (response.status_code, response.content, response.headers["etag"]) == (304, b"", tag)


def test_a_computation_whose_answer_is_known_says_so(client: Client) -> None:
    tag = ask(client, "create_budget").headers["etag"]
    response = ask(client, "create_budget", If_None_Match=tag)
    assert (response.status_code, response.json()["code"]) == (412, "precondition-failed")
    assert response.headers["etag"] == tag


@pytest.mark.parametrize("operation_id", OPERATIONS)
def test_another_media_type_has_another_tag(operation_id: str, client: Client) -> None:
    assert ask(client, operation_id).headers["etag"] != ask(client, operation_id, Accept=MSGPACK).headers["etag"]


@pytest.mark.parametrize("operation_id,cache", [("create_budget", "private, no-cache"), ("list_bodies", "no-cache")])
def test_caches_are_told_to_ask_again(operation_id: str, cache: str, client: Client) -> None:
    headers = ask(client, operation_id).headers
    assert (headers["cache-control"], headers["vary"]) == (cache, "Accept")


@pytest.mark.parametrize("path", ["/v1/bodies", "/v1/rules/esa-2012", "/openapi.json", "/docs", "/healthz", "/readyz"])
def test_head_tells_what_get_would_send(path: str, client: Client) -> None:
    got, told = client.get(path), client.head(path)
    assert (told.status_code, told.content) == (200, b"")
    kept = ("content-type", "content-length", "etag")
    assert [told.headers.get(name) for name in kept] == [got.headers.get(name) for name in kept]


def test_a_sane_request_id_is_taken_over(client: Client) -> None:
    response = client.get("/healthz", headers={"X-Request-Id": "run-7.a_B"})
    assert response.headers["x-request-id"] == "run-7.a_B"


@pytest.mark.parametrize("identity", [b"two words", b"a" * 65, b"", b"tab\tin", "ünsafe".encode()])
def test_any_other_request_id_is_replaced(identity: bytes, client: Client) -> None:
    response = client.get("/healthz", headers={b"X-Request-Id": identity})
    assert len(response.headers["x-request-id"]) == 16


def test_a_problem_bears_the_id_of_its_request(client: Client) -> None:
    response = client.get("/nothing", headers={"X-Request-Id": "run-8"})
    assert response.json()["request_id"] == response.headers["x-request-id"] == "run-8"


@pytest.mark.parametrize("path", ["/v1/bodies", "/docs", "/nothing", "/v1/bodies/"])
def test_no_browser_may_guess_a_media_type(path: str, client: Client) -> None:
    assert client.get(path).headers["x-content-type-options"] == "nosniff"


def test_whoever_comes_without_a_path_is_shown_the_way(client: Client) -> None:
    response = client.get("/", follow_redirects=False)
    assert (response.status_code, response.headers["location"]) == (307, "/docs")


def test_long_bodies_are_answered_as_short_ones(client: Client) -> None:
    padded = example_bytes("create_budget").ljust(100_000)
    response = client.post("/v1/budgets", headers={"Content-Type": JSON}, content=padded)
    assert response.content == ask(client, "create_budget").content


def test_a_service_that_was_stopped_and_starts_again_answers_again() -> None:
    app = create_app(Settings())
    # Long enough to be computed by a worker.
    padded = example_bytes("create_budget").ljust(20_000)
    for _ in range(2):
        with TestClient(app, base_url="http://127.0.0.1") as client:
            assert client.post("/v1/budgets", headers={"Content-Type": JSON}, content=padded).status_code == 200


@pytest.mark.parametrize("path,status", [("/healthz", "ok"), ("/readyz", "ready")])
def test_a_running_service_is_well(path: str, status: str, client: Client) -> None:
    assert client.get(path).json() == {"status": status}
