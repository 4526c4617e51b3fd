"""What a vehicle gives, stage by stage."""

import math

import pytest

from burntally.model.design import Design
from burntally.model.errors import UncomputableError
from burntally.model.mission import Coast, Mission, OrbitLocation
from burntally.model.operations import Performance, PerformanceRequest
from burntally.model.rules import Rules
from burntally.model.vehicle import Engine, Load, Payload, Stage, Vehicle
from burntally_service.budget import draw_up
from burntally_service.kernels.constants import G0
from burntally_service.vehicle.performance import performance_of

ENGINE = Engine(thrust=1e5, isp=300.0)


def two_stages(*, loads: list[Load] | None = None, engines: list[Engine] | None = None) -> Vehicle:
    """A vehicle of two stages; loads and engines of the first may be replaced."""
    lower = Stage(
        name="lower",
        dry_mass=1000.0,
        propellants=[Load(mass=9000.0)] if loads is None else loads,
        engines=[ENGINE] if engines is None else engines,
    )
    upper = Stage(name="upper", dry_mass=200.0, propellants=[Load(mass=800.0)], engines=[ENGINE])
    pods = [Payload(name="pod", mass=300.0), Payload(name="shroud", mass=50.0, on="lower")]
    return Vehicle(name="v", stages=[lower, upper], payloads=pods)


def performance(
    vehicle: Vehicle, rules: Rules | None = None, *, pressure: float = 0.0, gravity: float = G0
) -> Performance:
    request = PerformanceRequest(vehicle=vehicle, rules=rules or Rules(), ambient_pressure=pressure)
    return performance_of(request, gravity=gravity)


def codes(found: Performance) -> list[tuple[str, str]]:
    return [(finding.code, finding.pointer) for finding in found.findings]


def test_a_stage_carries_what_is_above_it_and_what_rides_on_it() -> None:
    assert [stage.carried for stage in performance(two_stages()).stages] == [1350.0, 300.0]


def test_the_stack_weighs_all_of_it() -> None:
    found = performance(two_stages())
    assert (found.initial_mass, found.payload) == (11350.0, 350.0)
    assert found.payload_fraction == pytest.approx(350.0 / 11350.0, rel=1e-15)


def test_the_rocket_equation_holds_for_each_stage() -> None:
    stages = performance(two_stages()).stages
    ratios = [11350.0 / 2350.0, 1300.0 / 500.0]
    assert [stage.mass_ratio for stage in stages] == pytest.approx(ratios, rel=1e-14)
    assert [stage.delta_v for stage in stages] == pytest.approx([300.0 * G0 * math.log(r) for r in ratios], rel=1e-14)


def test_fractions_are_of_the_step_alone() -> None:
    lower = performance(two_stages()).stages[0]
    told = (lower.propellant_fraction, lower.structural_coefficient, lower.payload_ratio)
    assert told == pytest.approx((0.9, 0.1, 0.135), rel=1e-15)


def test_residuals_ride_along() -> None:
    lower = performance(two_stages(), Rules(residual_fraction=0.02)).stages[0]
    assert lower.usable == pytest.approx(8820.0, rel=1e-15)
    assert lower.mass_ratio == pytest.approx(11350.0 / (2350.0 + 180.0), rel=1e-14)


def test_what_is_held_back_rides_along() -> None:
    lower = performance(two_stages(loads=[Load(mass=9000.0, held_back=500.0, residual_fraction=0.01)])).stages[0]
    assert lower.usable == pytest.approx(8410.0, rel=1e-15)


def test_growth_and_contingency_are_in() -> None:
    found = performance(two_stages(), Rules(mass_growth=0.1, mass_contingency=0.2))
    assert found.stages[0].dry_mass.allowable == pytest.approx(1320.0, rel=1e-15)
    assert found.payload == pytest.approx(385.0, rel=1e-15)


def test_thrust_to_weight_is_in_the_gravity_given() -> None:
    phase = performance(two_stages(), gravity=1.62).stages[0].phases[0]
    told = (phase.thrust_to_weight_ignition, phase.thrust_to_weight_burnout, phase.acceleration_burnout)
    assert told == pytest.approx((1e5 / 1.62 / 11350.0, 1e5 / 1.62 / 2350.0, 1e5 / 2350.0), rel=1e-14)


def test_burn_time_and_flow_agree() -> None:
    phase = performance(two_stages()).stages[0].phases[0]
    assert phase.burn_time * phase.mass_flow == pytest.approx(9000.0, rel=1e-14)


def test_an_inert_stage_gives_nothing() -> None:
    lower = performance(two_stages(loads=[], engines=[])).stages[0]
    assert (lower.phases, lower.delta_v, lower.mass_ratio) == ([], 0.0, 1.0)


def test_nothing_at_all_has_no_fractions() -> None:
    found = performance(Vehicle(name="v", stages=[Stage(name="s", dry_mass=0.0)]))
    assert (found.payload_fraction, found.stages[0].propellant_fraction) == (0.0, 0.0)


