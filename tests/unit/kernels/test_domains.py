"""Outside its domain a kernel answers NaN, and at the ends of it what the limit is."""

import math
from collections.abc import Callable
from typing import Any

import pytest

from burntally_service.kernels import (
    atmosphere,
    hyperbolas,
    manoeuvres,
    nozzle,
    orbits,
    plane_split,
    rocket,
    staging,
    transfers,
    vertical,
)
from burntally_service.kernels.atmosphere import AirLayer, MolarMassRow
from burntally_service.kernels.manoeuvres import Apsis
from burntally_service.kernels.plane_split import SpeedChange

GROUND = AirLayer(0.0, 288.15, -0.0065, 101325.0)
TOP = AirLayer(11e3, 216.65, 0.0, 22632.06)
LAYERS = [GROUND, TOP]
RATIOS = [MolarMassRow(80e3, 1.0), MolarMassRow(86e3, 0.999579)]
LOW = Apsis(7e6, 7e6)

# Each row spoils one argument of a call that is sound otherwise.
OUTSIDE: list[tuple[Callable[..., Any], tuple[Any, ...]]] = [
    (rocket.exhaust_speed, (0.0,)),
    (rocket.specific_impulse, (0.0,)),
    (rocket.ideal_delta_v, (0.0, 2.0)),
    (rocket.ideal_delta_v, (3000.0, 0.999)),
    (rocket.mass_ratio, (-1.0, 3000.0)),
    (rocket.mass_ratio, (1.0, 0.0)),
    (rocket.propellant_required, (-1.0, 1.0, 3000.0)),
    (rocket.propellant_required, (1.0, -1.0, 3000.0)),
    (rocket.propellant_required, (1.0, 1.0, 0.0)),
    (rocket.propellant_burned, (-1.0, 1.0, 3000.0)),
    (rocket.propellant_burned, (1.0, -1.0, 3000.0)),
    (rocket.propellant_burned, (1.0, 1.0, 0.0)),
    (rocket.propellant_load, (1.0, 1.0, 3000.0, 1.0)),
    (rocket.propellant_load, (1.0, 1.0, 3000.0, -0.1)),
    (rocket.propellant_load, (1.0, 1.0, 0.0, 0.0)),
    (rocket.mass_flow, (-1.0, 3000.0)),
    (rocket.mass_flow, (1.0, 0.0)),
    (rocket.burn_time, (-1.0, 1.0)),
    (rocket.burn_time, (1.0, 0.0)),
    (rocket.thrust_to_weight, (-1.0, 1.0, 1.0)),
    (rocket.thrust_to_weight, (1.0, 0.0, 1.0)),
    (rocket.thrust_to_weight, (1.0, 1.0, 0.0)),
    (rocket.mixed_exhaust_speed, ([1.0], [])),
    (rocket.mixed_exhaust_speed, ([], [])),
    (rocket.mixed_exhaust_speed, ([0.0], [3000.0])),
    (vertical.gravity_loss_vertical, (-1.0, 1.0)),
    (vertical.gravity_loss_vertical, (1.0, -1.0)),
    (vertical.height_vertical, (0.0, 2.0, 1.0, 9.8)),
    (vertical.height_vertical, (3000.0, 1.0, 1.0, 9.8)),
    (vertical.height_vertical, (3000.0, 2.0, -1.0, 9.8)),
    (vertical.height_vertical, (3000.0, 2.0, 1.0, -9.8)),
    (nozzle.thrust_in_air, (-1.0, 1.0, 1.0)),
    (nozzle.thrust_in_air, (1.0, -1.0, 1.0)),
    (nozzle.thrust_in_air, (1.0, 1.0, -1.0)),
    (nozzle.exhaust_speed_in_air, (0.0, 1.0, 1.0, 1.0)),
    (nozzle.exhaust_speed_in_air, (3000.0, 0.0, 1.0, 1.0)),
    (nozzle.exit_area, (-1.0, 300.0, 200.0)),
    (nozzle.exit_area, (1.0, 300.0, 301.0)),
    (nozzle.exit_area, (1.0, 0.0, 0.0)),
    (nozzle.exit_area_of_thrusts, (1.0, 1.1)),
    (nozzle.exit_area_of_thrusts, (1.0, -0.1)),
    (staging.stage_payload_fraction, (0.0, 1.0)),
    (staging.stage_payload_fraction, (0.5, 0.5)),
    (staging.stage_mass_ratio, (1.1, 0.5)),
    (staging.stage_mass_ratio, (0.5, 1.1)),
    (staging.endless_staging_delta_v, (0.0, 0.1, 0.1)),
    (staging.endless_staging_delta_v, (3000.0, 1.1, 0.1)),
    (staging.endless_staging_delta_v, (3000.0, 0.1, 0.0)),
    (staging.step_mass, (0.9, 0.1, 1.0)),
    (staging.step_mass, (2.0, 1.1, 1.0)),
    (staging.step_mass, (2.0, 0.1, -1.0)),
    (staging.optimal_mass_ratio, (0.0, 0.1, 1e-3)),
    (staging.optimal_mass_ratio, (3000.0, 0.0, 1e-3)),
    (staging.optimal_mass_ratio, (3000.0, 0.1, 0.0)),
    (staging.staging_multiplier, (0.0, [3000.0], [0.1])),
    (staging.staging_multiplier, (1e6, [3000.0], [0.1])),
    (staging.staging_multiplier, (1e3, [3000.0], [])),
    (staging.staging_multiplier, (1e3, [], [])),
    (orbits.circular_speed, (0.0, 7e6)),
    (orbits.circular_speed, (4e14, 0.0)),
    (orbits.escape_speed, (0.0, 7e6)),
    (orbits.escape_speed, (4e14, 0.0)),
    (orbits.orbital_speed, (0.0, 7e6, 7e6)),
    (orbits.orbital_speed, (4e14, 0.0, 7e6)),
    (orbits.orbital_speed, (4e14, 7e6, 0.0)),
    (orbits.orbital_speed, (4e14, 7e6, 3e6)),
    (orbits.apsis_speed, (0.0, 7e6, 7e6)),
    (orbits.apsis_speed, (4e14, 0.0, 7e6)),
    (orbits.apsis_speed, (4e14, 7e6, 0.0)),
    (orbits.apsis_speed_change, (4e14, 7e6, 0.0, 7e6)),
    (orbits.apsis_speed_change, (4e14, 7e6, 7e6, 0.0)),
    (orbits.semi_major_axis, (0.0, 6e3)),
    (orbits.semi_major_axis, (4e14, 0.0)),
    (orbits.opposite_apsis, (3e6, 7e6)),
    (orbits.opposite_apsis, (7e6, 0.0)),
    (orbits.eccentricity, (0.0, 7e6)),
    (orbits.eccentricity, (7e6, 6e6)),
    (orbits.mean_motion, (0.0, 7e6)),
    (orbits.mean_motion, (4e14, 0.0)),
    (orbits.period, (0.0, 7e6)),
    (orbits.period, (4e14, 0.0)),
    (orbits.synodic_period, (0.0, 1.0)),
    (orbits.synodic_period, (1.0, 0.0)),
    (orbits.soi_radius, (0.0, 1.0, 2.0)),
    (orbits.soi_radius, (1.0, 0.0, 2.0)),
    (orbits.soi_radius, (1.0, 1.0, 0.0)),
    (hyperbolas.characteristic_energy, (-1.0,)),
    (hyperbolas.hyperbolic_excess_speed, (-1.0,)),
    (hyperbolas.hyperbolic_speed, (0.0, 7e6, 1.0)),
    (hyperbolas.hyperbolic_speed, (4e14, 0.0, 1.0)),
    (hyperbolas.hyperbolic_speed, (4e14, 7e6, -1.0)),
    (hyperbolas.hyperbolic_speed_change, (4e14, 7e6, 0.0, 1.0)),
    (hyperbolas.hyperbola_eccentricity, (0.0, 7e6, 1.0)),
    (hyperbolas.hyperbola_eccentricity, (4e14, 0.0, 1.0)),
    (hyperbolas.hyperbola_eccentricity, (4e14, 7e6, -1.0)),
    (hyperbolas.asymptote_angle, (0.999,)),
    (hyperbolas.turn_angle, (0.999,)),
    (hyperbolas.aiming_radius, (0.0, 7e6, 1.0)),
    (hyperbolas.aiming_radius, (4e14, 0.0, 1.0)),
    (hyperbolas.aiming_radius, (4e14, 7e6, 0.0)),
    (hyperbolas.cheapest_capture_radius, (0.0, 1.0, 0.5)),
    (hyperbolas.cheapest_capture_radius, (4e14, 0.0, 0.5)),
    (hyperbolas.cheapest_capture_radius, (4e14, 1.0, 1.0)),
    (plane_split.combined_delta_v, (SpeedChange(-1.0, 2.0), 0.1)),
    (plane_split.combined_delta_v, (SpeedChange(1.0, -2.0), 0.1)),
    (plane_split.combined_delta_v, (SpeedChange(1.0, 0.0), -0.1)),
    (plane_split.combined_delta_v, (SpeedChange(1.0, 0.0), 3.2)),
    (plane_split.optimal_split, (SpeedChange(1.0, 1.0), SpeedChange(1.0, 1.0), SpeedChange(0.0, 0.0), -0.1)),
    (manoeuvres.plane_change, (-1.0, 0.1)),
    (manoeuvres.combined_burn, (1.0, -2.0, 0.1)),
    (manoeuvres.apsis_change, (4e14, LOW, 0.0, 0.0)),
    (manoeuvres.escape_burn, (4e14, LOW, -1.0, 0.0)),
    (manoeuvres.capture_burn, (4e14, LOW, 1.0, 4.0)),
    (transfers.hohmann, (4e14, 7e6, 0.0)),
    (transfers.apsis_transfer, (4e14, LOW, LOW, -0.1)),
    (transfers.cheapest_transfer, (0.0, LOW, LOW, 0.1)),
    (transfers.bielliptic, (4e14, LOW, 0.0, LOW, 0.1)),
    (transfers.phasing, (4e14, LOW, 1.0, 0.5)),
    (transfers.phasing, (4e14, LOW, 7.0, 1.0)),
    (transfers.phasing, (4e14, LOW, 6.0, 1.0)),
    (atmosphere.geopotential_altitude, (0.0, 0.0)),
    (atmosphere.geopotential_altitude, (-7e6, 6e6)),
    (atmosphere.geometric_altitude, (0.0, 0.0)),
    (atmosphere.geometric_altitude, (6e6, 6e6)),
    (atmosphere.layer_pressure, (GROUND, 0.0, 0.0)),
    (atmosphere.layer_pressure, (GROUND, 1e6, 287.0)),
    (atmosphere.layer_pressure, (AirLayer(0.0, 0.0, 0.0, 1.0), 0.0, 287.0)),
    (atmosphere.layer_pressure, (AirLayer(0.0, 1.0, 0.0, 1.0), -1e6, 287.0)),
    (atmosphere.layered_air, (0.0, [GROUND], 287.0, 1.4)),
    (atmosphere.layered_air, (-5001.0, LAYERS, 287.0, 1.4)),
    (atmosphere.layered_air, (11001.0, LAYERS, 287.0, 1.4)),
    (atmosphere.layered_air, (0.0, LAYERS, 0.0, 1.4)),
    (atmosphere.layered_air, (0.0, LAYERS, 287.0, 0.0)),
    (atmosphere.layered_air, (9e3, [AirLayer(0.0, 1.0, -1.0, 1.0), TOP], 287.0, 1.4)),
    (atmosphere.molar_mass_ratio, (0.0, [])),
    (atmosphere.molar_mass_ratio, (86001.0, RATIOS)),
]


