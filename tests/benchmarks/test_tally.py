"""The ledger of many designs, against the same ledger in blocked numpy, in one run; and one ledger in plain Python."""

import statistics
import sys
import time
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from typing import Any

import msgspec
import numpy as np
import pytest
from numpy.typing import NDArray

from burntally.model.design import Design
from burntally_service.budget.drawing import Drawn, draw
from burntally_service.kernels import tally_rows as rows
from burntally_service.kernels.constants import G0
from burntally_service.kernels.tally import tally
from burntally_service.kernels.tally_books import blank_books
from burntally_service.kernels.tally_lanes import tally_lanes
from burntally_service.kernels.tally_rows import Books
from burntally_service.kernels.tally_slack import slacks

pytestmark = pytest.mark.benchmark

LANES = 1_000_000
BLOCK = 8192
ROUNDS = 5
LOOPS = 4.0
"""100 us, where such a loop takes 25 to 28 us."""

_TUG = {"paid_by": ["tug"]}
DESIGN: dict[str, Any] = {
    "format": 1,
    "title": "three stages, ten legs",
    "vehicle": {
        "name": "hauler",
        "stages": [
            {
                "name": "first",
                "dry_mass": 6200.0,
                "propellants": [{"mass": 92000.0, "residual_fraction": 0.004}],
                "engines": [{"thrust": 1.45e6, "isp": 309.0}],
            },
            {
                "name": "second",
                "dry_mass": 1700.0,
                "propellants": [{"mass": 17500.0, "residual_fraction": 0.005}],
                "engines": [{"thrust": 95000.0, "isp": 346.0, "max_ignitions": 3}],
            },
            {
                "name": "tug",
                "dry_mass": 420.0,
                "propellants": [{"mass": 1250.0, "residual_fraction": 0.01}],
                "engines": [{"thrust": 4400.0, "isp": 322.0, "loss_per_ignition": 0.2}],
            },
        ],
        "payloads": [{"name": "pod a", "mass": 350.0}, {"name": "pod b", "mass": 250.0}],
    },
    "mission": {
        "start": {"kind": "site", "body": "earth", "latitude": 5.0},
        "legs": [
            {"kind": "ascend", "to": {"altitude": 250000.0}, "delta_v": 9050.0, "paid_by": ["first", "second"]},
            {"kind": "separate", "stages": ["second"]},
            {"kind": "allowance", "category": "navigation", "delta_v": 12.0, **_TUG},
            {"kind": "transfer", "to": {"apoapsis": 900000.0}, "delta_v": 180.0, **_TUG},
            {"kind": "transfer", "to": {"altitude": 900000.0}, "delta_v": 175.0, **_TUG},
            {"kind": "release", "payload": "pod a"},
            {"kind": "coast", "duration": 2592000.0, "upkeep_per_year": 30.0, **_TUG},
            {"kind": "transfer", "to": {"altitude": 1200000.0}, "delta_v": 150.0, **_TUG},
            {"kind": "release", "payload": "pod b"},
            {"kind": "deorbit", "periapsis": 50000.0, "delta_v": 290.0, **_TUG},
        ],
    },
    "rules": {
        "finite_burn": False,
        "contingency": [
            {"category": "deterministic", "fraction": 0.05},
            {"category": "navigation", "fraction": 0.1},
            {"category": "maintenance", "fraction": 1.0},
            {"category": "ascent", "fraction": 0.01},
        ],
        "reserve": {"delta_v": 25.0},
    },
}


@pytest.fixture(scope="module")
def drawn() -> Drawn:
    """The books of the design that is measured."""
    return draw(msgspec.convert(DESIGN, Design))


def alternating(first: Callable[[], object], second: Callable[[], object], rounds: int = ROUNDS) -> list[list[float]]:
    """Times of two works in turn [s], since a shared machine is fast at one moment and slow at the next."""
    return [[once(first), once(second)] for _ in range(rounds)]


def once(work: Callable[[], object]) -> float:
    """Time of one run [s]."""
    start = time.perf_counter()
    work()
    return time.perf_counter() - start


