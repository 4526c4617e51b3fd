"""The referee: poliastro, run live in an environment of its own."""

import json
import subprocess
from collections.abc import Callable, Iterator, Mapping, Sequence
from pathlib import Path
from typing import Any

import pytest

from tests.environments import environment

ROOT = Path(__file__).parents[2]
_OLDER_PYTHON = ("--ignore-requires-python",)

Ask = Callable[[Sequence[Mapping[str, Any]]], list[dict[str, Any]]]


@pytest.fixture(scope="session")
def ask() -> Iterator[Ask]:
    """Put questions to the referee, all of a kind at once."""
    # poliastro 0.17 says that it wants Python 3.10 or older, and runs on 3.11.
    folder = environment(ROOT / ".venv-referee", [ROOT / "requirements-referee.txt"], options=_OLDER_PYTHON)
    command = [str(folder / "bin/python"), "-W", "ignore", str(Path(__file__).parent / "referee.py")]
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
