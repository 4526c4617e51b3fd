"""Remedies: the smallest change of one field that mends a shortfall, each run again before it is told."""

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass

from msgspec import structs

from burntally.model.budget import Finding, Remedy
from burntally.model.design import Design
from burntally.model.errors import BurntallyError
from burntally_service.budget.changes import RESERVE, Change, changes, least_change
from burntally_service.budget.drawing import Drawn, draw
from burntally_service.budget.findings import findings_of
from burntally_service.budget.leg_books import margin_of
from burntally_service.budget.plan import PlanMemo, PlannedLeg
from burntally_service.budget.pointing import value_at, with_value
from burntally_service.haste import NeedsTimeError

__all__ = ["with_remedies"]

_OWING = frozenset(
    {"leg-unpaid", "reserve-unpaid", "payer-gone", "payer-inert", "payer-dry", "ignitions-exceeded", "boiled-dry"}
)
_SHORT = frozenset({*_OWING, "release-short", "overfilled"})

_MOST_TOLD = 3
_MOST_STEPS_TALLIED = 30_000
"""Work that the search for remedies may do, in steps of a plan tallied: about a second at worst."""


@dataclass(slots=True)
class _Bench:
    """Runs changed designs, within a bound of work."""

    design: Design
    memo: PlanMemo
    steps: int
    spent: int = 0

    def draw(self, pointer: str, value: object, *, with_slack: bool = False) -> Drawn | None:
        """Draw up the design with one field changed; None if it cannot be computed, or the work is used up."""
        # Steps and no clock, so that a design has the same remedies on every machine.
        self.spent += self.steps
        if self.spent > _MOST_STEPS_TALLIED:
            return None
        try:
            return draw(with_value(self.design, pointer, value), with_slack=with_slack, memo=self.memo)
        except BurntallyError:
            # A design that cannot be computed mends nothing, and the search goes on from the other side.
            return None


_Attempt = Callable[[Drawn, Finding, _Bench], Iterator[Remedy]]


def with_remedies(drawn: Drawn, findings: list[Finding], *, in_haste: bool = False) -> list[Finding]:
    """Add to each shortfall the changes that mend it.

    Parameters
    ----------
    drawn : Drawn
        The books of the design.
    findings : list of Finding
        What they show.
    in_haste : bool
        Whether to give up where there is a shortfall.

    Returns
    -------
    list of Finding
        The same, shortfalls with up to three remedies, the smallest change first.
    """
    if not any(finding.code in _SHORT for finding in findings):
        return findings
    if in_haste:
        raise NeedsTimeError
    bench = _Bench(drawn.design, drawn.memo, len(drawn.lowered.tables.steps))
    by_branch: dict[str, list[Remedy]] = {}
    return [
        structs.replace(finding, remedies=_remedies_of(drawn, finding, bench, by_branch)[:_MOST_TOLD])
        if finding.code in _SHORT
        else finding
        for finding in findings
    ]


def _remedies_of(drawn: Drawn, finding: Finding, bench: _Bench, by_branch: dict[str, list[Remedy]]) -> list[Remedy]:
    """What mends one shortfall; `by_branch` keeps what was found for its branch, which all its legs share."""
    remedies = list(_attempts(drawn, finding, bench, _AT_ONCE))
    if finding.code in _OWING and finding.branch is not None:
        if finding.branch not in by_branch:
            by_branch[finding.branch] = _owed_remedies(drawn, finding.branch, None, bench)
        remedies += by_branch[finding.branch]
    # To ask or to hold less is told only where nothing else helps, and to leave something out last of all.
    remedies = remedies or list(_attempts(drawn, finding, bench, _ELSE)) or _for_itself(drawn, finding, bench)
    return remedies or list(_left_out(drawn, finding, bench))


def _owed_remedies(drawn: Drawn, name: str, leg: int | None, bench: _Bench) -> list[Remedy]:
    """Changes that let a whole branch be paid, or one leg of it, the smallest first."""
    found: list[tuple[float, Remedy]] = []
    for change in changes(drawn, _branch_index(drawn, name), leg):

        def owed(value: float, change: Change = change) -> float:
            again = bench.draw(change.pointer, value)
            return math.inf if again is None else _owed(again, name, leg)

        value = least_change(change, owed)
        if value is not None:
            remedy = _checked(bench, change, value, lambda again: _owed(again, name, leg) == 0.0)
            if remedy is not None:
                found.append((abs(value - change.now) / max(change.now, 1e-300), remedy))
    return [remedy for _, remedy in sorted(found, key=lambda pair: pair[0])]


