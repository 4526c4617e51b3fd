"""The contract: committed as it is served, valid, closed, bounded, described, and with an example of everything."""

from collections.abc import Iterator
from pathlib import Path
from typing import Any

import msgspec
import pytest
from litestar.testing import TestClient
from openapi_spec_validator import OpenAPIV31SpecValidator

from burntally.model.budget import Budget
from burntally.model.design import Design
from burntally.model.operations import (
    Bodies,
    BodyRecord,
    Performance,
    PerformanceRequest,
    PresetRecord,
    Presets,
    Problem,
    TransferAnswer,
    TransferRequest,
)
from burntally_service.api.problems import PROBLEMS
from burntally_service.operations import OPERATIONS

COMMITTED = Path(__file__).parents[2] / "openapi" / "burntally.openapi.json"

Node = dict[str, Any]


def schemas_within(pointer: str, schema: Node) -> Iterator[tuple[str, Node]]:
    """Every schema within a schema, with where it is."""
    yield pointer, schema
    for key, value in schema.items():
        if key == "properties":
            for name, inner in value.items():
                yield from schemas_within(f"{pointer}/{name}", inner)
        elif key in {"anyOf", "oneOf"}:
            for index, inner in enumerate(value):
                yield from schemas_within(f"{pointer}/{key}/{index}", inner)
        elif key in {"items", "additionalProperties"} and isinstance(value, dict):
            yield from schemas_within(f"{pointer}/{key}", value)


def every_schema(document: Node) -> Iterator[tuple[str, Node]]:
    for name, schema in document["components"]["schemas"].items():
        yield from schemas_within(name, schema)


def reached_from(document: Node, names: set[str]) -> set[str]:
    """Names of all components that these lead to."""
    reached: set[str] = set()
    while names:
        name = names.pop()
        reached.add(name)
        inner = schemas_within(name, document["components"]["schemas"][name])
        references = (schema["$ref"].rpartition("/")[2] for _, schema in inner if "$ref" in schema)
        names |= set(references) - reached
    return reached


def names_told(document: Node) -> set[str]:
    """Names of the components that answers are made of."""
    successes = [node["responses"]["200"]["content"]["application/json"]["schema"] for node in operations_of(document)]
    return reached_from(document, {schema["$ref"].rpartition("/")[2] for schema in successes} | {"Problem"})


def operations_of(document: Node) -> list[Node]:
    return [operation for methods in document["paths"].values() for operation in methods.values()]


def lacking(pairs: Iterator[tuple[str, Node]], *keys: str) -> list[str]:
    return [pointer for pointer, schema in pairs if not all(key in schema for key in keys)]


def test_the_committed_contract_is_the_one_served(client: TestClient[Any]) -> None:
    assert client.get("/openapi.json").content == COMMITTED.read_bytes()


def test_it_is_valid(document: Node) -> None:
    assert list(OpenAPIV31SpecValidator(document).iter_errors()) == []


def test_every_operation_of_the_table_is_in_it(document: Node) -> None:
    assert {operation["operationId"] for operation in operations_of(document)} == set(OPERATIONS)


def test_requests_are_closed(document: Node) -> None:
    asked = reached_from(document, {row.request.__name__ for row in OPERATIONS.values() if row.takes_body})  # type: ignore[union-attr]  # it takes a body
    schemas = document["components"]["schemas"]
    objects = {name for name in asked if schemas[name].get("type") == "object"}
    assert {name for name in objects if schemas[name].get("additionalProperties") is not False} == set()


def test_answers_are_open_so_that_old_clients_read_new_fields(document: Node) -> None:
    assert {
        name for name in names_told(document) if "additionalProperties" in document["components"]["schemas"][name]
    } == set()


def test_numbers_are_bounded_on_both_sides(document: Node) -> None:
    numbers = (pair for pair in every_schema(document) if pair[1].get("type") in {"number", "integer"})
    unbounded = [
        pointer
        for pointer, schema in numbers
        if "const" not in schema
        and not (schema.keys() & {"minimum", "exclusiveMinimum"} and schema.keys() & {"maximum", "exclusiveMaximum"})
    ]
    assert unbounded == []