def figures(answer: Any) -> list[float]:
    """All figures of what a kernel returns."""
    return [part for row in answer for part in figures(row)] if isinstance(answer, tuple) else [answer]


@pytest.mark.parametrize("kernel, arguments", OUTSIDE, ids=lambda value: getattr(value, "__name__", None))
def test_outside_its_domain_a_kernel_answers_nan(kernel: Callable[..., Any], arguments: tuple[Any, ...]) -> None:
    assert math.isnan(figures(kernel(*arguments))[0])


@pytest.mark.parametrize(
    "kernel, arguments, limit",
    [
        (rocket.mass_ratio, (1e9, 1.0), math.inf),
        (rocket.propellant_required, (1.0, 1e9, 1.0), math.inf),
        (rocket.propellant_load, (1.0, 1e9, 1.0, 0.02), math.inf),
        (rocket.propellant_load, (1.0, 5000.0, 1000.0, 0.02), math.inf),
        (rocket.propellant_burned, (1.0, 1e9, 1.0), 1.0),
        (nozzle.thrust_in_air, (1.0, 1.0, 2.0), 0.0),
        (staging.stage_mass_ratio, (0.0, 0.0), math.inf),
        (staging.step_mass, (10.0, 0.1, 1.0), math.inf),
        (staging.optimal_mass_ratio, (3000.0, 0.1, 1e-4), 1.0),
        (orbits.synodic_period, (1.0, 1.0), math.inf),
        (orbits.apsis_speed_change, (4e14, 7e6, 7e6, 7e6), 0.0),
        (hyperbolas.turn_angle, (1.0,), math.pi),
        (hyperbolas.asymptote_angle, (1.0,), 0.0),
        (atmosphere.molar_mass_ratio, (0.0, RATIOS), 1.0),
    ],
)
def test_at_the_end_of_its_domain_a_kernel_answers_the_limit(
    kernel: Callable[..., float], arguments: tuple[Any, ...], limit: float
) -> None:
    assert kernel(*arguments) == limit


