"""Impulsive manoeuvres, against Curtis, Vallado and closed forms."""

import math

from burntally_service.kernels import manoeuvres, orbits, rocket, transfers
from burntally_service.kernels.manoeuvres import Apsis
from tests.published.cases import cases

CASES = cases("orbits_manoeuvres")


def circle(r: float) -> Apsis:
    """A circular orbit."""
    return Apsis(r, r)


def hohmann_figures(mu: float, r_1: float, r_2: float) -> dict[str, float]:
    """What most sources print of a Hohmann transfer."""
    transfer = transfers.hohmann(mu, r_1, r_2)
    return {
        "delta_v1_m_per_s": transfer.first.dv,
        "delta_v2_m_per_s": transfer.second.dv,
        "delta_v_total_m_per_s": transfer.dv,
        "transfer_time_s": transfer.tof,
    }


def test_orb_01_curtis_example_6_1() -> None:
    given = CASES["orb-01"].inputs
    r = given["body_radius_m"]
    start = Apsis(r + given["orbit1_perigee_alt_m"], r + given["orbit1_apogee_alt_m"])
    best = transfers.cheapest_transfer(given["mu_m3_per_s2"], start, circle(r + given["target_circular_alt_m"]), 0.0)
    c = given["isp_s"] * given["g0_m_per_s2"]
    CASES["orb-01"].agree(
        {
            "delta_v1_m_per_s": best.first.dv,
            "delta_v2_m_per_s": best.second.dv,
            "delta_v_total_m_per_s": best.dv,
            "propellant_kg": rocket.propellant_burned(given["spacecraft_mass_kg"], best.dv, c),
        }
    )


def test_orb_01_is_dearer_from_the_apogee() -> None:
    given = CASES["orb-01"].inputs
    r, ring = given["body_radius_m"], circle(given["body_radius_m"] + given["target_circular_alt_m"])
    start = Apsis(r + given["orbit1_apogee_alt_m"], r + given["orbit1_perigee_alt_m"])
    other = transfers.apsis_transfer(given["mu_m3_per_s2"], start, ring, 0.0)
    assert other.dv > CASES["orb-01"].expected["delta_v_total_m_per_s"]


def test_orb_02_vallado_example_6_1() -> None:
    given = CASES["orb-02"].inputs
    r = given["body_radius_m"]
    CASES["orb-02"].agree(hohmann_figures(given["mu_m3_per_s2"], r + given["alt1_m"], r + given["alt2_m"]))


def test_orb_03_vallado_example_6_2() -> None:
    given = CASES["orb-03"].inputs
    r, r_b = given["body_radius_m"], given["body_radius_m"] + given["alt_intermediate_m"]
    low, high = circle(r + given["alt1_m"]), circle(r + given["alt2_m"])
    path = transfers.bielliptic(given["mu_m3_per_s2"], low, r_b, high, 0.0)
    CASES["orb-03"].agree(
        {
            "delta_v_m_per_s": [path.first.transverse, path.second.transverse, path.third.transverse],
            "delta_v_total_m_per_s": path.dv,
            "transfer_time_s": path.tof_1 + path.tof_2,
        }
    )


def test_orb_04_curtis_example_6_3() -> None:
    given = CASES["orb-04"].inputs
    mu, r_1, r_2 = given["mu_m3_per_s2"], given["r1_m"], given["r2_m"]
    direct = transfers.hohmann(mu, r_1, r_2)
    detour = transfers.bielliptic(mu, circle(r_1), given["r_intermediate_m"], circle(r_2), 0.0)
    CASES["orb-04"].agree(
        {
            "hohmann_delta_v_m_per_s": direct.dv,
            "hohmann_time_s": direct.tof,
            "bielliptic_delta_v_m_per_s": detour.dv,
            "bielliptic_time_s": detour.tof_1 + detour.tof_2,
        }
    )


def saving(ratio: float, widening: float) -> float:
    """What a bi-elliptic path saves between circles of a ratio, with its middle so many times beyond the wider one."""
    detour = transfers.bielliptic(1.0, circle(1.0), ratio * widening, circle(ratio), 0.0)
    return transfers.hohmann(1.0, 1.0, ratio).dv - detour.dv


def test_orb_05_hohmann_is_better_below_the_first_ratio() -> None:
    ratio = CASES["orb-05"].expected["ratio_hohmann_always_better_below"]
    # The bound is met where the middle is at infinity.
    assert saving(ratio * (1.0 - 1e-6), 1e12) < 0.0 < saving(ratio * (1.0 + 1e-6), 1e12)


