"""Paying: which stage burns, what it lights, when it runs dry, and who goes on.

Every function here reads `Tables` and changes `Books`; the comments name the bookkeeping rules.
"""

import math
from typing import Final

from burntally_service.kernels.tally_flow import can_burn, finish_line, light_flow, spare_of, write_line
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

__all__ = ["NOTHING_OWED", "any_can_burn", "pay"]

TINY: Final = 5e-324
"""The least positive number: only what is exactly paid is below it."""

NOTHING_OWED: Final = 1e-9
"""Below this nothing is owed [m/s] (P7)."""


def _draw_down(tables: Tables, books: Books, stage: int, time: float) -> None:
    """Take the flow of a stage over a time out of its loads."""
    row = tables.stages[stage]
    for load in range(row.first_load, row.end_load):
        if books.flow[load] > 0.0:
            kg = books.flow[load] * time
            books.usable[load] = max(0.0, books.usable[load] - kg)
            books.burned[load] += kg


def _ignite(tables: Tables, books: Books, leg: int, burner: int) -> None:
    """Light what can burn of a burner, then take the losses: an engine that they leave dry has been lit all the same."""
    row = tables.burners[burner]
    branch = tables.legs[leg].branch
    stamp = books.count[STAMP]
    for place in range(row.first_lit, row.end_lit):
        engine = tables.lit[place]
        if can_burn(tables, books, engine):
            books.used[engine] += 1.0
            books.lit_at[engine] = stamp
    for place in range(row.first_lit, row.end_lit):
        engine = tables.lit[place]
        if books.lit_at[engine] == stamp:
            lost = 0.0
            if tables.engines[engine].loss_per_ignition > 0.0:
                lost = _lose(tables, books, engine)
            write_line(
                books,
                LINE_IGNITION,
                leg,
                engine,
                (0.0, 0.0, lost, books.branch_mass[branch], books.branch_clock[branch]),
            )
            books.branch_mass[branch] -= lost


def _lose(tables: Tables, books: Books, engine: int) -> float:
    """Take the loss of one ignition out of an engine's feeds, at their ratio, until the first is dry."""
    row = tables.engines[engine]
    wanted = row.count * row.loss_per_ignition / books.engine_flow[engine]
    time = wanted
    for feed in range(row.first_feed, row.end_feed):
        time = min(time, books.usable[tables.feeds[feed].load] / books.feed_flow[feed])
    lost = 0.0
    for feed in range(row.first_feed, row.end_feed):
        load = tables.feeds[feed].load
        kg = books.feed_flow[feed] * time
        books.usable[load] = max(0.0, books.usable[load] - kg)
        books.lost[load] += kg
        lost += kg
    return lost


def _burn(tables: Tables, books: Books, leg: int, burner: int, order: tuple[int, float]) -> float:
    """Burn one stage for a delta-v or for kilograms until it is paid or the stage is dry; return what is left to pay."""
    purpose, amount = order
    branch = tables.legs[leg].branch
    stage = tables.burners[burner].stage
    thrust, mdot, mask = light_flow(tables, books, burner)
    while mdot > 0.0:
        mass = books.branch_mass[branch]
        speed = thrust / mdot
        time, first_dry = spare_of(tables, books, stage)
        spare = mdot * time
        kg = amount if purpose == KILOGRAMS else -mass * math.expm1(-amount / speed)
        enough = kg <= spare
        if not enough:
            kg = spare
        _draw_down(tables, books, stage, kg / mdot)
        books.branch_mass[branch] = mass - kg
        if purpose == KILOGRAMS:
            given = 0.0
            amount = 0.0 if enough else amount - kg
        else:
            given = amount if enough else speed * math.log(mass / (mass - kg))
            amount -= given
        kind = LINE_DRAW if purpose == KILOGRAMS else LINE_BURN
        write_line(books, kind, leg, burner, (purpose, given, kg, mass, books.branch_clock[branch]))
        finish_line(books, mask, spare - kg)
        if enough:
            return 0.0
        books.usable[first_dry] = 0.0
        thrust, mdot, mask = light_flow(tables, books, burner)
    return amount


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
    stages = len(tables.stages)
    branch = tables.legs[leg].branch
    base = tables.legs[leg].account * stages
    left = amount
    # Kilograms owed are counted as a delta-v first, and held against the tolerance then.
    tolerance = TINY if purpose == KILOGRAMS else NOTHING_OWED
    ran_dry = -1
    lowest = -1
    for position in range(stages):
        stage = books.order[position]
        if books.where[stage] != branch:
            continue
        burner = tables.burner_of[base + stage]
        if burner < 0 or not any_can_burn(tables, books, burner):
            lowest = stage
            continue
        if purpose != KILOGRAMS:
            if position > 0:
                shed(tables, books, leg, position)
            if lowest >= 0 and books.where[lowest] == branch:
                books.unlit[leg] = 1
        if purpose == MANOEUVRE:
            _ignite(tables, books, leg, burner)
        before = left
        left = _burn(tables, books, leg, burner, (purpose, left))
        if left < before:
            if ran_dry >= 0 and purpose <= CONTINGENCY and not tables.legs[leg].ascent:
                books.handover[leg] = ran_dry + 1
            ran_dry = stage
        if left < tolerance:
            return 0.0
    return left


def any_can_burn(tables: Tables, books: Books, burner: int) -> bool:
    """Tell whether any engine of a burner can burn."""
    row = tables.burners[burner]
    for place in range(row.first_lit, row.end_lit):
        if can_burn(tables, books, tables.lit[place]):
            return True
    return False
