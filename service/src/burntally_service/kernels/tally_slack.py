"""Slack: the most that could be added at the end of a leg, with every charge of its branch still paid (rule M).

The closed form walks the ledger backward with the mass that a stage could lose and still pay what follows. Where an
addition would hand over to another stage, or change what another stage pays in between, it is searched for instead,
over the books themselves.
"""

import math
from typing import Final

from burntally_service.kernels.tally import tally
from burntally_service.kernels.tally_books import wipe
from burntally_service.kernels.tally_rows import (
    ADD_AT,
    DELTA_V,
    KG,
    KIND,
    LINE_BOILED,
    LINE_BURN,
    LINE_DOCKED,
    LINE_DRAW,
    LINE_HANDED,
    LINE_IGNITION,
    LINE_SEPARATION,
    LINE_TAKEN,
    LINE_WIDTH,
    LINES,
    MASK,
    MASS,
    PART,
    SPARE,
    Books,
    Tables,
)

__all__ = ["owed_with", "slack_by_search", "slacks"]

SEARCH: Final = -1.0
"""Mark of a slack that the closed form cannot tell."""

MOST: Final = 1e6
"""No more than this is ever added [m/s]: the contract's bound on a delta-v."""

TOLERANCE: Final = 1e-10
"""Width of the bracket at which the search ends, as a share of the slack."""

MOST_TRIES: Final = 200
"""The search halves its bracket at worst, and a bracket of 1e6 m/s needs 54 halvings."""

_NONE: Final = 0.0
_KNOWN: Final = 1.0
_MIXED: Final = 2.0


def slacks(tables: Tables, books: Books, walk: list[list[float]]) -> None:
    r"""Slack of every charged leg and reserve whose addition one stage pays alone.

    .. math:: s = c \ln \frac{m}{m - a}

    with a the mass that the stage could lose there: what it has to spare after its last draw, times the mass ratios of
    the draws in between.

    Parameters
    ----------
    tables : Tables
        What was tallied.
    books : Books
        Its books, with all lines.
    walk : list of lists of float
        Scratch of six rows: slack by mark [m/s], then state, reach [kg], mask and handover by stage, then the stage
        that drew last (-1 at first); changed.

    Returns
    -------
    None
        The first row holds the slacks, [m/s]; -1 where it must be searched for.

    References
    ----------
    .. [1] The project's bookkeeping rule M; no published source. The rocket equation: Sutton, Biblarz, Rocket
       Propulsion Elements, 9th ed., sec. 4.1.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> empty = NO_TABLES
    >>> slacks(empty, blank_books(empty, 0), [[], [], [], [], [], [-1.0]])
    """
    legs = tables.n_legs
    end = books.count[LINES]
    # Legs stand in the order in which they were tallied, and so do their lines.
    for leg in range(legs - 1, -1, -1):
        row = tables.legs[leg]
        if books.line_begin[leg] < 0:
            continue
        after = books.line_end[leg]
        if row.reserves:
            mark = legs + row.branch
            if books.reserve[row.branch] > 0.0:
                walk[0][mark] = _slack_at(books, walk, mark)
            _walk_lines(tables, books, walk, (end - 1, after, mark))
        if row.charged:
            walk[0][leg] = _slack_at(books, walk, leg)
        _walk_lines(tables, books, walk, (after - 1, books.line_begin[leg], leg))
        end = books.line_begin[leg]


def _slack_at(books: Books, walk: list[list[float]], mark: int) -> float:
    """Slack at the end of a leg, or after a reserve."""
    stage = books.spare_stage[mark]
    if stage < 0:
        return 0.0
    reach = books.spare[mark]
    more = books.spare_more[mark]
    state = walk[1][stage]
    if state == _MIXED or (state == _KNOWN and walk[3][stage] != books.spare_mask[mark]):
        return SEARCH
    if state == _KNOWN and walk[2][stage] <= reach:
        reach = walk[2][stage]
        more = int(walk[4][stage])
    if more:
        return SEARCH
    mass = books.spare_mass[mark]
    return books.spare_speed[mark] * math.log(mass / (mass - reach))


def _walk_lines(tables: Tables, books: Books, walk: list[list[float]], at: tuple[int, int, int]) -> None:
    """Walk backward over some lines of a leg, or of the reserve after it."""
    last, first, mark = at
    for line in range(last, first - 1, -1):
        start = line * LINE_WIDTH
        kind = int(books.lines[start + KIND])
        if kind <= LINE_DRAW:
            _walk_draw(tables, books, walk, (start, mark))
        elif kind != LINE_IGNITION:
            _walk_event(tables, books, walk, start)


