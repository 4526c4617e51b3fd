"""Figures of the trade. Common practice, no source: they bound, and validate nothing."""

import pytest

from burntally.model.operations import PerformanceRequest
from burntally.model.vehicle import Engine, Load, Stage, Vehicle
from burntally_service.kernels.constants import G0
from burntally_service.kernels.rocket import exhaust_speed, ideal_delta_v, thrust_to_weight
from burntally_service.vehicle.performance import performance_of
from tests.unit.budget.designs import budget_of, burn, design

TUG = Vehicle(
    name="tug",
    stages=[
        Stage(name="tug", dry_mass=6850.0, propellants=[Load(mass=800.0)], engines=[Engine(thrust=60e3, isp=345.0)])
    ],
)


def test_a_small_burn_of_a_heavy_tug() -> None:
    assert ideal_delta_v(exhaust_speed(345.0), 7650.0 / 6850.0) == pytest.approx(374.0, abs=0.5)


def test_thrust_to_weight_of_a_heavy_tug() -> None:
    assert thrust_to_weight(60e3, 7650.0, G0) == pytest.approx(0.8, abs=0.005)


def test_a_heavy_tug_burned_down() -> None:
    found = performance_of(PerformanceRequest(vehicle=TUG))
    assert found.delta_v == pytest.approx(374.0, abs=0.5)
    assert found.stages[0].phases[0].thrust_to_weight_ignition == pytest.approx(0.8, abs=0.005)


def test_a_budget_lets_a_heavy_tug_pay_that_much_and_no_more() -> None:
    tug = {
        "name": "tug",
        "dry_mass": 6850.0,
        "propellants": [{"mass": 800.0}],
        "engines": [{"thrust": 60e3, "isp": 345.0}],
    }
    budget = budget_of(design([burn(300.0)], tug))
    assert budget.margin == pytest.approx(74.0, abs=0.5)
    assert budget.stages[0].delta_v.capability == pytest.approx(374.0, abs=0.5)
