"""What a transfer asks and where it ends."""

import pytest

from burntally.model.errors import UncomputableError
from burntally.model.mission import Hyperbola, Location, Orbit, Site, Transfer
from burntally_service.kernels.manoeuvres import plane_change
from burntally_service.kernels.orbits import apsis_speed, circular_speed
from tests.unit.legs.worlds import GEO, MU_EARTH, R_EARTH, codes, flown, orbit, transfer, world

LEO = 400e3
GTO = {"periapsis": 250e3, "apoapsis": GEO}


class TestSize:
    def test_an_apoapsis_alone_moves_in_one_burn_at_the_periapsis(self) -> None:
        plan = flown(transfer(apoapsis=800e3), orbit(altitude=LEO))
        assert [(burn.name, burn.place) for burn in plan.manoeuvres] == [("raise apoapsis", "periapsis")]
        assert plan.end == orbit(periapsis=LEO, apoapsis=800e3)

    def test_an_apoapsis_alone_leaves_the_periapsis_of_an_ellipse(self) -> None:
        plan = flown(transfer(apoapsis=900e3), orbit(periapsis=LEO, apoapsis=800e3))
        assert plan.end == orbit(periapsis=LEO, apoapsis=900e3)

    def test_a_periapsis_alone_moves_in_one_burn_at_the_apoapsis(self) -> None:
        plan = flown(transfer(periapsis=300e3), orbit(periapsis=LEO, apoapsis=800e3))
        assert [(burn.name, burn.place) for burn in plan.manoeuvres] == [("lower periapsis", "apoapsis")]
        assert plan.end == orbit(periapsis=300e3, apoapsis=800e3)

    def test_a_periapsis_alone_keeps_the_apoapsis_that_a_period_tells(self) -> None:
        first = flown(transfer(periapsis=LEO, period=7200.0), orbit(altitude=LEO))
        second = flown(transfer(periapsis=500e3), first.end)
        assert second.manoeuvres[0].place == "apoapsis"
        assert len(second.manoeuvres) == 1

    @pytest.mark.parametrize("moved", ["periapsis", "apoapsis"])
    def test_an_apsis_that_passes_the_other_takes_it_along(self, moved: str) -> None:
        passed = 500e3 if moved == "periapsis" else 300e3
        plan = flown(transfer(**{moved: passed}), orbit(altitude=LEO))
        assert plan.end == orbit(altitude=passed)

    def test_a_capture_by_period_keeps_the_words_of_the_target(self) -> None:
        plan = flown(transfer(periapsis=LEO, period=126000.0), orbit(altitude=LEO))
        assert plan.end == orbit(periapsis=LEO, period=126000.0)

    def test_the_same_orbit_costs_nothing(self) -> None:
        plan = flown(transfer(altitude=LEO), orbit(altitude=LEO))
        assert (plan.manoeuvres, plan.strategy, plan.end) == ((), None, orbit(altitude=LEO))

    def test_a_circle_becomes_an_ellipse_around_it(self) -> None:
        plan = flown(transfer(periapsis=300e3, apoapsis=800e3), orbit(altitude=LEO))
        assert [burn.name for burn in plan.manoeuvres] == ["raise apoapsis", "lower periapsis"]

    def test_apsides_written_the_wrong_way_round_are_one_orbit(self) -> None:
        there = flown(transfer(altitude=800e3), orbit(periapsis=600e3, apoapsis=300e3))
        assert there.delta_v == flown(transfer(altitude=800e3), orbit(periapsis=300e3, apoapsis=600e3)).delta_v

    def test_a_period_too_short_for_its_periapsis_cannot_be_computed(self) -> None:
        with pytest.raises(UncomputableError) as caught:
            flown(transfer(periapsis=LEO, period=3600.0), orbit(altitude=LEO))
        assert caught.value.violations[0].pointer == "/to/period"

    @pytest.mark.parametrize("field", ["altitude", "periapsis", "apoapsis"])
    def test_beyond_the_centre_there_is_no_orbit(self, field: str) -> None:
        with pytest.raises(UncomputableError) as caught:
            flown(transfer(**{field: -9e4}), orbit(altitude=LEO), world(radius=8e4))
        assert caught.value.violations[0].pointer == f"/to/{field}"


