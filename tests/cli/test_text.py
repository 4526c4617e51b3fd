"""What a person reads, compared whole."""

from pathlib import Path

import msgspec
import pytest

from burntally.cli.columns import Column, grouped, hang, line_up, mass_decimals
from burntally.cli.findings import cautions_text, findings_text
from burntally.cli.text import NOTICE, verdict
from tests.cli import made_budgets
from tests.cli.golden_texts import EXAMPLES, GOLDEN, example_text, made_text

NAMES = made_budgets.__all__


@pytest.mark.parametrize("name", NAMES)
def test_a_budget_reads_as_agreed(name: str) -> None:
    assert made_text(name) == (GOLDEN / f"{name}.txt").read_text(encoding="utf-8")


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.name)
def test_an_example_reads_as_agreed(path: Path) -> None:
    assert example_text(path) == (GOLDEN / "examples" / f"{path.name}.txt").read_text(encoding="utf-8")


def test_every_text_is_of_an_example() -> None:
    assert [path.stem for path in sorted((GOLDEN / "examples").iterdir())] == [path.name for path in EXAMPLES]


@pytest.mark.parametrize("name", NAMES)
def test_the_verdict_is_the_first_line(name: str) -> None:
    assert made_text(name).splitlines()[0] == verdict(getattr(made_budgets, name)())


@pytest.mark.parametrize("name", NAMES)
def test_a_line_has_no_space_at_its_end(name: str) -> None:
    assert [line for line in made_text(name).splitlines() if line != line.rstrip()] == []


@pytest.mark.parametrize("name", NAMES)
def test_every_text_bears_the_notice(name: str) -> None:
    assert NOTICE in made_text(name)


@pytest.mark.parametrize("name", NAMES)
def test_own_words_are_plain_ascii(name: str) -> None:
    assert made_text(name).isascii()


@pytest.mark.parametrize(
    "number,decimals,text",
    [
        (1234567.891, 1, "1 234 567.9"),
        (-1234.5, 2, "-1 234.50"),
        (-0.01, 1, "0.0"),
        (0.0, 0, "0"),
        (None, 1, "-"),
    ],
)
def test_thousands_stand_apart(number: float | None, decimals: int, text: str) -> None:
    assert grouped(number, decimals=decimals) == text


@pytest.mark.parametrize("largest,decimals", [(0.0, 3), (9.99, 3), (10.0, 2), (99.9, 2), (100.0, 1), (1e6, 1)])
def test_small_masses_have_more_decimals(largest: float, decimals: int) -> None:
    assert mass_decimals(largest) == decimals


def test_words_stand_left_and_numbers_right() -> None:
    columns = [Column(head="a", cells=["xyz", "x"], is_words=True), Column(head="n", unit="kg", cells=["1.0", "10.0"])]
    assert line_up(columns) == "  a       n\n         kg\n  xyz   1.0\n  x    10.0"


@pytest.mark.parametrize("margin,said", [(0.0, "0 m/s to spare"), (0.04, "0.04 m/s"), (12345.6, "12 345.6 m/s")])
def test_a_narrow_margin_is_not_rounded_away(margin: float, said: str) -> None:
    assert said in verdict(msgspec.structs.replace(made_budgets.closing(), margin=margin))


def test_nothing_found_is_nothing_said() -> None:
    assert (findings_text([]), cautions_text([])) == ("", "")


def test_a_remedy_of_several_findings_is_told_once() -> None:
    finding = made_budgets.owing().findings[0]
    text = findings_text([finding, finding])
    assert (text.count("load 80.5 kg more"), text.splitlines()[-1]) == (1, "      remedy: as above")


def test_words_hang_beside_their_head_and_are_not_broken() -> None:
    pointer = "/" + "a" * 60
    assert hang(" " * 100 + "x ", f"one two {pointer}") == [" " * 100 + "x one two", " " * 102 + pointer]
