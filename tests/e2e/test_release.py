"""What the release script leaves: packages and a list of parts, the same to the byte from the same commit."""

import hashlib
import json
import re
import subprocess
from pathlib import Path

import pytest

from tests.e2e.container import ROOT, delivered, plain

pytestmark = pytest.mark.release


def released(folder: Path) -> Path:
    """Clone the checkout's last commit and release it, without tests and image."""
    subprocess.run(["git", "clone", "--quiet", "--no-hardlinks", ROOT, folder], check=True, capture_output=True)
    done = subprocess.run(
        [".ci/release", "packages", "parts", "sums"], cwd=folder, check=False, capture_output=True, text=True
    )
    assert done.returncode == 0, done.stdout + done.stderr
    return folder / "dist"


@pytest.fixture(scope="module")
def dist(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return released(tmp_path_factory.mktemp("release") / "first")


def test_every_file_has_its_checksum(dist: Path) -> None:
    text = (dist / "SHA256SUMS").read_text(encoding="utf-8")
    told = {name: digest for digest, name in re.findall(r"^(\w+)  (.+)$", text, flags=re.MULTILINE)}
    files = [path for path in dist.iterdir() if path.name != "SHA256SUMS"]
    assert told == {path.name: hashlib.sha256(path.read_bytes()).hexdigest() for path in files}


def test_both_packages_are_there_as_wheel_and_as_sources(dist: Path) -> None:
    kinds = sorted(re.sub(r"-[\d.]+(?=-py3|\.tar)", "", path.name) for path in dist.iterdir())
    wheels = [f"{name}-py3-none-any.whl" for name in ("burntally", "burntally_service")]
    assert set(kinds) >= {*wheels, "burntally.tar.gz", "burntally_service.tar.gz"}


def test_the_parts_are_the_pinned_ones_and_ours(dist: Path) -> None:
    (bom,) = dist.glob("*.cdx.json")
    told = json.loads(bom.read_text(encoding="utf-8"))
    parts = [told["metadata"]["component"], *told["components"]]
    assert {plain(part["name"]): part["version"] for part in parts} == delivered()


def test_a_second_release_is_the_same(dist: Path, tmp_path: Path) -> None:
    again = released(tmp_path / "second")
    assert (again / "SHA256SUMS").read_text(encoding="utf-8") == (dist / "SHA256SUMS").read_text(encoding="utf-8")