class TestPlane:
    def test_inclination_alone_on_a_circle_turns_the_whole_velocity(self) -> None:
        plan = flown(transfer(inclination=38.5), orbit(altitude=LEO, inclination=28.5))
        expected = plane_change(circular_speed(MU_EARTH, R_EARTH + LEO), 0.17453292519943295)
        assert plan.delta_v == pytest.approx(expected, rel=1e-12)
        assert plan.end == orbit(altitude=LEO, inclination=38.5)

    def test_an_unknown_apse_line_is_taken_on_the_line_of_nodes_and_said(self) -> None:
        plan = flown(transfer(inclination=10.0), orbit(**GTO, inclination=7.0))
        expected = plane_change(apsis_speed(MU_EARTH, R_EARTH + GEO, R_EARTH + 250e3), 0.05235987755982988)
        assert plan.delta_v == pytest.approx(expected, rel=1e-9)
        assert [caution.code for caution in plan.cautions] == ["line-of-nodes-assumed"]

    def test_a_known_apse_line_is_taken_as_it_is(self) -> None:
        plan = flown(transfer(inclination=10.0), orbit(**GTO, inclination=7.0, argument_of_periapsis=90.0))
        assert plan.cautions == ()
        assert [burn.place for burn in plan.manoeuvres] == ["node"]

    def test_an_apse_line_that_nearly_lies_on_the_nodes_costs_hardly_more(self) -> None:
        start = orbit(**GTO, inclination=7.0, argument_of_periapsis=178.0)
        on_line = flown(transfer(altitude=GEO, inclination=0.0), orbit(**GTO, inclination=7.0))
        off_line = flown(transfer(altitude=GEO, inclination=0.0), start)
        assert on_line.delta_v < off_line.delta_v < on_line.delta_v + 10.0

    def test_an_apse_line_across_the_nodes_turns_the_plane_apart(self) -> None:
        start = orbit(**GTO, inclination=7.0, argument_of_periapsis=90.0)
        plan = flown(transfer(altitude=GEO, inclination=0.0), start)
        assert [burn.name for burn in plan.manoeuvres] == ["circularise", "change plane"]
        assert plan.manoeuvres[1].coast_before > 0.0

    def test_a_way_too_fast_for_an_ellipse_is_left_out(self) -> None:
        start = orbit(periapsis=14e6, apoapsis=1.8e9, inclination=120.0, argument_of_periapsis=280.0)
        leg = Transfer(to=Orbit(altitude=1.4e8, inclination=0.0), apoapsis_max=3e9)
        assert "change plane" in [burn.name for burn in flown(leg, start).manoeuvres]

    def test_the_node_counts_where_both_are_known(self) -> None:
        start = orbit(altitude=LEO, inclination=55.0, raan=10.0)
        assert flown(transfer(raan=55.0), start).delta_v > 0.0
        assert flown(transfer(raan=370.0), start).manoeuvres == ()

    @pytest.mark.parametrize("inclinations", [(0.0, 10.0), (10.0, 0.0)])
    def test_an_orbit_in_the_equator_has_no_node(self, inclinations: tuple[float, float]) -> None:
        start = orbit(altitude=LEO, inclination=inclinations[0])
        plan = flown(transfer(inclination=inclinations[1], raan=40.0), start)
        assert plan.manoeuvres[0].plane_change_deg == pytest.approx(10.0, rel=1e-12)

    def test_two_burns_turn_the_plane_to_opposite_sides(self) -> None:
        plan = flown(transfer(altitude=GEO, inclination=0.0), orbit(altitude=LEO, inclination=28.5))
        normals = [burn.direction[2] for burn in plan.manoeuvres if burn.direction]
        assert normals[0] > 0.0 > normals[1]

    def test_a_plane_that_is_not_known_is_a_finding(self) -> None:
        plan = flown(transfer(inclination=10.0), orbit(altitude=LEO))
        assert [(found.code, found.suffix) for found in plan.findings] == [("plane-unknown", "/to/inclination")]
        assert plan.end == orbit(altitude=LEO, inclination=10.0)

    def test_a_node_asked_of_an_unknown_plane_is_a_finding(self) -> None:
        plan = flown(transfer(raan=10.0), orbit(altitude=LEO))
        assert [(found.code, found.suffix) for found in plan.findings] == [("plane-unknown", "/to/raan")]

    def test_a_node_that_is_not_known_is_a_finding(self) -> None:
        plan = flown(transfer(raan=10.0), orbit(altitude=LEO, inclination=50.0))
        assert [(found.code, found.suffix) for found in plan.findings] == [("node-unknown", "/to/raan")]


