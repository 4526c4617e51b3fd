"""Published manoeuvres, planned as whole legs."""

import pytest

from burntally.model.mission import Deorbit, Hyperbola, Orbit, OrbitLocation, Transfer
from tests.published.cases import case_named
from tests.unit.legs.worlds import codes, flown, orbit, transfer, world


def circle_of(mu: float, speed: float) -> float:
    """Radius of the circular orbit with a speed [m]."""
    return mu / speed / speed


def test_curtis_example_6_1_from_an_ellipse_to_a_circle() -> None:
    given, expected, rel = case_named("orbits_manoeuvres", "orb-01")
    start = orbit(periapsis=given["orbit1_perigee_alt_m"], apoapsis=given["orbit1_apogee_alt_m"])
    plan = flown(
        transfer(altitude=given["target_circular_alt_m"]), start, world(given["mu_m3_per_s2"], given["body_radius_m"])
    )
    assert [burn.delta_v for burn in plan.manoeuvres] == pytest.approx(
        [expected["delta_v1_m_per_s"], expected["delta_v2_m_per_s"]], rel=rel
    )


def test_vallado_example_6_1_hohmann() -> None:
    given, expected, rel = case_named("orbits_manoeuvres", "orb-02")
    bodies = world(given["mu_m3_per_s2"], given["body_radius_m"])
    plan = flown(transfer(altitude=given["alt2_m"]), orbit(altitude=given["alt1_m"]), bodies)
    assert (plan.delta_v, plan.duration) == pytest.approx(
        (expected["delta_v_total_m_per_s"], expected["transfer_time_s"]), rel=rel
    )


def test_vallado_example_6_2_bielliptic() -> None:
    given, expected, rel = case_named("orbits_manoeuvres", "orb-03")
    bodies = world(given["mu_m3_per_s2"], given["body_radius_m"])
    leg = Transfer(to=Orbit(altitude=given["alt2_m"]), strategy="bielliptic", apoapsis_max=given["alt_intermediate_m"])
    plan = flown(leg, orbit(altitude=given["alt1_m"]), bodies)
    signed = [burn.delta_v * burn.direction[1] for burn in plan.manoeuvres if burn.direction]
    assert signed == pytest.approx(expected["delta_v_m_per_s"], rel=rel)
    assert plan.duration == pytest.approx(expected["transfer_time_s"], rel=rel)


@pytest.mark.parametrize("strategy", ["hohmann", "bielliptic"])
def test_curtis_example_6_3_hohmann_against_bielliptic(strategy: str) -> None:
    given, expected, rel = case_named("orbits_manoeuvres", "orb-04")
    leg = Transfer(
        to=Orbit(altitude=given["r2_m"] - 1.0),
        strategy="hohmann" if strategy == "hohmann" else "bielliptic",
        apoapsis_max=given["r_intermediate_m"] - 1.0,
    )
    plan = flown(leg, orbit(altitude=given["r1_m"] - 1.0), world(given["mu_m3_per_s2"], 1.0))
    assert plan.delta_v == pytest.approx(expected[f"{strategy}_delta_v_m_per_s"], rel=rel)
    assert plan.duration == pytest.approx(expected[f"{strategy}_time_s"], rel=rel)


def test_curtis_example_6_3_takes_the_bielliptic_and_tells_the_other() -> None:
    given, expected, rel = case_named("orbits_manoeuvres", "orb-04")
    leg = Transfer(to=Orbit(altitude=given["r2_m"] - 1.0), apoapsis_max=given["r_intermediate_m"] - 1.0)
    plan = flown(leg, orbit(altitude=given["r1_m"] - 1.0), world(given["mu_m3_per_s2"], 1.0))
    assert plan.strategy == "bielliptic"
    assert plan.alternatives[0].delta_v == pytest.approx(expected["hohmann_delta_v_m_per_s"], rel=rel)


