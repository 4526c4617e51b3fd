"""Slack where a tank is filled on the way, or a stage is left dry to the last gram: each number worked by hand."""

import math
from typing import Any

import pytest

from burntally.model.budget import BranchBook
from burntally_service.kernels.constants import G0
from tests.unit.budget.designs import branch, budget_of, burn, design, stage

Plain = dict[str, Any]

SPEED = 320.0 * G0


def tank(mass: float, capacity: float, **fields: Any) -> list[Plain]:
    """Describe the only load of a stage."""
    return [{"mass": mass, "capacity": capacity, **fields}]


def fill(name: str, mass: float | None = None) -> Plain:
    """Take propellant on: to capacity, unless a mass is given."""
    wanted = {} if mass is None else {"mass": mass}
    return {"kind": "take_on", "propellants": [{"stage": name, "load": "propellant", **wanted}]}


def books(legs: list[Plain], *stages: Plain) -> BranchBook:
    """Draw up the books of the main branch."""
    return branch(budget_of(design(legs, *stages)))


def test_a_stage_that_runs_dry_before_it_is_filled_leaves_what_follows_to_the_next() -> None:
    # Once the lower stage is dry the upper one goes on, and the lower one drops: nothing is left to be filled, so the
    # upper one must keep what the last leg asks for.
    lower = stage("lower", propellants=tank(400.0, 400.0))
    book = books([burn(300.0), fill("lower"), burn(400.0)], lower, stage("upper"))
    own = SPEED * math.log(1800.0 / 1400.0) - 300.0
    assert book.legs[0].slack == pytest.approx(own + SPEED * math.log(900.0 / 500.0) - 400.0, rel=1e-9, abs=0.0)


def test_a_stated_mass_makes_up_for_nothing_though_it_fills_the_tank() -> None:
    # What was planned to be burned is taken on, and no more if more was burned: 1200 m/s on from there end at 500 kg.
    tug = stage(propellants=tank(400.0, 400.0))
    burned = books([burn(300.0)], tug).legs[0].payers[0].propellant
    book = books([burn(300.0), fill("tug", burned), burn(1200.0)], tug)
    mass = 900.0 * math.exp(-300.0 / SPEED)
    spare = 900.0 - 500.0 * math.exp(1200.0 / SPEED)
    assert book.legs[0].slack == pytest.approx(SPEED * math.log(mass / (mass - spare)), rel=1e-9, abs=0.0)


def test_a_tank_filled_again_holds_more_residual_for_all_that_was_taken_on() -> None:
    # Of each kilogram burned before, a tenth of what makes up for it never burns: 360 kg less a tenth of it are left.
    tug = stage(propellants=tank(400.0, 400.0, residual_fraction=0.1))
    book = books([burn(100.0), fill("tug"), burn(1450.0)], tug)
    needed = 900.0 * -math.expm1(-1450.0 / SPEED)
    burned = (360.0 - needed) / 0.1
    assert book.legs[0].slack == pytest.approx(SPEED * math.log(900.0 / (900.0 - burned)) - 100.0, rel=1e-9, abs=0.0)


def test_filling_a_tank_that_holds_more_than_its_capacity_makes_up_for_nothing() -> None:
    # 400 kg in a tank for 300: filling adds nothing, and 1600 m/s on from there need more than 300 kg.
    book = books([burn(10.0), fill("tug"), burn(1600.0)], stage(propellants=tank(400.0, 300.0)))
    assert book.legs[0].slack == pytest.approx(SPEED * math.log(900.0 / 500.0) - 1610.0, rel=1e-9, abs=0.0)


def test_a_stage_left_dry_to_the_last_gram_drops_before_another_adds() -> None:
    book = books([burn(SPEED * math.log(1800.0 / 1400.0)), burn(100.0)], stage("lower"), stage("upper"))
    assert book.legs[0].slack == pytest.approx(SPEED * math.log(900.0 / 500.0) - 100.0, rel=1e-9, abs=0.0)


@pytest.mark.parametrize("delta_v", [1.0, 100.0, 333.3])
def test_nothing_is_left_of_a_branch_that_was_docked(delta_v: float) -> None:
    away = {"kind": "separate", "stages": ["scout"]}
    legs = [burn(delta_v), away, {"kind": "take_on", "branch": "scout"}, burn(10.0)]
    scout = {"of": "scout", "legs": [burn(delta_v / 3.0), burn(delta_v / 7.0)]}
    plain = design(legs, stage("scout"), stage("tug"), branches=[scout])
    assert branch(budget_of(plain), "scout").end_mass == 0.0
