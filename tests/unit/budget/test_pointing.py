"""Pointers into a design: what they read, what they change, and what they do not."""

from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from burntally.model.decode import decode_builtins
from burntally.model.design import Design
from burntally_service.budget.pointing import value_at, with_value
from tests.unit.budget.designs import burn, design, engine, stage

PLAIN = design(
    [burn(10.0, "tug"), {"kind": "transfer", "to": {"altitude": 8e5}}],
    stage(
        propellants=[{"name": "fuel", "mass": 100.0}],
        dry_mass=[{"name": "frame", "mass": 50.0, "maturity": "new", "class": "structure"}],
        engines=[engine(feeds={"fuel": 1.0})],
    ),
)
DESIGN = decode_builtins(Design, PLAIN)
POINTERS = {
    "/title": None,
    "/vehicle/stages/0/engines/0/isp": 320.0,
    "/vehicle/stages/0/engines/0/feeds/fuel": 1.0,
    "/vehicle/stages/0/dry_mass/0/class": "structure",
    "/vehicle/stages/0/propellants/0/mass": 100.0,
    "/mission/legs/0/paid_by/0": "tug",
    "/mission/legs/1/to/altitude": 8e5,
    "/rules/finite_burn": False,
}


@pytest.mark.parametrize("pointer, value", POINTERS.items())
def test_a_pointer_reads_a_field_by_its_name_in_the_contract(pointer: str, value: object) -> None:
    assert value_at(DESIGN, pointer) == value


def test_the_empty_pointer_reads_the_whole() -> None:
    assert value_at(DESIGN, "") is DESIGN


@pytest.mark.parametrize("pointer", POINTERS)
def test_what_is_put_is_read_back(pointer: str) -> None:
    assert value_at(with_value(DESIGN, pointer, "new"), pointer) == "new"


@pytest.mark.parametrize("pointer", POINTERS)
def test_what_is_put_back_makes_the_same_design(pointer: str) -> None:
    changed = with_value(DESIGN, pointer, "new")
    assert with_value(changed, pointer, value_at(DESIGN, pointer)) == DESIGN


@pytest.mark.parametrize("pointer", POINTERS)
def test_the_design_itself_is_not_changed(pointer: str) -> None:
    with_value(DESIGN, pointer, "new")
    assert decode_builtins(Design, PLAIN) == DESIGN


@pytest.mark.parametrize("pointer", POINTERS)
def test_other_places_stay(pointer: str) -> None:
    changed = with_value(DESIGN, pointer, "new")
    assert [other for other in POINTERS if value_at(changed, other) != value_at(DESIGN, other)] == [pointer]


@pytest.mark.parametrize(
    "pointer, error",
    [
        ("/nothing", KeyError),
        ("/vehicle/stages/0/dry_mass/0/class_", KeyError),
        ("/vehicle/stages/7", IndexError),
        ("/vehicle/stages/0/engines/0/feeds/air", KeyError),
    ],
)
def test_a_pointer_that_leads_nowhere_is_refused(pointer: str, error: type[Exception]) -> None:
    with pytest.raises(error):
        value_at(DESIGN, pointer)


@pytest.mark.parametrize(
    "pointer, error", [("/nothing", KeyError), ("/vehicle/nothing/0", KeyError), ("/vehicle/stages/7/name", IndexError)]
)
def test_nothing_is_put_where_a_pointer_leads_nowhere(pointer: str, error: type[Exception]) -> None:
    with pytest.raises(error):
        with_value(DESIGN, pointer, "new")


def test_a_new_key_may_be_put_into_a_mapping() -> None:
    changed = with_value(DESIGN, "/vehicle/stages/0/engines/0/feeds/air", 2.0)
    assert changed.vehicle.stages[0].engines[0].feeds == {"fuel": 1.0, "air": 2.0}


@given(st.text(alphabet="~/01ab", min_size=1))
def test_any_key_can_be_pointed_at(key: str) -> None:
    root: dict[str, Any] = {key: 1}
    pointer = "/" + key.replace("~", "~0").replace("/", "~1")
    assert value_at(root, pointer) == 1
    assert with_value(root, pointer, 2) == {key: 2}
