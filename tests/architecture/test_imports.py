"""What two rooms may rest on, beyond what the import contracts of pyproject.toml say by names to avoid."""

import ast
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
MODEL = ROOT / "sdk/src/burntally/model"
KERNELS = ROOT / "service/src/burntally_service/kernels"


def _imported(path: Path) -> set[str]:
    """Top-level names of what a module imports, own rooms in full."""
    names: set[str] = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom) and node.level == 0:
            names.add(node.module or "")
    return {name if name.startswith("burntally") else name.partition(".")[0] for name in names}


def _foreign(path: Path, own: str) -> set[str]:
    return {name for name in _imported(path) if name not in sys.stdlib_module_names and not name.startswith(own)}


@pytest.mark.parametrize("path", sorted(MODEL.glob("**/*.py")), ids=lambda path: path.stem)
def test_the_contract_rests_on_msgspec_and_astropy_units(path: Path) -> None:
    assert _foreign(path, "burntally.model") <= {"msgspec", "astropy"}


def test_one_module_of_the_contract_knows_astropy() -> None:
    assert len([path for path in MODEL.glob("**/*.py") if "astropy" in _imported(path)]) <= 1


# Rows of the tally are structs, which Python reads and makes four times as fast as named tuples. What serves many
# lanes alone, and is imported for them alone, works with arrays.
_ALLOWED = {
    "tally_rows": {"msgspec"},
    "tally_lanes": {"msgspec", "numpy"},
    "_records": {"numpy"},
    "_lanes": {"numpy"},
    "_replay": {"numpy"},
}


@pytest.mark.parametrize(
    "path", [path for path in sorted(KERNELS.glob("**/*.py")) if path.stem != "_compile"], ids=lambda path: path.stem
)
def test_kernels_rest_on_the_standard_library(path: Path) -> None:
    assert _foreign(path, "burntally_service.kernels") <= _ALLOWED.get(path.stem, set())
