"""The referee: poliastro, run live in an environment of its own."""

import hashlib
import json
import subprocess
import sys
from collections.abc import Callable, Iterator, Mapping, Sequence
from pathlib import Path
from typing import Any

import pytest

ROOT = Path(__file__).parents[2]
PINS = ROOT / "requirements-referee.txt"
HOME = ROOT / ".venv-referee"

Ask = Callable[[Sequence[Mapping[str, Any]]], list[dict[str, Any]]]


def _environment() -> Path:
    """Python of the referee's environment, made on first use for these very pins."""
    folder = HOME / hashlib.sha256(PINS.read_bytes()).hexdigest()[:16]
    if not folder.exists():
        # Made under another name first: an install that breaks off must not look finished.
        unfinished = HOME / f"{folder.name}.unfinished"
        subprocess.run([sys.executable, "-m", "venv", "--clear", str(unfinished)], check=True)
        # poliastro 0.17 says that it wants Python 3.10 or older, and runs on 3.11.
        options = ["-q", "--disable-pip-version-check", "--no-deps", "--ignore-requires-python", "--require-hashes"]
        pip = [str(unfinished / "bin/python"), "-m", "pip", "install", *options, "-r", str(PINS)]
        subprocess.run(pip, check=True, capture_output=True)
        unfinished.rename(folder)
    return folder / "bin/python"


@pytest.fixture(scope="session")
def ask() -> Iterator[Ask]:
    """Put questions to the referee, all of a kind at once."""
    command = [str(_environment()), "-W", "ignore", str(Path(__file__).parent / "referee.py")]
    with subprocess.Popen(command, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True) as process:
        assert process.stdin
        assert process.stdout
        stdin, stdout = process.stdin, process.stdout

        def put(questions: Sequence[Mapping[str, Any]]) -> list[dict[str, Any]]:
            stdin.write(json.dumps(questions) + "\n")
            stdin.flush()
            answers: list[dict[str, Any]] = json.loads(stdout.readline())
            return answers

        yield put
        stdin.close()
