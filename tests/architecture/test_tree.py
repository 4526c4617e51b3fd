"""The checkout holds what the project is made of, and speaks of the project alone."""

import re
from pathlib import Path

import pytest

TOP = {
    ".ci",
    ".gitignore",
    "CHANGELOG.md",
    "DEVELOPERS.md",
    "LICENSE",
    "README.md",
    "docker",
    "openapi",
    "pyproject.toml",
    "requirements-clients.txt",
    "requirements-dev.txt",
    "requirements-referee.txt",
    "requirements-release.txt",
    "requirements.txt",
    "sdk",
    "service",
    "tests",
}
# This file names what no other may.
ITSELF = Path("tests/architecture/test_tree.py")
UNWANTED = {
    "a path of one machine": re.compile(r"(?<![\w.$}/~-])/(?:work|root|home|tmp)/"),
    "an unfinished place": re.compile(r"\b(?:TODO|FIXME|XXX)\b"),
    "a package registry's host": re.compile(r"pypi\.org|pythonhosted\.org|npmjs\.(?:org|com)|deb\.debian\.org"),
    "a test that does not run": re.compile(r"pytest\.(?:mark\.)?(?:skip|xfail)|importorskip|unittest\.skip"),
}


def _text(path: Path) -> str:
    return path.read_bytes().decode("utf-8", errors="replace")


def test_nothing_else_lies_at_the_top(tracked: list[Path]) -> None:
    assert {path.parts[0] for path in tracked} - TOP == set()


@pytest.mark.parametrize("what", sorted(UNWANTED))
def test_no_file_holds(what: str, root: Path, tracked: list[Path]) -> None:
    found = {str(path): match.group() for path in tracked if (match := UNWANTED[what].search(_text(root / path)))}
    found.pop(str(ITSELF), None)
    assert found == {}


def test_no_room_is_a_drawer(tracked: list[Path]) -> None:
    assert [path for path in tracked if path.stem in {"utils", "util", "common", "helpers", "misc"}] == []


def test_every_directive_names_its_rule(root: Path, tracked: list[Path]) -> None:
    bare = re.compile(r"# (?:type: ignore|pyright: ignore)(?!\[)|# noqa(?!: [A-Z])")
    sources = [path for path in tracked if path.suffix == ".py" and path != ITSELF]
    assert [path for path in sources if bare.search(_text(root / path))] == []
