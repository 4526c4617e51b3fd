"""How the contract's types become schemas of requests and of answers."""

from typing import Annotated, Any, Literal

import pytest
from msgspec import Struct

from burntally.model.scalars import Isp, Mass, doc
from burntally_service.api.schemas import component_schemas, ref_to


class Here(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="here"):
    """A place."""

    mass: Annotated[Mass | None, doc("Mass.")] = None


class There(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="there"):
    """Another place."""

    isp: Annotated[Isp, doc("Impulse; ``null`` is not read.")] = 1.0
    way: Annotated[Literal["up", "down"], doc("Way.")] = "up"


class Asked(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """A request."""

    place: Annotated[Here | There, doc("Place.")]


class Told(Struct, frozen=True, kw_only=True):
    """An answer."""

    place: Annotated[Here | There | None, doc("Place.")] = None
    counts: Annotated[dict[str, int], doc("Counts.")]
    value: Annotated[float | int | str | None, doc("Value.")] = None


class Places(Struct, frozen=True, kw_only=True):
    """An answer with a field of its own name."""

    places: Annotated[list[Here | There], doc("Places.")]


@pytest.fixture(scope="module")
def named() -> dict[str, Any]:
    return component_schemas([Asked], [Told, Places], {"Place": Here | There})


@pytest.fixture(scope="module")
def schemas() -> dict[str, Any]:
    return component_schemas([Asked], [Told])


def test_a_noun_in_both_has_two_schemas(schemas: dict[str, Any]) -> None:
    assert {"Asked", "Here", "HereAnswer", "There", "ThereAnswer", "Told"} <= set(schemas)


def test_the_answers_twin_bears_its_own_title(schemas: dict[str, Any]) -> None:
    assert schemas["HereAnswer"]["title"] == "HereAnswer"


def test_a_union_of_kinds_is_one_of_them(schemas: dict[str, Any]) -> None:
    assert schemas["Asked"]["properties"]["place"] == {
        "description": "Place.",
        "discriminator": {
            "propertyName": "kind",
            "mapping": {"here": "#/components/schemas/Here", "there": "#/components/schemas/There"},
        },
        "oneOf": [{"$ref": "#/components/schemas/Here"}, {"$ref": "#/components/schemas/There"}],
    }


def test_a_union_in_an_answer_leads_to_the_twins_and_is_never_null(schemas: dict[str, Any]) -> None:
    place = schemas["Told"]["properties"]["place"]
    assert [option["$ref"] for option in place["oneOf"]] == [
        "#/components/schemas/HereAnswer",
        "#/components/schemas/ThereAnswer",
    ]
    assert set(place["discriminator"]["mapping"].values()) == {option["$ref"] for option in place["oneOf"]}


def test_an_optional_quantity_is_one_flat_union(schemas: dict[str, Any]) -> None:
    assert schemas["Here"]["properties"]["mass"]["anyOf"] == [
        {"type": "number", "minimum": 0, "maximum": 10**9, "x-unit": "kg"},
        {"$ref": "#/components/schemas/MassText"},
        {"type": "null"},
    ]


def test_a_text_of_two_dimensions_knows_the_units_of_both(schemas: dict[str, Any]) -> None:
    assert schemas["SpecificImpulseText"]["examples"] == ["1.5 s", "1.5 m/s"]


def test_an_answers_quantity_is_a_plain_number(schemas: dict[str, Any]) -> None:
    assert schemas["HereAnswer"]["properties"]["mass"] == {
        "description": "Mass.",
        "type": "number",
        "minimum": 0,
        "maximum": 10**9,
        "x-unit": "kg",
    }


def test_a_tag_is_a_described_constant(schemas: dict[str, Any]) -> None:
    kind = schemas["Here"]["properties"]["kind"]
    assert (kind["type"], kind["const"]) == ("string", "here")


def test_what_is_left_out_has_a_default_that_is_told(schemas: dict[str, Any]) -> None:
    assert schemas["ThereAnswer"]["properties"]["way"]["default"] == "up"


def test_a_map_in_an_answer_is_bounded(schemas: dict[str, Any]) -> None:
    counts = schemas["Told"]["properties"]["counts"]
    assert (counts["maxProperties"], counts["additionalProperties"]["minimum"]) == (1000, 0)


def test_an_integer_beside_a_number_is_not_told_twice(schemas: dict[str, Any]) -> None:
    assert [option["type"] for option in schemas["Told"]["properties"]["value"]["anyOf"]] == ["number", "string"]


def test_marks_of_one_dialect_are_set_in_the_other(schemas: dict[str, Any]) -> None:
    assert schemas["There"]["properties"]["isp"]["description"] == "Impulse; `null` is not read."


@pytest.mark.parametrize("holder,twin", [("Asked", "Place"), ("Told", "PlaceAnswer")])
def test_a_union_that_has_a_name_is_a_component(holder: str, twin: str, named: dict[str, Any]) -> None:
    place = named[holder]["properties"]["place"]
    assert place == {"description": "Place.", "$ref": f"#/components/schemas/{twin}"}
    assert (named[twin]["title"], len(named[twin]["oneOf"])) == (twin, 2)


def test_a_named_union_stands_in_lists_too(named: dict[str, Any]) -> None:
    assert named["PlacesAnswer"]["properties"]["places"]["items"] == {"$ref": "#/components/schemas/PlaceAnswer"}


def test_an_answer_with_a_field_of_its_own_name_bears_another(named: dict[str, Any]) -> None:
    assert ("Places" in named, named["PlacesAnswer"]["title"]) == (False, "PlacesAnswer")
    assert ref_to(Places) == {"$ref": "#/components/schemas/PlacesAnswer"}


def test_what_may_be_null_is_not_told_as_null_where_it_is_left_out(schemas: dict[str, Any]) -> None:
    assert "default" not in schemas["Here"]["properties"]["mass"]
