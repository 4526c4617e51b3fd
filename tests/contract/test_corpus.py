"""The adversarial corpus: bodies that were written, or found, to do harm, each with what it must be answered."""

import re
import tomllib
from pathlib import Path
from typing import Any

import msgspec
import pytest
from litestar.testing import TestClient

from burntally.model.decode import JSON, MSGPACK
from burntally.model.operations import Problem
from burntally_service.operations import OPERATIONS

CORPUS = Path(__file__).parent / "corpus"
CASES: list[dict[str, Any]] = tomllib.loads((CORPUS / "manifest.toml").read_text(encoding="utf-8"))["case"]
MEDIA_TYPES = {".json": JSON, ".msgpack": MSGPACK}
POINTER = re.compile(r"(/([^~/]|~[01])*)*\Z")


def ask(client: TestClient[Any], case: dict[str, Any]) -> Any:
    body = CORPUS / case["body"]
    path = OPERATIONS[case.get("operation", "create_budget")].path
    return client.post(path, headers={"Content-Type": MEDIA_TYPES[body.suffix]}, content=body.read_bytes())


REFUSED = [case for case in CASES if case["status"] != 200]
ANSWERED = [case for case in CASES if case["status"] == 200]


@pytest.mark.parametrize("case", REFUSED, ids=lambda case: case["body"])
def test_a_harmful_body_is_refused_for_what_is_wrong_with_it(case: dict[str, Any], client: TestClient[Any]) -> None:
    response = ask(client, case)
    problem = msgspec.json.decode(response.content, type=Problem)
    pointers = [error.pointer for error in problem.errors]
    told = pointers[: len(case["pointers"])] if case.get("more") else pointers
    assert (response.status_code, problem.code, told) == (case["status"], case["code"], case["pointers"])
    assert all(POINTER.match(pointer) for pointer in pointers)


@pytest.mark.parametrize("case", REFUSED, ids=lambda case: case["body"])
def test_a_refusal_tells_what_was_expected_in_each_place(case: dict[str, Any], client: TestClient[Any]) -> None:
    errors = ask(client, case).json()["errors"]
    assert [error for error in errors if not error.get("expected")] == []


@pytest.mark.parametrize("case", ANSWERED, ids=lambda case: case["body"])
def test_an_odd_body_that_breaks_nothing_is_answered(case: dict[str, Any], client: TestClient[Any]) -> None:
    assert ask(client, case).status_code == 200


def test_every_body_has_its_case() -> None:
    bodies = sorted(path.name for path in CORPUS.iterdir() if path.suffix in MEDIA_TYPES)
    assert bodies == sorted(case["body"] for case in CASES)