def drawn_columns(drawn: Drawn) -> dict[str, NDArray[np.float64]]:
    """Masses, isp and costs, each spread by a few per cent."""
    generator = np.random.Generator(np.random.Philox(7))
    tables = drawn.lowered.tables
    nominal: dict[str, float] = {}
    for stage in range(3):
        nominal[f"items/{stage}/mass"] = tables.items[stage].mass
        nominal[f"loads/{stage}/mass"] = tables.loads[stage].mass
        nominal[f"engines/{stage}/isp"] = tables.engines[stage].isp
    for place, step in enumerate(tables.steps):
        if step.op == rows.BURN:
            nominal[f"steps/{place}/amount"] = step.amount
    return {name: value * generator.uniform(0.98, 1.02, LANES) for name, value in nominal.items()}


def outcomes_of(books: Books) -> list[float]:
    """What the main branch owes, and its mass at the end."""
    return [books.branch_owed[0], books.branch_mass[0]]


def in_lanes(drawn: Drawn, columns: dict[str, NDArray[np.float64]]) -> Callable[[], NDArray[np.float64]]:
    """The tally over all lanes."""
    names = [name.split("/") for name in columns]
    cells = [(table, int(row), field) for table, row, field in names]
    values = np.array(list(columns.values()))
    # Compiled here, or read from the disk.
    tally_lanes(drawn.lowered.tables, cells, values[:, :1], outcomes_of)
    return lambda: tally_lanes(drawn.lowered.tables, cells, values, outcomes_of)


class NumpyLedger:
    """The same ledger, written for arrays: one block of designs at a time."""

    def __init__(self, drawn: Drawn, columns: dict[str, NDArray[np.float64]], block: slice) -> None:
        tables = drawn.lowered.tables
        self.residual = [row.residual_fraction for row in tables.loads]
        self.loads = [columns[f"loads/{stage}/mass"][block] for stage in range(3)]
        self.dry = [columns[f"items/{stage}/mass"][block] for stage in range(3)]
        self.speed = [columns[f"engines/{stage}/isp"][block] * G0 for stage in range(3)]
        self.usable = [load * (1.0 - part) for load, part in zip(self.loads, self.residual, strict=True)]
        self.mass = self.dry[0] + self.dry[1] + self.dry[2] + self.loads[0] + self.loads[1] + self.loads[2] + 600.0
        self.owed = np.zeros_like(self.mass)
        self.aboard = [np.ones_like(self.mass, dtype=bool) for _ in range(3)]

    def pay(self, stages: tuple[int, ...], left: NDArray[np.float64]) -> None:
        """Pay a delta-v out of stages, one after another; a stage that is dry drops before the next burns."""
        for place, stage in enumerate(stages):
            if place:
                self.drop(stages[place - 1], left > 0.0)
            wanted = -self.mass * np.expm1(-left / self.speed[stage])
            kg = np.minimum(wanted, self.usable[stage])
            given = np.where(
                wanted <= self.usable[stage], left, self.speed[stage] * np.log(self.mass / (self.mass - kg))
            )
            self.usable[stage] = self.usable[stage] - kg
            self.mass = self.mass - kg
            left = left - given
        self.owed = self.owed + np.where(left < 1e-9, 0.0, left)

    def drop(self, stage: int, where: NDArray[np.bool_] | np.bool_) -> None:
        """Separate a stage with what is left in it."""
        left = self.dry[stage] + self.usable[stage] + self.residual[stage] * self.loads[stage]
        self.mass = self.mass - np.where(where & self.aboard[stage], left, 0.0)
        self.aboard[stage] = self.aboard[stage] & ~np.asarray(where)

    def lose(self, kg: float) -> None:
        """Lose propellant of the tug at an ignition."""
        lost = np.minimum(kg, self.usable[2])
        self.usable[2] = self.usable[2] - lost
        self.mass = self.mass - lost

    def run(self, costs: list[NDArray[np.float64]]) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
        """Fly the mission of the design."""
        ascent, navigation, raise_, circle, upkeep, climb, deorbit = costs
        self.pay((0, 1), ascent)
        self.pay((0, 1), 0.01 * ascent)
        self.drop(1, np.True_)
        for cost, share, after in (
            (navigation, 0.1, 0.0),
            (raise_, 0.05, 0.0),
            (circle, 0.05, 350.0),
            (upkeep, 1.0, 0.0),
            (climb, 0.05, 250.0),
            (deorbit, 0.05, 0.0),
        ):
            if cost is not upkeep:
                self.lose(0.2)
            self.pay((2,), cost)
            self.pay((2,), share * cost)
            self.mass = self.mass - after
        self.pay((2,), np.full_like(self.mass, 25.0))
        return self.owed, self.mass


