"""Columns of text that line up, and numbers that read well in them."""

from collections.abc import Sequence
from dataclasses import dataclass
from textwrap import wrap
from typing import Final

__all__ = ["ABSENT", "Column", "grouped", "hang", "line_up", "mass_decimals"]

ABSENT: Final = "-"

_GAP: Final = "  "
_WIDTH: Final = 118
_WIDTH_MIN: Final = 50


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """One column: its head, its unit (said once, below the head), and its cells.

    Parameters
    ----------
    head, unit : str
        Header lines.
    cells : sequence of str
        One for each row.
    is_words : bool
        Words stand to the left, numbers to the right.
    """

    head: str
    unit: str = ""
    cells: Sequence[str]
    is_words: bool = False

    def lines(self) -> list[str]:
        """Pad header and cells to one width."""
        rows = [self.head, self.unit, *self.cells]
        width = max(map(len, rows))
        return [row.ljust(width) if self.is_words else row.rjust(width) for row in rows]


def line_up(columns: Sequence[Column], *, indent: str = _GAP) -> str:
    """Set columns side by side.

    Parameters
    ----------
    columns : sequence of Column
        All with the same number of cells.
    indent : str
        Put before every line.

    Returns
    -------
    str
        Two header lines and the rows; no spaces at the ends of lines, no newline at the end.
    """
    rows = zip(*(column.lines() for column in columns), strict=True)
    return "\n".join((indent + _GAP.join(row)).rstrip() for row in rows)


def hang(head: str, words: str) -> list[str]:
    """Break words into lines that hang to the right of a head.

    Parameters
    ----------
    head : str
        Stands before the first line, and its width before the others.
    words : str
        One paragraph. Words are not broken, so that a pointer stays one.

    Returns
    -------
    list of str
        At least one line.
    """
    width = max(_WIDTH_MIN, _WIDTH - len(head))
    lines = wrap(words, width, break_long_words=False, break_on_hyphens=False) or [""]
    return [(lead + line).rstrip() for lead, line in zip([head, *[" " * len(head)] * len(lines)], lines, strict=False)]


def grouped(number: float | None, *, decimals: int = 1) -> str:
    """Write a number with its thousands apart; a dash where there is none."""
    if number is None:
        return ABSENT
    rounded = round(number, decimals) + 0.0  # minus zero would read as a shortfall
    return f"{rounded:,.{decimals}f}".replace(",", " ")


def mass_decimals(largest: float) -> int:
    """Decimals that show a mass column to about a thousandth of its largest entry, and never to less than 100 g."""
    return next((decimals for bound, decimals in ((100.0, 1), (10.0, 2)) if largest >= bound), 3)
