"""Where two orbital planes meet."""

import math

import pytest

from burntally_service.kernels.planes import crossing
from tests.published.cases import case_named

Vector = tuple[float, float, float]


def place(inc: float, raan: float, argument: float) -> Vector:
    """Direction of an argument of latitude."""
    cu, su, co, so = math.cos(argument), math.sin(argument), math.cos(raan), math.sin(raan)
    return (co * cu - so * su * math.cos(inc), so * cu + co * su * math.cos(inc), su * math.sin(inc))


@pytest.mark.parametrize("case_id", ["pln-03", "pln-04"])
def test_vallado_arguments_of_latitude(case_id: str) -> None:
    given, expected, _ = case_named("plane_changes", case_id)
    inc_i, inc_f = math.radians(given["inclination_i_deg"]), math.radians(given["inclination_f_deg"])
    found = crossing(inc_i, 0.0, inc_f, math.radians(given["node_change_deg"]))
    told = [math.degrees(found.argument_i), math.degrees(found.argument_f)]
    assert told == pytest.approx(
        [expected["argument_of_latitude_i_deg"], expected["argument_of_latitude_f_deg"]], abs=6e-5
    )


@pytest.mark.parametrize("raan_f", [0.1, 1.0, 3.0, 5.5])
@pytest.mark.parametrize("inc_i, inc_f", [(0.3, 1.9), (2.8, 0.2), (1.0, 1.0), (0.0, 0.7), (0.7, math.pi)])
def test_both_arguments_name_one_place(inc_i: float, inc_f: float, raan_f: float) -> None:
    found = crossing(inc_i, 0.4, inc_f, 0.4 + raan_f)
    first = place(inc_i, 0.4, found.argument_i)
    assert first == pytest.approx(place(inc_f, 0.4 + raan_f, found.argument_f), abs=1e-12)


def test_raising_the_inclination_turns_at_the_ascending_node() -> None:
    found = crossing(0.5, 1.0, 0.8, 1.0)
    assert found == pytest.approx((0.3, 0.0, 0.0), abs=1e-15)


def test_lowering_the_inclination_turns_at_the_descending_node() -> None:
    found = crossing(0.8, 1.0, 0.5, 1.0)
    assert found == pytest.approx((0.3, math.pi, math.pi), abs=1e-15)


def test_near_planes_keep_their_digits() -> None:
    assert crossing(1.0, 0.0, 1.0 + 1e-12, 0.0).angle == pytest.approx(1e-12, rel=1e-3)


def test_one_plane_keeps_its_directions() -> None:
    assert crossing(0.0, 0.0, 0.0, 1.0) == (0.0, 0.0, 2.0 * math.pi - 1.0)


def test_a_plane_flown_backwards_is_half_a_turn_away() -> None:
    assert crossing(0.0, 0.0, math.pi, 1.0).angle == pytest.approx(math.pi, rel=1e-15)


@pytest.mark.parametrize("wrong", [(-0.1, 0.0, 1.0, 0.0), (0.1, 0.0, 3.2, 0.0), (0.1, math.inf, 1.0, 0.0)])
def test_outside_its_domain_it_is_nan(wrong: tuple[float, float, float, float]) -> None:
    assert math.isnan(crossing(*wrong).angle)
