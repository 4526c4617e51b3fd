"""What HTTP says beside the answer: conditions, preferences, where the service is described, which operation goes."""

import os
import subprocess
import sys
from collections.abc import Iterator
from datetime import UTC, date, datetime
from email.utils import parsedate_to_datetime
from typing import Any

import msgspec
import pytest
from litestar import Litestar
from litestar.testing import TestClient

from burntally_service import operations
from burntally_service.api import openapi
from burntally_service.api.edge import Edge
from burntally_service.api.examples import example_bytes
from burntally_service.api.exchange import entity_tag
from burntally_service.api.metrics import Metrics
from burntally_service.api.routes import operation_routes
from burntally_service.api.settings import Settings
from burntally_service.api.turns import Turns
from burntally_service.operations import OPERATIONS, Retirement, answer

Client = TestClient[Any]

DESIGN = example_bytes("create_budget")
JSON = {"Content-Type": "application/json"}
PAGES = ["/v1/bodies", "/v1/bodies/earth", "/v1/rules", "/v1/rules/esa-2012", "/openapi.json", "/docs"]


def tag_of(client: Client, path: str) -> str:
    tag: str = client.get(path).headers["etag"]
    return tag


# conditions: {} stands for the tag of the answer

CONDITIONS = [
    ("{}", 304),
    ("W/{}", 304),
    ('"a", {}', 304),
    ('{} , "b"', 304),
    ('"a",{},"b"', 304),
    ('"a, b", W/{}', 304),
    ("*", 304),
    (" * ", 304),
    ('"a"', 200),
    ('"a", W/"b"', 200),
    ('"*"', 200),
    ("", 200),
    ("none", 200),
]


@pytest.mark.parametrize("path", PAGES)
@pytest.mark.parametrize("method", ["GET", "HEAD"])
@pytest.mark.parametrize("condition, status", CONDITIONS)
def test_what_the_caller_has_is_not_sent_again(
    path: str, method: str, condition: str, status: int, client: Client
) -> None:
    tag = tag_of(client, path)
    response = client.request(method, path, headers={"If-None-Match": condition.format(tag)})
    assert (response.status_code, response.headers["etag"]) == (status, tag)
    assert bool(response.content) == (status == 200 and method == "GET")


@pytest.mark.parametrize("path", PAGES)
def test_an_answer_that_is_not_sent_again_has_the_headers_of_the_one_that_was(path: str, client: Client) -> None:
    sent = client.get(path)
    known = client.get(path, headers={"If-None-Match": sent.headers["etag"]})
    for name in ("etag", "cache-control", "vary", "link"):
        assert known.headers.get(name) == sent.headers.get(name)


def test_tags_in_several_lines_are_one_list(client: Client) -> None:
    lines = [("If-None-Match", '"a"'), ("If-None-Match", tag_of(client, "/v1/bodies"))]
    assert client.get("/v1/bodies", headers=lines).status_code == 304


@pytest.mark.parametrize("condition", ["*", '"a"', 'W/"b", "c"'])
def test_what_was_never_computed_is_not_there_yet(condition: str, client: Client) -> None:
    assert client.post("/v1/budgets", headers=JSON | {"If-None-Match": condition}, content=DESIGN).status_code == 200


@pytest.mark.parametrize("condition", ["{}", "W/{}", '"a", {}'])
def test_a_computation_that_changed_nothing_says_so(condition: str, client: Client) -> None:
    tag = client.post("/v1/budgets", headers=JSON, content=DESIGN).headers["etag"]
    response = client.post("/v1/budgets", headers=JSON | {"If-None-Match": condition.format(tag)}, content=DESIGN)
    assert (response.status_code, response.headers["etag"]) == (412, tag)


@pytest.mark.parametrize("path", ["/v1/nothing", "/v1/bodies/nothing", "/healthz", "/readyz"])
def test_what_may_change_at_any_time_is_not_kept(path: str, client: Client) -> None:
    assert client.get(path).headers["cache-control"] == "no-store"


# preferences (RFC 7240): all operations answer at once and in full, so none is applied, and none is an error

PREFERENCES = [
    "respond-async",
    "respond-async, wait=10",
    "wait=0",
    "return=minimal",
    'return="representation"; foo="some; value"',
    "handling=strict",
    "handling=lenient, Wait = 5",
    "unheard-of",
    '=;,"',
]


@pytest.mark.parametrize("preference", PREFERENCES)
def test_a_preference_that_is_not_applied_changes_nothing(preference: str, client: Client) -> None:
    plain = client.post("/v1/budgets", headers=JSON, content=DESIGN)
    preferred = client.post("/v1/budgets", headers=JSON | {"Prefer": preference}, content=DESIGN)
    assert (preferred.status_code, preferred.content) == (200, plain.content)
    assert preferred.headers["etag"] == plain.headers["etag"]
    # Nothing of the answer turns on the header, so a cache need not look at it.
    assert preferred.headers["vary"] == "Accept"
    assert "preference-applied" not in preferred.headers


# computing is pure, so whoever lost an answer asks again


