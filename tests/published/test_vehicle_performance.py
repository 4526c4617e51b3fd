"""Published staging and engine figures, through the whole burn-down of a vehicle."""

from typing import Any

import pytest

from burntally.model.operations import Performance, PerformanceRequest
from burntally.model.rules import Rules
from burntally.model.vehicle import Engine, Load, Payload, Stage, Vehicle
from burntally_service.kernels.constants import G0
from burntally_service.vehicle.performance import performance_of
from tests.published.cases import case_named, cases


def stage(name: str, *, dry: float, propellant: float, isp: float, thrust: float = 1e6) -> Stage:
    return Stage(name=name, dry_mass=dry, propellants=[Load(mass=propellant)], engines=[Engine(thrust=thrust, isp=isp)])


def flown(stages: list[Stage], payload: float, *, gravity: float = G0, pressure: float = 0.0) -> Performance:
    vehicle = Vehicle(name="v", stages=stages, payloads=[Payload(name="payload", mass=payload)])
    return performance_of(PerformanceRequest(vehicle=vehicle, ambient_pressure=pressure), gravity=gravity)


def steps(expected: dict[str, Any], isps: list[float], *, g0: float) -> list[Stage]:
    """Stages of a case; its exhaust speed is its own g0 times isp, hence the isp in ours."""
    empty = expected.get("step_empty_mass_kg") or expected["empty_mass_kg"]
    propellant = expected.get("step_propellant_kg") or expected["propellant_mass_kg"]
    rows = zip(empty, propellant, isps, strict=True)
    return [
        stage(f"step {index}", dry=dry, propellant=mass, isp=isp * g0 / G0)
        for index, (dry, mass, isp) in enumerate(rows, start=1)
    ]


def test_sutton_example_2_1() -> None:
    given, expected, rel = case_named("rocket_staging", "rkt-01")
    propellant = given["initial_mass_kg"] - given["final_mass_kg"]
    rocket = stage(
        "projectile",
        dry=given["final_mass_kg"] - given["nonpropulsive_mass_kg"],
        propellant=propellant,
        isp=given["isp_s"] * given["g0_m_per_s2"] / G0,
        thrust=expected["thrust_N"],
    )
    found = flown([rocket], given["nonpropulsive_mass_kg"], gravity=given["g0_m_per_s2"])
    phase = found.stages[0].phases[0]
    told = {
        "mass_ratio_final_over_initial": 1.0 / found.stages[0].mass_ratio,
        "propellant_mass_fraction": found.stages[0].propellant_fraction,
        "mass_flow_kg_per_s": phase.mass_flow,
        "thrust_to_weight_initial": phase.thrust_to_weight_ignition,
        "thrust_to_weight_final": phase.thrust_to_weight_burnout,
        "max_acceleration_m_per_s2": phase.acceleration_burnout,
        "delta_v_ideal_m_per_s": found.delta_v,
    }
    assert told == {key: pytest.approx(expected[key], rel=rel) for key in told}
    assert phase.burn_time == pytest.approx(given["burn_time_s"], rel=rel)


@pytest.mark.parametrize("case_id", ["rkt-02", "rkt-03", "rkt-04"])
def test_curtis_restricted_staging(case_id: str) -> None:
    given, expected, rel = case_named("rocket_staging", case_id)
    stages = steps(expected, [given["isp_s"]] * given["stages"], g0=given["g0_m_per_s2"])
    found = flown(stages, given["payload_mass_kg"])
    assert found.delta_v == pytest.approx(expected["delta_v_m_per_s"], rel=rel)
    assert found.initial_mass == pytest.approx(expected["initial_mass_kg"], rel=rel)
    assert [step.mass_ratio for step in found.stages] == pytest.approx(
        [expected["stage_mass_ratio"]] * given["stages"], rel=rel
    )


def test_curtis_optimal_staging() -> None:
    given, expected, rel = case_named("rocket_staging", "rkt-06")
    found = flown(steps(expected, given["isp_s"], g0=given["g0_m_per_s2"]), given["payload_mass_kg"])
    assert [step.delta_v for step in found.stages] == pytest.approx(expected["stage_delta_v_m_per_s"], rel=rel)
    assert [step.structural_coefficient for step in found.stages] == pytest.approx(given["structural_ratio"], rel=rel)
    assert found.payload_fraction == pytest.approx(expected["payload_fraction"], rel=rel)


def test_two_stages_of_unlike_technology() -> None:
    given, expected, rel = case_named("rocket_staging", "rkt-10")
    rows = zip(expected["step_mass_kg"], given["structural_ratio"], given["isp_s"], strict=True)
    stages = [
        stage(f"step {index}", dry=mass * eps, propellant=mass * (1.0 - eps), isp=isp)
        for index, (mass, eps, isp) in enumerate(rows, start=1)
    ]
    found = flown(stages, given["payload_mass_kg"])
    assert [step.delta_v for step in found.stages] == pytest.approx(expected["stage_delta_v_m_per_s"], rel=rel)


def test_residual_propellant() -> None:
    given, expected, rel = case_named("rocket_staging", "rkt-08")
    tug = stage("tug", dry=given["dry_mass_kg"], propellant=expected["total_propellant_kg"], isp=given["isp_s"])
    rules = Rules(residual_fraction=given["residual_fraction_of_total_propellant"])
    found = performance_of(PerformanceRequest(vehicle=Vehicle(name="v", stages=[tug]), rules=rules))
    assert found.stages[0].usable == pytest.approx(expected["usable_propellant_kg"], rel=rel)
    assert found.delta_v == pytest.approx(given["delta_v_m_per_s"], rel=rel)


@pytest.mark.parametrize("case_id", ["eng-01", "eng-02", "eng-03"])
def test_engines_at_sea_level(case_id: str) -> None:
    case = cases("engines_ambient")[case_id]
    given, expected = case.inputs, case.expected
    engine = Engine(
        thrust=given["thrust_vacuum_N"], isp=given["isp_vacuum_s"], exit_area=expected["exit_area_implied_m2"]
    )
    lifter = Stage(name="lifter", dry_mass=1.0, propellants=[Load(mass=1.0)], engines=[engine])
    phase = flown([lifter], 0.0, pressure=101325.0).stages[0].phases[0]
    assert phase.thrust == pytest.approx(given["thrust_sea_level_N"], rel=1e-5)
    assert phase.isp == pytest.approx(expected["isp_sea_level_implied_s"], rel=1e-5)
