"""The README's two command lines do what the README says they do."""

import os
import re
import shutil
import subprocess
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
LINES = [line for line in (ROOT / "README.md").read_text(encoding="utf-8").splitlines() if line.startswith("python3 ")]


@pytest.fixture
def clone(tmp_path: Path) -> Path:
    """A copy of the checkout as a fresh clone has it: no environment, nothing built."""
    listing = subprocess.run(["git", "ls-files", "-z"], cwd=ROOT, check=True, capture_output=True, text=True).stdout
    for name in filter(None, listing.split("\0")):
        target = tmp_path / "clone" / name
        target.parent.mkdir(parents=True, exist_ok=True)
        shutil.copy2(ROOT / name, target)
    return tmp_path / "clone"


def test_there_are_two_commands() -> None:
    assert len(LINES) == 2


def test_the_first_command_prints_a_verdict(clone: Path) -> None:
    # The tests' own environment must not leak in, as it does not on another machine.
    environment = {name: value for name, value in os.environ.items() if not name.startswith(("PYTHON", "VIRTUAL_ENV"))}
    done = subprocess.run(
        ["bash", "-c", LINES[0]], cwd=clone, env=environment, check=False, capture_output=True, text=True
    )
    assert (done.returncode, re.match(r"closes, [\d .]+ m/s to spare", done.stdout) is not None) == (0, True), done


def test_the_second_command_is_what_ci_runs() -> None:
    # Not run here: it is the line that runs this very test.
    pattern = re.search(r"grep -E '(.+)' README\.md", (ROOT / ".ci/run").read_text(encoding="utf-8"))
    assert pattern is not None
    assert [line for line in LINES if re.search(pattern.group(1), line)] == LINES[1:]