class TestApseLine:
    def test_a_circle_lets_the_first_burn_choose_it(self) -> None:
        target = Orbit(periapsis=LEO, apoapsis=GEO, argument_of_periapsis=40.0)
        free = flown(transfer(periapsis=LEO, apoapsis=GEO), orbit(altitude=LEO))
        plan = flown(Transfer(to=target), orbit(altitude=LEO))
        assert plan.delta_v == free.delta_v
        assert plan.end == orbit(periapsis=LEO, apoapsis=GEO, argument_of_periapsis=40.0)

    def test_turning_it_costs(self) -> None:
        start = orbit(periapsis=LEO, apoapsis=500e3, argument_of_periapsis=10.0)
        plan = flown(transfer(argument_of_periapsis=50.0), start)
        assert plan.delta_v > 1.0
        assert plan.end == orbit(periapsis=LEO, apoapsis=500e3, argument_of_periapsis=50.0)

    def test_it_turns_about_where_the_periapsis_passes_the_apoapsis(self) -> None:
        start = orbit(periapsis=LEO, apoapsis=500e3, argument_of_periapsis=10.0)
        plan = flown(Transfer(to=Orbit(periapsis=500e3, apoapsis=900e3), strategy="one_burn"), start)
        assert plan.end == orbit(periapsis=500e3, apoapsis=900e3, argument_of_periapsis=190.0)

    def test_an_unknown_one_stays_unknown(self) -> None:
        plan = flown(transfer(apoapsis=900e3), orbit(periapsis=LEO, apoapsis=500e3))
        assert plan.end == orbit(periapsis=LEO, apoapsis=900e3)

    def test_a_circle_has_none(self) -> None:
        plan = flown(transfer(altitude=900e3), orbit(periapsis=LEO, apoapsis=500e3, argument_of_periapsis=10.0))
        assert plan.end == orbit(altitude=900e3)

    def test_asked_of_an_unknown_one_it_is_taken_on_the_nodes_and_said(self) -> None:
        plan = flown(transfer(argument_of_periapsis=50.0), orbit(periapsis=LEO, apoapsis=500e3))
        assert [caution.code for caution in plan.cautions] == ["line-of-nodes-assumed"]

    @pytest.mark.parametrize("asked", [0.0, 30.0, 100.0, 200.0])
    def test_plane_and_apse_line_together_end_where_asked(self, asked: float) -> None:
        start = orbit(altitude=LEO, inclination=50.0)
        plan = flown(transfer(periapsis=LEO, apoapsis=2000e3, inclination=55.0, argument_of_periapsis=asked), start)
        assert plan.manoeuvres
        assert plan.end == orbit(periapsis=LEO, apoapsis=2000e3, inclination=55.0, argument_of_periapsis=asked)

    def test_a_node_moved_moves_the_argument(self) -> None:
        start = orbit(**GTO, inclination=60.0, raan=0.0, argument_of_periapsis=60.0)
        plan = flown(transfer(raan=1.0), start)
        # The apse line stays where it is while the node under it moves by a degree times cos(60 deg).
        assert getattr(plan.end, "argument_of_periapsis", None) == pytest.approx(59.5, abs=0.01)


