"""Worked examples of margin by slack, to all the digits that the contract gives, and the textbook's case."""

import math
from typing import Any

import pytest

from burntally_service.kernels.constants import G0
from tests.unit.budget.designs import branch, budget_of, burn, design, engine, stage


def released() -> dict[str, Any]:
    """A stage that burns before, between and after the releases of two payloads."""
    return design(
        [
            burn(300.0),
            {"kind": "release", "payload": "big"},
            burn(400.0),
            {"kind": "release", "payload": "small"},
            burn(150.0),
        ],
        stage(propellants=[{"mass": 400.0, "residual_fraction": 0.02}]),
        payloads=[{"name": "big", "mass": 300.0}, {"name": "small", "mass": 200.0}],
    )


def lander(*, named: bool) -> dict[str, Any]:
    """A descent stage and an ascent stage, whose legs name their payers or leave them open."""
    below, above = (("descent",), ("ascent",)) if named else ((), ())
    return design(
        [
            burn(900.0, *below),
            burn(2050.0, *below),
            {"kind": "separate", "stages": ["descent"]},
            burn(1850.0, *above),
        ],
        stage("descent", dry_mass=2200.0, propellants=[{"mass": 8200.0}], engines=[engine(isp=320.0)]),
        stage("ascent", dry_mass=1100.0, propellants=[{"mass": 1500.0}], engines=[engine(isp=315.0)]),
        payloads=[{"name": "crew", "mass": 200.0}],
    )


def slacks(plain: dict[str, Any]) -> list[float | None]:
    """Slack of every leg that has one."""
    return [leg.slack for leg in branch(budget_of(plain)).legs if leg.slack is not None]


def test_slack_of_released_payloads() -> None:
    assert slacks(released()) == pytest.approx([365.4188, 487.3245, 652.3206], abs=5e-5, rel=0.0)


def test_margin_of_released_payloads_is_the_first_slack() -> None:
    budget = budget_of(released())
    assert budget.margin == pytest.approx(365.4188, abs=5e-5, rel=0.0)
    assert budget.limiting
    assert budget.limiting.leg == 0


def test_released_payloads_leave_propellant_that_is_worth_more_to_the_empty_stage() -> None:
    tug = budget_of(released()).stages[0]
    assert tug.loads[0].left == pytest.approx(117.3746, abs=5e-5, rel=0.0)
    assert tug.delta_v.left == pytest.approx(652.32, abs=5e-3, rel=0.0)


def test_slack_of_several_ends() -> None:
    assert slacks(lander(named=True)) == pytest.approx([96.4285, 96.4285, 520.1239], abs=5e-5, rel=0.0)


def test_margin_of_several_ends_is_the_least_of_them() -> None:
    assert budget_of(lander(named=True)).margin == pytest.approx(96.4285, abs=5e-5, rel=0.0)


def test_several_ends_leave_propellant_in_the_descent_stage() -> None:
    assert budget_of(lander(named=True)).stages[0].loads[0].left == pytest.approx(156.0251, abs=5e-5, rel=0.0)


def test_unnamed_legs_let_the_ascent_stage_cover_the_descent() -> None:
    # Held by hand: the descent stage's 96.4285 m/s, then what the ascent stage can spare of its own burn.
    v_exhaust, ascent = 315.0 * G0, 2800.0
    spare = v_exhaust * math.log(ascent / (ascent - 1500.0)) - 1850.0
    named, unnamed = slacks(lander(named=True)), slacks(lander(named=False))
    assert named[0] is not None
    assert unnamed == pytest.approx([named[0] + spare, named[0] + spare, spare], rel=1e-9, abs=0.0)


def test_unnamed_legs_are_worth_more() -> None:
    assert slacks(lander(named=False))[:2] == pytest.approx([616.55, 616.55], abs=5e-3, rel=0.0)


def test_margin_without_mass_events_is_the_textbooks_ideal_delta_v_left() -> None:
    plain = design([burn(300.0), burn(400.0), burn(150.0)], stage(propellants=[{"mass": 400.0}]))
    v_exhaust = 320.0 * G0
    assert budget_of(plain).margin == pytest.approx(v_exhaust * math.log(900.0 / 500.0) - 850.0, rel=1e-12, abs=0.0)


def two_tugs(*legs: dict[str, Any]) -> dict[str, Any]:
    """Two stages of one exhaust speed, the lower of which drops once it is dry."""
    return design(legs, stage("below"), stage("above"))


