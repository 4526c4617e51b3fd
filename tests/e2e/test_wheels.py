"""The two wheels carry every file of their package, data and type marker included."""

import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]


def _tracked(folder: str) -> set[str]:
    listing = subprocess.run(
        ["git", "ls-files", "-z", "."], cwd=ROOT / folder, check=True, capture_output=True, text=True
    )
    return {name for name in listing.stdout.split("\0") if name}


@pytest.mark.parametrize("dist", ["sdk", "service"])
def test_a_wheel_carries_its_whole_package(dist: str, tmp_path: Path) -> None:
    build: list[str | Path] = [
        sys.executable,
        "-m",
        "pip",
        "wheel",
        "-q",
        "--no-deps",
        "--no-build-isolation",
        "-w",
        tmp_path,
        f"./{dist}",
    ]
    subprocess.run(build, cwd=ROOT, check=True, capture_output=True)
    (wheel,) = tmp_path.glob("*.whl")
    assert _tracked(f"{dist}/src") - set(zipfile.ZipFile(wheel).namelist()) == set()
