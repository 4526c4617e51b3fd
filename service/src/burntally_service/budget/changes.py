"""Changes: the fields that may be changed to let a branch be paid, and the least change of one that does."""

import math
from collections.abc import Callable, Iterator

from msgspec import Struct

from burntally_service.budget.drawing import Drawn

__all__ = ["RESERVE", "Change", "changes", "least_change"]

RESERVE = -1
"""Stands for the reserve where a leg is asked for."""

_MOST_TRIES = 40

_MOST_LOAD = 1e9
"""Bound of the contract on a mass [kg]."""

_SIGNIFICANT = 4
"""Digits that a changed number is rounded to, away from the shortfall."""

_LEAST_ROUNDED = 1e-290
"""What is smaller stays as it is: its digits lie beyond the powers of ten that there are."""


class Change(Struct, frozen=True, kw_only=True):
    """A field that may be changed, up to a bound, and in what words and unit."""

    pointer: str
    now: float
    bound: float
    words: str
    unit: str
    """Unit of the contract; empty for a plain number."""


def changes(drawn: Drawn, branch: int, leg: int | None) -> Iterator[Change]:
    """Fields whose change may let a branch be paid.

    Parameters
    ----------
    drawn : Drawn
        The books.
    branch : int
        Index of the branch.
    leg : int or None
        The leg of the branch that matters alone; `RESERVE` for its reserve, None for all.

    Yields
    ------
    Change
        Loads of the payers, payloads, and the isp of the payers' engines.
    """
    payers = _payers(drawn, branch, leg)
    yield from _loads(drawn, payers)
    for index, payload in enumerate(drawn.design.vehicle.payloads):
        if isinstance(payload.mass, float) and payload.mass > 0.0:
            pointer = f"/vehicle/payloads/{index}/mass"
            yield Change(pointer=pointer, now=payload.mass, bound=0.0, words=f"carry {payload.name}", unit="kg")
    for engine, (stage, place) in enumerate(drawn.lowered.engines):
        row = drawn.lowered.tables.engines[engine]
        if stage in payers and not row.auxiliary:
            pointer = f"/vehicle/stages/{stage}/engines/{place}/isp"
            words = f"isp of {drawn.engine_name(engine)}"
            yield Change(pointer=pointer, now=row.isp, bound=1.5 * row.isp, words=words, unit="s")


def _payers(drawn: Drawn, branch: int, leg: int | None) -> set[int]:
    """Stages of the accounts that owe."""
    tables, books = drawn.lowered.tables, drawn.books
    chosen = drawn.legs_of(branch)[leg][0] if leg is not None and leg != RESERVE else None
    payers: set[int] = set()
    for index, row in enumerate(tables.legs):
        owes = books.owed[index] > 0.0 or (row.reserves and books.reserve_owed[branch] > 0.0)
        if row.branch == branch and owes and chosen in {None, index}:
            base = row.account * tables.n_stages
            payers |= {stage for stage in range(tables.n_stages) if tables.burner_of[base + stage] >= 0}
    return payers


def _loads(drawn: Drawn, payers: set[int]) -> Iterator[Change]:
    """Loads of stages, up to what their tanks hold."""
    for load, (stage, place) in enumerate(drawn.lowered.loads):
        if stage in payers:
            model = drawn.lowered.stages[stage].propellants[place]
            capacity = drawn.lowered.tables.loads[load].capacity
            # An empty load tells nothing of its size, so the whole stack does.
            bound = min(capacity, 1000.0 * max(model.mass, drawn.initial_mass), _MOST_LOAD)
            pointer = f"{drawn.load_pointer(load)}/mass"
            words = f"load {model.name} of {drawn.part_name(stage)}"
            yield Change(pointer=pointer, now=model.mass, bound=bound, words=words, unit="kg")


def least_change(change: Change, owed: Callable[[float], float]) -> float | None:
    """Value nearest to the present one at which nothing is owed.

    What is owed falls almost straight towards zero, so secants from the owing side find the place in a few runs, and
    halving is left for where they do not.

    Parameters
    ----------
    change : Change
        The field.
    owed : callable
        What is owed with a value in the field.

    Returns
    -------
    float or None
        The value, to a few digits; None if not even the bound is enough.
    """
    short, enough = change.now, change.bound
    if enough == short or owed(enough) > 0.0:
        return None
    owed_short = owed(short)
    guess = 0.5 * (short + enough) if enough < short else min(2.0 * short, 0.5 * (short + enough))
    for tries in range(_MOST_TRIES):
        # Rounded before it is tried, since the number that is told must be one that was found to be enough.
        guess = _rounded(guess, up=enough > short)
        if (guess - short) * (guess - enough) >= 0.0:
            guess = _rounded(0.5 * (short + enough), up=enough > short)
        if (guess - short) * (guess - enough) >= 0.0:
            break
        owed_guess = owed(guess)
        if owed_guess > 0.0:
            slope = (owed_short - owed_guess) / (guess - short)
            short, owed_short = guess, owed_guess
            # A secant that falls short forever would creep; every fourth try halves instead.
            guess = short + owed_short / slope if slope * (enough - short) > 0.0 and tries % 4 else enough
        else:
            enough = guess
            # A secant lands close above the least value, so that is felt for just below before the rest is halved.
            guess = short + (enough - short) * 0.9 if tries % 2 else 0.5 * (short + enough)
    return enough


def _rounded(value: float, *, up: bool) -> float:
    """Round to a few significant digits, up or down."""
    if abs(value) < _LEAST_ROUNDED:
        return value
    scale = 10.0 ** (_SIGNIFICANT - 1 - math.floor(math.log10(abs(value))))
    return (math.ceil(value * scale) if up else math.floor(value * scale)) / scale
