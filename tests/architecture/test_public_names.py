"""Every public module says what is public in it."""

import ast
import importlib
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
SOURCES = [ROOT / "sdk/src", ROOT / "service/src"]


def _public_modules() -> list[str]:
    paths = [path.relative_to(source) for source in SOURCES for path in sorted(source.rglob("*.py"))]
    names = [".".join(path.with_suffix("").parts).removesuffix(".__init__") for path in paths]
    return [name for name in names if not any(part.startswith("_") for part in name.split("."))]


def _defined(name: str) -> set[str]:
    """Public classes and functions that a module defines at its top."""
    source = Path(importlib.import_module(name).__file__ or "").read_text(encoding="utf-8")
    definitions = (ast.ClassDef, ast.FunctionDef, ast.AsyncFunctionDef)
    found = {node.name for node in ast.parse(source).body if isinstance(node, definitions)}
    return {name for name in found if not name.startswith("_")}


@pytest.mark.parametrize("name", _public_modules())
def test_what_is_listed_is_there(name: str) -> None:
    module = importlib.import_module(name)
    assert [entry for entry in getattr(module, "__all__", ()) if not hasattr(module, entry)] == []


@pytest.mark.parametrize("name", _public_modules())
def test_what_is_public_is_listed(name: str) -> None:
    assert _defined(name) <= set(getattr(importlib.import_module(name), "__all__", ()))