def test_a_leg_that_names_its_payer_caps_what_a_later_handover_allows() -> None:
    # Held by hand: the named payer has 400 kg out of 1 800 kg, however much the other stage could add afterwards.
    capability = 320.0 * G0 * math.log(1800.0 / 1400.0)
    found = slacks(two_tugs(burn(60.0), burn(220.0, "below"), burn(capability)))
    assert found[:2] == pytest.approx([capability - 280.0] * 2, rel=1e-9, abs=0.0)


def test_the_stage_that_goes_on_pays_what_a_tank_filled_later_would_have_paid() -> None:
    # Held by hand: once the lower stage has dropped, both legs are the upper one's but for the lower one's 400 kg.
    below, above = 320.0 * G0 * math.log(1800.0 / 1400.0), 320.0 * G0 * math.log(900.0 / 500.0)
    filling = {"kind": "take_on", "propellants": [{"stage": "below", "load": "propellant", "mass": 300.0}]}
    found = slacks(two_tugs(burn(60.0), filling, burn(90.0)))
    assert found[0] == pytest.approx(below + above - 150.0, rel=1e-9, abs=0.0)


def test_kilograms_fall_to_the_stage_that_goes_on() -> None:
    # Held by hand: in the limit the lower stage has dropped before the kilograms are drawn, so the upper one gives them
    # and then burns from a stack that is lighter by as much.
    v_exhaust, gas = 320.0 * G0, 7.0
    venting = {"kind": "allowance", "category": "gas", "propellant": gas}
    plain = two_tugs(burn(60.0), venting, {"kind": "separate", "stages": ["below"]}, burn(90.0))
    last = (900.0 - 400.0) * math.exp(90.0 / v_exhaust)
    expected = v_exhaust * (math.log(1800.0 / 1400.0) + math.log(900.0 / (last + gas))) - 60.0
    assert slacks(plain)[0] == pytest.approx(expected, rel=1e-9, abs=0.0)


def test_every_lesser_addition_is_paid_too() -> None:
    # Held by hand: the second engine's own tank limits the addition. Far beyond, where the first engine has burned most
    # of its tank, the stack is light enough again, but what lies between could not be paid.
    v_exhaust, wet, filled = 320.0 * G0, 4100.0, 50.0
    tug = stage(
        dry_mass=100.0,
        propellants=[{"name": "f", "mass": 3000.0}, {"name": "o", "mass": 1000.0}],
        engines=[engine(name="first", feeds={"f": 1.0}), engine(name="second", feeds={"o": 1.0})],
    )
    filling = {"kind": "take_on", "propellants": [{"stage": "tug", "load": "o", "mass": filled}]}
    share = -math.expm1(-100.0 / v_exhaust)
    burned = (1000.0 + filled - (wet + filled) * share) / (0.5 - share)
    found = slacks(design([burn(60.0), filling, burn(100.0, "tug", engines=["second"])], tug))
    assert found[0] == pytest.approx(v_exhaust * math.log(wet / (wet - burned)) - 60.0, rel=1e-9, abs=0.0)


def test_spent_stages_separate_one_after_another() -> None:
    # Held by hand: both lower stages are dry when the top one burns; the branch of the second weighs 500 kg, not 1 000.
    v_exhaust = 320.0 * G0
    second, first = v_exhaust * math.log(2700.0 / 2300.0), v_exhaust * math.log(2300.0 / 1900.0)
    rides = [burn(second, "two"), burn(first, "one"), burn(50.0, "three")]
    branches = [{"of": "two", "legs": [{"kind": "coast", "duration": 10.0}]}]
    plain = design(rides, stage("one"), stage("two"), stage("three"), branches=branches)
    assert branch(budget_of(plain), "two").end_mass == pytest.approx(500.0, rel=1e-9, abs=0.0)


def test_a_stage_that_a_later_leg_names_is_carried_dry() -> None:
    # Held by hand: an addition at the first leg that empties the lower stage is finished with that stage aboard, which
    # drops only before the upper stage burns for the second leg.
    v_exhaust = 320.0 * G0
    plain = two_tugs(burn(60.0, "below", "above"), burn(90.0, "below", "above"))
    least = 500.0 * math.exp(90.0 / v_exhaust)
    expected = v_exhaust * math.log(1800.0 / (500.0 + least)) - 60.0
    assert slacks(plain)[0] == pytest.approx(expected, rel=1e-9, abs=0.0)
