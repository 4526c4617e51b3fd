"""Published policies, as data: each says where its figures stand."""

import re
import tomllib
from importlib.resources import files
from typing import Any

import pytest

from burntally.model.decode import decode_builtins
from burntally.model.errors import NotFoundError
from burntally.model.rules import Rules
from burntally_service.budget.presets import list_presets, preset_digest, preset_named, preset_rules

TEXT = files("burntally_service").joinpath("data", "presets.toml").read_text(encoding="utf-8")
POLICIES: dict[str, dict[str, Any]] = tomllib.loads(TEXT)
FOR_THE_READER = {"title", "source", "url", "notes"}
EACH = pytest.mark.parametrize("name", POLICIES)


@EACH
def test_a_preset_is_rules_of_the_contract(name: str) -> None:
    stated = {key: value for key, value in POLICIES[name].items() if key not in FOR_THE_READER}
    assert decode_builtins(Rules, stated) == preset_rules(name)


@EACH
def test_a_preset_says_where_it_was_published(name: str) -> None:
    record = preset_named(name)
    assert record.title
    assert record.source


@EACH
def test_every_rule_of_a_preset_has_its_clause(name: str) -> None:
    rules = preset_rules(name)
    assert rules is not None
    assert [rule.category for rule in rules.contingency if not rule.clause] == []


@EACH
def test_no_preset_has_two_rules_of_a_category(name: str) -> None:
    rules = preset_rules(name)
    assert rules is not None
    categories = [rule.category for rule in rules.contingency]
    assert len({*categories}) == len(categories)


def test_every_other_figure_stands_below_its_clause() -> None:
    lines = TEXT.splitlines()
    figures = [
        place for place, line in enumerate(lines) if re.match(r"(mass_|residual_|reserve|fill_|\w+_m(in|ax))", line)
    ]
    assert figures
    bare = [lines[place] for place in figures if not re.search(r"# .*(R-|MAR-|[Ss]ection )", lines[place - 1])]
    assert bare == []


def test_presets_are_listed_by_name() -> None:
    assert [preset.name for preset in list_presets().presets] == sorted(POLICIES)


def test_a_digest_tells_presets_apart() -> None:
    assert len({preset_digest(name) for name in POLICIES}) == len(POLICIES)


def test_an_unknown_preset_has_neither_rules_nor_a_digest() -> None:
    assert (preset_rules("nobody"), preset_digest("nobody")) == (None, None)


def test_an_unknown_preset_is_told_with_those_that_there_are() -> None:
    with pytest.raises(NotFoundError) as caught:
        preset_named("nobody")
    assert [violation.pointer for violation in caught.value.violations] == ["/name"]


def test_figures_of_esa_2012() -> None:
    rules = preset_rules("esa-2012")
    assert rules is not None
    assert (rules.mass_contingency, rules.residual_fraction) == (0.2, 0.02)
    assert {rule.category: rule.fraction for rule in rules.contingency} == {
        "deterministic": 0.05,
        "maintenance": 1.0,
        "attitude": 1.0,
        "injection_error": 0.05,
        "navigation.low_thrust": 0.05,
    }


def test_figures_of_esa_mar() -> None:
    rules = preset_rules("esa-mar")
    assert rules is not None
    assert rules.residual_fraction == 0.02
    assert {rule.category: (rule.fraction, rule.floor, rule.fixed) for rule in rules.contingency} == {
        "deterministic": (0.05, 10.0, 0.0),
        "deterministic.flyby": (0.05, 0.0, 15.0),
        "deterministic.flyby.moon": (0.05, 0.0, 10.0),
        "injection_error": (0.0, 0.0, 0.0),
        "navigation": (0.0, 0.0, 0.0),
    }


@pytest.mark.parametrize("name", ["esa-2012", "esa-mar"])
def test_the_tanks_of_esa_hold_a_tenth_more_than_their_load(name: str) -> None:
    rules = preset_rules(name)
    assert rules is not None
    assert rules.limits is not None
    assert rules.limits.fill_max == pytest.approx(1.0 / 1.1, rel=1e-15, abs=0.0)