def test_burned_down_to_nothing_the_mass_ratio_has_no_bound() -> None:
    bare = Stage(name="s", dry_mass=0.0, propellants=[Load(mass=1.0)], engines=[ENGINE])
    assert performance(Vehicle(name="v", stages=[bare])).stages[0].mass_ratio == math.inf


class TestAmbientPressure:
    def test_it_takes_thrust_from_the_first_stage_alone(self) -> None:
        engine = Engine(thrust=1e5, isp=300.0, exit_area=0.2)
        found = performance(two_stages(engines=[engine]), pressure=101325.0)
        assert found.stages[0].phases[0].thrust == pytest.approx(79735.0, rel=1e-14)
        assert found.stages[0].delta_v == pytest.approx(0.79735 * found.stages[0].delta_v_vacuum, rel=1e-13)
        assert found.stages[1].delta_v == found.stages[1].delta_v_vacuum

    def test_a_second_stage_in_vacuum_needs_no_exit_area(self) -> None:
        engine = Engine(thrust=1e5, isp=300.0, isp_sea_level=280.0)
        assert codes(performance(two_stages(engines=[engine]), pressure=1e5)) == []

    def test_without_an_exit_area_thrust_does_not_feel_the_air(self) -> None:
        found = performance(two_stages(), pressure=101325.0)
        assert codes(found) == [("no-pressure-data", "/vehicle/stages/0/engines/0")]
        assert found.delta_v == found.delta_v_vacuum

    def test_thrust_is_never_below_zero(self) -> None:
        engine = Engine(thrust=1e5, isp=300.0, exit_area=2.0)
        found = performance(two_stages(engines=[engine]), pressure=101325.0)
        assert codes(found) == [("pressure-exceeds-thrust", "/vehicle/stages/0/engines/0")]
        assert (found.stages[0].delta_v, found.stages[0].phases[0].isp) == (0.0, 0.0)

    def test_a_nozzle_better_in_air_than_in_vacuum_cannot_be_computed(self) -> None:
        engine = Engine(thrust=1e5, isp=300.0, isp_sea_level=301.0)
        with pytest.raises(UncomputableError) as caught:
            performance(two_stages(engines=[engine]))
        pointers = [violation.pointer for violation in caught.value.violations]
        assert pointers == ["/vehicle/stages/0/engines/0/isp_sea_level"]


class TestMixtures:
    LOADS = (Load(name="oxidiser", mass=6000.0), Load(name="fuel", mass=3000.0))

    def test_what_a_mixture_leaves_is_told(self) -> None:
        engine = Engine(thrust=1e5, isp=300.0, feeds={"oxidiser": 3.0, "fuel": 1.0})
        found = performance(two_stages(loads=list(self.LOADS), engines=[engine]))
        assert codes(found) == [("feed-unbalanced", "/vehicle/stages/0/engines/0/feeds")]
        assert found.findings[0].value == pytest.approx(1000.0, rel=1e-14)

    def test_a_mixture_without_one_of_its_loads_never_lights(self) -> None:
        engine = Engine(thrust=1e5, isp=300.0, feeds={"oxidiser": 3.0, "fuel": 1.0})
        loads = [Load(name="oxidiser", mass=6000.0), Load(name="fuel", mass=0.0)]
        found = performance(two_stages(loads=loads, engines=[engine]))
        assert found.stages[0].phases == []
        assert codes(found) == [("feed-unbalanced", "/vehicle/stages/0/engines/0/feeds")]

    def test_half_a_percent_is_let_pass(self) -> None:
        engine = Engine(thrust=1e5, isp=300.0, feeds={"oxidiser": 2.009, "fuel": 1.0})
        assert codes(performance(two_stages(loads=list(self.LOADS), engines=[engine]))) == []

    def test_unlike_engines_mix_by_their_flows(self) -> None:
        engines = [Engine(name="a", thrust=2e6, isp=280.0), Engine(name="b", thrust=1e6, isp=430.0)]
        assert performance(two_stages(engines=engines)).stages[0].phases[0].isp == pytest.approx(316.8421, rel=1e-6)


def test_a_budget_tells_the_same_of_each_stage() -> None:
    mixture = [Load(mass=6000.0, name="ox"), Load(mass=3000.0, name="fuel", residual_fraction=0.02)]
    unlike = [
        Engine(name="big", thrust=1e5, isp=300.0, feeds={"ox": 2.3, "fuel": 1.0}),
        Engine(name="small", thrust=2e4, isp=230.0, feeds={"fuel": 1.0}),
    ]
    vehicle = two_stages(loads=mixture, engines=unlike)
    mission = Mission(start=OrbitLocation(body="earth", altitude=3e5), legs=[Coast(duration=1.0)])
    budget = draw_up(Design(format=1, vehicle=vehicle, mission=mission))
    told = [stage.delta_v_vacuum for stage in performance(vehicle).stages]
    assert [stage.delta_v.capability for stage in budget.stages] == pytest.approx(told, rel=1e-12, abs=0.0)
