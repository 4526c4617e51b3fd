"""Paying: which stage burns, what it lights, when it runs dry, and who goes on.

Every function here reads `Tables` and changes `Books`; the comments name the bookkeeping rules.
"""

import math
from typing import Final

from burntally_service.kernels.tally_flow import light_flow, lit_mask, spare_of, wants_ignition, write_line
from burntally_service.kernels.tally_rows import (
    CONTINGENCY,
    KILOGRAMS,
    LINE_BURN,
    LINE_DRAW,
    LINE_IGNITION,
    MANOEUVRE,
    STAMP,
    Books,
    Tables,
)
from burntally_service.kernels.tally_stack import shed

__all__ = ["NOTHING_OWED", "UNBALANCED_FRACTION", "burn_out", "pay"]

UNBALANCED_FRACTION: Final = 0.005
"""A load of a mixture left over by more than this share of what was loaded is told."""

TINY: Final = 5e-324
"""The least positive number: only what is exactly paid is below it."""

NOTHING_OWED: Final = 1e-9
"""Below this nothing is owed [m/s] (P7)."""


def _draw_down(tables: Tables, books: Books, stage: int, time: float) -> None:
    """Take the flow of a stage over a time out of its loads."""
    row = tables.stages[stage]
    usable, flow, burned = books.usable, books.flow, books.burned
    for load in range(row.first_load, row.end_load):
        rate = flow[load]
        if rate > 0.0:
            kg = rate * time
            left = usable[load] - kg
            # Rounding may ask for a trifle more than there is.
            left = max(left, 0.0)
            usable[load] = left
            burned[load] += kg
            if left <= books.dry_mark[load]:
                books.flow_of[stage] = -1


def _ignite(tables: Tables, books: Books, leg: int, burner: int, mask: int) -> None:
    """Light what can burn of a burner, then take the losses; an engine that they leave dry has been lit."""
    row = tables.burners[burner]
    branch = tables.legs[leg].branch
    first = tables.stages[row.stage].first_engine
    lit, engines = tables.lit, tables.engines
    # All are lit before any loss is taken, because the loss of one may leave dry what feeds another.
    for place in range(row.first_lit, row.end_lit):
        engine = lit[place]
        if mask >> (engine - first) & 1:
            used = books.used[engine] + 1.0
            books.used[engine] = used
            books.lit_at[engine] = books.count[STAMP]
            if used >= engines[engine].max_ignitions:
                books.flow_of[row.stage] = -1
    for place in range(row.first_lit, row.end_lit):
        engine = lit[place]
        if mask >> (engine - first) & 1:
            lost = 0.0
            mass = books.branch_mass[branch]
            if engines[engine].loss_per_ignition > 0.0:
                lost = _lose(tables, books, engine, row.stage)
                books.branch_mass[branch] = mass - lost
            write_line(books, (LINE_IGNITION, leg, engine), (0, 0.0, lost, mass, books.branch_clock[branch], 0, 0.0))


def _lose(tables: Tables, books: Books, engine: int, stage: int) -> float:
    """Take the loss of one ignition out of an engine's feeds, at their ratio, until the first is dry."""
    row = tables.engines[engine]
    if row.end_feed - row.first_feed == 1:
        return _lose_lone(tables, books, engine, stage)
    time = row.count * row.loss_per_ignition / books.engine_flow[engine]
    for feed in range(row.first_feed, row.end_feed):
        time = min(time, books.usable[tables.feeds[feed].load] / books.feed_flow[feed])
    lost = 0.0
    for feed in range(row.first_feed, row.end_feed):
        load = tables.feeds[feed].load
        kg = books.feed_flow[feed] * time
        left = books.usable[load] - kg
        left = max(left, 0.0)
        books.usable[load] = left
        books.lost[load] += kg
        lost += kg
        if left <= books.dry_mark[load]:
            books.flow_of[stage] = -1
    return lost


def _lose_lone(tables: Tables, books: Books, engine: int, stage: int) -> float:
    """Take the loss of one ignition out of the only load that feeds an engine."""
    row = tables.engines[engine]
    load = tables.feeds[row.first_feed].load
    usable = books.usable[load]
    kg = min(row.count * row.loss_per_ignition, usable)
    left = usable - kg
    books.usable[load] = left
    books.lost[load] += kg
    if left <= books.dry_mark[load]:
        books.flow_of[stage] = -1
    return kg


