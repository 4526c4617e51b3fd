"""What holds for every transfer."""

import math
from typing import Any

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from burntally.model.mission import Orbit, OrbitLocation, Transfer
from tests.unit.legs.worlds import GEO, R_EARTH, flown, orbit, world

altitudes = st.floats(200e3, 40e6)
inclinations = st.floats(0.0, 180.0)
angles = st.floats(0.0, 360.0)


@st.composite
def orbits(draw: st.DrawFn) -> OrbitLocation:
    """Any orbit whose elements are all known."""
    low, high = sorted((draw(altitudes), draw(altitudes)))
    return OrbitLocation(
        body="tessaly",
        periapsis=low,
        apoapsis=high,
        inclination=draw(inclinations),
        raan=draw(angles),
        argument_of_periapsis=draw(angles),
    )


def target_of(location: OrbitLocation, **changed: Any) -> Orbit:
    """The same orbit as a target."""
    fields = ("periapsis", "apoapsis", "inclination", "raan", "argument_of_periapsis")
    return Orbit(**{**{field: getattr(location, field) for field in fields}, **changed})


def cost(start: OrbitLocation, to: Orbit, **limits: Any) -> float:
    """Cost of the cheapest way; infinite if there is none."""
    plan = flown(Transfer(to=to, **limits), start)
    return plan.delta_v if not plan.findings else math.inf


@given(orbits())
def test_no_change_costs_nothing(start: OrbitLocation) -> None:
    assert cost(start, target_of(start)) == 0.0


@given(orbits(), orbits())
def test_a_way_back_costs_what_the_way_there_does(one: OrbitLocation, other: OrbitLocation) -> None:
    there, back = cost(one, target_of(other)), cost(other, target_of(one))
    assert there == pytest.approx(back, rel=1e-6, abs=1e-3)


@given(orbits(), orbits())
def test_a_leg_ends_where_it_was_asked_to(start: OrbitLocation, end: OrbitLocation) -> None:
    assert flown(Transfer(to=target_of(end)), start).end == end


@given(orbits(), orbits())
def test_directions_are_unit_vectors(start: OrbitLocation, end: OrbitLocation) -> None:
    for burn in flown(Transfer(to=target_of(end)), start).manoeuvres:
        assert burn.direction is not None
        assert math.hypot(*burn.direction) == pytest.approx(1.0, rel=1e-12)


@given(orbits(), altitudes, st.floats(0.0, 3e5), st.floats(1.0, 3.0))
def test_less_time_never_costs_less(start: OrbitLocation, altitude: float, limit: float, more: float) -> None:
    to = Orbit(altitude=altitude)
    assert cost(start, to, time_limit=limit) >= cost(start, to, time_limit=limit * more) - 1e-3


@given(orbits(), altitudes, st.floats(4e7, 4e8), st.floats(1.0, 3.0))
def test_a_lower_ceiling_never_costs_less(start: OrbitLocation, altitude: float, ceiling: float, more: float) -> None:
    to = Orbit(altitude=altitude, inclination=50.0)
    assert cost(start, to, apoapsis_max=ceiling) >= cost(start, to, apoapsis_max=ceiling * more) - 1e-3


@given(orbits(), altitudes, altitudes)
def test_a_floor_never_costs_less(start: OrbitLocation, altitude: float, floor: float) -> None:
    to = Orbit(altitude=altitude)
    assert cost(start, to, periapsis_min=floor) >= cost(start, to)


@given(orbits(), orbits())
def test_a_pinned_strategy_never_costs_less(start: OrbitLocation, end: OrbitLocation) -> None:
    to = target_of(end)
    assert cost(start, to, strategy="hohmann", apoapsis_max=2e8) >= cost(start, to, apoapsis_max=2e8)


