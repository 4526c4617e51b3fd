"""The stack: what separates, what starts a branch, and why an account can pay no more."""

from burntally_service.kernels.tally_books import stage_mass
from burntally_service.kernels.tally_flow import can_burn, wants_ignition, write_line
from burntally_service.kernels.tally_rows import (
    DRY,
    GONE,
    INERT,
    LINE_SEPARATION,
    NO_IGNITION,
    NOT_FLOWN,
    Books,
    Tables,
)

__all__ = ["cause_of", "detach", "lowest_spent", "shed"]


def _is_spent(tables: Tables, books: Books, stage: int) -> bool:
    """Tell whether a stage has main engines and none of them can burn (P3)."""
    row = tables.stages[stage]
    for engine in range(row.first_engine, row.end_engine):
        if not tables.engines[engine].auxiliary and can_burn(tables, books, engine):
            return False
    return _has_main_engine(tables, stage)


def _has_main_engine(tables: Tables, stage: int) -> bool:
    """Tell whether a stage has an engine that is not auxiliary."""
    row = tables.stages[stage]
    for engine in range(row.first_engine, row.end_engine):
        if not tables.engines[engine].auxiliary:
            return True
    return False


def shed(tables: Tables, books: Books, leg: int, payer_position: int) -> None:
    """Separate the spent stages at the bottom of the stack, with inert ones below them, before a payer burns.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        Changed where stages leave.
    leg : int
        The leg that is being paid, [-].
    payer_position : int
        Place of the payer in `Books.order`; only stages below it leave, [-].

    Returns
    -------
    None
        Masses in the books are in [kg].

    References
    ----------
    .. [1] The project's bookkeeping rule P3; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import LegRow
    >>> tables = Tables(*([],) * 12, [LegRow(0, 0, 1, 0, -1, 0.0, 0.0, 0.0, 0, 0, 0)], [])
    >>> shed(tables, blank_books(tables, 0), 0, 0)
    """
    position = lowest_spent(tables, books, leg, payer_position)
    while position >= 0:
        # One after another: a spent stage leaves by itself, and its branch holds none that left before.
        detach(tables, books, leg, position)
        position = lowest_spent(tables, books, leg, payer_position)


def lowest_spent(tables: Tables, books: Books, leg: int, payer_position: int) -> int:
    """Find the lowest spent stage that separates before a payer burns.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        The books as they stand.
    leg : int
        The leg that is being paid, [-].
    payer_position : int
        Place of the payer in `Books.order`; only stages below it leave, [-].

    Returns
    -------
    int
        Place of the stage in `Books.order`, [-]; -1 if none separates.

    References
    ----------
    .. [1] The project's bookkeeping rule P3; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import LegRow
    >>> tables = Tables(*([],) * 12, [LegRow(0, 0, 1, 0, -1, 0.0, 0.0, 0.0, 0, 0, 0)], [])
    >>> lowest_spent(tables, blank_books(tables, 0), 0, 0)
    -1
    """
    branch = tables.legs[leg].branch
    stages = tables.n_stages
    for position in range(payer_position):
        stage = books.order[position]
        if books.where[stage] != branch:
            continue
        # What must stay keeps aboard all that stands above it, so the search upward ends here.
        if tables.stages[stage].by_leg or tables.last_named[branch * stages + stage] > leg:
            return -1
        if _is_spent(tables, books, stage):
            return position
        if tables.stages[stage].first_engine < tables.stages[stage].end_engine:
            return -1
    return -1


def detach(tables: Tables, books: Books, leg: int, highest: int) -> None:
    """Take everything up to a place in the stack out of a leg's branch; it starts the first branch that is of it.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        Changed: where the parts are, branch masses, what was held back.
    leg : int
        The leg in which it happens, [-].
    highest : int
        Place in `Books.order` of the highest stage that leaves, [-].

    Returns
    -------
    None
        Masses in the books are in [kg].

    References
    ----------
    .. [1] The project's bookkeeping rule S; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import BranchRow, LegRow
    >>> leg = LegRow(0, 0, 1, 0, -1, 0.0, 0.0, 0.0, 0, 0, 0)
    >>> tables = Tables(*([],) * 11, [BranchRow(-1, 0.0, 0.0, 0)], [leg], [], n_branches=1)
    >>> detach(tables, blank_books(tables, 0), 0, -1)
    """
    branch = tables.legs[leg].branch
    target = _branch_of(tables, books, branch, highest)
    for position in range(highest + 1):
        stage = books.order[position]
        if books.where[stage] != branch:
            continue
        mass = stage_mass(tables, books, stage)
        books.where[stage] = target
        books.left_in[stage] = leg
        books.branch_mass[branch] -= mass
        if target >= 0:
            books.branch_mass[target] += mass
        before = books.branch_mass[branch] + mass
        # The last cell tells what leaves together from what leaves right after it.
        entry = (target, 0.0, mass, before, books.branch_clock[branch], 0, float(highest))
        write_line(books, (LINE_SEPARATION, leg, stage), entry)
        books.flow_of[stage] = -1
        row = tables.stages[stage]
        # What was held back was held for this moment: a branch of the part may burn it now.
        for load in range(row.first_load, row.end_load):
            books.usable[load] += books.held[load]
            books.held[load] = 0.0
    if not _any_aboard(tables, books, branch):
        # Nothing weighs nothing, whatever rounding has left over.
        books.branch_mass[branch] = 0.0


def _any_aboard(tables: Tables, books: Books, branch: int) -> bool:
    """Tell whether a branch still has a stage."""
    for stage in range(tables.n_stages):
        if books.where[stage] == branch:
            return True
    return False


def _branch_of(tables: Tables, books: Books, branch: int, highest: int) -> int:
    """Start the first branch that is of a part at or below a place in the stack; -1 without one."""
    for candidate in range(tables.n_branches):
        if books.branch_started[candidate]:
            continue
        part = tables.branches[candidate].part
        for position in range(highest + 1):
            if books.order[position] == part and books.where[part] == branch:
                books.branch_started[candidate] = 1
                books.branch_clock[candidate] = books.branch_clock[branch]
                return candidate
    return NOT_FLOWN


def cause_of(tables: Tables, books: Books, leg: int) -> int:
    """Why the account of a leg owes: all gone, nothing to burn, no ignition left, or dry.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        The books when the account could pay no more.
    leg : int
        Index of the leg, [-].

    Returns
    -------
    int
        The first cause that holds, [-].

    References
    ----------
    .. [1] The project's findings `payer-gone`, `payer-inert`, `ignitions-exceeded`, `payer-dry`; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import LegRow
    >>> tables = Tables(*([],) * 12, [LegRow(0, 0, 1, 0, -1, 0.0, 0.0, 0.0, 0, 0, 0)], [])
    >>> cause_of(tables, blank_books(tables, 0), 0) == INERT
    True
    """
    stages = tables.n_stages
    base = tables.legs[leg].account * stages
    burners = 0
    aboard = 0
    for stage in range(stages):
        burner = tables.burner_of[base + stage]
        if burner < 0:
            continue
        burners += 1
        if books.where[stage] == tables.legs[leg].branch:
            aboard += 1
            if wants_ignition(tables, books, burner):
                return NO_IGNITION
    if burners == 0:
        return INERT
    return DRY if aboard > 0 else GONE