def _payable(purpose: int, amount: float, mass: float, by: tuple[float, float]) -> tuple[float, float, bool]:
    """What is burned for an amount [kg], what that pays of it, and whether that is all.

    `by` is the exhaust speed [m/s] and the mass that there is to burn [kg].
    """
    speed, spare = by
    # expm1, since one minus an exponential would lose the digits of a small delta-v.
    wanted = amount if purpose == KILOGRAMS else -mass * math.expm1(-amount / speed)
    if wanted <= spare:
        # What suffices pays in full, to the last digit, so that no rounding is owed.
        return wanted, amount, True
    return spare, spare if purpose == KILOGRAMS else speed * math.log(mass / (mass - spare)), False


def _burn(tables: Tables, books: Books, leg: int, burner: int, order: tuple[int, float]) -> float:
    """Burn one stage until a delta-v, or kilograms, are paid or it is dry; return what is left to pay."""
    purpose, amount = order
    branch = tables.legs[leg].branch
    stage = tables.burners[burner].stage
    thrust, mdot, mask = light_flow(tables, books, burner)
    while mdot > 0.0:
        mass = books.branch_mass[branch]
        speed = thrust / mdot
        time, first_dry = spare_of(tables, books, stage)
        spare = mdot * time
        kg, paid, enough = _payable(purpose, amount, mass, (speed, spare))
        _draw_down(tables, books, stage, kg / mdot)
        books.branch_mass[branch] = mass - kg
        kind, told = (LINE_DRAW, 0.0) if purpose == KILOGRAMS else (LINE_BURN, paid)
        write_line(books, (kind, leg, burner), (purpose, told, kg, mass, books.branch_clock[branch], mask, spare - kg))
        amount -= paid
        if enough or amount <= 0.0:
            return 0.0
        # Emptied exactly, so that no rounding keeps an engine lit.
        books.usable[first_dry] = 0.0
        books.flow_of[stage] = -1
        _mark_unbalanced(tables, books, stage, first_dry)
        thrust, mdot, mask = light_flow(tables, books, burner)
    return amount


def _burn_lone(tables: Tables, books: Books, leg: int, burner: int, order: tuple[int, float]) -> float:
    """Burn the only engine of a burner on its only load, until what is asked is paid or it is dry; return the rest.

    What `_burn` does, without what one load needs none of: shares of a flow, and a first among loads to run dry.
    """
    purpose, amount = order
    row = tables.burners[burner]
    load = row.lone
    branch = tables.legs[leg].branch
    mass = books.branch_mass[branch]
    speed = books.engine_speed[tables.lit[row.first_lit]]
    spare = books.usable[load]
    kg, paid, enough = _payable(purpose, amount, mass, (speed, spare))
    left = spare - kg
    books.usable[load] = left
    books.burned[load] += kg
    books.branch_mass[branch] = mass - kg
    kind, told = (LINE_DRAW, 0.0) if purpose == KILOGRAMS else (LINE_BURN, paid)
    write_line(books, (kind, leg, burner), (purpose, told, kg, mass, books.branch_clock[branch], row.mask, left))
    if left <= books.dry_mark[load]:
        # Others may feed on the same load.
        books.flow_of[row.stage] = -1
        if not enough:
            _mark_unbalanced(tables, books, row.stage, load)
    return 0.0 if enough else max(0.0, amount - paid)


def _mark_unbalanced(tables: Tables, books: Books, stage: int, dry: int) -> None:
    """Mark a load that has run dry while much of another is left that an engine feeds on together with it."""
    row = tables.stages[stage]
    for engine in range(row.first_engine, row.end_engine):
        fitted = tables.engines[engine]
        fed = False
        over = -1
        for feed in range(fitted.first_feed, fitted.end_feed):
            load = tables.feeds[feed].load
            fed = fed or load == dry
            if books.usable[load] > UNBALANCED_FRACTION * books.stock[load]:
                over = load
        if fed and over >= 0 and books.unbalanced[stage] == 0:
            books.unbalanced[stage] = 1 + engine
            books.unbalanced_kg[stage] = books.usable[over]


