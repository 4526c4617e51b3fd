"""Burns on one line through the body, half a revolution apart."""

import math

import pytest

from burntally_service.kernels.ellipses import Place, apse_turn, apsis_place, coasting_time, ellipse_place
from burntally_service.kernels.half_turns import half_turn, half_turn_arc, two_half_turns, widest_half_turn
from burntally_service.kernels.manoeuvres import Apsis
from burntally_service.kernels.orbits import orbital_speed, period
from burntally_service.kernels.transfers import apsis_transfer, bielliptic

MU = 3.986004418e14
LOW, HIGH, WIDE = 7e6, 42e6, 90e6


def test_an_ellipse_keeps_its_energy() -> None:
    place = ellipse_place(MU, LOW, HIGH, 2.0)
    speed = math.sqrt(place.v_radial**2 + place.v_transverse**2)
    assert speed == pytest.approx(orbital_speed(MU, place.r, 0.5 * (LOW + HIGH)), rel=1e-13)


def test_an_ellipse_keeps_its_angular_momentum() -> None:
    here, there = ellipse_place(MU, LOW, HIGH, 0.3), ellipse_place(MU, LOW, HIGH, 4.0)
    assert here.r * here.v_transverse == pytest.approx(there.r * there.v_transverse, rel=1e-13)


@pytest.mark.parametrize("nu, r, opposite", [(0.0, LOW, HIGH), (math.pi, HIGH, LOW)])
def test_an_apsis_is_a_place_of_the_ellipse(nu: float, r: float, opposite: float) -> None:
    found = ellipse_place(MU, LOW, HIGH, nu)
    assert found == pytest.approx(apsis_place(MU, r, opposite), rel=1e-13, abs=1e-11)


def test_from_apsis_to_apsis_takes_half_a_period() -> None:
    found = coasting_time(MU, LOW, HIGH, 0.0, math.pi)
    assert found == pytest.approx(0.5 * period(MU, 0.5 * (LOW + HIGH)), rel=1e-14)


@pytest.mark.parametrize("nu", [0.5, 2.0, 3.0, 4.0, 6.0])
def test_there_and_on_is_a_period(nu: float) -> None:
    there, on = coasting_time(MU, LOW, HIGH, nu, 1.0), coasting_time(MU, LOW, HIGH, 1.0, nu)
    assert there + on == pytest.approx(period(MU, 0.5 * (LOW + HIGH)), rel=1e-13)


def test_two_burns_from_apsides_are_the_apsidal_transfer() -> None:
    found = half_turn(MU, apsis_place(MU, LOW, LOW), apsis_place(MU, HIGH, WIDE), 0.4)
    known = apsis_transfer(MU, Apsis(LOW, LOW), Apsis(HIGH, WIDE), 0.4)
    assert (found.dv, found.arc.tof) == pytest.approx((known.dv, known.tof), rel=1e-12)


def test_three_burns_from_apsides_are_the_bielliptic_transfer() -> None:
    found = two_half_turns(MU, apsis_place(MU, LOW, LOW), WIDE, apsis_place(MU, HIGH, HIGH), 0.4)
    known = bielliptic(MU, Apsis(LOW, LOW), WIDE, Apsis(HIGH, HIGH), 0.4)
    tofs = (found.arc_1.tof, found.arc_2.tof)
    assert (found.dv, *tofs) == pytest.approx((known.dv, known.tof_1, known.tof_2), rel=1e-12)


@pytest.mark.parametrize("nu", [0.2, 1.5, 3.0, 4.5])
def test_along_one_ellipse_nothing_is_burned(nu: float) -> None:
    ends = ellipse_place(MU, LOW, HIGH, nu), ellipse_place(MU, LOW, HIGH, nu + math.pi)
    assert half_turn(MU, *ends, 0.0).dv == pytest.approx(0.0, abs=1e-8)


@pytest.mark.parametrize("nu", [0.2, 1.5, 3.0, 4.5])
def test_the_arc_along_an_ellipse_takes_its_time(nu: float) -> None:
    here, there = ellipse_place(MU, LOW, HIGH, nu), ellipse_place(MU, LOW, HIGH, nu + math.pi)
    arc = half_turn_arc(MU, here.r, there.r, here.v_radial)
    assert arc.tof == pytest.approx(coasting_time(MU, LOW, HIGH, nu, nu + math.pi), rel=1e-12)


