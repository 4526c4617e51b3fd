"""What holds for every value that crosses the border."""

import json
import math
from contextlib import suppress
from pathlib import Path
from typing import Any

import msgspec
import pytest
from hypothesis import given
from hypothesis import strategies as st

from burntally.model._units import COMMON
from burntally.model.decode import MSGPACK, decode, decode_builtins, encode
from burntally.model.design import Design
from burntally.model.errors import ContractError, Violation
from burntally.model.quantity import QuantityError, read
from burntally.model.rules import Rules
from burntally.model.vehicle import Vehicle

BOOKS = sorted((Path(__file__).parent.parent / "published" / "books").glob("*.json"))

NAMES = st.text("abcXYZ 019_.-", min_size=1, max_size=12).filter(lambda name: name != "main")
MASSES = st.floats(0.0, 1e9)
GROWTHS = st.none() | st.floats(0.0, 3.0)
ITEMS = st.fixed_dictionaries(
    {"name": st.text(max_size=20), "mass": MASSES}, optional={"count": st.integers(1, 10000), "growth": GROWTHS}
)
LOADS = st.fixed_dictionaries(
    {"name": NAMES, "mass": MASSES},
    optional={"capacity": st.none() | MASSES, "boiloff_per_day": MASSES, "residual_fraction": st.floats(0.0, 1.0)},
)
ENGINES = st.fixed_dictionaries(
    {"name": NAMES, "thrust": st.floats(0.0, 1e9, exclude_min=True), "isp": st.floats(1.0, 1e6)},
    optional={"count": st.integers(1, 64), "auxiliary": st.booleans(), "exit_area": st.none() | st.floats(0.0, 1e6)},
)
STAGES = st.fixed_dictionaries(
    {
        "name": NAMES,
        "dry_mass": MASSES | st.lists(ITEMS, min_size=1, max_size=3),
        "propellants": st.lists(LOADS, max_size=3),
        "engines": st.lists(ENGINES, max_size=2),
    },
    optional={"mass_growth": GROWTHS, "separation": st.sampled_from(["when_spent", "by_leg"])},
)
VEHICLES = st.fixed_dictionaries({"name": NAMES, "stages": st.lists(STAGES, min_size=1, max_size=3)})
ANYTHING = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=10) | st.binary(max_size=4),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(max_size=8), inner, max_size=4),
    max_leaves=12,
)


def design_of(book: Path) -> dict[str, Any]:
    design: dict[str, Any] = json.loads(book.read_text(encoding="utf-8"))["design"]
    return design


@pytest.mark.parametrize("book", BOOKS, ids=lambda book: book.stem)
def test_both_gears_of_the_decoder_read_a_design_alike(book: Path) -> None:
    design = design_of(book)
    assert decode_builtins(Design, design) == msgspec.convert(design, Design)


@pytest.mark.parametrize("book", BOOKS, ids=lambda book: book.stem)
def test_a_design_comes_back_from_json_as_it_went(book: Path) -> None:
    design = decode(Design, json.dumps(design_of(book)).encode())
    assert decode(Design, encode(design)) == design


@pytest.mark.parametrize("book", BOOKS, ids=lambda book: book.stem)
def test_a_design_comes_back_from_messagepack_as_it_went(book: Path) -> None:
    design = decode(Design, json.dumps(design_of(book)).encode())
    assert decode(Design, encode(design, media_type=MSGPACK), media_type=MSGPACK) == design


@pytest.mark.parametrize("book", BOOKS, ids=lambda book: book.stem)
def test_what_is_written_holds_no_field_that_was_not_read(book: Path) -> None:
    # The quick look for doubled keys counts on it.
    design = design_of(book)
    assert encode(decode(Design, json.dumps(design).encode())).count(b":") <= json.dumps(design).count(":")


@given(vehicle=VEHICLES)
def test_a_vehicle_comes_back_as_it_went(vehicle: dict[str, Any]) -> None:
    read_once = decode(Vehicle, json.dumps(vehicle).encode())
    assert decode(Vehicle, encode(read_once)) == read_once


@given(vehicle=VEHICLES)
def test_both_gears_of_the_decoder_read_a_vehicle_alike(vehicle: dict[str, Any]) -> None:
    assert decode_builtins(Vehicle, vehicle) == msgspec.convert(vehicle, Vehicle)


@given(value=ANYTHING)
@pytest.mark.parametrize("type_", [Design, Rules])
def test_anything_is_either_read_or_refused_with_violations_that_can_be_written(type_: type, value: Any) -> None:
    told: tuple[Violation, ...] = ()
    try:
        decode_builtins(type_, value)
    except ContractError as error:
        told = error.violations
    assert msgspec.json.decode(msgspec.json.encode(told), type=tuple[Violation, ...]) == told


@given(body=st.binary(max_size=40))
@pytest.mark.parametrize("media_type", ["application/json", MSGPACK])
def test_any_bytes_are_either_read_or_refused_with_violations_that_can_be_written(media_type: str, body: bytes) -> None:
    told: tuple[Violation, ...] = ()
    try:
        decode(Rules, body, media_type=media_type)
    except ContractError as error:
        told = error.violations
    assert msgspec.json.decode(msgspec.json.encode(told), type=tuple[Violation, ...]) == told


@given(value=ANYTHING)
def test_the_parser_of_messagepack_reads_what_msgspec_reads(value: Any) -> None:
    from burntally.model._msgpack import msgpack_values

    try:
        body = msgspec.msgpack.encode(value)
    except (OverflowError, UnicodeEncodeError):
        return
    assert repr(msgpack_values(body)) == repr(msgspec.msgpack.decode(body))


@given(number=st.floats(allow_nan=False, allow_infinity=False))
@pytest.mark.parametrize("x_unit", sorted(COMMON))
def test_a_number_in_the_unit_of_the_contract_is_that_number(x_unit: str, number: float) -> None:
    if x_unit in COMMON[x_unit]:
        assert read(f"{number!r} {x_unit}", x_unit) == number


@given(number=st.decimals(-1e6, 1e6, places=6))
@pytest.mark.parametrize(
    "x_unit, unit, zeros",
    [("kg", "t", 3), ("N", "kN", 3), ("m", "km", 3), ("m/s", "km/s", 3), ("1", "%", -2), ("Pa", "MPa", 6)],
)
def test_a_power_of_ten_moves_the_point_and_rounds_nothing(x_unit: str, unit: str, zeros: int, number: Any) -> None:
    assert read(f"{number:f} {unit}", x_unit) == float(f"{number:f}e{zeros}")


@given(text=st.text(max_size=30))
@pytest.mark.parametrize("x_unit", sorted(COMMON))
def test_any_text_is_a_quantity_or_refused(x_unit: str, text: str) -> None:
    number = 0.0
    with suppress(QuantityError):
        number = read(text, x_unit)
    assert not math.isnan(number)
