"""Rules with their preset filled in, and which rule a leg takes."""

from typing import Any

import pytest
from msgspec import UNSET, structs

from burntally.model.errors import UncomputableError
from burntally.model.rules import Contingency, GrowthRow, Limits, Reserve, Rules
from burntally_service.budget import rules as room
from burntally_service.budget.presets import preset_rules
from burntally_service.budget.rules import no_rule, resolve, rule_for

STATED: dict[str, Any] = {
    "mass_growth": 0.3,
    "mass_contingency": 0.1,
    "residual_fraction": 0.01,
    "growth_table": [GrowthRow(maturity="flown", growth=0.05)],
    "reserve": Reserve(delta_v=10.0),
}


def fraction(rules: Rules, category: str) -> float:
    """Fraction of the rule of a category."""
    return next(rule.fraction for rule in rules.contingency if rule.category == category)


def test_without_a_preset_rules_stay_as_they_are() -> None:
    rules = Rules(residual_fraction=0.01)
    assert resolve(rules) is rules


def test_a_preset_fills_what_is_not_stated() -> None:
    resolved = resolve(Rules(preset="esa-2012"))
    preset = preset_rules("esa-2012")
    assert preset is not None
    assert structs.replace(resolved, preset=None) == preset


@pytest.mark.parametrize("name", STATED.keys())
def test_what_is_stated_beats_the_preset(name: str) -> None:
    assert getattr(resolve(Rules(preset="esa-2012", **{name: STATED[name]})), name) == STATED[name]


@pytest.mark.parametrize("name", ["mass_growth", "mass_contingency", "residual_fraction"])
def test_a_stated_zero_beats_the_preset(name: str) -> None:
    stated: dict[str, Any] = {name: 0.0}
    assert getattr(resolve(Rules(preset="esa-2012", **stated)), name) == 0.0


def test_a_stated_rule_replaces_that_of_the_preset_whole() -> None:
    resolved = resolve(Rules(preset="esa-mar", contingency=[Contingency(category="deterministic", fraction=0.2)]))
    told = [rule for rule in resolved.contingency if rule.category == "deterministic"]
    assert told == [Contingency(category="deterministic", fraction=0.2)]


def test_other_rules_of_the_preset_stay_beside_a_stated_one() -> None:
    resolved = resolve(Rules(preset="esa-2012", contingency=[Contingency(category="deterministic", fraction=0.2)]))
    assert fraction(resolved, "maintenance") == 1.0


def test_a_stated_rule_of_a_longer_category_leaves_the_shorter_one() -> None:
    own = Contingency(category="deterministic.landing", fraction=0.2)
    resolved = resolve(Rules(preset="esa-2012", contingency=[own]))
    assert (fraction(resolved, "deterministic"), fraction(resolved, "deterministic.landing")) == (0.05, 0.2)


def test_a_limit_of_the_preset_stands_where_nothing_is_stated() -> None:
    limits = resolve(Rules(preset="esa-2012", limits=Limits(burn_time_max=60.0))).limits
    assert limits is not None
    assert limits.burn_time_max == 60.0
    assert limits.fill_max == pytest.approx(1.0 / 1.1, rel=1e-15, abs=0.0)


def test_null_lifts_a_limit_of_the_preset() -> None:
    limits = resolve(Rules(preset="esa-2012", limits=Limits(fill_max=None))).limits
    assert limits is not None
    assert limits.fill_max is None


def test_limits_stand_alone_where_the_preset_has_none(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(room, "preset_rules", lambda _name: Rules())
    assert resolve(Rules(preset="bare", limits=Limits(fill_max=0.5))).limits == Limits(fill_max=0.5)


def test_a_limit_that_nobody_states_is_none(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(room, "preset_rules", lambda _name: Rules(limits=Limits(fill_max=0.5)))
    limits = resolve(Rules(preset="bare", limits=Limits(burn_time_max=60.0))).limits
    assert limits is not None
    assert limits.acceleration_max is UNSET


def test_an_unknown_preset_is_told_at_its_place() -> None:
    with pytest.raises(UncomputableError) as caught:
        resolve(Rules(preset="nobody"), pointer="/rules")
    assert [violation.pointer for violation in caught.value.violations] == ["/rules/preset"]


def test_an_unknown_preset_is_told_the_known_ones() -> None:
    with pytest.raises(UncomputableError) as caught:
        resolve(Rules(preset="nobody"))
    assert caught.value.violations[0].expected == "esa-2012, esa-mar"


@pytest.mark.parametrize(
    "category, taken",
    [
        ("deterministic", 0),
        ("deterministic.flyby", 1),
        ("deterministic.flyby.moon", 1),
        ("deterministic.landing", 0),
        ("deterministics", -1),
        ("attitude", -1),
    ],
)
def test_a_leg_takes_the_rule_with_the_longest_front(category: str, taken: int) -> None:
    rules = Rules(contingency=[Contingency(category="deterministic"), Contingency(category="deterministic.flyby")])
    assert rule_for(category, rules) == taken


def test_the_order_of_the_rules_does_not_matter() -> None:
    rules = Rules(contingency=[Contingency(category="deterministic.flyby"), Contingency(category="deterministic")])
    assert rule_for("deterministic.flyby", rules) == 0


def test_no_rule_adds_nothing() -> None:
    rule = no_rule()
    assert (rule.fraction, rule.floor, rule.fixed) == (0.0, 0.0, 0.0)