class TestStrategy:
    def test_hohmann_leaves_the_bielliptic_unweighed(self) -> None:
        leg = Transfer(to=Orbit(altitude=376310e3), strategy="hohmann", apoapsis_max=503873e3)
        assert flown(leg, orbit(altitude=191e3)).strategy == "hohmann"

    def test_bielliptic_without_a_bound_cannot_be_computed(self) -> None:
        with pytest.raises(UncomputableError) as caught:
            flown(Transfer(to=Orbit(altitude=GEO), strategy="bielliptic"), orbit(altitude=LEO))
        assert caught.value.violations[0].pointer == "/strategy"

    def test_bielliptic_takes_what_a_time_allows(self) -> None:
        leg = Transfer(to=Orbit(altitude=376310e3), strategy="bielliptic", time_limit=2.0e6)
        plan = flown(leg, orbit(altitude=191e3))
        assert plan.duration == pytest.approx(2.0e6, rel=1e-6)

    def test_bielliptic_below_the_target_is_no_way(self) -> None:
        leg = Transfer(to=Orbit(altitude=GEO), strategy="bielliptic", apoapsis_max=GEO)
        assert codes(flown(leg, orbit(altitude=LEO))) == ["no-convergence"]

    def test_a_wide_turn_of_the_plane_goes_by_a_far_point_that_is_not_the_farthest(self) -> None:
        leg = Transfer(to=Orbit(inclination=45.0), strategy="bielliptic", apoapsis_max=4e8)
        plan = flown(leg, orbit(altitude=LEO, inclination=0.0))
        single = flown(transfer(inclination=45.0), orbit(altitude=LEO, inclination=0.0))
        nearer = flown(
            Transfer(to=Orbit(inclination=45.0), strategy="bielliptic", apoapsis_max=2e7),
            orbit(altitude=LEO, inclination=0.0),
        )
        assert plan.delta_v == pytest.approx(nearer.delta_v, rel=1e-9)
        assert plan.delta_v < single.delta_v

    def test_bielliptic_turns_the_plane_off_the_apse_line_too(self) -> None:
        start = orbit(periapsis=LEO, apoapsis=2000e3, inclination=60.0, argument_of_periapsis=70.0)
        leg = Transfer(to=Orbit(altitude=LEO, inclination=0.0), strategy="bielliptic", apoapsis_max=2e8)
        plan = flown(leg, start)
        assert plan.strategy == "bielliptic"
        assert plan.delta_v < flown(transfer(altitude=LEO, inclination=0.0), start).delta_v

    def test_one_burn_where_the_orbits_share_an_apsis(self) -> None:
        leg = Transfer(to=Orbit(altitude=GEO), strategy="one_burn")
        assert flown(leg, orbit(**GTO)).strategy == "one_burn"

    def test_one_burn_where_they_share_none_is_no_way(self) -> None:
        plan = flown(Transfer(to=Orbit(altitude=GEO), strategy="one_burn"), orbit(altitude=LEO))
        assert [(found.code, found.suffix) for found in plan.findings] == [("no-convergence", "/strategy")]
        assert plan.end == orbit(altitude=GEO)

    def test_what_else_was_weighed_is_told(self) -> None:
        plan = flown(transfer(altitude=16e6), orbit(periapsis=480e3, apoapsis=800e3))
        assert [cost.strategy for cost in plan.alternatives] == ["hohmann from apoapsis"]
        assert plan.alternatives[0].delta_v > plan.delta_v


class TestLimits:
    def test_too_little_time_is_a_finding(self) -> None:
        plan = flown(Transfer(to=Orbit(altitude=GEO), time_limit=3600.0), orbit(altitude=LEO))
        found = plan.findings[0]
        assert (found.code, found.suffix, found.limit, found.unit) == ("time-limit", "/time_limit", 3600.0, "s")
        assert found.value is not None
        assert found.value > 3600.0

    def test_too_low_a_ceiling_is_a_finding(self) -> None:
        plan = flown(Transfer(to=Orbit(altitude=GEO), apoapsis_max=2e7), orbit(altitude=LEO))
        assert codes(plan) == ["no-convergence"]
        assert plan.findings[0].value == pytest.approx(GEO, rel=1e-12)

    def test_too_high_a_floor_is_a_finding(self) -> None:
        plan = flown(Transfer(to=Orbit(altitude=GEO), periapsis_min=500e3), orbit(altitude=LEO))
        found = plan.findings[0]
        assert (found.code, found.suffix, found.limit) == ("periapsis-low", "/periapsis_min", 500e3)
        assert found.value == pytest.approx(LEO, rel=1e-9)

    def test_a_floor_makes_the_other_apsis_the_place_to_burn(self) -> None:
        start = orbit(periapsis=100e3, apoapsis=800e3)
        free, bound = transfer(altitude=2000e3), Transfer(to=Orbit(altitude=2000e3), periapsis_min=300e3)
        assert flown(free, start).lowest_periapsis == pytest.approx(100e3, rel=1e-9)
        assert flown(bound, start).lowest_periapsis == pytest.approx(800e3, rel=1e-9)

    def test_a_path_into_the_ground_is_planned_and_said(self) -> None:
        plan = flown(transfer(periapsis=-300e3), orbit(altitude=LEO))
        assert [(found.code, found.severity) for found in plan.findings] == [("periapsis-below-surface", "error")]
        assert plan.findings[0].value == pytest.approx(-300e3, rel=1e-9)
        assert plan.delta_v > 0.0

    def test_from_a_fall_the_first_burn_is_at_the_apoapsis(self) -> None:
        plan = flown(transfer(altitude=LEO), orbit(periapsis=-300e3, apoapsis=LEO))
        assert [burn.place for burn in plan.manoeuvres] == ["apoapsis"]
        assert codes(plan) == []

    def test_beyond_the_sphere_of_influence_is_a_caution(self) -> None:
        plan = flown(transfer(apoapsis=2e9), orbit(altitude=LEO), world(soi=9e8))
        assert [caution.code for caution in plan.cautions] == ["sphere-of-influence"]


