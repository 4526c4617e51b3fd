"""Many designs of one shape: the same tally, once for each lane of columns."""

from collections.abc import Sequence
from typing import Any

from burntally_service.kernels.tally import tally
from burntally_service.kernels.tally_books import wipe
from burntally_service.kernels.tally_rows import Books, Tables

__all__ = ["tally_lanes"]


def tally_lanes(tables: Tables, books: Books, cells: list[float], slots: Sequence[int], lanes: tuple[Any, Any]) -> None:
    """Tally one design for each lane, with the lane's numbers in some cells of its tables.

    Parameters
    ----------
    tables : Tables
        The record of the design; its cells are changed.
    books : Books
        Blank books, used for every lane.
    cells : array of float
        All cells of the tables' record, a view of its memory.
    slots : array of int
        Cells that the lanes fill, shape (n_slots,), [-].
    lanes : tuple of arrays of float
        Columns, shape (n_slots, n_lanes), in the units of their cells; outcomes, shape (2, n_lanes): what the main
        branch owes [m/s] and its mass at the end [kg]; changed.

    Returns
    -------
    None
        The outcomes are filled in, [m/s] and [kg].

    References
    ----------
    .. [1] The project's bookkeeping rules C, P and S; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> import numpy as np
    >>> empty = NO_TABLES
    >>> tally_lanes(empty, blank_books(empty, 0), [], [], (np.zeros((0, 0)), np.zeros((2, 0))))
    """
    columns, outcomes = lanes
    for lane in range(outcomes.shape[1]):
        for place in range(len(slots)):
            cells[slots[place]] = columns[place, lane]
        wipe(tables, books)
        tally(tables, books)
        outcomes[0, lane] = books.branch_owed[0]
        outcomes[1, lane] = books.branch_mass[0]