def test_curtis_plane_change_at_geo_is_bettered_by_the_split() -> None:
    given, expected, rel = case_named("orbits_manoeuvres", "orb-07")
    bodies = world(given["mu_m3_per_s2"], 1.0)
    start = orbit(altitude=given["r1_m"] - 1.0, inclination=given["inclination_deg"])
    plan = flown(transfer(altitude=given["r2_m"] - 1.0, inclination=0.0), start, bodies)
    whole = expected["total_plane_change_at_apogee_m_per_s"]
    assert 0.99 * whole < plan.delta_v < whole * (1.0 + rel)


def test_optimal_split_from_leo_to_geo() -> None:
    given, expected, rel = case_named("orbits_manoeuvres", "orb-08")
    bodies = world(given["mu_m3_per_s2"], 1.0)
    start = orbit(altitude=given["r1_m"] - 1.0, inclination=given["inclination_deg"])
    plan = flown(transfer(altitude=given["r2_m"] - 1.0, inclination=0.0), start, bodies)
    assert plan.delta_v == pytest.approx(expected["delta_v_total_m_per_s"], rel=rel)
    assert plan.manoeuvres[0].plane_change_deg == pytest.approx(
        expected["optimum_first_burn_plane_change_deg"], abs=0.003
    )


def test_simple_plane_change() -> None:
    given, expected, rel = case_named("orbits_manoeuvres", "orb-09")
    start = orbit(altitude=given["r_m"] - 1.0, inclination=50.0)
    plan = flown(transfer(inclination=50.0 + given["inclination_change_deg"]), start, world(given["mu_m3_per_s2"], 1.0))
    assert plan.delta_v == pytest.approx(expected["delta_v_m_per_s"], rel=rel)


@pytest.mark.parametrize("row", [0, 1, 2])
def test_deorbit_to_50_km(row: int) -> None:
    given, expected, rel = case_named("orbits_manoeuvres", "orb-10")
    bodies = world(given["mu_m3_per_s2"], given["body_radius_m"])
    plan = flown(Deorbit(periapsis=given["perigee_alt_m"]), orbit(altitude=given["alt_m"][row]), bodies)
    assert plan.delta_v == pytest.approx(expected["delta_v_m_per_s"][row], rel=rel)


def test_reboost_of_a_station() -> None:
    given, expected, rel = case_named("orbits_manoeuvres", "orb-12")
    bodies = world(given["mu_m3_per_s2"], given["body_radius_m"])
    plan = flown(transfer(altitude=given["alt2_m"]), orbit(altitude=given["alt1_m"]), bodies)
    found = [burn.delta_v for burn in plan.manoeuvres]
    assert found == pytest.approx([expected["delta_v1_m_per_s"], expected["delta_v2_m_per_s"]], rel=rel)
    assert plan.duration == pytest.approx(expected["transfer_time_s"], rel=rel)


def test_apogee_burn_of_a_gto_satellite() -> None:
    given, expected, rel = case_named("end_to_end", "e2e-01")
    geo = given["geo_radius_m"] - given["body_radius_m"]
    start = orbit(periapsis=given["gto_perigee_alt_m"], apoapsis=geo, inclination=given["inclination_deg"])
    bodies = world(given["mu_m3_per_s2"], given["body_radius_m"])
    plan = flown(transfer(altitude=geo, inclination=0.0), start, bodies)
    assert [burn.delta_v for burn in plan.manoeuvres] == pytest.approx([expected["apogee_burn_m_per_s"]], rel=rel)


def test_graveyard_above_geo() -> None:
    given, expected, rel = case_named("end_to_end", "e2e-01")
    geo = given["geo_radius_m"] - given["body_radius_m"]
    bodies = world(given["mu_m3_per_s2"], given["body_radius_m"])
    plan = flown(transfer(altitude=geo + given["graveyard_raise_m"]), orbit(altitude=geo), bodies)
    assert plan.delta_v == pytest.approx(expected["graveyard_m_per_s"], rel=rel)


