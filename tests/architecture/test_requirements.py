"""What is installed is pinned, hashed, and the least that is needed."""

import re
from pathlib import Path

import pytest

FILES = [
    "requirements.txt",
    "requirements-dev.txt",
    "requirements-referee.txt",
    "requirements-release.txt",
    "requirements-clients.txt",
]


def _pins(path: Path) -> dict[str, str]:
    """Each requirement's name and marker, with the version that it is held at."""
    found = re.findall(r"^([\w.-]+)==(\S+)(?: ; (.+?))? \\$", path.read_text(encoding="utf-8"), flags=re.MULTILINE)
    return {f"{name} {marker}".strip(): version for name, version, marker in found}


@pytest.mark.parametrize("name", FILES)
def test_every_line_is_a_pin_or_a_hash(name: str, root: Path) -> None:
    lines = (root / name).read_text(encoding="utf-8").splitlines()
    shape = re.compile(r"[\w.-]+==\S+( ; .+)? \\|    --hash=sha256:[0-9a-f]{64}( \\)?")
    assert [line for line in lines if not shape.fullmatch(line)] == []


def test_tests_run_on_the_versions_that_are_delivered(root: Path) -> None:
    assert _pins(root / "requirements.txt").items() <= _pins(root / "requirements-dev.txt").items()


@pytest.mark.parametrize("name", ["pydantic", "advanced-alchemy"])
def test_what_slows_every_start_stays_out(name: str, root: Path) -> None:
    # Installed, either one is imported by the web framework, which then takes a second more to start.
    assert name not in _pins(root / "requirements.txt")