def pay(tables: Tables, books: Books, leg: int, purpose: int, amount: float) -> float:
    """Pay a delta-v, or kilograms, out of the account of a leg; return what is owed.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        Changed: everything that a burn changes.
    leg : int
        Index of the leg whose account pays, [-].
    purpose : int
        What it is burned for, [-].
    amount : float
        Delta-v [m/s], or mass [kg] if the purpose is kilograms.

    Returns
    -------
    float
        What no stage of the account paid, in the unit of `amount`, [m/s] or [kg].

    References
    ----------
    .. [1] The project's bookkeeping rules C5, P1 to P4; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import LegRow
    >>> leg = LegRow(0, 0, 1, 0, -1, 0.0, 0.0, 0.0, 0, 0, 0)
    >>> tables = Tables(*([],) * 12, [leg], [])
    >>> pay(tables, blank_books(tables, 0), 0, MANOEUVRE, 5.0)
    5.0
    """
    stages = tables.n_stages
    row = tables.legs[leg]
    branch = row.branch
    base = row.account * stages
    left = amount
    # Kilograms owed are counted as a delta-v first, and held against the tolerance then.
    tolerance = TINY if purpose == KILOGRAMS else NOTHING_OWED
    passed = -1
    lowest = -1
    for position in range(stages):
        stage = books.order[position]
        if books.where[stage] != branch:
            continue
        burner = tables.burner_of[base + stage]
        mask = 0
        if burner >= 0:
            mask = lit_mask(tables, books, burner)
        if mask == 0:
            # Only the open account passes a stage that merely lacks an ignition; named payers have a finding of their
            # own.
            if burner >= 0 and base == 0 and wants_ignition(tables, books, burner):
                passed = stage
            lowest = stage
            continue
        if lowest >= 0:
            _leave_below(tables, books, leg, (purpose, position, lowest))
        if purpose == MANOEUVRE:
            _ignite(tables, books, leg, burner, mask)
        before = left
        if tables.burners[burner].lone >= 0:
            left = _burn_lone(tables, books, leg, burner, (purpose, left))
        else:
            left = _burn(tables, books, leg, burner, (purpose, left))
        if left < before:
            if passed >= 0:
                _mark_handover(tables, books, leg, (purpose, passed))
            passed = stage
        lowest = stage
        if left < tolerance:
            return 0.0
    return left if left >= tolerance else 0.0


def _leave_below(tables: Tables, books: Books, leg: int, at: tuple[int, int, int]) -> None:
    """Separate what is spent below a payer, and mark that something is carried unlit if anything stays."""
    purpose, position, lowest = at
    if purpose != KILOGRAMS:
        shed(tables, books, leg, position)
    if books.where[lowest] == tables.legs[leg].branch:
        books.unlit[leg] = 1


def _mark_handover(tables: Tables, books: Books, leg: int, passed: tuple[int, int]) -> None:
    """Mark that another stage goes on for one that ran dry, where that is worth telling."""
    purpose, stage = passed
    if purpose <= CONTINGENCY and not tables.legs[leg].quiet:
        books.handover[leg] = stage + 1


def burn_out(tables: Tables, books: Books, stage: int, mass: float) -> float:
    """Ideal delta-v of all that the main engines of a stage can burn, under a given mass.

    Parameters
    ----------
    tables : Tables
        What is tallied; its first account is the open one.
    books : Books
        Changed: the usable propellant of the stage is burned.
    stage : int
        Index of the stage, [-].
    mass : float
        Mass of the stage and all above it, [kg].

    Returns
    -------
    float
        Sum over the intervals of one set of lit engines, [m/s]; infinite where nothing but propellant is left to push.

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., sec. 4.1.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> tables = Tables(*([],) * 8, [-1], *([],) * 5)
    >>> burn_out(tables, blank_books(tables, 0), 0, 1.0)
    0.0
    """
    burner = tables.burner_of[stage]
    delta_v = 0.0
    if burner < 0:
        return delta_v
    books.flow_of[stage] = -1
    thrust, mdot, _ = light_flow(tables, books, burner)
    while mdot > 0.0:
        time, first_dry = spare_of(tables, books, stage)
        kg = mdot * time
        if kg >= mass:
            # A stage that weighs nothing but its propellant: there is no end to its speed, and no answer.
            return math.inf
        delta_v += thrust / mdot * math.log(mass / (mass - kg))
        mass -= kg
        row = tables.stages[stage]
        for load in range(row.first_load, row.end_load):
            left = books.usable[load] - books.flow[load] * time
            left = max(left, 0.0)
            books.usable[load] = left
        books.usable[first_dry] = 0.0
        books.flow_of[stage] = -1
        thrust, mdot, _ = light_flow(tables, books, burner)
    return delta_v
