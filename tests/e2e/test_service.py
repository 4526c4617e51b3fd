"""A server as a caller finds it: its pages, and the bytes that it answers. It may run anywhere: see `conftest.py`."""

import http.client
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path
from urllib.parse import urlsplit

import pytest

from burntally.client import Answer, Client, connect, errors
from burntally_service.api.examples import example_bytes
from burntally_service.operations import OPERATIONS

ROOT = Path(__file__).parents[2]
NAMED = {"get_body": "moon", "get_rules": "esa-2012"}
WAIT_S = 30.0


@pytest.fixture
def connection(url: str) -> Iterator[http.client.HTTPConnection]:
    connection = http.client.HTTPConnection(urlsplit(url).netloc, timeout=WAIT_S)
    yield connection
    connection.close()


@pytest.fixture(scope="module")
def over_http(url: str) -> Iterator[Client]:
    with connect(url) as client:
        yield client


def ask(connection: http.client.HTTPConnection, method: str, path: str) -> tuple[int, bytes]:
    connection.request(method, path)
    response = connection.getresponse()
    return response.status, response.read()


def test_it_is_alive(connection: http.client.HTTPConnection) -> None:
    assert ask(connection, "GET", "/healthz")[0] == 200


def test_it_is_ready_once_it_listens(connection: http.client.HTTPConnection) -> None:
    assert ask(connection, "GET", "/readyz") == (200, b'{"status":"ready"}')


def test_it_serves_the_contract_that_is_published(connection: http.client.HTTPConnection) -> None:
    published = (ROOT / "openapi/burntally.openapi.json").read_bytes()
    assert ask(connection, "GET", "/openapi.json") == (200, published)


def test_it_has_a_page_to_read(connection: http.client.HTTPConnection) -> None:
    assert ask(connection, "GET", "/docs")[0] == 200


@pytest.mark.parametrize("operation_id", sorted(OPERATIONS))
def test_it_answers_what_is_answered_in_process(operation_id: str, over_http: Client) -> None:
    def answered(client: Client) -> Answer:
        return client.call(operation_id, example_bytes(operation_id) or None, name=NAMED.get(operation_id))

    with connect() as client:
        assert answered(over_http).body == answered(client).body


def test_it_refuses_as_it_does_in_process(over_http: Client) -> None:
    with pytest.raises(errors.InvalidRequest) as refused:
        over_http.budget({"format": 1})
    assert {violation.pointer for violation in refused.value.violations} == {"/mission", "/vehicle"}


def test_a_command_that_asks_it_prints_what_a_command_without_it_prints(url: str) -> None:
    def printed(*options: str) -> str:
        command: list[str | Path] = [
            Path(sys.executable).with_name("burntally"),
            "check",
            *options,
            "sdk/examples/closes.toml",
        ]
        done = subprocess.run(command, cwd=ROOT, check=True, capture_output=True, text=True)
        return done.stdout

    assert printed("--server", url) == printed()