@given(orbits(), orbits(), st.sampled_from((0.5, 3.0, 1e3)))
def test_a_world_of_another_scale_costs_as_its_speeds(start: OrbitLocation, end: OrbitLocation, scale: float) -> None:
    to = Orbit(altitude=(R_EARTH + (end.periapsis or 0.0)) * scale - 1.0, inclination=end.inclination)
    big = OrbitLocation(
        body="tessaly",
        periapsis=(R_EARTH + (start.periapsis or 0.0)) * scale - 1.0,
        apoapsis=(R_EARTH + (start.apoapsis or 0.0)) * scale - 1.0,
        inclination=start.inclination,
        argument_of_periapsis=start.argument_of_periapsis,
    )
    small = flown(
        Transfer(to=Orbit(altitude=end.periapsis, inclination=end.inclination)),
        OrbitLocation(
            body="tessaly",
            periapsis=start.periapsis,
            apoapsis=start.apoapsis,
            inclination=start.inclination,
            argument_of_periapsis=start.argument_of_periapsis,
        ),
    )
    large = flown(Transfer(to=to), big, world(radius=1.0))
    assert large.delta_v * math.sqrt(scale) == pytest.approx(small.delta_v, rel=1e-7, abs=1e-4)


@given(altitudes, altitudes, inclinations)
def test_the_plane_is_never_cheaper_to_turn_than_to_keep(low: float, high: float, inclination: float) -> None:
    start = orbit(altitude=low, inclination=inclination)
    assert cost(start, Orbit(altitude=high, inclination=180.0 - inclination)) >= cost(start, Orbit(altitude=high))


@given(st.floats(0.0, 360.0), st.floats(1e-7, 1e-5), st.floats(0.0, 60.0))
def test_turning_the_apse_line_a_little_changes_the_cost_a_little(argp: float, step: float, inclination: float) -> None:
    def from_gto(argument: float) -> float:
        start = orbit(
            periapsis=250e3, apoapsis=GEO, inclination=inclination, argument_of_periapsis=min(argument, 360.0)
        )
        return cost(start, Orbit(altitude=GEO, inclination=0.0))

    assert from_gto(argp) == pytest.approx(from_gto(argp + step), abs=1e-3 + 300.0 * step)


@given(altitudes, st.floats(0.0, 1e3), st.floats(0.0, 60.0), angles)
def test_a_circle_and_an_ellipse_that_is_nearly_one_cost_the_same(
    low: float, more: float, inclination: float, argp: float
) -> None:
    circle = orbit(altitude=low, inclination=inclination)
    nearly = orbit(periapsis=low, apoapsis=low + more, inclination=inclination, argument_of_periapsis=argp)
    to = Orbit(altitude=GEO, inclination=5.0)
    assert cost(circle, to) == pytest.approx(cost(nearly, to), abs=2.0)


@given(st.floats(1.05, 40.0), st.floats(1e-9, 1e-7))
def test_the_cost_does_not_jump_where_another_strategy_takes_over(ratio: float, step: float) -> None:
    r = R_EARTH + 200e3

    def to_ratio(q: float) -> float:
        return cost(orbit(altitude=200e3), Orbit(altitude=q * r - R_EARTH), apoapsis_max=60.0 * r)

    assert to_ratio(ratio) == pytest.approx(to_ratio(ratio * (1.0 + step)), abs=1e-2)


@given(orbits())
def test_a_period_says_the_same_as_an_apoapsis(start: OrbitLocation) -> None:
    assume(start.apoapsis is not None and start.periapsis is not None)
    low, high = R_EARTH + (start.periapsis or 0.0), R_EARTH + (start.apoapsis or 0.0)
    period = 2.0 * math.pi * math.sqrt((0.5 * (low + high)) ** 3 / world()["tessaly"].mu)
    assume(period * (1.0 - 1e-12) > 2.0 * math.pi * math.sqrt(low**3 / world()["tessaly"].mu))
    by_apoapsis = cost(orbit(altitude=300e3), Orbit(periapsis=start.periapsis, apoapsis=start.apoapsis))
    by_period = cost(orbit(altitude=300e3), Orbit(periapsis=start.periapsis, period=period))
    assert by_period == pytest.approx(by_apoapsis, rel=1e-9, abs=1e-3)
