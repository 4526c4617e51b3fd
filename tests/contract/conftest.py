"""What the tests of the contract share: the application in process, its document, and a client."""

from collections.abc import Iterator
from pathlib import Path
from typing import Any

import msgspec
import pytest
from litestar.testing import TestClient

from burntally_service.api.app import create_app
from burntally_service.api.edge import Edge
from burntally_service.api.openapi import encoded_document
from burntally_service.api.settings import Settings

MAX_BODY_BYTES = 200_000


@pytest.fixture(scope="session")
def app() -> Edge:
    return create_app(Settings(max_body_bytes=MAX_BODY_BYTES, body_timeout_s=0.3))


@pytest.fixture(scope="session")
def client(app: Edge) -> Iterator[TestClient[Any]]:
    with TestClient(app=app, base_url="http://127.0.0.1", raise_server_exceptions=False) as client:
        yield client


@pytest.fixture(scope="session")
def document() -> dict[str, Any]:
    decoded: dict[str, Any] = msgspec.json.decode(encoded_document())
    return decoded


def pytest_ignore_collect(collection_path: Path, config: pytest.Config) -> bool | None:
    """Leave out what takes half a minute to collect, unless it was asked for."""
    is_long = collection_path.name == "test_generated_release.py"
    return True if is_long and config.option.markexpr != "release" else None
