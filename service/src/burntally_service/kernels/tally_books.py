"""Opening the books: what is aboard before the first step."""

from typing import Any, Final

from burntally_service.kernels.constants import G0
from burntally_service.kernels.tally_rows import BLANK, LINE_WIDTH, LINES, NOT_FLOWN, STAMP, Books, Tables

__all__ = ["DRY_FRACTION", "blank_books", "engines_flow", "load_up", "stage_mass", "wipe"]

DRY_FRACTION: Final = 1e-9
"""A load below this share of what was loaded is dry (P7)."""


def blank_books(tables: Tables, lines: int) -> Books:
    """Books of the right size for some tables, with nothing in them, for the gear of one value.

    Parameters
    ----------
    tables : Tables
        What will be tallied.
    lines : int
        How many lines of the ledger there is room for, [-].

    Returns
    -------
    Books
        Lists of blank entries, [-].

    References
    ----------
    .. [1] The project's bookkeeping rules; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> blank_books(NO_TABLES, 0).lines
    []
    """
    sizes = {
        "loads": tables.n_loads,
        "engines": tables.n_engines,
        "feeds": tables.n_feeds,
        "parts": tables.n_stages + tables.n_payloads,
        "payloads": tables.n_payloads,
        "stages": tables.n_stages,
        "branches": tables.n_branches,
        "rules": tables.n_branches * tables.n_rules,
        "legs": tables.n_legs,
        "marks": tables.n_legs + tables.n_branches,
        "lines": lines * LINE_WIDTH,
        "count": 4,
        "added": 2,
    }
    # One list for each field, in their order: by name it would take half as long again.
    lists: list[Any] = [[entry] * sizes[of] for of, entry in BLANK.values()]
    books = Books(*lists)
    books.order[:] = range(tables.n_stages)
    books.count[:] = (0, 0, -1, lines)
    return books


def load_up(tables: Tables, books: Books) -> None:
    """Fill the books with what is aboard before the first step.

    Masses are allowable ones: basic by growth of each item by the system contingency.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        Changed: loads, engines, parts and the first branch.

    Returns
    -------
    None
        The books hold the start, masses in [kg].

    References
    ----------
    .. [1] ANSI/AIAA S-120A-2015, terms basic, predicted and allowable mass.

    Examples
    --------
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> empty = NO_TABLES
    >>> load_up(empty, blank_books(empty, 0))
    """
    stages = tables.n_stages
    for place in range(tables.n_items):
        row = tables.items[place]
        books.part_mass[row.part] += row.mass * row.count * (1.0 + row.growth) * (1.0 + row.contingency)
    for load in range(tables.n_loads):
        content = tables.loads[load]
        residual = content.residual_fraction * content.mass
        books.residual[load] = residual
        books.held[load] = content.held_back
        books.usable[load] = max(0.0, content.mass - residual - content.held_back)
        books.stock[load] = content.mass
        books.dry_mark[load] = DRY_FRACTION * content.mass
    engines_flow(tables, books)
    for payload in range(tables.n_payloads):
        rider = tables.payloads[payload]
        if rider.aboard:
            books.payload_on[payload] = rider.stage
    if tables.n_branches > 0:
        books.branch_started[0] = 1
        for stage in range(stages):
            books.branch_mass[0] += stage_mass(tables, books, stage)


def engines_flow(tables: Tables, books: Books) -> None:
    r"""Mass flow of each engine, and of each of its feeds, at full thrust in vacuum.

    .. math:: \dot m = n F / (g_0 I_{sp})

    Parameters
    ----------
    tables : Tables
        Engines and their feeds.
    books : Books
        Changed: `engine_flow` and `feed_flow`, [kg/s]; `engine_speed`, of the exhaust, [m/s].

    Returns
    -------
    None
        The books hold the flows, [kg/s].

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., sec. 2.1.

    Examples
    --------
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> empty = NO_TABLES
    >>> engines_flow(empty, blank_books(empty, 0))
    """
    for engine in range(tables.n_engines):
        row = tables.engines[engine]
        flow = row.count * row.thrust / (row.isp * G0)
        books.engine_flow[engine] = flow
        books.engine_speed[engine] = row.count * row.thrust / flow
        parts = 0.0
        for feed in range(row.first_feed, row.end_feed):
            parts += tables.feeds[feed].parts
        for feed in range(row.first_feed, row.end_feed):
            books.feed_flow[feed] = flow * (tables.feeds[feed].parts / parts)


def stage_mass(tables: Tables, books: Books, stage: int) -> float:
    """Mass of a stage with its propellant and all that rides on it.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        The books as they stand.
    stage : int
        Index of the stage, [-].

    Returns
    -------
    float
        Mass, [kg].

    References
    ----------
    .. [1] The project's bookkeeping rules; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_rows import StageRow, Tables
    >>> tables = Tables([], [StageRow(0, 0, 0, 0, 0)], *([],) * 12, n_stages=1)
    >>> stage_mass(tables, blank_books(tables, 0), 0)
    0.0
    """
    row = tables.stages[stage]
    mass = books.part_mass[stage]
    for load in range(row.first_load, row.end_load):
        mass += books.usable[load] + books.held[load] + books.residual[load]
    for payload in range(tables.n_payloads):
        if books.payload_on[payload] == stage:
            mass += books.part_mass[tables.n_stages + payload]
    return mass


def wipe(tables: Tables, books: Books) -> None:
    """Make used books blank again, in place.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        Changed: everything but the lines, which are written over; what is to be added stays, [m/s].

    Returns
    -------
    None
        The books are as `blank_books` made them, masses 0 [kg].

    References
    ----------
    .. [1] The project's bookkeeping rules; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> wipe(NO_TABLES, blank_books(NO_TABLES, 0))
    """
    # Entries that are written before they are read stay as they are, since a search wipes the books for every try.
    for load in range(tables.n_loads):
        books.burned[load] = books.lost[load] = books.boiled[load] = books.handed[load] = books.taken[load] = 0.0
    for engine in range(tables.n_engines):
        books.used[engine] = books.lit_at[engine] = 0.0
    for part in range(tables.n_stages + tables.n_payloads):
        books.part_mass[part] = 0.0
    for payload in range(tables.n_payloads):
        books.payload_on[payload] = NOT_FLOWN
    for stage in range(tables.n_stages):
        books.where[stage] = 0
        books.order[stage] = stage
        books.left_in[stage] = -1
        books.flow_of[stage] = -1
        books.unbalanced[stage] = 0
    for place in range(tables.n_branches * tables.n_rules):
        books.rule_sum[place] = 0.0
    for branch in range(tables.n_branches):
        books.branch_mass[branch] = books.branch_clock[branch] = books.branch_charged[branch] = 0.0
        books.branch_owed[branch] = books.reserve[branch] = books.reserve_owed[branch] = 0.0
        books.branch_started[branch] = 0
    _wipe_legs(tables, books)
    books.count[LINES] = books.count[STAMP] = 0


def _wipe_legs(tables: Tables, books: Books) -> None:
    """Make the entries of the legs blank again."""
    for leg in range(tables.n_legs):
        books.required[leg] = books.by_fraction[leg] = books.by_floor[leg] = books.by_fixed[leg] = 0.0
        books.owed[leg] = 0.0
        books.handover[leg] = 0
        books.unlit[leg] = 0
        books.line_begin[leg] = -1
    for mark in range(tables.n_legs + tables.n_branches):
        books.cause[mark] = 0
        books.spare_stage[mark] = -1
        books.spare_more[mark] = 0
        books.next_stage[mark] = -1
