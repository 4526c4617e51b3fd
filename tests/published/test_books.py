"""Designs whose legs state their cost, against the results of the bookkeeping rules.

Two independent implementations of the rules agreed on the results to 1e-9. A number is the same within 1e-9 of the
larger, or within 1e-9 in its unit; names, counts and codes are exact.
"""

import json
import math
from pathlib import Path
from typing import Any

import msgspec
import pytest

from burntally.model.budget import BranchBook, Budget, LegBook, StageBook
from burntally.model.design import Design
from burntally_service.budget import draw_up

BOOKS = sorted((Path(__file__).parent / "books").glob("*.json"))

COMPARED_CODES = frozenset(
    {
        "leg-unpaid",
        "reserve-unpaid",
        "payer-gone",
        "payer-inert",
        "payer-dry",
        "ignitions-exceeded",
        "part-absent",
        "release-short",
        "branch-not-started",
        "handover",
        "left-behind",
        "held-back-unused",
        "unlit-aboard",
        "solid-surplus",
        "feed-unbalanced",
        "boiled-dry",
        "overfilled",
        "nothing-to-pay",
        "no-contingency",
        "no-growth",
        "impulse-mismatch",
        "booster-outlives-stage",
    }
)


@pytest.fixture(scope="module", params=BOOKS, ids=lambda path: path.stem)
def book(request: pytest.FixtureRequest) -> tuple[Budget, dict[str, Any]]:
    """A budget, and what the rules make of its design."""
    case = json.loads(request.param.read_text())
    design = msgspec.convert(case["design"], Design)
    return draw_up(design), case["expect"]


def differences(found: Any, expected: Any) -> dict[str, tuple[Any, Any]]:
    """What differs, by its place: numbers beyond the tolerance of the books, anything else at all."""
    left, right = flat(found), flat(expected)
    return {
        place: (left.get(place), right.get(place))
        for place in left.keys() | right.keys()
        if not is_same(left.get(place), right.get(place))
    }


def is_same(found: object, expected: object) -> bool:
    """Compare two numbers within 1e-9 of the larger or in their unit, anything else exactly."""
    if isinstance(found, float) and isinstance(expected, float):
        return math.isclose(found, expected, rel_tol=1e-9, abs_tol=1e-9)
    return found == expected


def leg_row(book: LegBook) -> dict[str, Any]:
    return {
        "required": book.required,
        "contingency": {name: getattr(book.contingency, name) for name in ("fraction", "floor", "fixed")},
        "charged": book.charged,
        "owed": book.owed,
        "slack": book.slack,
        "mass_before": book.mass_before,
        "mass_after": book.mass_after,
        "payers": [
            {"stage": payer.stage, "delta_v": payer.delta_v, "propellant": payer.propellant} for payer in book.payers
        ],
    }


def flat(value: Any, path: str = "") -> dict[str, Any]:
    """Flatten nested results, so that each number is compared and named on its own."""
    if isinstance(value, dict):
        return {key: item for name, part in value.items() for key, item in flat(part, f"{path}/{name}").items()}
    if isinstance(value, list):
        return {key: item for place, part in enumerate(value) for key, item in flat(part, f"{path}/{place}").items()}
    return {path: value}


def branch_row(book: BranchBook) -> dict[str, Any]:
    row: dict[str, Any] = {
        "name": book.name,
        "closes": book.closes,
        "margin": book.margin,
        "owed": book.owed,
        "charged": book.charged,
        "legs": [leg_row(leg) for leg in book.legs],
    }
    if book.reserve is not None:
        row["reserve"] = {name: getattr(book.reserve, name) for name in ("charged", "owed", "slack")}
        row["end_mass"] = book.end_mass
    return row


def stage_row(book: StageBook) -> dict[str, Any]:
    separated = book.separated
    return {
        "name": book.name,
        "booster_of": book.booster_of,
        "count": book.count,
        "dry_mass": msgspec.to_builtins(book.dry_mass),
        "ignitions": book.ignitions,
        "loads": [msgspec.to_builtins(load) for load in book.loads],
        "separated": separated and {"branch": separated.branch, "left_behind": separated.left_behind},
    }


def test_the_budget_is_the_books(book: tuple[Budget, dict[str, Any]]) -> None:
    budget, expected = book
    limiting = budget.limiting and {"branch": budget.limiting.branch, "leg": budget.limiting.leg}
    found = {
        "closes": budget.closes,
        "margin": budget.margin,
        "limiting": limiting,
        "initial_mass": budget.initial_mass,
    }
    assert differences(found, {name: expected[name] for name in found}) == {}


def test_every_branch_is_the_books(book: tuple[Budget, dict[str, Any]]) -> None:
    budget, expected = book
    found = [branch_row(branch) for branch in budget.branches]
    assert differences(found, [without_empty(branch) for branch in expected["branches"]]) == {}


def without_empty(branch: dict[str, Any]) -> dict[str, Any]:
    """A branch that never started has no reserve and no end mass, whether left out or null."""
    return {name: value for name, value in branch.items() if name not in {"reserve", "end_mass"} or value is not None}


def test_every_stage_is_the_books(book: tuple[Budget, dict[str, Any]]) -> None:
    budget, expected = book
    assert differences([stage_row(stage) for stage in budget.stages], expected["stages"]) == {}


def test_the_findings_are_the_books(book: tuple[Budget, dict[str, Any]]) -> None:
    budget, expected = book
    codes = sorted(finding.code for finding in budget.findings if finding.code in COMPARED_CODES)
    assert codes == expected["codes"]


SHORTFALLS = frozenset({"leg-unpaid", "reserve-unpaid", "payer-gone", "payer-inert", "payer-dry", "ignitions-exceeded"})


def test_every_shortfall_has_a_remedy(book: tuple[Budget, dict[str, Any]]) -> None:
    budget, _ = book
    short = [finding for finding in budget.findings if finding.code in SHORTFALLS]
    assert [finding for finding in short if not finding.remedies] == []