def _walk_event(tables: Tables, books: Books, walk: list[list[float]], start: int) -> None:
    """Forget, or stop trusting, what is known of a stage when its loads or its branch change."""
    kind = int(books.lines[start + KIND])
    part = int(books.lines[start + PART])
    if kind == LINE_SEPARATION:
        walk[1][part] = _NONE
    elif kind == LINE_DOCKED:
        for stage in range(tables.n_stages):
            walk[1][stage] = _MIXED
    elif kind == LINE_TAKEN:
        if tables.loads[part].capacity < math.inf:
            walk[1][tables.loads[part].stage] = _MIXED
    elif kind == LINE_BOILED:
        if books.lines[start + MASK] > 0.0:
            walk[1][tables.loads[part].stage] = _MIXED
    elif kind == LINE_HANDED and books.lines[start + KG] < books.lines[start + DELTA_V]:
        walk[1][tables.loads[part].stage] = _MIXED


def _walk_draw(tables: Tables, books: Books, walk: list[list[float]], at: tuple[int, int]) -> None:
    """Carry the mass that a stage could lose from after a draw to before it."""
    start, mark = at
    drawer = tables.burners[int(books.lines[start + PART])].stage
    mask = books.lines[start + MASK]
    spare = books.lines[start + SPARE]
    if drawer != int(walk[5][0]):
        # What another stage draws in between depends on the mass that this one has lost.
        for stage in range(tables.n_stages):
            if stage != drawer and walk[1][stage] == _KNOWN:
                walk[1][stage] = _MIXED
        walk[5][0] = float(drawer)
    if walk[1][drawer] == _KNOWN and walk[3][drawer] != mask:
        walk[1][drawer] = _MIXED
    if walk[1][drawer] == _NONE or (walk[1][drawer] == _KNOWN and spare < walk[2][drawer]):
        walk[1][drawer] = _KNOWN
        walk[2][drawer] = spare
        walk[3][drawer] = mask
        walk[4][drawer] = _hands_over(books, mark, drawer, int(mask))
    if int(books.lines[start + KIND]) == LINE_BURN:
        mass = books.lines[start + MASS]
        walk[2][drawer] *= mass / (mass - books.lines[start + KG])


def _hands_over(books: Books, mark: int, stage: int, mask: int) -> float:
    """Tell (1) whether another stage or engine would go on if this one ran dry in a leg."""
    if books.spare_stage[mark] < 0:
        return 0.0
    same = books.spare_stage[mark] == stage and books.spare_mask[mark] == mask
    return float(books.spare_more[mark]) if same else 1.0


def owed_with(tables: Tables, scratch: Books, mark: int, added: float) -> float:
    """What the branch of a leg would owe if a delta-v were added at its end.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    scratch : Books
        Books to use; changed.
    mark : int
        Index of the leg; the number of legs plus the branch for a reserve, [-].
    added : float
        Delta-v added, [m/s].

    Returns
    -------
    float
        Sum owed in the branch, [m/s].

    References
    ----------
    .. [1] The project's bookkeeping rule M; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import BranchRow
    >>> tables = Tables(*([],) * 11, [BranchRow(-1, 0.0, 0.0, 0)], [], [], n_branches=1)
    >>> owed_with(tables, blank_books(tables, 0), 0, 1.0)
    0.0
    """
    wipe(tables, scratch)
    scratch.count[ADD_AT] = mark
    scratch.added[0] = added
    scratch.added[1] = 0.0
    tally(tables, scratch)
    legs = tables.n_legs
    branch = tables.legs[mark].branch if mark < legs else mark - legs
    return scratch.branch_owed[branch]


def slack_by_search(tables: Tables, scratch: Books, mark: int) -> float:
    """Slack of a leg, or of a reserve, found over the books themselves.

    What is owed rises from zero where the slack ends, so the search comes from the owing side with secants and keeps
    a bracket.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    scratch : Books
        Books to use; changed.
    mark : int
        Index of the leg; the number of legs plus the branch for a reserve, [-].

    Returns
    -------
    float
        Slack, [m/s]; 0 if nothing can be added.

    References
    ----------
    .. [1] The project's bookkeeping rule M; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import BranchRow
    >>> tables = Tables(*([],) * 11, [BranchRow(-1, 0.0, 0.0, 0)], [], [], n_branches=1)
    >>> slack_by_search(tables, blank_books(tables, 0), 0)
    1000000.0
    """
    owed_with(tables, scratch, mark, MOST)
    high = MOST - scratch.added[1]
    owed_high = owed_with(tables, scratch, mark, high)
    if owed_high <= 0.0:
        return high
    low: float = 0.0
    guess: float = high - owed_high
    step = 0.0
    for _ in range(MOST_TRIES):
        width = TOLERANCE * max(1.0, high)
        if high - low <= width:
            break
        if not low < guess < high:
            guess = 0.5 * (low + high)
        owed = owed_with(tables, scratch, mark, guess)
        if owed <= 0.0:
            # The secant fell short: feel forward from there in growing steps, so that a good guess is confirmed fast.
            low = guess
            step = max(width, 16.0 * step)
            guess = min(low + step, 0.5 * (low + high))
        else:
            slope = (owed_high - owed) / (high - guess)
            high = guess
            owed_high = owed
            step = 0.0
            guess = high - owed / slope if slope > 0.0 else 0.5 * (low + high)
    return low