def test_a_layer_begins_at_its_base() -> None:
    cold = AirLayer(5e3, 200.0, 0.0, 5e4)
    assert atmosphere.layered_air(5e3, [GROUND, cold, TOP], 287.0, 1.4).temperature == 200.0


def test_a_poor_stage_under_a_good_one_is_left_out() -> None:
    speeds, coefficients = [1500.0, 4500.0], [0.3, 0.1]
    p = staging.staging_multiplier(2000.0, speeds, coefficients)
    assert staging.optimal_mass_ratio(speeds[0], coefficients[0], p) == 1.0


def test_the_slower_a_burn_the_more_it_turns() -> None:
    fast, slow = SpeedChange(7800.0, 2400.0), SpeedChange(1600.0, 1500.0)
    split = plane_split.optimal_split(fast, SpeedChange(300.0, 10.0), slow, 0.5)
    assert split.second > split.third > split.first


@pytest.mark.parametrize("slow", [0, 1, 2])
def test_a_great_turn_goes_where_it_is_slow(slow: int) -> None:
    burns = [SpeedChange(7800.0, 2400.0)] * 3
    burns[slow] = SpeedChange(100.0, 30.0)
    split = plane_split.optimal_split(burns[0], burns[1], burns[2], 2.5)
    assert split[slow] > 2.4


def test_a_burn_that_does_not_exist_turns_nothing() -> None:
    burn = SpeedChange(7800.0, 2400.0)
    assert plane_split.optimal_split(burn, SpeedChange(0.0, 0.0), SpeedChange(0.0, 0.0), 0.5) == (0.5, 0.0, 0.0)
