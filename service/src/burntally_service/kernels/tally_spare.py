"""What an addition at the end of a leg would be paid with: noted by the tally, read by the walk for slack."""

from burntally_service.kernels.tally_books import stage_mass
from burntally_service.kernels.tally_flow import light_flow, lit_mask, spare_of
from burntally_service.kernels.tally_rows import DROPS, NEXT_STAGE, UNCLEAR, Books, Tables
from burntally_service.kernels.tally_stack import lowest_spent

__all__ = ["note_spare"]


def note_spare(tables: Tables, books: Books, leg: int, mark: int) -> None:
    """Note which stage of a leg's account would pay an addition here, how much it has, and what would go on after it.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        Changed: the entries of the mark, masses in [kg], speeds in [m/s].
    leg : int
        The leg whose account pays, [-].
    mark : int
        Index of the leg; the number of legs plus the branch for a reserve, [-].

    Returns
    -------
    None
        The entries are noted, masses in [kg].

    References
    ----------
    .. [1] The project's bookkeeping rule M; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import LegRow
    >>> tables = Tables(*([],) * 12, [LegRow(0, 0, 1, 0, -1, 0.0, 0.0, 0.0, 0, 0, 0)], [], n_legs=1)
    >>> books = blank_books(tables, 1)
    >>> note_spare(tables, books, 0, 0)
    >>> books.spare_stage
    [-1]
    """
    row = tables.legs[leg]
    base = row.account * tables.n_stages
    below = False
    for position in range(tables.n_stages):
        stage = books.order[position]
        if books.where[stage] != row.branch:
            continue
        burner = tables.burner_of[base + stage]
        mask = 0
        if burner >= 0:
            mask = lit_mask(tables, books, burner)
        if mask == 0:
            below = True
        elif books.spare_stage[mark] >= 0:
            if books.spare_more[mark] == 0:
                _note_next(tables, books, (leg, mark), (stage, burner))
            elif books.next_stage[mark] != stage:
                # A third stage could go on after the second, which one mark cannot hold.
                books.spare_more[mark] = UNCLEAR
                return
        else:
            spare, speed, first_dry = _spare_by(tables, books, burner)
            books.spare[mark] = spare
            books.spare_speed[mark] = speed
            books.spare_mass[mark] = books.branch_mass[row.branch]
            books.spare_stage[mark] = stage
            books.spare_mask[mark] = mask
            if below and lowest_spent(tables, books, leg, position) >= 0:
                books.spare_more[mark] = DROPS
                return
            if below or _burns_on(tables, burner, first_dry):
                books.spare_more[mark] = UNCLEAR


def _spare_by(tables: Tables, books: Books, burner: int) -> tuple[float, float, int]:
    """Mass that a burner, of which something can burn, can burn before a load is dry [kg], exhaust speed, that load."""
    row = tables.burners[burner]
    if row.lone >= 0:
        return books.usable[row.lone], books.engine_speed[tables.lit[row.first_lit]], row.lone
    thrust, mdot, _ = light_flow(tables, books, burner)
    time, first_dry = spare_of(tables, books, row.stage)
    return mdot * time, thrust / mdot, first_dry


def _note_next(tables: Tables, books: Books, at: tuple[int, int], by: tuple[int, int]) -> None:
    """Note the stage that would go on after the payer had run dry and dropped; unclear if it would not drop."""
    leg, mark = at
    stage, burner = by
    branch = tables.legs[leg].branch
    payer = books.spare_stage[mark]
    named_later = tables.last_named[branch * tables.n_stages + payer] > leg
    spare, speed, first_dry = _spare_by(tables, books, burner)
    above, adjoining = _above(tables, books, branch, payer)
    # What stands between the two may drop with the payer, or keep it aboard.
    if tables.stages[payer].by_leg or named_later or adjoining != stage or _burns_on(tables, burner, first_dry):
        books.spare_more[mark] = UNCLEAR
        return
    books.spare_more[mark] = NEXT_STAGE
    books.next_stage[mark] = stage
    books.next_mask[mark] = lit_mask(tables, books, burner)
    books.next_spare[mark] = spare
    books.next_speed[mark] = speed
    books.next_mass[mark] = above


def _above(tables: Tables, books: Books, branch: int, stage: int) -> tuple[float, int]:
    """Mass of all that stands above a stage in its branch [kg], and which stage stands right above it (-1: none)."""
    mass = 0.0
    adjoining = -1
    reached = False
    for position in range(tables.n_stages):
        other = books.order[position]
        if reached and books.where[other] == branch:
            mass += stage_mass(tables, books, other)
            if adjoining < 0:
                adjoining = other
        reached = reached or other == stage
    return mass, adjoining


def _burns_on(tables: Tables, burner: int, dry: int) -> bool:
    """Tell whether some engine of a burner goes on when one load is dry."""
    row = tables.burners[burner]
    if row.end_lit - row.first_lit == 1:
        return False
    for place in range(row.first_lit, row.end_lit):
        fitted = tables.engines[tables.lit[place]]
        fed_by_dry = False
        for feed in range(fitted.first_feed, fitted.end_feed):
            fed_by_dry = fed_by_dry or tables.feeds[feed].load == dry
        if not fed_by_dry:
            return True
    return False
