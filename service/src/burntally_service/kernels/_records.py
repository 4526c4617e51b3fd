"""What the compiled gear takes in place of rows of floats: structured arrays."""

from __future__ import annotations

import functools
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any, get_type_hints

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

__all__ = ["records"]


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


@functools.cache
def _row_layout(row_type: type[Any]) -> np.dtype[Any]:
    """Layout of one row: a double for each field, in its order."""
    import numpy as np

    return np.dtype([(name, "f8") for name in get_type_hints(row_type)])