def test_deorbit_of_an_observer() -> None:
    given, expected, rel = case_named("end_to_end", "e2e-03")
    bodies = world(given["mu_m3_per_s2"], given["body_radius_m"])
    plan = flown(Deorbit(periapsis=given["deorbit_perigee_alt_m"]), orbit(altitude=given["alt_m"]), bodies)
    assert plan.delta_v == pytest.approx(expected["deorbit_m_per_s"], rel=rel)


def test_curtis_example_8_5_capture_by_period() -> None:
    given, expected, rel = case_named("patched_conic", "pc-04")
    arrival = Hyperbola(body="tessaly", c3=expected["v_infinity_m_per_s"] ** 2, approaching=True)
    leg = transfer(periapsis=expected["periapsis_radius_m"] - 1.0, period=given["capture_period_s"])
    plan = flown(leg, arrival, world(given["mu_body_m3_per_s2"], 1.0))
    assert plan.delta_v == pytest.approx(expected["delta_v_m_per_s"], rel=rel)
    assert [burn.name for burn in plan.manoeuvres] == ["capture"]


def test_lunar_orbit_insertion() -> None:
    given, expected, rel = case_named("patched_conic", "pc-08")
    arrival = Hyperbola(body="tessaly", c3=expected["v_infinity_moon_m_per_s"] ** 2, approaching=True)
    plan = flown(transfer(altitude=given["moon_orbit_radius_m"] - 1.0), arrival, world(given["mu_moon_m3_per_s2"], 1.0))
    assert plan.delta_v == pytest.approx(expected["loi_delta_v_m_per_s"], rel=rel)


def test_vallado_example_6_4_circular() -> None:
    given, expected, rel = case_named("plane_changes", "pln-01")
    mu = 398600441500000.0
    start = orbit(altitude=circle_of(mu, given["speed_m_per_s"]) - 1.0, inclination=28.5)
    plan = flown(transfer(inclination=28.5 + given["inclination_change_deg"]), start, world(mu, 1.0))
    assert plan.delta_v == pytest.approx(expected["delta_v_m_per_s"], rel=rel)


def test_vallado_example_6_4_at_the_slower_node_of_an_ellipse() -> None:
    given, expected, rel = case_named("plane_changes", "pln-02")
    slr, ecc, radius = given["semi_latus_rectum_m"], given["eccentricity"], given["body_radius_m"]
    start = OrbitLocation(
        body="tessaly",
        periapsis=slr / (1.0 + ecc) - radius,
        apoapsis=slr / (1.0 - ecc) - radius,
        inclination=30.0,
        argument_of_periapsis=given["argument_of_perigee_deg"],
    )
    leg = transfer(inclination=30.0 + given["inclination_change_deg"])
    plan = flown(leg, start, world(given["mu_m3_per_s2"], radius))
    assert plan.delta_v == pytest.approx(expected["delta_v_m_per_s"], rel=rel)
    assert [burn.place for burn in plan.manoeuvres] == ["node"]


@pytest.mark.parametrize("case_id", ["pln-03", "pln-04"])
def test_vallado_examples_6_5_and_6_6_node_and_inclination(case_id: str) -> None:
    given, expected, rel = case_named("plane_changes", case_id)
    mu = 398600441500000.0
    start = orbit(
        altitude=circle_of(mu, given["speed_m_per_s"]) - 1.0, inclination=given["inclination_i_deg"], raan=20.0
    )
    leg = transfer(inclination=given["inclination_f_deg"], raan=20.0 + given["node_change_deg"])
    plan = flown(leg, start, world(mu, 1.0))
    assert plan.delta_v == pytest.approx(expected["delta_v_m_per_s"], rel=rel)


def test_a_published_leg_finds_nothing_wrong() -> None:
    given, _, _ = case_named("orbits_manoeuvres", "orb-02")
    bodies = world(given["mu_m3_per_s2"], given["body_radius_m"])
    plan = flown(transfer(altitude=given["alt2_m"]), orbit(altitude=given["alt1_m"]), bodies)
    assert codes(plan) == []