def test_the_same_request_has_the_same_answer_and_tag(client: Client) -> None:
    first, second = (client.post("/v1/budgets", headers=JSON, content=DESIGN) for _ in range(2))
    assert (first.content, first.headers["etag"]) == (second.content, second.headers["etag"])


@pytest.mark.parametrize("operation_id", [row.id for row in OPERATIONS.values() if row.takes_body])
def test_a_process_started_anew_gives_the_same_answer(operation_id: str) -> None:
    asks = f"""
import sys
from burntally_service.api.examples import example_bytes
from burntally_service.operations import answer
sys.stdout.buffer.write(answer({operation_id!r}, example_bytes({operation_id!r})))
"""
    environment = os.environ | {"PYTHONHASHSEED": "4711"}
    told = subprocess.run([sys.executable, "-c", asks], env=environment, capture_output=True, check=True).stdout
    here = answer(operation_id, example_bytes(operation_id))
    assert entity_tag((), told) == entity_tag((), here)


# where the service is described (RFC 8631)


@pytest.mark.parametrize("operation_id", OPERATIONS)
def test_every_answer_says_where_the_service_is_described(operation_id: str, client: Client) -> None:
    row = OPERATIONS[operation_id]
    path = row.path.format(name=msgspec.json.decode(example_bytes(operation_id) or b"{}").get("name", ""))
    content = example_bytes(operation_id) if row.takes_body else None
    response = client.request(row.method, path, headers=JSON, content=content)
    assert response.links["service-desc"]["url"] == "/openapi.json"
    assert response.links["service-doc"]["url"] == "/docs"


@pytest.mark.parametrize("relation", ["service-desc", "service-doc"])
def test_where_the_service_is_described_there_is_something(relation: str, client: Client) -> None:
    assert client.get(client.get("/v1/rules").links[relation]["url"]).status_code == 200


# an operation that goes (RFC 9745, RFC 8594)

GOING = msgspec.structs.replace(
    OPERATIONS["list_rules"],
    id="list_old_rules",
    path="/v1/old-rules",
    retirement=Retirement(deprecated=date(2031, 4, 12), sunset=date(2032, 1, 1), successor="/v1/rules"),
)
ANNOUNCED = msgspec.structs.replace(
    GOING, id="list_odd_rules", path="/v1/odd-rules", retirement=Retirement(deprecated=date(2031, 4, 12))
)


@pytest.fixture
def fixture_routes(monkeypatch: pytest.MonkeyPatch) -> Iterator[Client]:
    monkeypatch.setattr(operations, "OPERATIONS", dict(OPERATIONS) | {row.id: row for row in (GOING, ANNOUNCED)})
    settings = Settings()
    app = Litestar(
        operation_routes([GOING, ANNOUNCED], settings, Turns(settings)), openapi_config=None, logging_config=None
    )
    with TestClient(Edge(app, settings=settings, metrics=Metrics())) as client:
        yield client


def test_an_operation_that_goes_says_since_when_and_until_when(fixture_routes: Client) -> None:
    response = fixture_routes.get("/v1/old-rules")
    since = datetime.fromtimestamp(int(response.headers["deprecation"].removeprefix("@")), UTC)
    assert since == datetime(2031, 4, 12, tzinfo=UTC)
    assert parsedate_to_datetime(response.headers["sunset"]) == datetime(2032, 1, 1, tzinfo=UTC)
    assert response.headers["sunset"] == "Thu, 01 Jan 2032 00:00:00 GMT"


def test_an_operation_that_goes_leads_to_its_successor(fixture_routes: Client) -> None:
    links = fixture_routes.get("/v1/old-rules").links
    assert links["successor-version"]["url"] == "/v1/rules"
    assert links["deprecation"]["url"] == "/docs#list_old_rules"
    assert links["service-desc"]["url"] == "/openapi.json"


def test_an_operation_that_goes_says_so_when_nothing_is_sent_again(fixture_routes: Client) -> None:
    known = fixture_routes.get("/v1/old-rules", headers={"If-None-Match": "*"})
    assert (known.status_code, known.headers["deprecation"]) == (304, "@1933718400")


def test_no_last_day_is_told_where_none_is_set(fixture_routes: Client) -> None:
    response = fixture_routes.get("/v1/odd-rules")
    assert "deprecation" in response.headers
    assert "sunset" not in response.headers


def test_an_operation_that_stays_says_nothing_of_going(client: Client) -> None:
    assert client.get("/v1/rules").headers.keys() & {"deprecation", "sunset"} == set()


def test_the_contract_marks_an_operation_that_goes(monkeypatch: pytest.MonkeyPatch) -> None:
    going = msgspec.structs.replace(OPERATIONS["list_rules"], retirement=GOING.retirement)
    monkeypatch.setattr(openapi, "OPERATIONS", dict(OPERATIONS) | {"list_rules": going})
    told = openapi.document()
    node = told["paths"]["/v1/rules"]["get"]
    assert node["deprecated"] is True
    assert (
        {"Deprecation", "Sunset"} <= node["responses"]["200"]["headers"].keys() <= told["components"]["headers"].keys()
    )
