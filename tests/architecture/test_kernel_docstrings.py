"""A kernel's docstring is its specification: quantities with units, source, an example that runs."""

import doctest
import importlib
import inspect
import pkgutil
import re
from collections.abc import Callable
from typing import Any

import pytest

import burntally_service.kernels as room

MODULES = sorted(
    found.name for found in pkgutil.walk_packages(room.__path__, f"{room.__name__}.") if "._" not in found.name
)
UNIT = re.compile(r"\[[^\[\]\n]+\]")


def _kernels() -> list[Any]:
    """Pytest parameters: every public function that the room defines, under its dotted name."""
    found = []
    for module_name in MODULES:
        module = importlib.import_module(module_name)
        for name in getattr(module, "__all__", ()):
            kernel = getattr(module, name)
            if inspect.isfunction(kernel) and kernel.__module__ == module_name:
                found.append(pytest.param(kernel, id=f"{module_name.removeprefix(room.__name__)[1:]}.{name}"))
    return found


def _section(kernel: Callable[..., object], title: str) -> str:
    """Text under a NumPy heading, up to the next one; empty where the heading is missing."""
    text = inspect.getdoc(kernel) or ""
    found = re.search(rf"^{title}\n-+\n(.*?)(?=^\w[\w ]*\n-{{3,}}$|\Z)", text, flags=re.MULTILINE | re.DOTALL)
    return found.group(1).strip("\n") if found else ""


def _entries(section: str) -> dict[str, str]:
    """Name of each documented parameter and the text that follows it; `a, b : float` documents two."""
    heads = list(re.finditer(r"^(\w+(?:, \w+)*) : .*$", section, flags=re.MULTILINE))
    ends = [head.start() for head in heads[1:]] + [len(section)]
    return {
        name: section[head.end() : end]
        for head, end in zip(heads, ends, strict=True)
        for name in head.group(1).split(", ")
    }


def _explains_itself(kernel: Callable[..., object], name: str) -> bool:
    """Whether a parameter is a row or a function, whose own definition says the units."""
    kind = str(inspect.signature(kernel).parameters[name].annotation)
    plain = {"float", "int", "bool", "Sequence", "tuple", "NDArray", "FloatArray"}
    return re.split(r"\W+", kind.partition("[")[0])[-1] not in plain


@pytest.mark.parametrize("kernel", _kernels())
def test_parameters_are_those_of_the_signature(kernel: Callable[..., object]) -> None:
    assert list(_entries(_section(kernel, "Parameters"))) == list(inspect.signature(kernel).parameters)


@pytest.mark.parametrize("kernel", _kernels())
def test_every_parameter_has_a_unit(kernel: Callable[..., object]) -> None:
    entries = _entries(_section(kernel, "Parameters"))
    assert [name for name, text in entries.items() if not (UNIT.search(text) or _explains_itself(kernel, name))] == []


@pytest.mark.parametrize("kernel", _kernels())
def test_what_is_returned_has_a_unit(kernel: Callable[..., object]) -> None:
    assert UNIT.search(_section(kernel, "Returns"))


@pytest.mark.parametrize("kernel", _kernels())
def test_a_source_is_named(kernel: Callable[..., object]) -> None:
    assert re.search(r"^\.\. \[1\] \S", _section(kernel, "References"), flags=re.MULTILINE)


@pytest.mark.parametrize("kernel", _kernels())
def test_an_example_is_given(kernel: Callable[..., object]) -> None:
    assert ">>> " in _section(kernel, "Examples")


@pytest.mark.parametrize("name", MODULES)
def test_examples_run(name: str) -> None:
    assert doctest.testmod(importlib.import_module(name)).failed == 0
