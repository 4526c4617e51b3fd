"""Drawing up: resolve, plan, lower, tally; what the books say, before it is explained."""

import itertools
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any

from msgspec import Struct

from burntally.model.design import Design
from burntally.model.mission import Ascend
from burntally.model.rules import Rules
from burntally_service.bodies import Body, system_of
from burntally_service.budget.lower import Lowered, lower
from burntally_service.budget.plan import BranchPlan, Handoff, PlanMemo, PlannedLeg, plan_branch
from burntally_service.budget.rules import resolve
from burntally_service.haste import NeedsTimeError
from burntally_service.kernels import tally_rows as rows
from burntally_service.kernels.tally import tally
from burntally_service.kernels.tally_books import blank_books
from burntally_service.kernels.tally_search import slack_by_search
from burntally_service.kernels.tally_slack import slacks
from burntally_service.legs.orbit import check_start

__all__ = ["Drawn", "Line", "Lit", "draw", "stage_pointer"]

_ROOM_PER_STEP = 4


def stage_pointer(stage: int) -> str:
    """Where a stage stands in the design."""
    return f"/vehicle/stages/{stage}"


class Line(Struct, frozen=True, gc=False):
    """One line of the ledger, as the tally wrote it."""

    kind: int
    leg: int
    part: int
    purpose: int
    delta_v: float
    kg: float
    mass: float
    time: float
    mask: int
    spare: float


class Lit(Struct, frozen=True, gc=False):
    """Engines that burn together: names, thrust in vacuum [N] and mass flow [kg/s]."""

    names: tuple[str, ...]
    thrust: float
    mdot: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Drawn:
    """Books of a design, with the names that their indices stand for.

    Attributes
    ----------
    slack : list of float or None
        By leg, then by branch for its reserve, [m/s]; None where there is none.
    """

    design: Design
    rules: Rules
    bodies: Mapping[str, Body]
    lowered: Lowered
    books: rows.Books
    lines: list[Line]
    memo: PlanMemo
    slack: list[float | None]
    lights: dict[tuple[int, int], Lit] = field(default_factory=dict)

    @property
    def branches(self) -> list[BranchPlan | None]:
        """Plans of the branches; None where a branch never started."""
        return self.lowered.branches

    @property
    def initial_mass(self) -> float:
        """Mass of the whole stack before the first leg [kg]."""
        return self.books.mass_before[self.legs_of(0)[0][0]]

    def legs_of(self, branch: int) -> list[tuple[int, PlannedLeg]]:
        """Legs of a branch with their index in the tables."""
        return [(leg, row) for leg, (of, row) in enumerate(self.lowered.legs) if of == branch and row is not None]

    def branch_name(self, branch: int) -> str:
        """Name of a branch that started."""
        plan = self.branches[branch]
        return plan.name if plan else ""

    def load_pointer(self, load: int) -> str:
        """Where a load stands in the design."""
        stage, place = self.lowered.loads[load]
        return f"{stage_pointer(stage)}/propellants/{place}"

    def part_name(self, part: int) -> str:
        """Name of a stage, or of a payload counted after the stages."""
        stages = len(self.lowered.stages)
        return self.lowered.stages[part].name if part < stages else self.lowered.payloads[part - stages].name

    def lit(self, stage: int, mask: int) -> Lit:
        """The engines of a stage whose bit is set, with what they give together."""
        found = self.lights.get((stage, mask))
        if found is None:
            found = self.lights[stage, mask] = self._lit(stage, mask)
        return found

    def _lit(self, stage: int, mask: int) -> Lit:
        """Sum up some engines of a stage."""
        tables = self.lowered.tables
        row = tables.stages[stage]
        names: list[str] = []
        thrust = 0.0
        mdot = 0.0
        for engine in range(row.first_engine, row.end_engine):
            if mask >> (engine - row.first_engine) & 1:
                names.append(self.engine_name(engine))
                thrust += tables.engines[engine].count * tables.engines[engine].thrust
                mdot += self.books.engine_flow[engine]
        return Lit(tuple(names), thrust, mdot)

    def engine_name(self, engine: int) -> str:
        """Name of an engine of the tables."""
        stage, place = self.lowered.engines[engine]
        return self.lowered.stages[stage].engines[place].name


