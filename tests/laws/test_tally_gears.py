"""The tally compiled writes the same bits into every list of the books as the tally in Python."""

import json
from collections.abc import Callable
from pathlib import Path
from typing import Any

import msgspec
import numpy as np
import pytest
from hypothesis import given, settings

from burntally.model.decode import decode_builtins
from burntally.model.design import Design
from burntally_service.budget.drawing import draw
from burntally_service.kernels._compile import compiled
from burntally_service.kernels._records import books_record, tables_record
from burntally_service.kernels.tally import tally
from burntally_service.kernels.tally_books import blank_books
from burntally_service.kernels.tally_rows import LINES, Books, Tables
from tests.laws.drawn_designs import designs

BOOKS = sorted((Path(__file__).parents[1] / "published" / "books").glob("*.json"))
ROOM_FOR_LINES = 256
"""One layout for all designs here, since each takes a minute to compile anew."""

Gear = Callable[[Any, Any], None]


@pytest.fixture(scope="session")
def twin() -> Gear:
    """The compiled tally, from the disk if it has been compiled before."""
    return compiled(tally)


def tables_of(design: Design) -> Tables:
    """Tables of a design as the last tally of its budget read them."""
    return draw(design, with_slack=False).lowered.tables


def differing(tables: Tables, twin: Gear) -> list[str]:
    """Lists of the books whose bits differ between the gears."""
    plain, record = blank_books(tables, ROOM_FOR_LINES), books_record(tables, ROOM_FOR_LINES)
    tally(tables, plain)
    twin(tables_record(tables)[0], record[0])
    assert plain.count[LINES] <= ROOM_FOR_LINES
    found = []
    for name in Books.__struct_fields__:
        cells = record[0][name]
        expected = np.array(getattr(plain, name), dtype=cells.dtype)
        if expected.tobytes() != cells[: len(expected)].tobytes():
            found.append(name)
    return found


@pytest.mark.parametrize("path", BOOKS, ids=lambda path: path.stem)
def test_both_gears_write_the_same_books(path: Path, twin: Gear) -> None:
    design = msgspec.convert(json.loads(path.read_text())["design"], Design)
    assert differing(tables_of(design), twin) == []


@settings(max_examples=settings().max_examples * 3 // 5)
@given(plain=designs())
def test_both_gears_write_the_same_books_of_drawn_designs(plain: dict[str, Any], twin: Gear) -> None:
    assert differing(tables_of(decode_builtins(Design, plain)), twin) == []
