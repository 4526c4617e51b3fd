"""The checkout under test, and the project's own tools as they are installed beside the interpreter."""

import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]


@pytest.fixture(scope="session")
def root() -> Path:
    """Top folder of the checkout."""
    return ROOT


@pytest.fixture(scope="session")
def tracked() -> list[Path]:
    """Every file under version control that is there, relative to the top."""
    listing = subprocess.run(["git", "ls-files", "-z"], cwd=ROOT, check=True, capture_output=True, text=True).stdout
    return [Path(name) for name in listing.split("\0") if name and (ROOT / name).is_file()]


@pytest.fixture
def passes() -> Callable[..., None]:
    """Run a tool at the top of the checkout; fail with all that it prints if it complains."""

    def run(tool: str, *arguments: str) -> None:
        program = Path(sys.executable).with_name(tool)
        done = subprocess.run([program, *arguments], cwd=ROOT, check=False, capture_output=True, text=True)
        if done.returncode:
            pytest.fail(done.stdout + done.stderr, pytrace=False)

    return run