def _branch_index(drawn: Drawn, name: str) -> int:
    return next(index for index, plan in enumerate(drawn.branches) if plan and plan.name == name)


def _owed(drawn: Drawn, name: str, leg: int | None) -> float:
    """What a branch owes, or one leg of it; a branch that no longer starts mends nothing."""
    for index, plan in enumerate(drawn.branches):
        if plan and plan.name == name:
            if leg is None:
                return drawn.books.branch_owed[index]
            if leg == RESERVE:
                return drawn.books.reserve_owed[index]
            return drawn.books.owed[drawn.legs_of(index)[leg][0]]
    return math.inf


def _checked(bench: _Bench, change: Change, value: float, mends: Callable[[Drawn], bool]) -> Remedy | None:
    """Run a change once more, with the margin that it brings; None if it does not mend after all."""
    again = bench.draw(change.pointer, value, with_slack=True)
    if again is None or not mends(again):
        return None
    words = f"{change.words}: {change.now:.6g} → {value:.6g} {change.unit}".rstrip()
    return _remedy(again, change.pointer, (change.now, value), words)


def _remedy(again: Drawn, pointer: str, values: tuple[object, object], message: str) -> Remedy:
    """Tell a change with the margin of the budget that it brings."""
    margins = [margin_of(again, branch) for branch, plan in enumerate(again.branches) if plan]
    margin = min((margin for margin in margins if margin is not None), default=None)
    return Remedy(pointer=pointer, from_=values[0], to=values[1], margin=margin, message=message)  # type: ignore[arg-type]


def _attempts(
    drawn: Drawn, finding: Finding, bench: _Bench, attempts: dict[str, tuple[_Attempt, ...]]
) -> Iterator[Remedy]:
    """Changes of the field at fault itself that make one finding go."""
    for attempt in attempts.get(finding.code, ()):
        yield from attempt(drawn, finding, bench)


def _for_itself(drawn: Drawn, finding: Finding, bench: _Bench) -> list[Remedy]:
    """Changes that let one leg be paid, or the reserve, in a branch that no single change mends."""
    if finding.code not in _OWING or finding.branch is None:
        return []
    return _owed_remedies(drawn, finding.branch, RESERVE if finding.leg is None else finding.leg, bench)


def _is_mended(again: Drawn, finding: Finding) -> bool:
    """Tell whether a finding is gone from changed books, and no other shortfall stands in its place."""
    codes = _OWING if finding.code in _OWING else {finding.code}
    here = (finding.branch, finding.leg)
    return not any(other.code in codes and (other.branch, other.leg) == here for other in findings_of(again))


def _tried(
    bench: _Bench, finding: Finding, pointer: str, values: tuple[object, object], message: str
) -> Iterator[Remedy]:
    """Run one change, and tell it if it mends the finding."""
    again = bench.draw(pointer, values[1], with_slack=True)
    if again is not None and _is_mended(again, finding):
        yield _remedy(again, pointer, values, message)


def _open_account(drawn: Drawn, finding: Finding, bench: _Bench) -> Iterator[Remedy]:
    """Let any stage pay."""
    row = _leg_row(drawn, finding)
    pointer = f"{row.pointer}/paid_by"
    now = value_at(drawn.design, pointer)
    if getattr(row.leg, "engines", None) is None:
        yield from _tried(bench, finding, pointer, (now, None), "let any stage aboard pay: leave paid_by out")


def _leg_row(drawn: Drawn, finding: Finding) -> PlannedLeg:
    """The leg that a finding is of."""
    branch = _branch_index(drawn, finding.branch or "")
    return next(row for _, row in drawn.legs_of(branch) if row.index == finding.leg)


def _more_ignitions(drawn: Drawn, finding: Finding, bench: _Bench) -> Iterator[Remedy]:
    """Allow more ignitions, as few more as mend it."""
    pointer = f"{finding.pointer}/max_ignitions"
    now = value_at(drawn.design, pointer)
    for more in (1, 2, 3, 5, 10, 20, 50, 100):
        again = bench.draw(pointer, now + more, with_slack=True)
        if again is not None and _is_mended(again, finding):
            yield _remedy(again, pointer, (now, now + more), f"allow {now + more} ignitions")
            return


