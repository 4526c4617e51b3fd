"""Spent stages that leave right after one another each start the branch that is of them."""

from typing import Any

import msgspec
import pytest

from burntally.model.budget import Budget
from burntally.model.design import Design
from burntally_service.budget import draw_up
from tests.unit.budget.designs import budget_of, design


def stage(name: str, load: float) -> dict[str, Any]:
    return {
        "name": name,
        "dry_mass": 100.0,
        "propellants": [{"mass": load, "held_back": 5.0}],
        "engines": [{"thrust": 5000.0, "isp": 300.0}],
    }


@pytest.fixture
def budget() -> Budget:
    """Two stages are drained by named legs, and a third then burns: both leave just before it does."""
    own = [{"kind": "allowance", "category": "trim", "delta_v": 10.0}]
    drain = {"kind": "allowance", "category": "vent"}
    design = {
        "format": 1,
        "vehicle": {"name": "stack", "stages": [stage("lower", 200.0), stage("middle", 300.0), stage("upper", 400.0)]},
        "mission": {
            "start": {"kind": "orbit", "body": "earth", "altitude": 4e5},
            "legs": [
                {**drain, "propellant": 195.0, "paid_by": ["lower"]},
                {**drain, "propellant": 295.0, "paid_by": ["middle"]},
                {"kind": "allowance", "category": "trim", "delta_v": 100.0},
            ],
            "branches": [{"of": "lower", "legs": own}, {"of": "middle", "legs": own}],
        },
    }
    return draw_up(msgspec.convert(design, Design))


@pytest.mark.parametrize("name", ["lower", "middle"])
def test_each_flies_alone(budget: Budget, name: str) -> None:
    book = next(book for book in budget.branches if book.name == name)
    assert [leg.mass_before for leg in book.legs] == [pytest.approx(105.0, abs=1e-9)]


def test_every_branch_closes(budget: Budget) -> None:
    assert [book.closes for book in budget.branches] == [True, True, True]


def test_a_stage_that_drops_for_a_reserve_after_kilograms_alone_leaves_in_the_last_leg() -> None:
    # No leg is charged a delta-v, so the open account holds the reserve at the end; the lower stage is dry by then.
    gas = {"kind": "allowance", "category": "gas", "propellant": 197.5, "paid_by": ["lower"]}
    plain = design([gas, gas], stage("lower", 400.0), stage("upper", 400.0), reserve={"delta_v": 10.0})
    separated = budget_of(plain).stages[0].separated
    assert separated is not None
    assert separated.leg == 1