@pytest.mark.parametrize("kind,bound", [("array", "maxItems"), ("string", "maxLength")], ids=["arrays", "strings"])
def test_what_may_be_long_is_bounded(kind: str, bound: str, document: Node) -> None:
    found = (pair for pair in every_schema(document) if pair[1].get("type") == kind)
    assert lacking(((p, s) for p, s in found if not s.keys() & {"const", "enum"}), bound) == []


def test_maps_are_bounded(document: Node) -> None:
    maps = ((p, s) for p, s in every_schema(document) if isinstance(s.get("additionalProperties"), dict))
    assert lacking(maps, "maxProperties") == []


def test_every_field_is_described(document: Node) -> None:
    fields = (
        (f"{name}/{field}", inner)
        for name, schema in document["components"]["schemas"].items()
        for field, inner in schema.get("properties", {}).items()
    )
    assert lacking(fields, "description") == []


def test_every_component_is_described(document: Node) -> None:
    assert lacking(iter(document["components"]["schemas"].items()), "title", "description") == []


def test_every_enumeration_tells_its_type(document: Node) -> None:
    found = (pair for pair in every_schema(document) if pair[1].keys() & {"enum", "const"})
    assert lacking(found, "type") == []


def test_every_union_of_kinds_maps_its_kinds(document: Node) -> None:
    found = [schema for _, schema in every_schema(document) if "oneOf" in schema]
    assert found
    assert all(
        sorted(schema["discriminator"]["mapping"].values()) == sorted(option["$ref"] for option in schema["oneOf"])
        for schema in found
    )


def test_a_quantity_is_a_number_or_a_text_in_requests_alone(document: Node) -> None:
    texts = {name for name in document["components"]["schemas"] if name.endswith("Text")}
    assert len(texts) == 13
    assert texts & names_told(document) == set()


def test_a_number_with_a_unit_may_be_written_as_a_text(document: Node) -> None:
    load = document["components"]["schemas"]["Load"]["properties"]
    assert load["mass"] == {
        "x-unit": "kg",
        "description": "Propellant loaded.",
        "anyOf": [
            {"type": "number", "minimum": 0, "maximum": 10**9, "x-unit": "kg"},
            {"$ref": "#/components/schemas/MassText"},
        ],
    }


def test_the_contract_has_the_fields_of_its_types(document: Node) -> None:
    types = [Design, PerformanceRequest, TransferRequest, Budget, Performance, TransferAnswer]
    types += [Bodies, BodyRecord, Presets, PresetRecord, Problem]
    _, plain = msgspec.json.schema_components(types, ref_template="{name}")
    schemas = document["components"]["schemas"]
    assert {name: list(schema["properties"]) for name, schema in plain.items()} == {
        name: list(schemas[name if name in schemas else f"{name}Answer"]["properties"]) for name in plain
    }


@pytest.mark.parametrize("operation_id", [row.id for row in OPERATIONS.values() if row.takes_body])
def test_every_request_has_an_example(operation_id: str, document: Node) -> None:
    operation = next(node for node in operations_of(document) if node["operationId"] == operation_id)
    assert operation["requestBody"]["content"]["application/json"]["examples"]


@pytest.mark.parametrize("operation_id", OPERATIONS)
def test_every_answer_has_an_example(operation_id: str, document: Node) -> None:
    operation = next(node for node in operations_of(document) if node["operationId"] == operation_id)
    assert operation["responses"]["200"]["content"]["application/json"]["examples"]


def test_every_problem_that_it_names_is_one_of_ours(document: Node) -> None:
    responses = document["components"]["responses"].values()
    codes = {code for node in responses for code in node["content"]["application/problem+json"]["examples"]}
    assert codes <= set(PROBLEMS)


def test_it_says_what_it_is_not_for(document: Node) -> None:
    assert "Not for flight safety, range safety, licensing or operations." in document["info"]["description"]