def test_an_arc_that_falls_passes_the_periapsis() -> None:
    here, there = ellipse_place(MU, LOW, HIGH, -1.0), ellipse_place(MU, LOW, HIGH, math.pi - 1.0)
    arc = half_turn_arc(MU, here.r, there.r, here.v_radial)
    assert (arc.r_min, arc.r_max) == pytest.approx((LOW, there.r), rel=1e-12)


def test_an_arc_that_rises_passes_the_apoapsis() -> None:
    here, there = ellipse_place(MU, LOW, HIGH, 1.0), ellipse_place(MU, LOW, HIGH, math.pi + 1.0)
    arc = half_turn_arc(MU, here.r, there.r, here.v_radial)
    assert (arc.r_min, arc.r_max) == pytest.approx((here.r, HIGH), rel=1e-12)


def test_the_burns_sum_to_the_whole() -> None:
    found = half_turn(MU, ellipse_place(MU, LOW, HIGH, 0.7), apsis_place(MU, WIDE, WIDE), 0.3)
    assert found.first.dv + found.second.dv == pytest.approx(found.dv, rel=1e-13)


def test_the_radial_speeds_are_shared_at_best() -> None:
    start, end = ellipse_place(MU, LOW, HIGH, 0.7), apsis_place(MU, WIDE, WIDE)
    best = half_turn(MU, start, end, 0.3)
    for shift in (-50.0, 50.0):
        one = math.hypot(best.first.radial + shift, best.first.transverse, best.first.normal)
        other = math.hypot(best.second.radial + shift, best.second.transverse, best.second.normal)
        assert one + other > best.dv


def test_two_burns_leave_on_the_orbit_after() -> None:
    start, end = ellipse_place(MU, LOW, HIGH, 0.7), ellipse_place(MU, HIGH, WIDE, 2.0)
    found = half_turn(MU, start, end, 0.0)
    radial = -(start.v_radial + found.first.radial) + found.second.radial
    assert radial == pytest.approx(end.v_radial, rel=1e-12)


def test_three_burns_leave_on_the_orbit_after() -> None:
    start, end = ellipse_place(MU, LOW, HIGH, 0.7), ellipse_place(MU, HIGH, WIDE, 2.0)
    found = two_half_turns(MU, start, 2.0 * WIDE, end, 0.0)
    after_b = found.second.radial - (start.v_radial + found.first.radial)
    assert -after_b + found.third.radial == pytest.approx(end.v_radial, rel=1e-12)


def test_an_apse_line_turned_by_nothing_costs_nothing() -> None:
    assert apse_turn(MU, LOW, HIGH, 0.0) == 0.0


def test_an_apse_line_turned_right_about_stops_the_greatest_radial_speed() -> None:
    assert apse_turn(MU, LOW, HIGH, math.pi) == pytest.approx(
        2.0 * ellipse_place(MU, LOW, HIGH, 0.5 * math.pi).v_radial, rel=1e-14
    )


def test_the_widest_way_takes_all_the_time() -> None:
    tof = 5e5
    r_b = widest_half_turn(MU, LOW, HIGH, tof)
    took = 0.5 * (period(MU, 0.5 * (LOW + r_b)) + period(MU, 0.5 * (r_b + HIGH)))
    assert took == pytest.approx(tof, rel=1e-12)


def test_too_little_time_leads_nowhere() -> None:
    assert widest_half_turn(MU, LOW, HIGH, 60.0) == pytest.approx(0.0, abs=1.0)


def test_an_arc_too_fast_for_an_ellipse_is_none() -> None:
    assert math.isnan(half_turn_arc(MU, LOW, HIGH, 2e4).tof)


@pytest.mark.parametrize(
    "found",
    [
        apsis_place(MU, -1.0, LOW).v_transverse,
        ellipse_place(MU, HIGH, LOW, 0.0).r,
        coasting_time(MU, HIGH, LOW, 0.0, 1.0),
        coasting_time(MU, LOW, HIGH, 0.0, math.inf),
        apse_turn(MU, LOW, HIGH, 4.0),
        half_turn_arc(MU, 0.0, HIGH, 0.0).tof,
        half_turn(MU, Place(-1.0, 0.0, 1.0), apsis_place(MU, HIGH, HIGH), 0.0).dv,
        two_half_turns(MU, Place(-1.0, 0.0, 1.0), WIDE, apsis_place(MU, HIGH, HIGH), 0.0).dv,
        widest_half_turn(MU, LOW, HIGH, math.inf),
        widest_half_turn(MU, 0.0, HIGH, 1.0),
        widest_half_turn(1e300, LOW, HIGH, 1e308),
    ],
)
def test_outside_its_domain_it_is_nan(found: float) -> None:
    assert math.isnan(found)
