"""What holds for every two-body orbit."""

import math

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from burntally_service.kernels import atmosphere, hyperbolas, orbits
from burntally_service.kernels.manoeuvres import Apsis
from tests.laws.strategies import APSIS, MU, RADIUS, SPAN

V_INF = st.floats(1.0, 1e5)


@given(MU, APSIS)
def test_both_apsides_have_one_energy(mu: float, apsis: Apsis) -> None:
    r, o = apsis
    here = 0.5 * orbits.apsis_speed(mu, r, o) ** 2 - mu / r
    there = 0.5 * orbits.apsis_speed(mu, o, r) ** 2 - mu / o
    assert here == pytest.approx(there, rel=1e-9, abs=1e-12 * mu / min(r, o))


@given(MU, APSIS)
def test_both_apsides_have_one_angular_momentum(mu: float, apsis: Apsis) -> None:
    r, o = apsis
    assert r * orbits.apsis_speed(mu, r, o) == pytest.approx(o * orbits.apsis_speed(mu, o, r), rel=1e-12)


@given(MU, APSIS)
def test_apsis_speed_is_vis_viva(mu: float, apsis: Apsis) -> None:
    r, o = apsis
    assume(r < 1e3 * o)
    assert orbits.apsis_speed(mu, r, o) == pytest.approx(orbits.orbital_speed(mu, r, 0.5 * (r + o)), rel=1e-9)


@given(MU, RADIUS)
def test_circle_and_parabola_are_limits(mu: float, r: float) -> None:
    assert orbits.apsis_speed(mu, r, r) == pytest.approx(orbits.circular_speed(mu, r), rel=1e-15)
    assert orbits.apsis_speed(mu, r, math.inf) == orbits.escape_speed(mu, r)


@given(MU, RADIUS)
def test_period_and_size_are_inverse(mu: float, sma: float) -> None:
    assert orbits.semi_major_axis(mu, orbits.period(mu, sma)) == pytest.approx(sma, rel=1e-13)


@given(MU, RADIUS)
def test_period_is_a_turn_at_mean_motion(mu: float, sma: float) -> None:
    assert orbits.mean_motion(mu, sma) * orbits.period(mu, sma) == pytest.approx(2.0 * math.pi, rel=1e-14)


@given(MU, SPAN, SPAN, SPAN)
def test_speed_change_is_the_difference_of_the_speeds(mu: float, r: float, before: float, after: float) -> None:
    v_i, v_f = orbits.apsis_speed(mu, r, before), orbits.apsis_speed(mu, r, after)
    assert orbits.apsis_speed_change(mu, r, before, after) == pytest.approx(v_f - v_i, rel=1e-9, abs=1e-13 * v_i)


@given(MU, RADIUS, st.floats(1e-12, 1e-6))
def test_a_tiny_raise_keeps_its_digits(mu: float, r: float, part: float) -> None:
    after = r * (1.0 + part)
    rise = (after - r) / r
    change = orbits.apsis_speed_change(mu, r, r, after)
    # First two terms of the series of sqrt(2 mu / r / (1 + r / r_o)) about the circle.
    assert change == pytest.approx(orbits.circular_speed(mu, r) * rise * (0.25 - 0.15625 * rise), rel=1e-9)


@given(MU, APSIS, V_INF)
def test_escape_keeps_the_energy_of_its_excess(mu: float, apsis: Apsis, v_inf: float) -> None:
    r, o = apsis
    v = orbits.apsis_speed(mu, r, o) + hyperbolas.hyperbolic_speed_change(mu, r, o, v_inf)
    assert v * v - 2.0 * mu / r == pytest.approx(v_inf * v_inf, rel=1e-9, abs=1e-12 * mu / r)


@given(MU, RADIUS, V_INF)
def test_turn_and_asymptote_belong_together(mu: float, r: float, v_inf: float) -> None:
    ecc = hyperbolas.hyperbola_eccentricity(mu, r, v_inf)
    half_turn = 0.5 * hyperbolas.turn_angle(ecc)
    assert half_turn + hyperbolas.asymptote_angle(ecc) == pytest.approx(0.5 * math.pi, rel=1e-7)


@given(MU, RADIUS, V_INF)
def test_aiming_radius_keeps_angular_momentum(mu: float, r: float, v_inf: float) -> None:
    h = r * hyperbolas.hyperbolic_speed(mu, r, v_inf)
    assert hyperbolas.aiming_radius(mu, r, v_inf) * v_inf == pytest.approx(h, rel=1e-12)


@given(st.floats(100.0, 1e5), st.floats(0.0, 0.9), st.floats(0.5, 2.0))
def test_no_periapsis_captures_cheaper(v_inf: float, ecc: float, part: float) -> None:
    best = hyperbolas.cheapest_capture_radius(4e14, v_inf, ecc)
    widening = (1.0 + ecc) / (1.0 - ecc)

    def cost(r: float) -> float:
        return hyperbolas.hyperbolic_speed_change(4e14, r, r * widening, v_inf)

    assert cost(best) <= cost(part * best) * (1.0 + 1e-12)


@given(st.floats(1.0, 1e9), st.floats(1.0, 1e9))
def test_synodic_rate_is_the_difference_of_the_rates(one: float, other: float) -> None:
    assume(abs(one - other) > 1e-3 * one)
    assert 1.0 / orbits.synodic_period(one, other) == pytest.approx(abs(1.0 / one - 1.0 / other), rel=1e-9)


@given(st.floats(-5e3, 1e6))
def test_geometric_and_geopotential_altitude_are_inverse(alt: float) -> None:
    h = atmosphere.geopotential_altitude(alt, 6356766.0)
    assert atmosphere.geometric_altitude(h, 6356766.0) == pytest.approx(alt, rel=1e-12, abs=1e-9)
