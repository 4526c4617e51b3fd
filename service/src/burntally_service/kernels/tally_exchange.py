"""What moves mass without a manoeuvre: parts that leave, payloads and propellant given or taken, docking."""

import math

from burntally_service.kernels.tally_books import DRY_FRACTION, stage_mass
from burntally_service.kernels.tally_flow import write_line
from burntally_service.kernels.tally_rows import (
    DOCK,
    LINE_ABSENT,
    LINE_DOCKED,
    LINE_HANDED,
    LINE_RELEASE,
    LINE_TAKEN,
    LINE_TAKEN_PAYLOAD,
    RELEASE_PAYLOAD,
    RELEASE_PROPELLANT,
    SEPARATE,
    TAKE_PAYLOAD,
    TAKE_PROPELLANT,
    Books,
    Tables,
)
from burntally_service.kernels.tally_stack import detach

__all__ = ["exchange"]


def exchange(tables: Tables, books: Books, op: int, order: tuple[int, int, float]) -> None:
    """Do what moves mass without a manoeuvre.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        Changed: loads, payloads, stack and branch masses, [kg].
    op : int
        What to do, [-].
    order : tuple
        Leg [-], part [-], and mass [kg]; an infinite mass means all that there is, or room for.

    Returns
    -------
    None
        The books are changed, masses in [kg]; a part that is not aboard is told by a line.

    References
    ----------
    .. [1] The project's bookkeeping rule S; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> empty = NO_TABLES
    >>> exchange(empty, blank_books(empty, 0), -1, (0, 0, 0.0))
    """
    leg, part, amount = order
    if op == SEPARATE:
        _separate(tables, books, leg, part)
    elif op == RELEASE_PAYLOAD:
        _release(tables, books, leg, (part, amount))
    elif op == RELEASE_PROPELLANT:
        _hand_over(tables, books, leg, (part, amount))
    elif op == TAKE_PAYLOAD:
        _take_payload(tables, books, leg, part)
    elif op == TAKE_PROPELLANT:
        _take_propellant(tables, books, leg, (part, amount))
    elif op == DOCK:
        _dock(tables, books, leg, (part, amount))


def _tell(tables: Tables, books: Books, head: tuple[int, int, int], amounts: tuple[float, float]) -> None:
    """Write a line with a mass that was wanted, or was there before, and the mass that moves."""
    branch = tables.legs[head[1]].branch
    mass, clock = books.branch_mass[branch], books.branch_clock[branch]
    write_line(books, head, (0, amounts[0], amounts[1], mass, clock, 0, 0.0))


def _separate(tables: Tables, books: Books, leg: int, stage: int) -> None:
    """Separate a stage with all below it; absent, say so, unless it left in this very leg with one above it."""
    if books.where[stage] != tables.legs[leg].branch:
        if books.left_in[stage] != leg:
            _tell(tables, books, (LINE_ABSENT, leg, stage), (0.0, 0.0))
        return
    for position in range(tables.n_stages):
        if books.order[position] == stage:
            detach(tables, books, leg, position)
            return


def _release(tables: Tables, books: Books, leg: int, order: tuple[int, float]) -> None:
    """Release a payload, or part of it; what is not there is short."""
    payload, wanted = order
    branch = tables.legs[leg].branch
    part = tables.n_stages + payload
    stage = books.payload_on[payload]
    if stage < 0 or books.where[stage] != branch:
        _tell(tables, books, (LINE_ABSENT, leg, part), (0.0, 0.0))
        return
    kg = min(wanted, books.part_mass[part])
    _tell(tables, books, (LINE_RELEASE, leg, payload), (wanted, kg))
    books.part_mass[part] -= kg
    books.branch_mass[branch] -= kg
    if wanted == math.inf:
        books.payload_on[payload] = -1


def _hand_over(tables: Tables, books: Books, leg: int, order: tuple[int, float]) -> None:
    """Hand over usable propellant of a load; what is not there is short."""
    load, wanted = order
    branch = tables.legs[leg].branch
    stage = tables.loads[load].stage
    if books.where[stage] != branch:
        _tell(tables, books, (LINE_ABSENT, leg, stage), (0.0, 0.0))
        return
    kg = min(wanted, books.usable[load])
    _tell(tables, books, (LINE_HANDED, leg, load), (wanted, kg))
    books.usable[load] -= kg
    books.flow_of[stage] = -1
    books.handed[load] += kg
    books.branch_mass[branch] -= kg


def _take_payload(tables: Tables, books: Books, leg: int, payload: int) -> None:
    """Take a payload on, onto its stage or onto the topmost one."""
    branch = tables.legs[leg].branch
    stage = tables.payloads[payload].stage
    if stage < 0:
        for position in range(tables.n_stages):
            if books.where[books.order[position]] == branch:
                stage = books.order[position]
    if stage < 0 or books.where[stage] != branch:
        _tell(tables, books, (LINE_ABSENT, leg, max(0, stage)), (0.0, 0.0))
        return
    kg = books.part_mass[tables.n_stages + payload]
    _tell(tables, books, (LINE_TAKEN_PAYLOAD, leg, payload), (0.0, kg))
    books.payload_on[payload] = stage
    books.branch_mass[branch] += kg


def _take_propellant(tables: Tables, books: Books, leg: int, order: tuple[int, float]) -> None:
    """Take propellant on, a mass or to the load's capacity; its residual share never burns."""
    load, wanted = order
    branch = tables.legs[leg].branch
    row = tables.loads[load]
    if books.where[row.stage] != branch:
        _tell(tables, books, (LINE_ABSENT, leg, row.stage), (0.0, 0.0))
        return
    there = books.usable[load] + books.held[load] + books.residual[load]
    kg = max(0.0, row.capacity - there) if wanted == math.inf else wanted
    mass, clock = books.branch_mass[branch], books.branch_clock[branch]
    # The cell before the last tells what is filled up from a mass that is taken on whatever is there.
    filled = 1 if wanted == math.inf and there <= row.capacity else 0
    write_line(books, (LINE_TAKEN, leg, load), (0, there, kg, mass, clock, filled, 0.0))
    residual = row.residual_fraction * kg
    books.residual[load] += residual
    books.usable[load] += kg - residual
    books.taken[load] += kg
    books.stock[load] += kg
    # What rounding may leave grows with what was loaded, and the dry mark with it.
    books.dry_mark[load] = DRY_FRACTION * books.stock[load]
    books.flow_of[row.stage] = -1
    books.branch_mass[branch] += kg


def _dock(tables: Tables, books: Books, leg: int, order: tuple[int, float]) -> None:
    """Dock what is left of a branch, if it is over, on top of the stack; say so if there is nothing to dock."""
    docked, is_over = order
    branch = tables.legs[leg].branch
    stages = tables.n_stages
    moved = 0
    for position in range(stages):
        # Each stage that went to the top has let those after it down by one place.
        stage = books.order[position - moved]
        if books.where[stage] != docked or is_over <= 0.0:
            continue
        for place in range(position - moved, stages - 1):
            books.order[place] = books.order[place + 1]
        books.order[stages - 1] = stage
        moved += 1
        mass = stage_mass(tables, books, stage)
        _tell(tables, books, (LINE_DOCKED, leg, stage), (0.0, mass))
        books.where[stage] = branch
        books.branch_mass[branch] += mass
        books.branch_mass[docked] -= mass
    if moved > 0:
        # All that was left has come aboard, and nothing weighs nothing, whatever rounding has left over.
        books.branch_mass[docked] = 0.0
    else:
        _tell(tables, books, (LINE_ABSENT, leg, tables.branches[docked].part), (0.0, 0.0))
