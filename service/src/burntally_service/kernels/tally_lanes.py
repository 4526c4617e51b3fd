"""Many designs of one shape: the same tally, once for each lane of columns."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING, Any

from msgspec import structs

from burntally_service.kernels.tally import tally
from burntally_service.kernels.tally_books import blank_books
from burntally_service.kernels.tally_rows import Books, Tables

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

__all__ = ["tally_lanes", "with_cells"]

Cell = tuple[str, int, str]
"""A list of the tables, a row of it, a field of the row."""


def with_cells(tables: Tables, cells: Sequence[Cell], numbers: Sequence[float]) -> Tables:
    """Tables with other numbers in some of their cells.

    Parameters
    ----------
    tables : Tables
        The rows of a design and its plan.
    cells : sequence of Cell
        The cells that change, [-].
    numbers : sequence of float
        What they hold, in their own units, [kg], [m/s], ….

    Returns
    -------
    Tables
        New tables, numbers in the units of their cells, [kg], [m/s], …; rows that do not change are shared.

    References
    ----------
    .. [1] The project's bookkeeping rules; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> with_cells(NO_TABLES, [], []) == NO_TABLES
    True
    """
    lists: dict[str, list[Any]] = {}
    for (name, row, field), number in zip(cells, numbers, strict=True):
        rows = lists.setdefault(name, list(getattr(tables, name)))
        rows[row] = structs.replace(rows[row], **{field: number})
    return structs.replace(tables, **lists)


def tally_lanes(
    tables: Tables, cells: Sequence[Cell], columns: NDArray[np.float64], read: Callable[[Books], Sequence[float]]
) -> NDArray[np.float64]:
    """Tally one design for each lane, with the lane's numbers in some cells of its tables.

    Parameters
    ----------
    tables : Tables
        The rows of the design and its plan.
    cells : sequence of Cell
        Cells that the lanes fill, [-].
    columns : numpy.ndarray
        The numbers, shape (n_cells, n_lanes), in the units of their cells, [kg], [m/s], ….
    read : callable
        Takes the books of a lane, without lines; returns the outcomes that are wanted of them.

    Returns
    -------
    numpy.ndarray
        Outcomes, shape (n_outcomes, n_lanes), with the bits of the tally of each design alone, [kg], [m/s], ….

    References
    ----------
    .. [1] The project's bookkeeping rules C, P and S; no published source.

    Examples
    --------
    >>> import numpy as np
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> tally_lanes(NO_TABLES, [], np.zeros((0, 2)), lambda books: [1.0])
    array([[1., 1.]])
    """
    # numpy is loaded here, since a process that computes single designs must never pay for it.
    from burntally_service.kernels._lanes import in_lanes

    def run(kernel: Callable[[Tables, Books], None], numbers: Sequence[float]) -> Sequence[float]:
        filled = with_cells(tables, cells, numbers)
        books = blank_books(filled, 0)
        kernel(filled, books)
        return read(books)

    return in_lanes(tally, run, columns)
