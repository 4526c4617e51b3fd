"""Departures, arrivals and spheres of influence, against Curtis and closed forms."""

import math

import pytest

from burntally_service.kernels import hyperbolas, manoeuvres, orbits, rocket, transfers
from burntally_service.kernels.constants import DAY
from burntally_service.kernels.manoeuvres import Apsis
from tests.published.cases import cases

CASES = cases("patched_conic")


def test_pc_01_curtis_example_8_1() -> None:
    given = CASES["pc-01"].inputs
    days = orbits.synodic_period(given["period1_day"], given["period2_day"])
    CASES["pc-01"].agree({"synodic_period_day": days})


def test_pc_02_curtis_example_8_2() -> None:
    given = CASES["pc-02"].inputs
    days = transfers.hohmann(given["mu_sun_m3_per_s2"], given["r1_m"], given["r2_m"]).tof / DAY
    synodic = orbits.synodic_period(given["period1_day"], given["period2_day"])
    # The way back mirrors the way out, so the wait closes twice the phase that is left at arrival.
    left = (days / given["period1_day"] - 0.5) * synodic
    CASES["pc-02"].agree({"transfer_time_day": days, "minimum_wait_day": synodic - 2.0 * left})


def test_pc_03_curtis_example_8_4() -> None:
    given = CASES["pc-03"].inputs
    mu, r = given["mu_body_m3_per_s2"], given["parking_radius_m"]
    v_inf = transfers.hohmann(given["mu_sun_m3_per_s2"], given["r1_m"], given["r2_m"]).first.dv
    ecc = hyperbolas.hyperbola_eccentricity(mu, r, v_inf)
    burn = manoeuvres.escape_burn(mu, Apsis(r, r), v_inf, 0.0)
    CASES["pc-03"].agree(
        {
            "v_infinity_m_per_s": hyperbolas.hyperbolic_excess_speed(hyperbolas.characteristic_energy(v_inf)),
            "C3_m2_per_s2": hyperbolas.characteristic_energy(v_inf),
            "parking_speed_m_per_s": orbits.circular_speed(mu, r),
            "delta_v_m_per_s": burn.dv,
            "hyperbola_eccentricity": ecc,
            "beta_deg": math.degrees(hyperbolas.asymptote_angle(ecc)),
            "propellant_fraction": rocket.propellant_burned(1.0, burn.dv, given["isp_s"] * given["g0_m_per_s2"]),
        }
    )


def test_pc_04_curtis_example_8_5() -> None:
    given = CASES["pc-04"].inputs
    mu = given["mu_body_m3_per_s2"]
    v_inf = transfers.hohmann(given["mu_sun_m3_per_s2"], given["r1_m"], given["r2_m"]).second.dv
    sma = orbits.semi_major_axis(mu, given["capture_period_s"])
    # The example holds the period, so its eccentricity is the one whose cheapest periapsis has that period.
    ecc = 2.0 * mu / (sma * v_inf * v_inf) - 1.0
    r_peri = hyperbolas.cheapest_capture_radius(mu, v_inf, ecc)
    burn = manoeuvres.capture_burn(mu, Apsis(r_peri, orbits.opposite_apsis(sma, r_peri)), v_inf, 0.0)
    approach = hyperbolas.hyperbola_eccentricity(mu, r_peri, v_inf)
    CASES["pc-04"].agree(
        {
            "v_infinity_m_per_s": v_inf,
            "semi_major_axis_m": sma,
            "eccentricity": orbits.eccentricity(r_peri, orbits.opposite_apsis(sma, r_peri)),
            "periapsis_radius_m": r_peri,
            "delta_v_m_per_s": burn.dv,
            "aiming_radius_m": hyperbolas.aiming_radius(mu, r_peri, v_inf),
            "beta_deg": math.degrees(hyperbolas.asymptote_angle(approach)),
        }
    )


def test_pc_04_a_low_periapsis_is_cheaper_at_that_period() -> None:
    given = CASES["pc-04"].inputs
    mu, r_peri = given["mu_body_m3_per_s2"], 3680e3
    v_inf = transfers.hohmann(given["mu_sun_m3_per_s2"], given["r1_m"], given["r2_m"]).second.dv
    r_apo = orbits.opposite_apsis(orbits.semi_major_axis(mu, given["capture_period_s"]), r_peri)
    assert manoeuvres.capture_burn(mu, Apsis(r_peri, r_apo), v_inf, 0.0).dv == pytest.approx(1210.8, abs=0.05)


def test_pc_05_curtis_table_a_2() -> None:
    given = CASES["pc-05"].inputs
    radii = {
        name: orbits.soi_radius(sma, given["mass_kg"][name], given["mass_sun_kg"])
        for name, sma in given["semi_major_axis_m"].items()
    }
    CASES["pc-05"].agree({"soi_m": radii})


def test_pc_06_moon() -> None:
    given = CASES["pc-06"].inputs
    CASES["pc-06"].agree({"soi_m": orbits.soi_radius(given["semi_major_axis_m"], given["mass_ratio"], 1.0)})


@pytest.mark.parametrize("name", ["pc-07-venus", "pc-07-mars", "pc-07-jupiter"])
def test_pc_07_venus_pc_07_mars_pc_07_jupiter_hohmann(name: str) -> None:
    given = CASES[name].inputs
    cruise = transfers.hohmann(given["mu_sun_m3_per_s2"], given["r1_m"], given["r2_m"])
    r = given["earth_radius_m"] + given["parking_alt_m"]
    CASES[name].agree(
        {
            "C3_m2_per_s2": hyperbolas.characteristic_energy(cruise.first.dv),
            "v_infinity_departure_m_per_s": cruise.first.dv,
            "v_infinity_arrival_m_per_s": cruise.second.dv,
            "departure_delta_v_m_per_s": manoeuvres.escape_burn(
                given["mu_earth_m3_per_s2"], Apsis(r, r), cruise.first.dv, 0.0
            ).dv,
            "transfer_time_s": cruise.tof,
        }
    )


def test_pc_08_moon_and_back_into_orbit() -> None:
    given = CASES["pc-08"].inputs
    r, r_moon = given["moon_orbit_radius_m"], given["moon_distance_m"]
    cruise = transfers.hohmann(given["mu_earth_m3_per_s2"], given["parking_radius_m"], r_moon)
    CASES["pc-08"].agree(
        {
            "tli_delta_v_m_per_s": cruise.first.dv,
            "v_infinity_moon_m_per_s": cruise.second.dv,
            "loi_delta_v_m_per_s": manoeuvres.capture_burn(
                given["mu_moon_m3_per_s2"], Apsis(r, r), cruise.second.dv, 0.0
            ).dv,
            "transfer_time_s": cruise.tof,
        }
    )
