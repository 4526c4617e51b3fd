"""Quantities as text: what is read, to which float, and what is refused with which words."""

import subprocess
import sys
from decimal import Decimal

import pytest

from burntally.model import _astropy
from burntally.model._units import COMMON
from burntally.model.quantity import QuantityError, dimension_of, read, units_of, wire_pattern


@pytest.mark.parametrize(
    "text, x_unit, expected",
    [
        ("7.65 t", "kg", 7650.0),
        ("1.2e3 kg", "kg", 1200.0),
        ("850kg", "kg", 850.0),
        (" 850 kg ", "kg", 850.0),
        ("+.5 t", "kg", 500.0),
        ("60 kN", "N", 60000.0),
        ("50 m/s", "m/s", 50.0),
        ("3.38 km / s", "m/s", 3380.0),
        ("12 %", "1", 0.12),
        ("0.3 %", "1", 0.003),
        ("3.9 g0", "m/s2", 38.245935),
        ("9.81 m/s²", "m/s2", 9.81),
        ("9.81 m/s**2", "m/s2", 9.81),
        ("9.81 m/s^2", "m/s2", 9.81),
        ("28.5 deg", "deg", 28.5),
        ("28.5°", "deg", 28.5),
        ("35 h", "s", 126000.0),
        ("1 yr", "s", 31557600.0),
        ("2 d", "s", 172800.0),
        ("-90 km", "m", -90000.0),
        ("1.001 km", "m", 1001.0),
        ("16.5 km2/s2", "m2/s2", 16.5e6),
        ("398600.4418 km3/s2", "m3/s2", 3.986004418e14),
    ],
)
def test_a_common_unit_gives_the_float_that_the_plain_number_is(text: str, x_unit: str, expected: float) -> None:
    assert read(text, x_unit) == expected


def test_a_specific_impulse_may_be_a_time() -> None:
    assert read("345 s", "s", "m/s") == 345.0


def test_a_specific_impulse_may_be_an_exhaust_speed() -> None:
    assert read("3.383294250 km/s", "s", "m/s") == pytest.approx(345.0, rel=1e-12)  # 345 s x 9.80665 m/s2


def test_a_time_may_not_be_a_speed() -> None:
    with pytest.raises(QuantityError, match="a speed"):
        read("3.38 km/s", "s")


@pytest.mark.parametrize(
    "text, x_unit, expected",
    [
        ("1 lyr / wk", "m/s", 9460730472580800.0 / 604800.0),  # light-year: IAU, 365.25 d at 299792458 m/s
        ("36 km h-1", "m/s", 10.0),
        ("5 meter", "m", 5.0),
        ("30 arcmin", "deg", 0.5),
        ("12 percent", "1", 0.12),
        ("3 m s-2", "m/s2", 3.0),
        ("1 J/kg", "m2/s2", 1.0),
    ],
)
def test_other_units_are_read_by_the_syntax_of_astropy(text: str, x_unit: str, expected: float) -> None:
    assert read(text, x_unit) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(
    "text",
    [
        "",
        "kg",
        "5",
        "nan kg",
        "inf kg",
        "٣ kg",
        "\uff15 kg",
        "5 kg\n",
        "1,5 kg",
        "5\tkg",
        "5 5 kg",
        "0x1f kg",
        "1_000 kg",
    ],
)
def test_what_is_not_a_number_with_a_unit_is_refused(text: str) -> None:
    with pytest.raises(QuantityError):
        read(text, "kg")


@pytest.mark.parametrize(
    "unit",
    [
        "foo",
        "kgs",
        "m/s/s",
        "kg0",
        "m**99999",
        "(",
        "kg(",
        "kg/",
        "Kg",
        "kg;",
        "sqrt",
        "x" * 200,
        "mag(AB)",
        "h99",
        "кг",
    ],
)
def test_an_unknown_unit_is_refused(unit: str) -> None:
    with pytest.raises(QuantityError):
        read(f"5 {unit}", "kg")


@pytest.mark.parametrize(
    "text, x_unit, named",
    [("5 m", "kg", "a length"), ("5 g0", "1", "an acceleration"), ("5 mol", "kg", "a mass"), ("5 cg", "m/s2", "cg")],
)
def test_a_unit_of_another_dimension_is_told_with_both(text: str, x_unit: str, named: str) -> None:
    with pytest.raises(QuantityError, match=named):
        read(text, x_unit)


def test_grams_in_place_of_an_acceleration_are_offered_g0() -> None:
    with pytest.raises(QuantityError, match="5 g0"):
        read("5 g", "m/s2")


def test_a_number_too_large_is_infinite_so_that_bounds_refuse_it() -> None:
    assert read("1e400 t", "kg") == float("inf")


def test_a_near_unit_is_suggested() -> None:
    with pytest.raises(QuantityError, match="did you mean 'kg'"):
        read("5 kgs", "kg")


def test_without_the_units_library_the_extra_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "astropy", None)
    _astropy.factor.cache_clear()
    with pytest.raises(QuantityError, match=r"burntally\[units\]"):
        read("36 km h-1", "m/s")


@pytest.mark.parametrize(
    "x_unit, unit", [(x_unit, unit) for x_unit, units in COMMON.items() for unit in units if unit != "g0"]
)
def test_a_common_unit_means_what_astropy_means_by_it(x_unit: str, unit: str) -> None:
    assert float(COMMON[x_unit][unit]) == pytest.approx(_astropy.factor(unit, x_unit), rel=1e-14)


def test_standard_gravity_is_the_defined_one() -> None:
    assert COMMON["m/s2"]["g0"] == Decimal("9.80665")  # 3rd CGPM, 1901


@pytest.mark.parametrize("x_unit", list(COMMON))
def test_the_pattern_lets_through_what_is_read(x_unit: str) -> None:
    import re

    assert all(re.search(wire_pattern(x_unit), f"1.5 {unit}") for unit in units_of(x_unit))


def test_an_unknown_unit_of_the_contract_is_named_as_it_is() -> None:
    assert dimension_of("lm") == "a quantity in lm"


def test_common_units_load_no_library() -> None:
    code = "import sys; from burntally.model.decode import decode; from burntally.model.quantity import read; "
    code += "read('7.65 t', 'kg'); sys.exit('astropy' in sys.modules or 'numpy' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0
