"""The tally: the steps of a plan, one after another, paid out of the stack; the only place where mass changes."""

import math
from typing import Final

from burntally_service.kernels.constants import DAY, G0
from burntally_service.kernels.tally_books import DRY_FRACTION, load_up
from burntally_service.kernels.tally_burns import NOTHING_OWED, pay
from burntally_service.kernels.tally_exchange import exchange
from burntally_service.kernels.tally_flow import write_line
from burntally_service.kernels.tally_rows import (
    ADD_AT,
    ADDITION,
    BEGIN,
    BURN,
    COAST,
    CONTINGENCY,
    DRAW,
    END,
    KILOGRAMS,
    LINE_BOILED,
    LINES,
    PAID,
    RESERVE,
    ROOM,
    STAMP,
    START,
    Books,
    Tables,
)
from burntally_service.kernels.tally_spare import note_spare
from burntally_service.kernels.tally_stack import cause_of

__all__ = ["tally"]

SLOWEST_EXHAUST: Final = G0
"""Exhaust speed at the contract's least specific impulse, 1 s [m/s]."""


def tally(tables: Tables, books: Books) -> None:
    """Draw up the books of a plan.

    Parameters
    ----------
    tables : Tables
        The rows of the design and its plan: masses [kg], speeds [m/s], times [s].
    books : Books
        Blank books; changed.

    Returns
    -------
    None
        The books are drawn up; nothing is raised, and what cannot be paid is owed, [m/s].

    References
    ----------
    .. [1] The project's bookkeeping rules C, P and S; no published source. The rocket equation: Sutton, Biblarz,
       Rocket Propulsion Elements, 9th ed., sec. 4.1.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> empty = NO_TABLES
    >>> tally(empty, blank_books(empty, 0))
    """
    load_up(tables, books)
    index = 0
    while index < tables.n_steps:
        step = tables.steps[index]
        index += 1
        op = step.op
        if op == BURN:
            _manoeuvre(tables, books, step.leg, (step.purpose, step.amount, step.count))
        elif op == END:
            _end(tables, books, step.leg)
        elif op == BEGIN:
            _begin(tables, books, step.leg)
        elif op == COAST:
            _coast(tables, books, step.leg, step.amount)
        elif op == START:
            # A branch whose part never left has nothing to fly: its steps are passed over.
            if not books.branch_started[step.part]:
                index = tables.branches[step.part].end_step
        elif op == DRAW:
            _draw(tables, books, step.leg, step.amount)
        else:
            exchange(tables, books, op, (step.leg, step.part, step.amount))


def _begin(tables: Tables, books: Books, leg: int) -> None:
    """Note what a leg starts with; nothing is lit in it yet."""
    branch = tables.legs[leg].branch
    books.count[STAMP] += 1
    books.line_begin[leg] = books.count[LINES]
    books.mass_before[leg] = books.branch_mass[branch]
    books.clock_before[leg] = books.branch_clock[branch]


def _manoeuvre(tables: Tables, books: Books, leg: int, order: tuple[int, float, int]) -> None:
    """Pay one manoeuvre, flown as so many ignitions (P4)."""
    purpose, amount, splits = order
    books.required[leg] += amount
    if amount <= 0.0:
        return
    share = amount / splits
    for _ in range(splits):
        # An engine is lit while it bears the present stamp, so a new one puts all of them out.
        books.count[STAMP] += 1
        owed = pay(tables, books, leg, purpose, share)
        if owed > 0.0:
            _owe(tables, books, leg, owed)


def _owe(tables: Tables, books: Books, leg: int, owed: float) -> None:
    """Note what is owed, and why."""
    if books.cause[leg] == PAID:
        books.cause[leg] = cause_of(tables, books, leg)
    books.owed[leg] += owed
    books.branch_owed[tables.legs[leg].branch] += owed


def _end(tables: Tables, books: Books, leg: int) -> None:
    """Settle a leg: contingency (C2), an addition that is searched for, the reserve that follows (C4)."""
    row = tables.legs[leg]
    branch = row.branch
    if row.charged:
        _contingency(tables, books, leg)
    if books.count[ADD_AT] == leg:
        _add(tables, books, leg)
    books.mass_after[leg] = books.branch_mass[branch]
    books.clock_after[leg] = books.branch_clock[branch]
    books.line_end[leg] = books.count[LINES]
    if row.charged and books.count[ROOM] > 0:
        note_spare(tables, books, leg, leg)
    if row.reserves:
        _hold_reserve(tables, books, leg)


def _add(tables: Tables, books: Books, leg: int) -> None:
    """Burn the delta-v that slack is searched with; it raises no contingency, reserve or ignition of its own (M)."""
    if books.added[0] <= 0.0:
        # Nothing to burn, no burn: nothing may drop for it either (P4).
        return
    owed = pay(tables, books, leg, ADDITION, books.added[0])
    books.added[1] = owed
    books.branch_owed[tables.legs[leg].branch] += owed


