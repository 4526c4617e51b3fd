"""The tally over many lanes leaves each design the same bits in every list of the books as the tally of it alone."""

import json
import math
import struct
from collections.abc import Sequence
from itertools import chain
from pathlib import Path
from typing import Any

import msgspec
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from burntally.model.decode import decode_builtins
from burntally.model.design import Design
from burntally_service.budget.drawing import draw
from burntally_service.kernels.tally import tally
from burntally_service.kernels.tally_books import blank_books
from burntally_service.kernels.tally_lanes import Cell, tally_lanes, with_cells
from burntally_service.kernels.tally_rows import Books, Tables
from tests.laws.drawn_designs import designs

BOOKS = sorted((Path(__file__).parents[1] / "published" / "books").glob("*.json"))
LANES = 12


def tables_of(design: Design) -> Tables:
    """Tables of a design as the last tally of its budget read them."""
    return draw(design, with_slack=False).lowered.tables


def drawn_lanes(tables: Tables, seed: int) -> tuple[list[Cell], NDArray[np.float64]]:
    """Numbers for the masses, isp and amounts of a design, so far apart that the lanes go ways of their own."""
    cells: list[Cell] = [("items", row, "mass") for row in range(tables.n_items)]
    cells += [("loads", row, "mass") for row in range(tables.n_loads)]
    cells += [("engines", row, "isp") for row in range(tables.n_engines)]
    cells += [("steps", row, "amount") for row, step in enumerate(tables.steps) if math.isfinite(step.amount)]
    nominal = np.array([getattr(getattr(tables, name)[row], field) for name, row, field in cells])
    spread = np.random.Generator(np.random.Philox(seed)).uniform(0.6, 1.4, (len(cells), LANES))
    # The first lane is the design itself, and two lanes are alike, as in a table of few values.
    spread[:, 0] = 1.0
    spread[:, 1] = spread[:, 2]
    return cells, nominal[:, None] * spread


def everything(books: Books) -> Sequence[float]:
    """All that the books hold, but for the lines, of which there are none."""
    return list(chain.from_iterable(getattr(books, name) for name in Books.__struct_fields__ if name != "lines"))


def alone(tables: Tables, cells: Sequence[Cell], numbers: Sequence[float]) -> Sequence[float]:
    """The same of one design."""
    filled = with_cells(tables, cells, numbers)
    books = blank_books(filled, 0)
    tally(filled, books)
    return everything(books)


def bits(numbers: Sequence[float]) -> list[bytes]:
    return [struct.pack("<d", number) for number in numbers]


def agree(tables: Tables, seed: int) -> bool:
    """Tell whether all lanes have the bits of their design alone."""
    cells, columns = drawn_lanes(tables, seed)
    found = tally_lanes(tables, cells, columns, everything)
    return all(
        bits(found[:, lane].tolist()) == bits(alone(tables, cells, [float(cell) for cell in columns[:, lane]]))
        for lane in range(LANES)
    )


@pytest.mark.parametrize("path", BOOKS, ids=lambda path: path.stem)
def test_every_lane_has_the_bits_of_its_design_alone(path: Path) -> None:
    design = msgspec.convert(json.loads(path.read_text())["design"], Design)
    assert agree(tables_of(design), 5)


@settings(max_examples=settings().max_examples * 3 // 5)
@given(plain=designs(), seed=st.integers(0, 2**32))
def test_every_lane_of_a_drawn_design_has_the_bits_of_its_design_alone(plain: dict[str, Any], seed: int) -> None:
    assert agree(tables_of(decode_builtins(Design, plain)), seed)
