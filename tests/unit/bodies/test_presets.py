"""The margin policies fit the contract, and every figure has its clause."""

import tomllib
from importlib.resources import files

import msgspec
import pytest

from burntally.model.rules import Rules

PRESETS = tomllib.loads(files("burntally_service").joinpath("data/presets.toml").read_text(encoding="utf-8"))
FOR_THE_READER = {"title", "source", "url", "notes"}


@pytest.mark.parametrize("name", PRESETS)
def test_a_policy_fits_the_contract(name: str) -> None:
    rules = {key: value for key, value in PRESETS[name].items() if key not in FOR_THE_READER}
    assert msgspec.convert(rules, Rules, strict=True).contingency


@pytest.mark.parametrize("name", PRESETS)
def test_every_contingency_quotes_its_clause(name: str) -> None:
    assert [row["category"] for row in PRESETS[name]["contingency"] if not row.get("clause")] == []


@pytest.mark.parametrize("name", PRESETS)
def test_a_policy_names_its_document(name: str) -> None:
    assert PRESETS[name]["title"]
    assert PRESETS[name]["source"]


@pytest.mark.parametrize("name", PRESETS)
def test_a_tank_holds_a_tenth_more_than_its_load(name: str) -> None:
    assert PRESETS[name]["limits"]["fill_max"] == pytest.approx(1.0 / 1.1, rel=1e-15)