def _contingency(tables: Tables, books: Books, leg: int) -> None:
    """Charge what the rule of a leg adds: max(fraction, floor) + fixed, a category's floor at its last leg (C2)."""
    row = tables.legs[leg]
    base = books.required[leg]
    share = row.fraction * base
    floor = 0.0
    if row.floor_on_category:
        place = row.branch * tables.n_rules + row.rule
        books.rule_sum[place] += share
        # One floor for all legs of the category, so it waits until their shares are all known.
        if row.settles:
            floor = max(0.0, row.floor - books.rule_sum[place])
    elif row.rule >= 0:
        floor = max(0.0, row.floor - share)
    books.by_fraction[leg] = share
    books.by_floor[leg] = floor
    books.by_fixed[leg] = row.fixed
    added = share + floor + row.fixed
    books.branch_charged[row.branch] += base + added
    if added > 0.0:
        owed = pay(tables, books, leg, CONTINGENCY, added)
        if owed > 0.0:
            _owe(tables, books, leg, owed)


def _hold_reserve(tables: Tables, books: Books, leg: int) -> None:
    """Burn the reserve of a branch out of the account of its last charged leg, after which nothing else is charged."""
    branch = tables.legs[leg].branch
    row = tables.branches[branch]
    amount = row.reserve_fraction * books.branch_charged[branch] + row.reserve_delta_v
    mark = tables.n_legs + branch
    books.reserve[branch] = amount
    if amount > 0.0:
        owed = pay(tables, books, leg, RESERVE, amount)
        if owed > 0.0:
            books.cause[mark] = cause_of(tables, books, leg)
        books.reserve_owed[branch] = owed
        books.branch_owed[branch] += owed
    if books.count[ADD_AT] == mark:
        _add(tables, books, leg)
    if amount > 0.0 and books.count[ROOM] > 0:
        note_spare(tables, books, leg, mark)


def _coast(tables: Tables, books: Books, leg: int, duration: float) -> None:
    """Let time pass, and boil off what boils (P6)."""
    branch = tables.legs[leg].branch
    books.branch_clock[branch] += duration
    for place in range(tables.n_boilers):
        load = tables.boilers[place]
        row = tables.loads[load]
        if books.where[row.stage] != branch or books.usable[load] <= 0.0:
            continue
        kg = min(books.usable[load], row.boiloff_per_day * (duration / DAY))
        dried = 1 if kg == books.usable[load] else 0
        mass, clock = books.branch_mass[branch], books.branch_clock[branch]
        write_line(books, (LINE_BOILED, leg, load), (0, 0.0, kg, mass, clock, dried, 0.0))
        books.usable[load] -= kg
        if books.usable[load] <= books.dry_mark[load]:
            # The engines that it fed are out, so the flow that is kept for the stage no longer holds.
            books.flow_of[row.stage] = -1
        books.boiled[load] += kg
        books.branch_mass[branch] -= kg


def _draw(tables: Tables, books: Books, leg: int, amount: float) -> None:
    """Draw kilograms with the rule's fraction; what is owed of them counts as a delta-v (C3, P7)."""
    row = tables.legs[leg]
    owed = pay(tables, books, leg, KILOGRAMS, amount * (1.0 + row.fraction))
    mass = books.branch_mass[row.branch]
    if owed > 0.0:
        speed = _speed_of_lowest(tables, books, row.account)
        left = mass - owed
        # More than there is to draw on, or nothing aboard at all, counts as a stack burned to dryness.
        ratio = mass / left if left > DRY_FRACTION * mass else 1.0 / DRY_FRACTION
        delta_v = speed * math.log(ratio)
        if delta_v >= NOTHING_OWED:
            books.cause[leg] = cause_of(tables, books, leg)
            books.owed[leg] += delta_v
            books.branch_owed[row.branch] += delta_v
    if books.count[ROOM] > 0:
        note_spare(tables, books, leg, leg)


def _speed_of_lowest(tables: Tables, books: Books, account: int) -> float:
    """Mixed exhaust speed of an account's engines on its lowest stage, attached or not.

    An account without engines draws nothing and still owes, so it counts as the slowest engine that there may be.
    """
    stages = tables.n_stages
    for stage in range(stages):
        burner = tables.burner_of[account * stages + stage]
        if burner >= 0:
            row = tables.burners[burner]
            thrust = 0.0
            mdot = 0.0
            for place in range(row.first_lit, row.end_lit):
                engine = tables.lit[place]
                thrust += tables.engines[engine].count * tables.engines[engine].thrust
                mdot += books.engine_flow[engine]
            return thrust / mdot
    return SLOWEST_EXHAUST
