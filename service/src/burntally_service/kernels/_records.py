"""What the compiled gear takes in place of rows: structured arrays, and tables and books as single records.

A compiled function that takes dozens of arrays takes minutes to compile and longer to call than to run, so all rows of
a design stand in one record, and all its books in another: each is passed as one pointer. Their room is a power of
two, so that designs of about one size share the compiled code.
"""

from __future__ import annotations

import functools
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any, Final, get_args, get_type_hints

from burntally_service.kernels.tally_rows import ADD_AT, BLANK, LINE_WIDTH, ROOM, Books, Tables

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

__all__ = ["books_record", "flat_cells", "records", "room_of", "tables_record"]

_LEAST_ROOM: Final = 64
"""Room for as many rows of every kind as a common design has."""

# Some lists grow with a product, accounts by stages or branches by stages, or hold several rows for each leg or stage.
# A multiple for them keeps the room small, which one long list would otherwise double for all.
_ROWS_PER_ROOM: Final = {"burner_of": 8, "last_named": 8, "steps": 4, "items": 4, "lit": 4}
_BOOKS_PER_ROOM: Final = {"rule_sum": 16, "count": 1, "added": 1}


def records(row_type: type[tuple[Any, ...]], rows: Sequence[tuple[Any, ...]]) -> NDArray[np.void]:
    """Rows of floats as the structured array that compiled kernels read, field by field.

    Parameters
    ----------
    row_type : type
        Named tuple whose fields are all floats.
    rows : sequence of row_type
        The rows; may be empty.

    Returns
    -------
    numpy.ndarray
        Shape (len(rows),), one float64 field for each field of `row_type`, in its order.

    Examples
    --------
    >>> from typing import NamedTuple
    >>> class Point(NamedTuple):
    ...     x: float
    ...     y: float
    >>> records(Point, [Point(1.0, 2.0)])[0]["y"]
    np.float64(2.0)
    """
    import numpy as np

    return np.array([tuple(row) for row in rows], dtype=_row_layout(row_type))


def room_of(tables: Tables) -> int:
    """Room that tables need in a record: the least power of two, at least 64, at which every row list fits."""
    room = _LEAST_ROOM
    needed = [
        -(-len(getattr(tables, name)) // _ROWS_PER_ROOM.get(name, 1))
        for name in Tables.__struct_fields__
        if not name.startswith("n_")
    ]
    needed += [tables.n_branches * tables.n_rules // _BOOKS_PER_ROOM["rule_sum"] + 1]
    needed += [tables.n_legs + tables.n_branches, tables.n_stages + tables.n_payloads]
    while room < max(needed):
        room *= 2
    return room


def _scalar(hint: object) -> str:
    return "i8" if hint is int else "f8"


@functools.cache
def _row_layout(row_type: type[Any]) -> np.dtype[Any]:
    """Layout of one row, a struct or a named tuple: eight bytes a field, in its order."""
    import numpy as np

    return np.dtype([(name, _scalar(hint)) for name, hint in get_type_hints(row_type).items()])


@functools.cache
def _tables_layout(room: int) -> np.dtype[Any]:
    """Layout of the record of all tables."""
    import numpy as np

    fields: list[Any] = []
    for name, hint in get_type_hints(Tables).items():
        if name.startswith("n_"):
            fields.append((name, "i8"))
        else:
            (of,) = get_args(hint)
            layout = "i8" if of is int else _row_layout(of)
            fields.append((name, layout, (room * _ROWS_PER_ROOM.get(name, 1),)))
    return np.dtype(fields)


@functools.cache
def _books_layout(room: int, lines: int) -> np.dtype[Any]:
    """Layout of the record of all books."""
    import numpy as np

    fields: list[Any] = []
    for name, hint in get_type_hints(Books).items():
        (of,) = get_args(hint)
        size = max(1, lines * LINE_WIDTH) if name == "lines" else room * _BOOKS_PER_ROOM.get(name, 1)
        fields.append((name, _scalar(of), (size,)))
    return np.dtype(fields)


def tables_record(tables: Tables) -> NDArray[np.void]:
    """Tables as one record, in an array of one.

    Parameters
    ----------
    tables : Tables
        The rows of a design and its plan.

    Returns
    -------
    numpy.ndarray
        Shape (1,).
    """
    import numpy as np

    record = np.zeros(1, dtype=_tables_layout(room_of(tables)))
    for name in Tables.__struct_fields__:
        value = getattr(tables, name)
        if name.startswith("n_"):
            record[0][name] = value
            continue
        for place, row in enumerate(value):
            cells = row if isinstance(row, int) else tuple(getattr(row, key) for key in row.__struct_fields__)
            record[0][name][place] = cells
    return record


def books_record(tables: Tables, lines: int = 0) -> NDArray[np.void]:
    """Blank books as one record, in an array of one.

    Parameters
    ----------
    tables : Tables
        What will be tallied.
    lines : int
        How many lines of the ledger there is room for.

    Returns
    -------
    numpy.ndarray
        Shape (1,).
    """
    import numpy as np

    record = np.zeros(1, dtype=_books_layout(room_of(tables), lines))
    books = record[0]
    for name, (_, entry) in BLANK.items():
        books[name] = entry
    books["order"] = np.arange(len(books["order"]))
    books["count"][ADD_AT] = -1
    books["count"][ROOM] = lines
    return record


def flat_cells(record: NDArray[np.void]) -> tuple[NDArray[np.float64], dict[str, tuple[int, int]]]:
    """Every cell of a tables record as one array of floats, and where each list starts and how wide its rows are.

    Parameters
    ----------
    record : numpy.ndarray
        From `tables_record`.

    Returns
    -------
    cells : numpy.ndarray
        A view of the record, shape (cells,); integer fields read as floats make no sense in it.
    places : dict of str to tuple of int
        First cell and cells per row, by the name of the list.
    """
    import numpy as np

    places: dict[str, tuple[int, int]] = {}
    fields: Any = record.dtype.fields
    for name, (field, offset) in fields.items():
        places[name] = (offset // 8, field.base.itemsize // 8)
    return record.view(np.float64).reshape(-1), places
