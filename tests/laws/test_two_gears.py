"""Both gears of every kernel give the same bits over all doubles, and neither raises."""

from __future__ import annotations

import importlib
import inspect
import math
import struct
import typing
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from burntally_service.kernels._compile import compiled, records

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator

MODULES = ("rocket",)

NASTY = (0.0, -0.0, 5e-324, -5e-324, 2.2250738585072014e-308, 1e-200, 1e200, 1.7976931348623157e308, math.inf, -math.inf, math.nan)
doubles = st.one_of(
    st.floats(),
    st.sampled_from(NASTY),
    st.floats(1e-3, 1e12),
    st.floats(0.0, 4.0),
    st.floats(6e6, 5e7),
)


def kernels() -> Iterator[Any]:
    """Every public kernel, by its name."""
    for name in MODULES:
        module = importlib.import_module(f"burntally_service.kernels.{name}")
        for public in module.__all__:
            if inspect.isfunction(kernel := getattr(module, public)):
                yield pytest.param(kernel, id=f"{name}.{public}")


def is_row(annotation: Any) -> bool:
    """Tell a named tuple of floats from a float."""
    return isinstance(annotation, type) and issubclass(annotation, tuple)


def values(annotation: Any) -> st.SearchStrategy[Any]:
    """Draw anything of a kernel's parameter type."""
    if annotation is float:
        return doubles
    if is_row(annotation):
        return st.builds(annotation, *([doubles] * len(annotation._fields)))
    (item,) = typing.get_args(annotation)
    return st.lists(values(item), max_size=4)


def packed(annotation: Any, value: Any) -> Any:
    """Turn an argument into what the compiled gear takes in its place."""
    if typing.get_origin(annotation) is not Sequence:
        return value
    (item,) = typing.get_args(annotation)
    return records(item, value) if is_row(item) else np.array(value, dtype=np.float64)


def bits(value: Any) -> Any:
    """Take apart what a kernel returns, with all NaNs alike."""
    if isinstance(value, tuple):
        return tuple(bits(part) for part in value)
    return "nan" if math.isnan(value) else struct.pack("<d", value)


def annotations(kernel: Callable[..., Any]) -> list[Any]:
    """Types of a kernel's parameters, in order."""
    namespace = {**kernel.__globals__, "Sequence": Sequence}
    hints = typing.get_type_hints(kernel, globalns=namespace)
    return [hints[name] for name in inspect.signature(kernel).parameters]


@pytest.mark.parametrize("kernel", list(kernels()))
def test_gears_give_the_same_bits(kernel: Callable[..., Any]) -> None:
    types = annotations(kernel)
    twin = compiled(kernel)

    @settings(max_examples=300, derandomize=True, database=None, deadline=None)
    @given(st.tuples(*(values(kind) for kind in types)))
    def check(arguments: tuple[Any, ...]) -> None:
        sent = [packed(kind, value) for kind, value in zip(types, arguments, strict=True)]
        assert bits(kernel(*arguments)) == bits(twin(*sent))

    check()
