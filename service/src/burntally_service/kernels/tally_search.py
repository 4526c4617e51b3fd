"""Slack by search, over the books themselves: for the marks that the closed form cannot tell."""

from typing import Final

from burntally_service.kernels.tally import tally
from burntally_service.kernels.tally_books import wipe
from burntally_service.kernels.tally_rows import ADD_AT, Books, Tables

__all__ = ["owed_with", "slack_by_search"]

MOST: Final = 1e6
"""No more than this is ever added [m/s]: the contract's bound on a delta-v."""

TOLERANCE: Final = 1e-10
"""Width of the bracket at which the search ends, as a share of the slack."""

LESSER: Final = 16
"""Parts into which what could be added is cut, to see that every lesser addition is paid too: where a stage gone, or an
ignition spent, leaves a lighter stack, more may be payable where less is not."""

MOST_TRIES: Final = 200
"""The search halves its bracket at worst, and a bracket of 1e6 m/s needs 54 halvings."""


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
    slack = high if owed_high <= 0.0 else _narrow(tables, scratch, (mark, 0.0, high, owed_high))
    for place in range(1, LESSER):
        added = slack * (place / LESSER)
        owed = owed_with(tables, scratch, mark, added)
        if owed > 0.0:
            return _narrow(tables, scratch, (mark, slack * ((place - 1) / LESSER), added, owed))
    return slack


def _narrow(tables: Tables, scratch: Books, bracket: tuple[int, float, float, float]) -> float:
    """Close a bracket, given as mark, an addition that owes nothing, and one that owes, with what it owes."""
    mark, low, high, owed_high = bracket
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
