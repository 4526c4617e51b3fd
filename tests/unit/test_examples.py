"""The example designs do what their first lines say."""

from functools import cache
from pathlib import Path

import pytest

from burntally.cli.files import read_design
from burntally.model.budget import Budget
from burntally_service.budget import draw_up

EXAMPLES = Path(__file__).parents[2] / "sdk" / "examples"
VERDICTS = {
    "closes.toml": True,
    "fails.toml": False,
    "launcher.toml": True,
    "rescue.yaml": True,
    "tessaly.json": True,
}


@cache
def budget_of(name: str) -> Budget:
    return draw_up(read_design(EXAMPLES / name))


def test_every_example_is_held_to_its_word() -> None:
    assert {path.name for path in EXAMPLES.iterdir() if path.suffix in {".toml", ".yaml", ".json"}} == set(VERDICTS)


@pytest.mark.parametrize("name, closes", sorted(VERDICTS.items()))
def test_an_example_closes_or_does_not(name: str, *, closes: bool) -> None:
    assert budget_of(name).closes == closes


@pytest.mark.parametrize("name", sorted(name for name, closes in VERDICTS.items() if closes))
def test_an_example_that_closes_is_neither_tight_nor_idle(name: str) -> None:
    margin = budget_of(name).margin
    assert margin is not None
    assert 10.0 < margin < 300.0


def test_the_one_that_fails_owes_the_turn_of_the_plane() -> None:
    budget = budget_of("fails.toml")
    first = next(found for found in budget.findings if found.severity == "error")
    assert (first.code, first.leg) == ("leg-unpaid", 0)
    assert first.remedies


def test_the_rescue_comes_down_with_the_pod() -> None:
    books = budget_of("rescue.yaml").branches[0]
    end = books.end
    assert getattr(end, "periapsis", None) == 62e3
    assert books.legs[2].mass_after - books.legs[2].mass_before == pytest.approx(640.0, rel=1e-12)


def test_the_launcher_flies_its_second_stage_down() -> None:
    branches = budget_of("launcher.toml").branches
    assert [(branch.name, branch.closes) for branch in branches] == [("main", True), ("second", True)]


@pytest.mark.parametrize("name", ["closes.toml", "tessaly.json"])
def test_a_transfer_that_turns_the_plane_shares_the_turn(name: str) -> None:
    burns = budget_of(name).branches[0].legs[0].manoeuvres
    assert all(burn.plane_change is not None and burn.plane_change > 0.0 for burn in burns)
    assert len(burns) == 2
