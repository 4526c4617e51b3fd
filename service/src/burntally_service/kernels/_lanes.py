"""Many lanes of numbers through kernels that choose: each way through them is recorded once and replayed."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from contextlib import suppress
from typing import TYPE_CHECKING, Any, Final

import numpy as np

from burntally_service.kernels._compile import compiled
from burntally_service.kernels._replay import replay
from burntally_service.kernels._tape import Tape, record, recording

if TYPE_CHECKING:
    from numpy.typing import NDArray

__all__ = ["in_lanes"]

Run = Callable[[Callable[..., Any], Sequence[Any]], Sequence[Any]]

WIDTH: Final = 1024
"""Lanes of a block: long enough for vector instructions, short enough that all slots stay in the second-level cache."""

MOST_WAYS: Final = 64
"""Lanes whose way is not among so many are few, and each is run by itself."""


def in_lanes(kernel: Callable[..., Any], run: Run, columns: NDArray[np.float64]) -> NDArray[np.float64]:
    """Run a kernel for each lane, with the bits that it would give each of them alone.

    Parameters
    ----------
    kernel : function
        Plain function of the kernels package.
    run : callable
        Takes the kernel, or what stands for it, and the numbers of one lane; returns the lane's outcomes. It does no
        arithmetic that needs `math`.
    columns : numpy.ndarray
        Shape (n_columns, n_lanes).

    Returns
    -------
    numpy.ndarray
        Outcomes, shape (n_outcomes, n_lanes); NaN in a lane for which the kernel alone would raise.
    """
    lanes = columns.shape[1]
    waiting = np.arange(lanes, dtype=np.int64)
    outcomes = np.empty((0, lanes))
    for _ in range(MOST_WAYS):
        if not len(waiting):
            return outcomes
        here = columns if len(waiting) == lanes else columns[:, waiting]
        tape = _recorded(kernel, run, here[:, 0])
        if tape is None:
            waiting = waiting[1:]
            continue
        found, kept = _replayed(tape, here)
        if kept.all() and len(kept) == lanes:
            return found
        if outcomes.shape[0] != tape.n_outcomes:
            outcomes = np.full((tape.n_outcomes, lanes), np.nan)
        outcomes[:, waiting[kept]] = found[:, kept]
        waiting = waiting[~kept]
    for lane in waiting:
        with suppress(ArithmeticError, ValueError):
            outcomes[:, lane] = run(kernel, [float(cell) for cell in columns[:, lane]])
    return outcomes


def _recorded(kernel: Callable[..., Any], run: Run, lane: NDArray[np.float64]) -> Tape | None:
    """Record the way of a lane; None where it has no end."""
    try:
        return record(lambda numbers: run(recording(kernel), numbers), [float(cell) for cell in lane])
    except (ArithmeticError, ValueError):
        return None


def _replayed(tape: Tape, columns: NDArray[np.float64]) -> tuple[NDArray[np.float64], NDArray[np.bool_]]:
    """Outcomes of all lanes, and for which of them the tape holds."""
    lanes = columns.shape[1]
    outcomes = np.empty((tape.n_outcomes, lanes))
    kept = np.empty(lanes)
    block = np.empty((tape.n_slots, WIDTH))
    block[: len(tape.constants)] = np.array(tape.constants)[:, None]
    compiled(replay)(np.array(tape.program, dtype=np.int64), columns, outcomes, kept, block)
    return outcomes, kept > 0.0