class TestStart:
    @pytest.mark.parametrize(
        "start", [None, Site(body="tessaly", latitude=5.0), Hyperbola(body="tessaly", c3=1e6, periapsis=LEO)]
    )
    def test_what_is_no_orbit_is_a_finding(self, start: Location | None) -> None:
        assert codes(flown(transfer(altitude=GEO), start)) == ["location-unknown"]

    def test_an_orbit_without_a_size_is_a_finding(self) -> None:
        assert codes(flown(transfer(altitude=GEO), orbit(inclination=5.0))) == ["location-unknown"]

    def test_without_a_size_anywhere_the_end_is_not_known(self) -> None:
        assert flown(transfer(apoapsis=GEO), orbit(inclination=5.0)).end is None

    def test_another_body_is_a_finding(self) -> None:
        plan = flown(Transfer(to=Orbit(body="orrin", altitude=GEO)), orbit(altitude=LEO))
        assert [(found.code, found.suffix) for found in plan.findings] == [("wrong-body", "/to/body")]


class TestCapture:
    @staticmethod
    def arrival(**fields: float) -> Hyperbola:
        return Hyperbola(body="tessaly", c3=1e7, approaching=True, **fields)

    def test_it_is_burned_where_the_hyperbola_passes(self) -> None:
        plan = flown(transfer(apoapsis=GEO), self.arrival(periapsis=LEO))
        assert plan.end == orbit(periapsis=LEO, apoapsis=GEO)
        assert [(burn.name, burn.place) for burn in plan.manoeuvres] == [("capture", "periapsis")]

    def test_it_goes_on_where_the_pass_is_not_an_apsis_of_the_target(self) -> None:
        plan = flown(transfer(altitude=GEO), self.arrival(periapsis=LEO))
        assert [burn.name for burn in plan.manoeuvres] == ["capture", "circularise"]

    def test_a_pass_that_is_not_aimed_is_aimed_by_the_target(self) -> None:
        plan = flown(transfer(altitude=LEO), self.arrival())
        assert plan.end == orbit(altitude=LEO)

    def test_an_inclination_is_aimed_at_and_said(self) -> None:
        plan = flown(transfer(altitude=LEO, inclination=75.0), self.arrival())
        assert [caution.code for caution in plan.cautions] == ["asymptote-assumed"]
        assert plan.end == orbit(altitude=LEO, inclination=75.0)

    def test_a_node_cannot_be_aimed_at(self) -> None:
        assert codes(flown(transfer(altitude=LEO, raan=75.0), self.arrival())) == ["node-unknown"]

    @pytest.mark.parametrize("target", [{"apoapsis": GEO}, {"inclination": 4.0}])
    def test_without_any_periapsis_it_is_a_finding(self, target: dict[str, float]) -> None:
        assert codes(flown(transfer(**target), self.arrival())) == ["location-unknown"]

    def test_without_a_size_it_is_a_finding(self) -> None:
        plan = flown(transfer(periapsis=LEO), self.arrival())
        assert [(found.code, found.suffix) for found in plan.findings] == [("location-unknown", "/to")]

    def test_without_excess_speed_it_is_no_hyperbola(self) -> None:
        start = Hyperbola(body="tessaly", c3=-1e6, approaching=True, periapsis=LEO)
        assert codes(flown(transfer(altitude=LEO), start)) == ["location-unknown"]


@pytest.mark.parametrize(
    "start",
    [
        orbit(periapsis=LEO, apoapsis=5e11, inclination=179.9, argument_of_periapsis=33.0),
        orbit(periapsis=LEO, apoapsis=401e3, inclination=90.0, raan=0.0, argument_of_periapsis=359.0),
        orbit(periapsis=-6e6, apoapsis=3e5, inclination=180.0),
        orbit(altitude=LEO, inclination=0.0),
    ],
)
@pytest.mark.parametrize(
    "target",
    [
        {"altitude": 500e3, "inclination": 0.0},
        {"periapsis": 200e3, "apoapsis": 9e11, "inclination": 90.0, "argument_of_periapsis": 270.0},
        {"inclination": 170.0},
    ],
)
def test_hostile_orbits_are_planned(start: Location, target: dict[str, float]) -> None:
    plan = flown(transfer(**target), start)
    assert 0.0 < plan.delta_v < 1e5
    assert 0.0 <= plan.duration < 1e13
