"""A release is refused while it rests on a licence that nobody has agreed to."""

import json
import subprocess
import sys
from pathlib import Path

import pytest


@pytest.fixture
def refuses(root: Path) -> "Refuses":
    """The release's check, asked of one package."""
    return Refuses(root / ".ci/licences.py")


class Refuses:
    """Runs the check as the release does."""

    def __init__(self, program: Path) -> None:
        self.program = program

    def __call__(self, *licences: str) -> str:
        """Give the names that it refuses; a package is named after its licence."""
        listed = json.dumps([{"Name": licence, "License": licence} for licence in licences])
        done = subprocess.run([sys.executable, self.program], input=listed, check=False, capture_output=True, text=True)
        assert done.returncode == bool(done.stderr)
        return done.stderr


@pytest.mark.parametrize(
    "licence",
    ["MIT", "Apache-2.0 OR GPL-2.0-only", "BSD-2-Clause AND Apache-2.0 WITH LLVM-exception", "MIT License; 0BSD"],
)
def test_a_permissive_licence_is_taken(licence: str, refuses: Refuses) -> None:
    assert refuses(licence) == ""


@pytest.mark.parametrize(
    "licence",
    ["UNKNOWN", "GPL-3.0-only", "MIT AND GPL-2.0-only", "MIT License; GNU Affero General Public License v3"],
)
def test_any_other_is_refused(licence: str, refuses: Refuses) -> None:
    assert refuses("MIT", licence) == f"{licence}: {licence}\n"


def test_an_empty_list_shows_nothing(refuses: Refuses) -> None:
    assert refuses() == "no package at all\n"