def test_orb_05_any_bielliptic_is_better_above_the_second_ratio() -> None:
    ratio = CASES["orb-05"].expected["ratio_any_bielliptic_better_above"]
    # The bound is met where the middle is hardly beyond the target.
    assert saving(ratio * (1.0 - 1e-3), 1.0 + 1e-5) < 0.0 < saving(ratio * (1.0 + 1e-3), 1.0 + 1e-5)


def test_orb_06_curtis_example_6_5() -> None:
    given = CASES["orb-06"].inputs
    ring, shift = circle(given["geo_radius_m"]), math.radians(given["shift_deg_west"])
    path = transfers.phasing(given["mu_m3_per_s2"], ring, -shift, float(given["revolutions"]))
    CASES["orb-06"].agree(
        {
            "phasing_period_s": path.period,
            "phasing_semi_major_axis_m": 0.5 * (ring.r + path.r_opposite),
            "delta_v_total_m_per_s": path.dv,
        }
    )


def test_orb_07_curtis_plane_change_to_geo() -> None:
    given = CASES["orb-07"].inputs
    mu, r_1, r_2 = given["mu_m3_per_s2"], given["r1_m"], given["r2_m"]
    angle = math.radians(given["inclination_deg"])
    flat = transfers.hohmann(mu, r_1, r_2)
    high = manoeuvres.apsis_change(mu, Apsis(r_2, r_1), r_2, angle)
    low = manoeuvres.apsis_change(mu, circle(r_1), r_2, angle)
    CASES["orb-07"].agree(
        {
            "dv_perigee_m_per_s": flat.first.dv,
            "dv_apogee_combined_m_per_s": high.dv,
            "total_plane_change_at_apogee_m_per_s": flat.first.dv + high.dv,
            "total_plane_change_in_leo_m_per_s": low.dv + flat.second.dv,
        }
    )


def test_orb_08_vallado_optimum_split() -> None:
    given = CASES["orb-08"].inputs
    mu, r_1, r_2 = given["mu_m3_per_s2"], given["r1_m"], given["r2_m"]
    angle = math.radians(given["inclination_deg"])
    flat, best = transfers.hohmann(mu, r_1, r_2), transfers.apsis_transfer(mu, circle(r_1), circle(r_2), angle)
    CASES["orb-08"].agree(
        {
            "optimum_first_burn_plane_change_deg": math.degrees(best.first.plane_change),
            "delta_v_total_m_per_s": best.dv,
            "delta_v_all_at_apogee_m_per_s": flat.first.dv
            + manoeuvres.apsis_change(mu, Apsis(r_2, r_1), r_2, angle).dv,
            "delta_v_all_at_perigee_m_per_s": manoeuvres.apsis_change(mu, circle(r_1), r_2, angle).dv + flat.second.dv,
        }
    )


def test_orb_09_simple_plane_change() -> None:
    given = CASES["orb-09"].inputs
    v = orbits.circular_speed(given["mu_m3_per_s2"], given["r_m"])
    dv = manoeuvres.plane_change(v, math.radians(given["inclination_change_deg"]))
    CASES["orb-09"].agree({"delta_v_m_per_s": dv})


def test_orb_10_deorbit() -> None:
    given = CASES["orb-10"].inputs
    r, r_peri = given["body_radius_m"], given["body_radius_m"] + given["perigee_alt_m"]
    burns = [manoeuvres.apsis_change(given["mu_m3_per_s2"], circle(r + alt), r_peri, 0.0) for alt in given["alt_m"]]
    CASES["orb-10"].agree({"delta_v_m_per_s": [-burn.transverse for burn in burns]})


def test_orb_11_escape() -> None:
    given = CASES["orb-11"].inputs
    mu, r = given["mu_m3_per_s2"], given["r_m"]
    CASES["orb-11"].agree(
        {
            "circular_speed_m_per_s": orbits.circular_speed(mu, r),
            "delta_v_m_per_s": manoeuvres.escape_burn(mu, circle(r), 0.0, 0.0).dv,
        }
    )


def test_orb_12_small_raise() -> None:
    given = CASES["orb-12"].inputs
    r = given["body_radius_m"]
    CASES["orb-12"].agree(hohmann_figures(given["mu_m3_per_s2"], r + given["alt1_m"], r + given["alt2_m"]))