def draw(design: Design, *, with_slack: bool = True, memo: PlanMemo | None = None, in_haste: bool = False) -> Drawn:
    """Draw up the books of a design.

    A branch is planned once its parent's books tell where and when its part left, so the tally runs once more for each
    branch that starts.

    Parameters
    ----------
    design : Design
        The design.
    with_slack : bool
        Whether the slack of each leg is wanted.
    memo : dict, optional
        Plans of legs made for designs that share them; changed.
    in_haste : bool
        Whether to give up where a slack must be searched for.

    Returns
    -------
    Drawn
        The books.

    Raises
    ------
    UncomputableError
        If the preset or a body is not known.
    """
    rules = resolve(design.rules)
    bodies = system_of(design.mission.system)
    check_start(design.mission.start, bodies, pointer="/mission/start")
    plans: list[BranchPlan | None] = [None] * (len(design.mission.branches) + 1)
    plans_made: PlanMemo = {} if memo is None else memo
    start = Handoff(location=design.mission.start, elapsed=0.0)
    plans[0] = plan_branch(design, rules, branch=0, handoff=start, bodies=bodies, memo=plans_made)
    while True:
        lowered = lower(design.vehicle, rules, plans)
        books, lines = _tallied(lowered)
        started = _newly_started(design, lowered, lines)
        if started is None:
            break
        branch, handoff = started
        plans[branch] = plan_branch(design, rules, branch=branch, handoff=handoff, bodies=bodies, memo=plans_made)
    return Drawn(
        design=design,
        rules=rules,
        bodies=bodies,
        lowered=lowered,
        books=books,
        lines=lines,
        memo=plans_made,
        slack=_slack(lowered, books, in_haste=in_haste) if with_slack else [],
    )


def _tallied(lowered: Lowered) -> tuple[rows.Books, list[Line]]:
    """Tally, with more room for lines if the first guess was too small."""
    tables = lowered.tables
    room = _ROOM_PER_STEP * len(tables.steps)
    books = blank_books(tables, room)
    tally(tables, books)
    written = books.count[rows.LINES]
    if written > room:
        books = blank_books(tables, written)
        tally(tables, books)
    return books, [_line(books.lines, line * rows.LINE_WIDTH) for line in range(written)]


def _line(cells: list[Any], start: int) -> Line:
    """Read one line out of the flat ledger, in which whole numbers are ints."""
    return Line(*cells[start : start + rows.LINE_WIDTH])


def _newly_started(design: Design, lowered: Lowered, lines: list[Line]) -> tuple[int, Handoff] | None:
    """First branch that a separation starts and that is not planned yet, with where it starts.

    What leaves together starts the first branch that is of any part of it.
    """
    if None not in lowered.branches:
        return None
    for place, end in _separations(lines):
        group = {lowered.stages[line.part].name for line in lines[place:end]}
        for index, branch in enumerate(design.mission.branches):
            # What is flown by a branch already, the tally has moved there itself.
            if lines[place].purpose == rows.NOT_FLOWN and branch.of in group and lowered.branches[index + 1] is None:
                return index + 1, _handoff(lowered, lines, place)
    return None


def _separations(lines: list[Line]) -> Iterator[tuple[int, int]]:
    """Yield where each group of parts that leave together begins in the ledger, and where it ends."""
    place = 0
    for (kind, *_), group in itertools.groupby(lines, key=lambda line: (line.kind, line.leg, line.spare)):
        end = place + len(list(group))
        if kind == rows.LINE_SEPARATION:
            yield place, end
        place = end


def _handoff(lowered: Lowered, lines: list[Line], place: int) -> Handoff:
    """Where and when a part left: at its leg's start or end, or at a place that nobody knows within it."""
    line = lines[place]
    branch, row = lowered.legs[line.leg]
    if row is None:
        # Only the reserve of a branch without a charged leg is burned in none, and that is when its legs are over.
        return Handoff(location=None, elapsed=line.time, left_in=(branch, -1))
    left_in = (branch, row.index)
    burned = [other.purpose for other in lines[:place] if other.leg == line.leg and other.kind == rows.LINE_BURN]
    if not row.plan.manoeuvres or (not burned and not isinstance(row.leg, Ascend)):
        return Handoff(location=row.start, elapsed=line.time, left_in=left_in)
    settled = any(purpose in {rows.CONTINGENCY, rows.RESERVE} for purpose in burned)
    return Handoff(location=row.plan.end if settled else None, elapsed=line.time, left_in=left_in)


def _has_slack(tables: rows.Tables, books: rows.Books, mark: int) -> bool:
    """Tell whether a leg, or a reserve counted after the legs, is charged in a branch that started and owes nothing."""
    legs = len(tables.legs)
    branch = tables.legs[mark].branch if mark < legs else mark - legs
    charged = tables.legs[mark].charged if mark < legs else books.reserve[branch] > 0.0
    return bool(charged and books.branch_started[branch] and books.branch_owed[branch] <= 0.0)


def _slack(lowered: Lowered, books: rows.Books, *, in_haste: bool) -> list[float | None]:
    """Slack by leg, then by branch for its reserve; none in a branch that owes."""
    tables = lowered.tables
    legs, stages, branches = len(tables.legs), len(tables.stages), len(tables.branches)
    walk = [[0.0] * (legs + branches), *([0.0] * stages for _ in range(5)), [-1.0] * 5]
    slacks(tables, books, walk)
    found: list[float | None] = [None] * (legs + branches)
    scratch = None
    for mark in range(legs + branches):
        if not _has_slack(tables, books, mark):
            continue
        slack = walk[0][mark]
        if slack < 0.0 and in_haste:
            raise NeedsTimeError
        if slack < 0.0:
            scratch = scratch or blank_books(tables, 0)
            slack = slack_by_search(tables, scratch, mark)
        found[mark] = slack
    return found