def _what_is_there(drawn: Drawn, finding: Finding, bench: _Bench) -> Iterator[Remedy]:
    """Release what there is."""
    leg = value_at(drawn.design, finding.pointer)
    if leg.mass is not None and leg.mass == finding.value:
        pointer = f"{finding.pointer}/mass"
    else:
        places = [index for index, move in enumerate(leg.propellants) if move.mass == finding.value]
        pointer = f"{finding.pointer}/propellants/{places[0]}/mass" if places else ""
    if pointer:
        values = (finding.value, finding.limit)
        yield from _tried(bench, finding, pointer, values, f"release the {finding.limit:.6g} kg that are there")


def _what_fits(drawn: Drawn, finding: Finding, bench: _Bench) -> Iterator[Remedy]:
    """Load what may be loaded."""
    values = (value_at(drawn.design, finding.pointer), finding.limit)
    again = bench.draw(finding.pointer, finding.limit, with_slack=True)
    if again is not None and not any(
        other.code == finding.code and other.pointer == finding.pointer for other in findings_of(again)
    ):
        yield _remedy(again, finding.pointer, values, f"load {finding.limit:.6g} kg")


def _less_asked(drawn: Drawn, finding: Finding, bench: _Bench) -> Iterator[Remedy]:
    """Ask less of a leg whose cost is stated: what its account can pay."""
    row = _leg_row(drawn, finding)
    for name, unit in (("delta_v", "m/s"), ("upkeep_per_year", "m/s"), ("propellant", "kg")):
        stated = getattr(row.leg, name, None)
        if isinstance(stated, float) and stated > 0.0:
            pointer, words = f"{row.pointer}/{name}", f"ask less: {name}"
            change = Change(pointer=pointer, now=stated, bound=0.0, words=words, unit=unit)
            yield from _least_tried(finding, change, bench)


def _less_held(drawn: Drawn, finding: Finding, bench: _Bench) -> Iterator[Remedy]:
    """Hold less in reserve, where the design states it."""
    reserve = value_at(drawn.design, finding.pointer)
    for name, unit in (("delta_v", "m/s"), ("fraction", "")):
        stated = getattr(reserve, name, 0.0)
        if stated > 0.0:
            pointer, words = f"{finding.pointer}/{name}", f"hold less: {name}"
            change = Change(pointer=pointer, now=stated, bound=0.0, words=words, unit=unit)
            yield from _least_tried(finding, change, bench)


def _least_tried(finding: Finding, change: Change, bench: _Bench) -> Iterator[Remedy]:
    """Find the least change of one field that mends a finding."""
    name, leg = finding.branch or "", RESERVE if finding.leg is None else finding.leg

    def owed(value: float) -> float:
        again = bench.draw(change.pointer, value)
        return math.inf if again is None else _owed(again, name, leg)

    value = least_change(change, owed)
    if value is not None:
        remedy = _checked(bench, change, value, lambda again: _is_mended(again, finding))
        if remedy is not None:
            yield remedy


def _left_out(drawn: Drawn, finding: Finding, bench: _Bench) -> Iterator[Remedy]:
    """Leave a leg or a reserve out, where no single number mends what several faults cause together."""
    if finding.code not in _OWING:
        return
    pointer = finding.pointer
    words = "no single number mends this; the branch without the reserve"
    container, value = pointer, None
    if finding.leg is not None:
        pointer = _leg_row(drawn, finding).pointer
        container = pointer.rpartition("/")[0]
        legs = value_at(drawn.design, container)
        value = [leg for index, leg in enumerate(legs) if index != finding.leg]
        words = "no single number mends this; the branch without the leg"
    if value == []:
        # A branch needs a leg, so the only one is left to ask nothing.
        words = "no single number mends this; the leg asking nothing"
        yield from _tried(bench, finding, f"{pointer}/delta_v", (None, 0.0), words)
        return
    again = bench.draw(container, value, with_slack=True)
    if again is not None:
        yield _remedy(again, pointer, (None, None), words)


_AT_ONCE: dict[str, tuple[_Attempt, ...]] = {
    "payer-gone": (_open_account,),
    "payer-inert": (_open_account,),
    "payer-dry": (_open_account,),
    "ignitions-exceeded": (_more_ignitions, _open_account),
    "release-short": (_what_is_there,),
    "overfilled": (_what_fits,),
}
"""Changes that cost a run or two."""

_ELSE: dict[str, tuple[_Attempt, ...]] = {
    "leg-unpaid": (_less_asked,),
    "payer-gone": (_less_asked,),
    "payer-inert": (_less_asked,),
    "payer-dry": (_less_asked,),
    "ignitions-exceeded": (_less_asked,),
    "reserve-unpaid": (_less_held,),
}
"""Changes that give something up."""
