"""How the engines of a stage burn its loads down."""

import math

import pytest

from burntally.model.vehicle import Engine, Load, Stage
from burntally_service.kernels.constants import G0
from burntally_service.vehicle.burndown import burn_down, main_engines

# An exhaust speed of 1000 m/s, so that a newton is a gram each second.
ISP = 1000.0 / G0


def stage(*engines: Engine, loads: tuple[str, ...] = ("fuel", "oxidiser")) -> Stage:
    return Stage(
        name="s", dry_mass=1.0, propellants=[Load(name=name, mass=100.0) for name in loads], engines=list(engines)
    )


def test_an_engine_without_feeds_draws_on_the_first_load() -> None:
    (engine,) = main_engines(stage(Engine(thrust=1000.0, isp=ISP)))
    assert engine.feeds == ((0, 1.0),)


def test_a_mixture_ratio_is_shares_of_the_flow() -> None:
    (engine,) = main_engines(stage(Engine(thrust=1000.0, isp=ISP, feeds={"oxidiser": 3.0, "fuel": 1.0})))
    assert engine.feeds == ((1, 0.75), (0, 0.25))


def test_units_burn_together() -> None:
    (engine,) = main_engines(stage(Engine(thrust=1000.0, isp=ISP, count=4)))
    assert (engine.thrust, engine.mass_flow) == pytest.approx((4000.0, 4.0), rel=1e-14)


def test_auxiliary_engines_stay_out() -> None:
    assert main_engines(stage(Engine(thrust=1.0, isp=ISP, auxiliary=True))) == ()


def test_without_a_load_nothing_burns() -> None:
    assert main_engines(stage(Engine(thrust=1.0, isp=ISP), loads=())) == ()


def test_one_engine_burns_its_load_in_one_interval() -> None:
    engines = main_engines(stage(Engine(thrust=2000.0, isp=ISP)))
    intervals, left = burn_down([100.0, 100.0], engines)
    told = [(interval.duration, interval.propellant) for interval in intervals]
    assert told == [pytest.approx((50.0, 100.0), rel=1e-14)]
    assert left == [0.0, 100.0]


def test_a_mixture_ends_with_the_load_that_runs_dry_first() -> None:
    engines = main_engines(stage(Engine(thrust=1000.0, isp=ISP, feeds={"oxidiser": 3.0, "fuel": 1.0})))
    intervals, left = burn_down([100.0, 60.0], engines)
    assert [interval.propellant for interval in intervals] == [pytest.approx(80.0, rel=1e-14)]
    assert left == [pytest.approx(80.0, rel=1e-14), 0.0]


def test_an_engine_that_goes_out_leaves_the_others_burning() -> None:
    engines = main_engines(
        stage(
            Engine(name="mixed", thrust=1000.0, isp=ISP, feeds={"oxidiser": 1.0, "fuel": 1.0}),
            Engine(name="single", thrust=500.0, isp=ISP, feeds={"fuel": 1.0}),
        )
    )
    intervals, left = burn_down([100.0, 20.0], engines)
    assert [[engine.name for engine in interval.engines] for interval in intervals] == [["mixed", "single"], ["single"]]
    assert left == [0.0, 0.0]


def test_loads_that_run_dry_together_end_one_interval() -> None:
    engines = main_engines(stage(Engine(thrust=1000.0, isp=ISP, feeds={"oxidiser": 2.7, "fuel": 1.0})))
    intervals, left = burn_down([10.0 / 3.7, 27.0 / 3.7], engines)
    assert len(intervals) == 1
    assert sum(left) == pytest.approx(0.0, abs=1e-12)


def test_the_weakest_engine_of_all_burns_nothing() -> None:
    # Its flow is below the least number that there is.
    assert burn_down([100.0, 0.0], main_engines(stage(Engine(thrust=5e-324, isp=ISP)))) == ([], [100.0, 0.0])


def test_what_was_never_loaded_does_not_burn() -> None:
    assert burn_down([0.0, 0.0], main_engines(stage(Engine(thrust=1000.0, isp=ISP)))) == ([], [0.0, 0.0])


@pytest.mark.parametrize(
    "engine, area",
    [
        (Engine(thrust=1e6, isp=340.0, exit_area=1.5, count=2), 3.0),
        (Engine(thrust=1e6, isp=340.0, isp_sea_level=305.5495), 1.0),
        (Engine(thrust=1e6, isp=340.0), None),
    ],
)
def test_the_exit_area_is_stated_or_implied(engine: Engine, area: float | None) -> None:
    assert main_engines(stage(engine))[0].area_exit == (None if area is None else pytest.approx(area, rel=1e-5))


def test_a_nozzle_better_in_air_than_in_vacuum_is_none() -> None:
    area = main_engines(stage(Engine(thrust=1e6, isp=340.0, isp_sea_level=341.0)))[0].area_exit
    assert area is not None
    assert math.isnan(area)
