"""Deorbits, coasts, stated legs, and legs that fly nothing."""

import pytest

from burntally.model.errors import UncomputableError
from burntally.model.mission import (
    Allowance,
    Ascend,
    Coast,
    Deorbit,
    Flyby,
    Hyperbola,
    Land,
    Landing,
    Leg,
    Location,
    Orbit,
    Release,
    Rendezvous,
    Separate,
    Site,
    Spiral,
    TakeOn,
    Transfer,
    Transit,
)
from burntally.model.vehicle import Payload
from burntally_service.kernels.constants import JULIAN_YEAR
from burntally_service.legs import Clock
from tests.unit.legs.worlds import codes, flown, orbit, world

LEO = 400e3
SITE = Site(body="tessaly", latitude=5.0)


class TestDeorbit:
    def test_one_burn_at_the_apoapsis(self) -> None:
        plan = flown(Deorbit(periapsis=50e3), orbit(periapsis=LEO, apoapsis=600e3, argument_of_periapsis=30.0))
        assert [(burn.name, burn.place) for burn in plan.manoeuvres] == [("lower periapsis", "apoapsis")]
        assert plan.end == orbit(periapsis=50e3, apoapsis=600e3, argument_of_periapsis=30.0)

    def test_into_the_ground_is_what_it_is_for(self) -> None:
        plan = flown(Deorbit(periapsis=-50e3), orbit(altitude=LEO))
        assert (codes(plan), plan.lowest_periapsis) == ([], None)

    def test_a_periapsis_that_is_lower_already_stays(self) -> None:
        start = orbit(periapsis=40e3, apoapsis=LEO)
        plan = flown(Deorbit(periapsis=50e3), start)
        assert (plan.manoeuvres, plan.end) == ((), start)

    @pytest.mark.parametrize("start", [None, SITE, orbit(inclination=3.0)])
    def test_from_no_orbit_is_a_finding(self, start: Location | None) -> None:
        assert codes(flown(Deorbit(periapsis=50e3), start)) == ["location-unknown"]

    def test_beyond_the_centre_cannot_be_computed(self) -> None:
        with pytest.raises(UncomputableError) as caught:
            flown(Deorbit(periapsis=-9e4), orbit(altitude=LEO), world(radius=8e4))
        assert caught.value.violations[0].pointer == "/periapsis"


class TestCoast:
    def test_without_upkeep_it_only_takes_time(self) -> None:
        plan = flown(Coast(duration=86400.0), orbit(altitude=LEO))
        assert (plan.source, plan.manoeuvres, plan.duration) == ("none", (), 86400.0)

    def test_upkeep_comes_after_the_time(self) -> None:
        plan = flown(Coast(duration=JULIAN_YEAR / 2.0, upkeep_per_year=50.0), orbit(altitude=LEO))
        burn = plan.manoeuvres[0]
        assert (burn.purpose, burn.coast_before, burn.delta_v) == ("upkeep", JULIAN_YEAR / 2.0, 25.0)

    def test_upkeep_may_be_stated(self) -> None:
        plan = flown(Coast(duration=10.0, upkeep_per_year=50.0, delta_v=7.0), None)
        assert (plan.source, plan.delta_v, plan.duration) == ("stated", 7.0, 10.0)

    @pytest.mark.parametrize(
        "until, seconds",
        [
            ("2031-01-02", 82800.0),
            ("2031-01-01T02:00", 3600.0),
            ("2031-01-01T01:00:00.5Z", 0.5),
            ("2031-01-01T01:00:00.000000001Z", 1e-9),
        ],
    )
    def test_until_a_date(self, until: str, seconds: float) -> None:
        plan = flown(Coast(until=until), orbit(altitude=LEO), clock=Clock(elapsed=3600.0, epoch="2031-01-01"))
        assert plan.duration == pytest.approx(seconds, rel=1e-3)

    def test_a_date_that_has_passed_is_a_finding(self) -> None:
        plan = flown(Coast(until="2031-01-01"), orbit(altitude=LEO), clock=Clock(elapsed=60.0, epoch="2031-01-01"))
        assert [(found.code, found.suffix, found.value) for found in plan.findings] == [("time-limit", "/until", -60.0)]

    def test_a_date_without_a_calendar_is_a_finding(self) -> None:
        assert codes(flown(Coast(until="2031-01-01"), orbit(altitude=LEO))) == ["time-limit"]


