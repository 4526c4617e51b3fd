"""Environments of their own for tools that do not get along with the project's, made on first use."""

import hashlib
import subprocess
import sys
from collections.abc import Callable, Sequence
from pathlib import Path

__all__ = ["environment"]


def environment(
    home: Path,
    pins: Sequence[Path],
    *,
    options: Sequence[str] = (),
    finish: Callable[[Path], None] = lambda _: None,
) -> Path:
    """Find the environment for these very pins, or make it.

    Parameters
    ----------
    home : Path
        Where environments of the kind are kept, each named by the digest of its pins.
    pins : sequence of Path
        Files that say what is in it; the first is a hashed file of requirements.
    options : sequence of str
        More options of pip.
    finish : callable
        What else it takes, done in the folder of the environment.

    Returns
    -------
    Path
        Folder of a virtual environment.
    """
    digest = hashlib.sha256(b"\0".join(path.read_bytes() for path in pins))
    folder = home / digest.hexdigest()[:16]
    if not folder.exists():
        # Made under another name first: an install that breaks off must not look finished.
        unfinished = home / f"{folder.name}.unfinished"
        subprocess.run([sys.executable, "-m", "venv", "--clear", str(unfinished)], check=True)
        pip = [str(unfinished / "bin/python"), "-m", "pip", "install", "-q", "--disable-pip-version-check"]
        wanted = ["--no-deps", "--require-hashes", *options, "-r", str(pins[0])]
        subprocess.run([*pip, *wanted], check=True, capture_output=True)
        finish(unfinished)
        unfinished.rename(folder)
    return folder
