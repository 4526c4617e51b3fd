"""Whoever is refused is told what was expected in the place of what was read."""

import ast
from collections.abc import Iterator
from pathlib import Path

ROOT = Path(__file__).parents[2]
TELLING = {
    ROOT / "sdk/src/burntally/model": {"Violation", "errors.Violation", "tell"},
    ROOT / "service/src/burntally_service": {"Violation", "errors.Violation"},
}


def _tellings() -> Iterator[tuple[str, set[str | None]]]:
    """Where a violation is told, and what is said of it."""
    for room, names in TELLING.items():
        for path in sorted(room.rglob("*.py")):
            for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
                if isinstance(node, ast.Call) and ast.unparse(node.func) in names:
                    yield f"{path.relative_to(ROOT)}:{node.lineno}", {keyword.arg for keyword in node.keywords}


def test_there_are_violations_to_look_at() -> None:
    assert len(list(_tellings())) > 50


def test_every_violation_says_what_was_expected() -> None:
    assert [place for place, said in _tellings() if "expected" not in said] == []