ENDS: list[tuple[Leg, Location | None, Location | None]] = [
    (Ascend(to=Orbit(altitude=LEO, inclination=5.0), delta_v=9e3), SITE, orbit(altitude=LEO, inclination=5.0)),
    (Ascend(to=Orbit(apoapsis=LEO), delta_v=9e3), SITE, None),
    (Ascend(to=Orbit(altitude=LEO), delta_v=9e3), None, None),
    (Transfer(to=Orbit(apoapsis=900e3), delta_v=1.0), orbit(altitude=LEO), orbit(periapsis=LEO, apoapsis=900e3)),
    (Transfer(to=Orbit(body="tessaly", altitude=LEO), delta_v=1.0), None, orbit(altitude=LEO)),
    (
        Transfer(to=Orbit(inclination=5.0), delta_v=1.0),
        orbit(periapsis=LEO, apoapsis=900e3, argument_of_periapsis=9.0),
        orbit(periapsis=LEO, apoapsis=900e3, inclination=5.0),
    ),
    (
        Transfer(to=Orbit(), delta_v=1.0),
        orbit(periapsis=LEO, apoapsis=900e3, argument_of_periapsis=9.0),
        orbit(periapsis=LEO, apoapsis=900e3, argument_of_periapsis=9.0),
    ),
    (Spiral(to=Orbit(altitude=900e3), delta_v=1.0), orbit(altitude=LEO, raan=3.0), orbit(altitude=900e3, raan=3.0)),
    (Rendezvous(delta_v=1.0), orbit(altitude=LEO), orbit(altitude=LEO)),
    (Rendezvous(to=Orbit(altitude=900e3), delta_v=1.0), orbit(altitude=LEO), orbit(altitude=900e3)),
    (Deorbit(periapsis=50e3, delta_v=1.0), orbit(altitude=LEO), orbit(periapsis=50e3, apoapsis=LEO)),
    (Deorbit(periapsis=50e3, delta_v=1.0), None, None),
    (Land(site=Landing(latitude=3.0), delta_v=1.0), orbit(altitude=LEO), Site(body="tessaly", latitude=3.0)),
    (Land(delta_v=1.0), orbit(altitude=LEO), None),
    (Transit(to=Orbit(body="tessaly", altitude=LEO), delta_v=1.0), orbit(altitude=LEO), orbit(altitude=LEO)),
    (Transit(to=Orbit(body="tessaly"), delta_v=1.0), Hyperbola(body="tessaly", c3=0.0), None),
    (Flyby(delta_v=1.0), Hyperbola(body="tessaly", c3=0.0), None),
    (Allowance(delta_v=1.0), SITE, SITE),
    (Allowance(propellant=1.0), SITE, SITE),
    (Separate(stages=["a"]), SITE, SITE),
    (Release(payload="a"), SITE, SITE),
    (TakeOn(payload=Payload(name="a", mass=1.0)), SITE, SITE),
]


@pytest.mark.parametrize("leg, start, end", ENDS)
def test_where_a_leg_ends_is_the_same_when_its_cost_is_stated(
    leg: Leg, start: Location | None, end: Location | None
) -> None:
    assert flown(leg, start).end == end


@pytest.mark.parametrize("leg, start", [(leg, start) for leg, start, _ in ENDS])
def test_a_leg_that_is_not_computed_finds_nothing_wrong_and_takes_no_time(leg: Leg, start: Location | None) -> None:
    plan = flown(leg, start)
    assert (codes(plan), plan.duration) == ([], 0.0)


def test_a_stated_cost_of_nothing_is_still_a_manoeuvre() -> None:
    plan = flown(Allowance(delta_v=0.0), SITE)
    assert [(burn.name, burn.delta_v) for burn in plan.manoeuvres] == [("stated", 0.0)]


def test_kilograms_are_no_manoeuvre() -> None:
    plan = flown(Allowance(propellant=3.0), SITE)
    assert (plan.source, plan.manoeuvres) == ("stated", ())


def test_a_body_that_is_not_there_cannot_be_computed() -> None:
    with pytest.raises(UncomputableError) as caught:
        flown(Transit(to=Orbit(body="orrin"), delta_v=1.0), orbit(altitude=LEO))
    assert caught.value.violations[0].pointer == "/to/body"


class TestEntering:
    def test_a_leg_that_goes_on_through_the_air_is_noted(self) -> None:
        plan = flown(Coast(duration=1.0), orbit(periapsis=50e3, apoapsis=LEO), world(top=100e3))
        assert [(found.code, found.severity) for found in plan.findings] == [("entering", "note")]

    def test_above_the_air_it_is_not(self) -> None:
        assert codes(flown(Coast(duration=1.0), orbit(altitude=LEO), world(top=100e3))) == []

    @pytest.mark.parametrize("leg", [Land(delta_v=1.0), Allowance(delta_v=1.0), Separate(stages=["a"])])
    def test_what_lands_or_flies_nothing_goes_on_from_no_orbit(self, leg: Leg) -> None:
        assert codes(flown(leg, orbit(periapsis=50e3, apoapsis=LEO), world(top=100e3))) == []
