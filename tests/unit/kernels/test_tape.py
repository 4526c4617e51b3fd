"""A tape holds all that was done with its numbers, and holds for no lane that would have gone another way."""

import math
from collections.abc import Callable, Sequence
from types import FunctionType
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray

from burntally_service.kernels import rocket
from burntally_service.kernels._lanes import in_lanes
from burntally_service.kernels._tape import Number, record, recording


def as_kernel(function: Callable[..., Any]) -> FunctionType:
    """Pass a function off as one of the kernels."""
    assert isinstance(function, FunctionType)
    copy = FunctionType(function.__code__, function.__globals__, function.__name__)
    copy.__module__ = rocket.__name__
    return copy


def folded(left: float, right: float) -> float:
    """Something with every operation and every comparison."""
    total = 3.0 - left + right * 2 - (-left) / right + 1.0 / left
    total += math.log(left) if left < right else math.expm1(-right)
    total = max(total, 0.0)
    if left <= 1.0 or right >= 2.5 or left == right or total > 9.0:
        total -= min(left, 0.25)
    return 1.5 * total if left != 2.0 else 1 + total


def lanes_of(*lanes: tuple[float, ...]) -> NDArray[np.float64]:
    return np.array(lanes).T


def through(kernel: FunctionType, columns: NDArray[np.float64]) -> list[float]:
    """First outcome of a kernel for each lane."""
    found = in_lanes(kernel, lambda twin, numbers: [twin(*numbers)], columns)
    return [float(cell) for cell in found[0]]


def test_lanes_that_go_different_ways_have_the_bits_of_each_alone() -> None:
    values = [0.1, 0.5, 1.0, 1.7, 2.0, 2.5, 40.0]
    lanes = [(left, right) for left in values for right in values]
    assert through(as_kernel(folded), lanes_of(*lanes)) == [folded(*lane) for lane in lanes]


def test_more_ways_than_are_recorded_are_run_alone() -> None:
    def counted(number: float) -> float:
        steps = 0.0
        while number > 1.0:
            number /= 2.0
            steps += 1.0
        return steps + number

    lanes = [(2.0**power * 1.25,) for power in range(100)]
    assert through(as_kernel(counted), lanes_of(*lanes)) == [counted(*lane) for lane in lanes]


def test_more_lanes_than_a_block_holds() -> None:
    columns = np.array([np.linspace(0.1, 3.0, 5000), np.linspace(4.0, 0.2, 5000)])
    expected = [folded(float(left), float(right)) for left, right in columns.T]
    assert through(as_kernel(folded), columns) == expected


def test_an_outcome_may_be_a_number_that_came_in_or_a_constant() -> None:
    def same(number: float) -> tuple[float, float]:
        return number, -0.0

    found = in_lanes(as_kernel(same), lambda twin, numbers: twin(*numbers), lanes_of((1.0,), (2.0,)))
    assert found.tolist() == [[1.0, 2.0], [-0.0, -0.0]]
    assert np.signbit(found[1]).all()


@pytest.mark.parametrize("first", [0.0, 4.0])
def test_a_lane_that_alone_would_raise_is_nan_and_spoils_no_other(first: float) -> None:
    def inverse_root(number: float) -> float:
        return 1.0 / (1.0 / number) + math.log(number + 1.0) + math.expm1(number)

    values = [first, 4.0, 0.0, -3.0, 1e3, 1.0]
    found = through(as_kernel(inverse_root), lanes_of(*((value,) for value in values)))
    expected = [inverse_root(value) if value in {1.0, 4.0} else math.nan for value in values]
    assert found == pytest.approx(expected, rel=0.0, nan_ok=True)


def test_what_no_outcome_rests_on_is_left_out() -> None:
    def wasteful(numbers: Sequence[Number]) -> Sequence[Number]:
        numbers[0] * numbers[1]
        return [numbers[0] + 1.0]

    tape = record(wasteful, [1.0, 2.0])
    # A load, an addition, a store.
    assert len(tape.program) == 3


def test_what_is_done_twice_is_written_once() -> None:
    tape = record(lambda numbers: [numbers[0] / 2.0, numbers[0] / 2.0], [1.0])
    assert len(tape.program) == 4


@pytest.mark.parametrize("escape", [float, int, math.sqrt, math.log, hash])
def test_a_number_never_leaves_its_tape(escape: Callable[[Any], object]) -> None:
    with pytest.raises(TypeError):
        record(lambda numbers: [escape(numbers[0])], [2.0])


def test_a_kernel_with_a_function_that_is_not_recorded_is_refused() -> None:
    def rooted(number: float) -> float:
        return math.sqrt(number)

    with pytest.raises(AttributeError):
        record(lambda numbers: [recording(as_kernel(rooted))(numbers[0])], [2.0])


def test_no_lanes_give_no_outcomes() -> None:
    found = in_lanes(as_kernel(folded), lambda twin, numbers: [twin(*numbers)], np.empty((2, 0)))
    assert found.size == 0
