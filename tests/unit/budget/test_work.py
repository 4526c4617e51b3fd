"""Work: what a design asks for is known, and bounded, before anything is computed."""

from typing import Any

import msgspec
import pytest

from burntally.model.decode import decode
from burntally.model.design import Design
from burntally.model.errors import UncomputableError
from burntally_service.budget.work import MOST_AT_ONCE, MOST_WORK, check_work, work_of
from burntally_service.haste import NeedsTimeError
from burntally_service.operations import answer

MOST_LEGS, MOST_BRANCHES, MOST_SPLITS, MOST_ENGINES, MOST_LOADS = 200, 16, 50, 16, 8


def body(*, legs: int = 1, splits: int = 1, branches: int = 0, engines: int = 1, loads: int = 1, **leg: Any) -> bytes:
    """A design of so many of each."""
    stages = [
        {
            "name": f"stage {n}",
            "dry_mass": 500.0,
            "propellants": [{"name": f"load {k}", "mass": 900.0} for k in range(loads)],
            "engines": [{"name": f"engine {k}", "thrust": 4e4, "isp": 320.0} for k in range(engines)],
        }
        for n in range(1 + branches)
    ]
    row = [{"kind": "flyby", "delta_v": 1.0, "splits": splits, **leg}] * legs
    mission = {
        "start": {"kind": "orbit", "body": "earth", "altitude": 4e5},
        "legs": row,
        "branches": [{"of": f"stage {n}", "legs": row} for n in range(branches)],
    }
    return msgspec.json.encode({"format": 1, "vehicle": {"name": "Meridian", "stages": stages}, "mission": mission})


def design(**counts: Any) -> Design:
    return decode(Design, body(**counts))


def test_one_leg_is_itself_and_its_ignition_on_a_stage_with_one_engine_and_one_load() -> None:
    assert work_of(design()) == 2 * 4


def test_a_transfer_that_is_computed_may_take_three_manoeuvres() -> None:
    assert work_of(design(kind="transfer", delta_v=None, to={"altitude": 5e5}, splits=2)) == 7 * 4


@pytest.mark.parametrize(
    "more",
    [{"legs": 2}, {"splits": 2}, {"branches": 1}, {"engines": 2}, {"loads": 2}],
    ids=lambda more: next(iter(more)),
)
def test_more_of_anything_is_more_work(more: dict[str, int]) -> None:
    assert work_of(design(**more)) > work_of(design())


def test_what_flies_each_burn_in_one_is_within_the_bound() -> None:
    check_work(design(legs=MOST_LEGS, branches=11))


def test_the_most_of_everything_is_refused_before_it_is_computed(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("burntally_service.budget.draw_up", None)
    most = body(legs=MOST_LEGS, splits=MOST_SPLITS, branches=11, engines=MOST_ENGINES, loads=MOST_LOADS)
    with pytest.raises(UncomputableError) as refusal:
        answer("create_budget", most)
    violation = refusal.value.violations[0]
    assert violation.pointer == "/mission"
    assert (violation.read or "").startswith(f"{12 * 12 * 200 * 51 * 26} steps")
    assert str(MOST_WORK) in (violation.expected or "")


def test_what_takes_more_than_a_moment_is_not_computed_where_it_arrived() -> None:
    crowd = design(legs=MOST_LEGS, splits=5)
    assert MOST_AT_ONCE < work_of(crowd) < MOST_WORK
    check_work(crowd)
    with pytest.raises(NeedsTimeError):
        check_work(crowd, in_haste=True)
