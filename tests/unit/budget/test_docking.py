"""Docking: what is left of a finished branch comes aboard, once it is there to be docked."""

import math
from typing import Any

import pytest

from burntally.model.budget import Budget
from burntally_service.kernels.constants import G0
from tests.unit.budget.designs import branch, budget_of, burn, design, findings, stage

Plain = dict[str, Any]

AWAY: Plain = {"kind": "separate", "stages": ["scout"]}
DOCK: Plain = {"kind": "take_on", "branch": "scout"}
SCOUT: Plain = {"of": "scout", "legs": [burn(500.0)]}


def flown(*legs: Plain, branches: tuple[Plain, ...] = (SCOUT,)) -> Budget:
    """Fly a scout below a tug."""
    return budget_of(design(legs, stage("scout"), stage("tug"), branches=list(branches)))


def test_what_is_left_of_a_branch_comes_aboard() -> None:
    budget = flown(AWAY, DOCK, burn(10.0))
    left = budget.stages[0].loads[0]
    assert branch(budget).legs[2].mass_before == pytest.approx(900.0 + 500.0 + 400.0 - left.burned, rel=1e-12, abs=0.0)


def test_a_branch_that_is_docked_is_charged_all_the_same() -> None:
    assert branch(flown(AWAY, DOCK, burn(10.0)), "scout").charged == 500.0


def test_nothing_can_be_docked_before_it_has_left() -> None:
    assert [found.leg for found in findings(flown(DOCK, AWAY, burn(10.0)), "part-absent")] == [0]


def test_a_branch_is_flown_though_somebody_meant_to_dock_it_before_it_had_left() -> None:
    budget = flown(DOCK, AWAY, burn(10.0))
    assert branch(budget, "scout").legs[0].payers[0].delta_v == pytest.approx(500.0, rel=1e-12, abs=0.0)


def test_nothing_can_be_docked_twice() -> None:
    assert [found.leg for found in findings(flown(AWAY, DOCK, DOCK, burn(10.0)), "part-absent")] == [2]


def test_a_branch_cannot_dock_itself() -> None:
    narcissus = {"of": "scout", "legs": [burn(500.0), DOCK]}
    told = findings(flown(AWAY, burn(10.0), branches=(narcissus,)), "part-absent")
    assert [(found.branch, found.leg) for found in told] == [("scout", 1)]


def test_a_branch_of_a_branch_is_flown_before_it_is_docked() -> None:
    probe_away = {"kind": "separate", "stages": ["probe"]}
    scout = {"of": "scout", "legs": [probe_away, burn(50.0)]}
    probe = {"of": "probe", "legs": [burn(70.0)]}
    legs = [AWAY, {"kind": "take_on", "branch": "probe"}, burn(10.0)]
    budget = budget_of(design(legs, stage("probe"), stage("scout"), stage("tug"), branches=[scout, probe]))
    assert [branch(budget, name).legs[-1].paid for name in ("scout", "probe")] == [True, True]
    assert findings(budget, "part-absent") == []
    assert branch(budget).legs[1].mass_after > branch(budget).legs[1].mass_before


def test_slack_before_a_docking_leaves_enough_for_what_comes_after() -> None:
    hulk = {"name": "tug", "dry_mass": 900.0}
    wait = {"of": "scout", "legs": [{"kind": "coast", "duration": 1.0}]}
    legs = [burn(400.0, "scout"), AWAY, DOCK, burn(100.0, "scout")]
    first = branch(budget_of(design(legs, stage("scout"), hulk, branches=[wait]))).legs[0]
    # Nothing is lost on the way, so the stack has what a single burn would leave it.
    assert first.slack == pytest.approx(320.0 * G0 * math.log(1800.0 / 1400.0) - 500.0, rel=1e-9, abs=0.0)
