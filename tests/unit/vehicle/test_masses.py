"""Masses as written, as predicted and as allowed."""

import pytest

from burntally.model.budget import DryMass
from burntally.model.rules import GrowthRow, Rules
from burntally.model.vehicle import MassItem, Payload, Stage
from burntally_service.vehicle.masses import dry_mass_of, growth_of, has_uncovered_item, payload_mass_of

RULES = Rules(
    mass_growth=0.3,
    mass_contingency=0.2,
    growth_table=[
        GrowthRow(maturity="new", growth=0.2),
        GrowthRow(maturity="new", class_="structure", growth=0.25),
        GrowthRow(maturity="flown", class_="structure", growth=0.02),
    ],
)


@pytest.mark.parametrize(
    "item, growth",
    [
        (MassItem(name="a", mass=1.0, growth=0.07, maturity="new"), 0.07),
        (MassItem(name="a", mass=1.0, growth=0.0, maturity="new"), 0.0),
        (MassItem(name="a", mass=1.0, maturity="new", class_="structure"), 0.25),
        (MassItem(name="a", mass=1.0, maturity="new", class_="harness"), 0.2),
        (MassItem(name="a", mass=1.0, maturity="new"), 0.2),
        (MassItem(name="a", mass=1.0, maturity="flown"), 0.3),
        (MassItem(name="a", mass=1.0), 0.3),
    ],
)
def test_growth_is_the_first_that_covers_an_item(item: MassItem, growth: float) -> None:
    assert growth_of(item, RULES) == growth


def test_the_part_beats_the_rules_for_what_nothing_else_covers() -> None:
    assert growth_of(MassItem(name="a", mass=1.0), RULES, fallback=0.1) == 0.1


def test_what_nothing_covers_does_not_grow() -> None:
    assert growth_of(MassItem(name="a", mass=1.0), Rules()) is None


def test_a_plain_mass_is_one_item() -> None:
    found = dry_mass_of(Stage(name="s", dry_mass=100.0), RULES)
    assert found == DryMass(basic=100.0, predicted=130.0, allowable=156.0)


def test_items_grow_each_by_itself_and_count() -> None:
    items = [MassItem(name="a", mass=10.0, count=3, growth=0.1), MassItem(name="b", mass=5.0, growth=0.0)]
    found = dry_mass_of(Stage(name="s", dry_mass=items), Rules())
    assert (found.basic, found.predicted, found.allowable) == pytest.approx((35.0, 38.0, 38.0), rel=1e-15)


def test_the_growth_of_a_stage_is_for_its_own_items() -> None:
    assert dry_mass_of(Stage(name="s", dry_mass=100.0, mass_growth=0.5), RULES).predicted == 150.0


def test_a_payload_grows_without_the_system_contingency() -> None:
    assert payload_mass_of(Payload(name="p", mass=100.0), RULES) == 130.0


@pytest.mark.parametrize("rules, uncovered", [(Rules(), True), (Rules(mass_growth=0.0), False)])
def test_a_growth_of_zero_covers(rules: Rules, *, uncovered: bool) -> None:
    assert has_uncovered_item(100.0, rules) == uncovered


def test_one_item_without_growth_is_enough() -> None:
    items = [MassItem(name="a", mass=1.0, growth=0.1), MassItem(name="b", mass=1.0)]
    assert has_uncovered_item(items, Rules())
