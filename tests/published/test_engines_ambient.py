"""Engines in air and engines together, against published data sheets."""

import math

import pytest

from burntally_service.bodies.standard_air import air_at
from burntally_service.kernels import nozzle, rocket
from tests.published.cases import cases

CASES = cases("engines_ambient")


@pytest.mark.parametrize("name", ["eng-01", "eng-02", "eng-03"])
def test_eng_01_eng_02_eng_03_thrust_in_air(name: str) -> None:
    given = CASES[name].inputs
    thrust, c = given["thrust_vacuum_N"], rocket.exhaust_speed(given["isp_vacuum_s"])
    area = nozzle.exit_area_of_thrusts(thrust, given["thrust_sea_level_N"])
    ground, high = given["ambient_pressure_Pa"], air_at(10000.0).pressure
    CASES[name].agree(
        {
            "exit_area_implied_m2": area,
            "exit_diameter_implied_m": math.sqrt(4.0 * area / math.pi),
            "mass_flow_from_vacuum_kg_per_s": rocket.mass_flow(thrust, c),
            "isp_sea_level_implied_s": rocket.specific_impulse(nozzle.exhaust_speed_in_air(c, thrust, area, ground)),
            "thrust_at_10km_N": nozzle.thrust_in_air(thrust, area, high),
            "isp_at_10km_s": rocket.specific_impulse(nozzle.exhaust_speed_in_air(c, thrust, area, high)),
        },
        but=frozenset({"published_mass_flow_kg_per_s"}),
    )


@pytest.mark.parametrize("name", ["eng-01", "eng-02", "eng-03"])
def test_eng_01_eng_02_eng_03_published_isp_at_sea_level(name: str) -> None:
    given = CASES[name].inputs
    thrust, c = given["thrust_vacuum_N"], rocket.exhaust_speed(given["isp_vacuum_s"])
    area = nozzle.exit_area(thrust, given["isp_vacuum_s"], given["isp_sea_level_s"])
    # Published pairs of thrust and specific impulse are rounded, and not of one moment.
    close = pytest.approx(given["thrust_sea_level_N"], rel=CASES[name].tolerance["relative_vs_published_isp_sl"])
    assert nozzle.thrust_in_air(thrust, area, given["ambient_pressure_Pa"]) == close
    assert nozzle.exhaust_speed_in_air(c, thrust, area, given["ambient_pressure_Pa"]) == pytest.approx(
        rocket.exhaust_speed(given["isp_sea_level_s"]), rel=1e-12
    )


def test_eng_01_published_mass_flow() -> None:
    given, published = CASES["eng-01"].inputs, CASES["eng-01"].expected["published_mass_flow_kg_per_s"]
    flow = rocket.mass_flow(given["thrust_vacuum_N"], rocket.exhaust_speed(given["isp_vacuum_s"]))
    # The data sheet differs by 0.14 % from the quotient of its own rounded figures.
    assert flow == pytest.approx(published, rel=2e-3)


def test_eng_04_unlike_engines_together() -> None:
    given = CASES["eng-04"].inputs
    speeds = [rocket.exhaust_speed(isp) for isp in given["isp_s"]]
    mixed = rocket.specific_impulse(rocket.mixed_exhaust_speed(given["thrust_N"], speeds))
    CASES["eng-04"].agree({"effective_isp_s": mixed}, but=frozenset({"wrong_thrust_weighted_mean_s"}))


def test_eng_05_thrust_along_the_standard_atmosphere() -> None:
    given = CASES["eng-05"].inputs
    thrust, area, c = given["thrust_vacuum_N"], given["exit_area_m2"], rocket.exhaust_speed(given["isp_vacuum_s"])
    pressures = [air_at(altitude).pressure for altitude in given["altitude_geometric_m"]]
    speeds = [nozzle.exhaust_speed_in_air(c, thrust, area, pressure) for pressure in pressures]
    CASES["eng-05"].agree(
        {
            "thrust_N": [nozzle.thrust_in_air(thrust, area, pressure) for pressure in pressures],
            "isp_s": [rocket.specific_impulse(speed) for speed in speeds],
        }
    )
