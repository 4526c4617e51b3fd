"""The best split of a plane change against searches that know nothing of how it is found."""

import math

import numpy as np
import pytest
from numpy.typing import NDArray

from burntally_service.kernels.manoeuvres import Apsis
from burntally_service.kernels.orbits import orbital_speed
from burntally_service.kernels.transfers import apsis_transfer, bielliptic

DRAWS = 60
MU = 3.986004418e14


def drawn(seed: int, count: int) -> list[tuple[list[float], float]]:
    """Radii and a plane change, every other one of them small."""
    draw = np.random.default_rng(seed)
    wide, small = draw.uniform(0.0, math.pi, DRAWS), 10.0 ** draw.uniform(-6.0, -1.0, DRAWS)
    turns = np.where(np.arange(DRAWS) % 2, wide, small).tolist()
    return list(zip(np.exp(draw.uniform(15.7, 19.8, (DRAWS, count))).tolist(), turns, strict=True))


def cost(r: float, before: float, after: float, turns: NDArray[np.float64]) -> NDArray[np.float64]:
    """Burn at an apsis by the cosine law, for many turns of the plane."""
    v_i, v_f = orbital_speed(MU, r, 0.5 * (r + before)), orbital_speed(MU, r, 0.5 * (r + after))
    squared: NDArray[np.float64] = v_i * v_i + v_f * v_f - 2.0 * v_i * v_f * np.cos(turns)
    return np.sqrt(np.maximum(squared, 0.0))


def shares(turn: float) -> NDArray[np.float64]:
    """Shares of a turn, dense at both ends, where the best one may hide."""
    ends = turn * np.logspace(-8.0, 0.0, 2001)
    return np.unique(np.concatenate([np.linspace(0.0, turn, 4001), ends, turn - ends]))


@pytest.mark.parametrize("place", range(DRAWS))
def test_no_split_in_two_is_cheaper(place: int) -> None:
    (r_1, o_1, r_2, o_2), turn = drawn(11, 4)[place]
    first = shares(turn)
    least = float(np.min(cost(r_1, o_1, r_2, first) + cost(r_2, r_1, o_2, turn - first)))
    # A grid finds the least cost only from above.
    assert apsis_transfer(MU, Apsis(r_1, o_1), Apsis(r_2, o_2), turn).dv == pytest.approx(least, rel=1e-6)
    assert apsis_transfer(MU, Apsis(r_1, o_1), Apsis(r_2, o_2), turn).dv <= least * (1.0 + 1e-9) + 1e-6


@pytest.mark.parametrize("place", range(DRAWS))
def test_no_split_in_three_is_cheaper(place: int) -> None:
    (r_1, o_1, r_b, r_2, o_2), turn = drawn(12, 5)[place]
    grid = np.unique(np.concatenate([np.linspace(0.0, 1.0, 301), np.logspace(-6.0, 0.0, 100)]))
    first, third = (turn * part for part in np.meshgrid(grid, grid))
    second = turn - first - third
    total = cost(r_1, o_1, r_b, first) + cost(r_b, r_1, r_2, second) + cost(r_2, r_b, o_2, third)
    least = float(np.min(np.where(second >= 0.0, total, np.inf)))
    dv = bielliptic(MU, Apsis(r_1, o_1), r_b, Apsis(r_2, o_2), turn).dv
    assert least * (1.0 - 1e-3) <= dv <= least * (1.0 + 1e-9) + 1e-6