def in_numpy(drawn: Drawn, columns: dict[str, NDArray[np.float64]]) -> Callable[[], NDArray[np.float64]]:
    """The ledger in blocked numpy over all lanes."""
    costs = [column for name, column in columns.items() if name.startswith("steps/")]
    outcomes = np.zeros((2, LANES))

    def run() -> NDArray[np.float64]:
        for start in range(0, LANES, BLOCK):
            block = slice(start, start + BLOCK)
            outcomes[:, block] = NumpyLedger(drawn, columns, block).run([cost[block] for cost in costs])
        return outcomes

    return run


def test_a_million_ledgers_are_not_slower_than_blocked_numpy(drawn: Drawn, capsys: pytest.CaptureFixture[str]) -> None:
    columns = drawn_columns(drawn)
    lanes, peer = in_lanes(drawn, columns), in_numpy(drawn, columns)
    assert np.allclose(lanes(), peer(), rtol=1e-9, atol=1e-6)
    pairs = alternating(lanes, peer)
    ours, theirs = min(pair[0] for pair in pairs), min(pair[1] for pair in pairs)
    ratio = statistics.median(pair[1] / pair[0] for pair in pairs)
    with capsys.disabled():
        sys.stdout.write(
            f"\nledger of 3 stages and 10 legs, {LANES} designs: {ours / LANES * 1e6:.2f} us each, "
            f"blocked numpy {theirs / LANES * 1e6:.2f} us, ratio {ratio:.2f}\n"
        )
    assert ratio >= 1.0


def test_two_threads_of_ledgers_are_nearly_twice_as_fast(drawn: Drawn, capsys: pytest.CaptureFixture[str]) -> None:
    columns = drawn_columns(drawn)
    halves = [
        {name: column[half] for name, column in columns.items()} for half in (slice(None, None, 2), slice(1, None, 2))
    ]
    whole, parts = in_lanes(drawn, columns), [in_lanes(drawn, half) for half in halves]
    with ThreadPoolExecutor(2) as pool:
        together = list(pool.map(lambda part: part(), parts))
        assert np.array_equal(whole()[:, ::2], together[0])
        pairs = alternating(whole, lambda: list(pool.map(lambda part: part(), parts)), 2 * ROUNDS)
    # Both at their best: on a shared machine the second core is often busy with something else.
    ratio = min(pair[0] for pair in pairs) / min(pair[1] for pair in pairs)
    with capsys.disabled():
        sys.stdout.write(f"\nledgers on two threads against one: {ratio:.2f}\n")
    assert ratio >= 1.8


def test_one_ledger_with_slack_in_plain_python(drawn: Drawn, capsys: pytest.CaptureFixture[str]) -> None:
    tables = drawn.lowered.tables
    marks = tables.n_legs + tables.n_branches

    def work() -> None:
        books = blank_books(tables, 100)
        tally(tables, books)
        slacks(tables, books, [[0.0] * marks, *([0.0] * tables.n_stages for _ in range(5)), [-1.0] * 5])

    def loop() -> float:
        total = 0.0
        for number in range(1000):
            total += number
        return total

    pairs = alternating(work, loop, 2000)
    ours = min(pair[0] for pair in pairs)
    ratio = statistics.median(pair[0] / pair[1] for pair in pairs)
    with capsys.disabled():
        sys.stdout.write(f"\ntally with slack: {ours * 1e6:.0f} us, {ratio:.1f} loops of 1000 additions\n")
    assert ratio <= LOOPS
