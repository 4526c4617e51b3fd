"""Replaying a tape: its program, an operation at a time, over blocks of lanes."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from burntally_service.kernels._tape import (
    ADD,
    DIVIDE,
    EXPM1,
    IS_LESS,
    IS_NOT_MORE,
    LOAD,
    LOG,
    MULTIPLY,
    NEGATE,
    STORE,
    SUBTRACT,
)

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    Lanes = NDArray[np.float64]

__all__ = ["replay"]


def replay(program: NDArray[np.int64], columns: Lanes, outcomes: Lanes, kept: Lanes, block: Lanes) -> None:
    """Replay a tape for every lane.

    Written so that each inner loop is one operation over one block, which stays in the processor's nearest memory and
    which compilers turn into vector instructions.

    Parameters
    ----------
    program : numpy.ndarray of int
        Shape (n_lines, 4): operation, slot filled, slots read, [-].
    columns : numpy.ndarray
        Shape (n_columns, n_lanes): the numbers of each lane.
    outcomes : numpy.ndarray
        Shape (n_outcomes, n_lanes); changed.
    kept : numpy.ndarray
        Shape (n_lanes,): 1 where every guard told what it did when the tape was recorded, 0 elsewhere, where the
        outcomes mean nothing; changed, [-].
    block : numpy.ndarray
        Shape (n_slots, width), the constants in its first rows; changed.
    """
    lanes = kept.shape[0]
    width = block.shape[1]
    for start in range(0, lanes, width):
        size = min(width, lanes - start)
        alike = kept[start : start + size]
        alike[:] = 1.0
        for line in range(program.shape[0]):
            op, to, first, second = program[line, 0], program[line, 1], program[line, 2], program[line, 3]
            if op == LOAD:
                block[to, :size] = columns[first, start : start + size]
            elif op == STORE:
                outcomes[to, start : start + size] = block[first, :size]
            elif op >= IS_LESS:
                _guard(op, to == 1, block[first], block[second], alike)
            elif op >= NEGATE:
                _apply(op, block[first], block[to], size)
            else:
                _combine(op, block[first], block[second], block[to], size)


def _combine(op: int, left: Lanes, right: Lanes, result: Lanes, size: int) -> None:
    """An operation of two numbers."""
    if op == ADD:
        for lane in range(size):
            result[lane] = left[lane] + right[lane]
    elif op == SUBTRACT:
        for lane in range(size):
            result[lane] = left[lane] - right[lane]
    elif op == MULTIPLY:
        for lane in range(size):
            result[lane] = left[lane] * right[lane]
    elif op == DIVIDE:
        for lane in range(size):
            result[lane] = left[lane] / right[lane]


def _apply(op: int, operand: Lanes, result: Lanes, size: int) -> None:
    """An operation of one number."""
    if op == NEGATE:
        for lane in range(size):
            result[lane] = -operand[lane]
    elif op == EXPM1:
        for lane in range(size):
            result[lane] = math.expm1(operand[lane])
    elif op == LOG:
        for lane in range(size):
            result[lane] = math.log(operand[lane])


def _guard(op: int, told: bool, left: Lanes, right: Lanes, alike: Lanes) -> None:
    """Strike out the lanes for which a comparison tells something else."""
    same, other = (1.0, 0.0) if told else (0.0, 1.0)
    if op == IS_LESS:
        for lane in range(len(alike)):
            alike[lane] *= same if left[lane] < right[lane] else other
    elif op == IS_NOT_MORE:
        for lane in range(len(alike)):
            alike[lane] *= same if left[lane] <= right[lane] else other
    else:
        for lane in range(len(alike)):
            alike[lane] *= same if left[lane] == right[lane] else other
