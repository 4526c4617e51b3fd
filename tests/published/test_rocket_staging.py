"""Rocket equation, staging and boosters, against Sutton, Curtis and closed forms."""

import math
from collections.abc import Sequence

import pytest

from burntally_service.kernels import rocket, staging, vertical
from tests.published.cases import Case, cases

CASES = cases("rocket_staging")


def test_rkt_01_sutton_example_2_1() -> None:
    given = CASES["rkt-01"].inputs
    initial, final, g0 = given["initial_mass_kg"], given["final_mass_kg"], given["g0_m_per_s2"]
    c = given["isp_s"] * g0
    burned = initial - final
    flow = burned / given["burn_time_s"]
    thrust = flow * c
    CASES["rkt-01"].agree(
        {
            "mass_ratio_final_over_initial": 1.0 / rocket.mass_ratio(rocket.ideal_delta_v(c, initial / final), c),
            "propellant_mass_fraction": burned / (initial - given["nonpropulsive_mass_kg"]),
            "mass_flow_kg_per_s": rocket.mass_flow(thrust, c),
            "thrust_N": thrust,
            "thrust_to_weight_initial": rocket.thrust_to_weight(thrust, initial, g0),
            "thrust_to_weight_final": rocket.thrust_to_weight(thrust, final, g0),
            "max_acceleration_m_per_s2": thrust / final,
            "effective_exhaust_velocity_m_per_s": c,
            "total_impulse_N_s": thrust * rocket.burn_time(burned, flow),
            "delta_v_ideal_m_per_s": rocket.ideal_delta_v(c, initial / final),
        }
    )


@pytest.mark.parametrize("name", ["rkt-02", "rkt-03", "rkt-04"])
def test_rkt_02_rkt_03_rkt_04_curtis_restricted_staging(name: str) -> None:
    given = CASES[name].inputs
    count, eps = given["stages"], given["structural_ratio"]
    share = staging.stage_payload_fraction(given["total_payload_fraction"], float(count))
    ratio = staging.stage_mass_ratio(eps, share)
    steps: list[float] = []
    carried = given["payload_mass_kg"]
    for _ in range(count):
        steps.insert(0, staging.step_mass(ratio, eps, carried))
        carried += steps[0]
    CASES[name].agree(
        {
            "initial_mass_kg": carried,
            "stage_payload_fraction": share,
            "stage_mass_ratio": ratio,
            "delta_v_m_per_s": count * rocket.ideal_delta_v(given["isp_s"] * given["g0_m_per_s2"], ratio),
            "step_mass_kg": steps,
            "step_empty_mass_kg": [eps * step for step in steps],
            "step_propellant_kg": [(1.0 - eps) * step for step in steps],
        }
    )


def test_rkt_05_curtis_endless_staging() -> None:
    given = CASES["rkt-05"].inputs
    c = given["isp_s"] * given["g0_m_per_s2"]
    dv = staging.endless_staging_delta_v(c, given["structural_ratio"], given["total_payload_fraction"])
    CASES["rkt-05"].agree({"delta_v_m_per_s": dv})


def optimal(case: Case) -> tuple[float, list[float], list[float], list[float]]:
    """Multiplier, and speed, mass ratio and mass of each stage of the lightest vehicle."""
    eps: Sequence[float] = case.inputs["structural_ratio"]
    speeds = [isp * case.inputs["g0_m_per_s2"] for isp in case.inputs["isp_s"]]
    multiplier = staging.staging_multiplier(case.inputs["burnout_speed_m_per_s"], speeds, eps)
    ratios = [staging.optimal_mass_ratio(c, e, multiplier) for c, e in zip(speeds, eps, strict=True)]
    steps: list[float] = []
    for ratio, e in zip(reversed(ratios), reversed(eps), strict=True):
        steps.insert(0, staging.step_mass(ratio, e, case.inputs["payload_mass_kg"] + math.fsum(steps)))
    return multiplier, speeds, ratios, steps


