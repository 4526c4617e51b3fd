"""Both gears of every kernel give the same bits over all doubles, and neither raises."""

import importlib
import inspect
import math
import pkgutil
import struct
import typing
from collections.abc import Callable, Iterator, Sequence
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import burntally_service.kernels as room
from burntally_service.kernels._compile import compiled
from burntally_service.kernels._records import records

# The tally walks tables whose indices must fit each other, so not any double will do; it has laws of its own.
MODULES = sorted(
    found.name for found in pkgutil.iter_modules(room.__path__) if not found.name.startswith(("_", "tally", "books"))
)

NASTY = (0.0, -0.0, 5e-324, -5e-324, 2.3e-308, 1e-200, 1e200, 1.7e308, math.inf, -math.inf, math.nan)
WILD = st.one_of(st.floats(), st.sampled_from(NASTY))
# Figures of the trade, or the guards would refuse nearly every draw.
TAME = st.one_of(st.floats(0.0, 4.0), st.floats(1e-3, 1e4), st.floats(6e6, 5e7), st.sampled_from((0.0, 4e14, math.pi)))


def kernels() -> Iterator[Any]:
    """Every public kernel, by its name."""
    for name in MODULES:
        module = importlib.import_module(f"burntally_service.kernels.{name}")
        for public in module.__all__:
            if inspect.isfunction(kernel := getattr(module, public)):
                yield pytest.param(kernel, id=f"{name}.{public}")


def row_fields(kind: Any) -> tuple[str, ...]:
    """Fields of a named tuple; none for anything else."""
    return getattr(kind, "_fields", ())


def drawn(kind: Any, doubles: st.SearchStrategy[float]) -> st.SearchStrategy[Any]:
    """Anything of a kernel's parameter type."""
    if kind is float:
        return doubles
    if fields := row_fields(kind):
        return st.builds(kind, *([doubles] * len(fields)))
    (item,) = typing.get_args(kind)
    return st.lists(drawn(item, doubles), max_size=4)


def packed(kind: Any, value: Any) -> Any:
    """What the compiled gear takes in place of an argument."""
    if typing.get_origin(kind) is not Sequence:
        return value
    (item,) = typing.get_args(kind)
    return records(item, value) if row_fields(item) else np.array(value, dtype=np.float64)


def bits(value: Any) -> object:
    """What a kernel returns, taken apart, with all NaNs alike."""
    if isinstance(value, tuple):
        return tuple(bits(part) for part in value)
    return "nan" if math.isnan(value) else struct.pack("<d", value)


@pytest.mark.parametrize("kernel", list(kernels()))
def test_gears_give_the_same_bits(kernel: Callable[..., Any]) -> None:
    kinds = [typing.get_type_hints(kernel)[name] for name in inspect.signature(kernel).parameters]
    twin = compiled(kernel)

    @given(st.one_of(*(st.tuples(*(drawn(kind, doubles) for kind in kinds)) for doubles in (WILD, TAME))))
    def check(arguments: tuple[Any, ...]) -> None:
        sent = [packed(kind, value) for kind, value in zip(kinds, arguments, strict=True)]
        assert bits(kernel(*arguments)) == bits(twin(*sent))

    check()