def test_rkt_06_curtis_optimal_staging() -> None:
    given = CASES["rkt-06"].inputs
    eps, payload = given["structural_ratio"], given["payload_mass_kg"]
    multiplier, speeds, ratios, steps = optimal(CASES["rkt-06"])
    CASES["rkt-06"].agree(
        {
            "lagrange_multiplier_s_per_km": 1000.0 * multiplier,
            "stage_mass_ratio": ratios,
            "step_mass_kg": steps,
            "empty_mass_kg": [e * step for e, step in zip(eps, steps, strict=True)],
            "propellant_mass_kg": [(1.0 - e) * step for e, step in zip(eps, steps, strict=True)],
            "initial_mass_kg": payload + sum(steps),
            "payload_fraction": payload / (payload + sum(steps)),
            "stage_delta_v_m_per_s": [rocket.ideal_delta_v(c, n) for c, n in zip(speeds, ratios, strict=True)],
        }
    )


def test_rkt_07_boosters_beside_a_core() -> None:
    given = CASES["rkt-07"].inputs
    thrusts = [given["booster_count"] * given["booster_thrust_vac_N"], given["core_thrust_vac_N"]]
    speeds = [rocket.exhaust_speed(given["booster_isp_vac_s"]), rocket.exhaust_speed(given["core_isp_vac_s"])]
    mixed = rocket.mixed_exhaust_speed(thrusts, speeds)
    flow = rocket.mass_flow(sum(thrusts), mixed)
    burned, initial = flow * given["overlap_burn_time_s"], given["liftoff_mass_kg"]
    CASES["rkt-07"].agree(
        {
            "effective_isp_s": rocket.specific_impulse(mixed),
            "total_mass_flow_kg_per_s": flow,
            "propellant_burned_kg": burned,
            "delta_v_phase_m_per_s": rocket.ideal_delta_v(mixed, initial / (initial - burned)),
            "core_propellant_used_in_phase_kg": rocket.mass_flow(thrusts[1], speeds[1]) * given["overlap_burn_time_s"],
            "thrust_to_weight_liftoff_vac": rocket.thrust_to_weight(sum(thrusts), initial, given["g0_m_per_s2"]),
        }
    )


def test_rkt_08_load_with_residual() -> None:
    given = CASES["rkt-08"].inputs
    dry, share = given["dry_mass_kg"], given["residual_fraction_of_total_propellant"]
    load = rocket.propellant_load(dry, given["delta_v_m_per_s"], rocket.exhaust_speed(given["isp_s"]), share)
    CASES["rkt-08"].agree(
        {
            "total_propellant_kg": load,
            "usable_propellant_kg": load * (1.0 - share),
            "residual_kg": load * share,
            "initial_mass_kg": dry + load,
            "final_mass_kg": dry + load * share,
        }
    )


def test_rkt_09_vertical_ascent() -> None:
    given = CASES["rkt-09"].inputs
    c, g, initial = rocket.exhaust_speed(given["isp_s"]), given["gravity_m_per_s2"], given["initial_mass_kg"]
    ratio = initial / (initial - given["propellant_mass_kg"])
    time = rocket.burn_time(given["propellant_mass_kg"], rocket.mass_flow(given["thrust_N"], c))
    loss = vertical.gravity_loss_vertical(g, time)
    CASES["rkt-09"].agree(
        {
            "burn_time_s": time,
            "ideal_delta_v_m_per_s": rocket.ideal_delta_v(c, ratio),
            "gravity_loss_m_per_s": loss,
            "burnout_speed_m_per_s": rocket.ideal_delta_v(c, ratio) - loss,
            "burnout_height_m": vertical.height_vertical(c, ratio, time, g),
            "liftoff_thrust_to_weight": rocket.thrust_to_weight(given["thrust_N"], initial, g),
        }
    )


def test_rkt_10_optimal_staging_of_unlike_stages() -> None:
    _, speeds, ratios, steps = optimal(CASES["rkt-10"])
    CASES["rkt-10"].agree(
        {
            "stage_mass_ratio": ratios,
            "step_mass_kg": steps,
            "initial_mass_kg": CASES["rkt-10"].inputs["payload_mass_kg"] + sum(steps),
            "stage_delta_v_m_per_s": [rocket.ideal_delta_v(c, n) for c, n in zip(speeds, ratios, strict=True)],
        }
    )
