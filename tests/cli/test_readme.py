"""What the README shows is what happens."""

import json
import re
from pathlib import Path

import pytest

from burntally import connect
from burntally.cli import main

ROOT = Path(__file__).parents[2]
README = (ROOT / "README.md").read_text(encoding="utf-8")
SNIPPETS = re.findall(r"^```python\n(.*?)^```", README, re.DOTALL | re.MULTILINE)
SESSION = re.search(r"^```text\n\$ burntally (?P<typed>.*?)\n(?P<shown>.*?)^…\n```", README, re.DOTALL | re.MULTILINE)
POSTED = re.search(r"curl .*?/v1/budgets .*?-d '(?P<body>.*?)'$", README, re.DOTALL | re.MULTILINE)


@pytest.fixture(autouse=True)
def at_the_top(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)


def test_there_are_snippets() -> None:
    assert len(SNIPPETS) == 2


@pytest.mark.parametrize("snippet", SNIPPETS, ids=range(len(SNIPPETS)))
def test_a_snippet_runs_and_says_something(snippet: str, capsys: pytest.CaptureFixture[str]) -> None:
    exec(compile(snippet, "README.md", "exec"), {})  # noqa: S102 -- the README's own words
    assert capsys.readouterr().out


def test_the_command_prints_what_is_shown(capsys: pytest.CaptureFixture[str]) -> None:
    assert SESSION is not None
    main(SESSION["typed"].split())
    assert capsys.readouterr().out.startswith(SESSION["shown"])


def test_what_is_posted_is_a_design_that_closes() -> None:
    assert POSTED is not None
    with connect() as client:
        assert client.budget(json.loads(POSTED["body"])).closes


def test_the_exit_codes_are_those_of_the_command() -> None:
    from burntally.cli.exit_codes import ExitCode

    assert [int(code) for code in re.findall(r"^\| (\d) \|", README, re.MULTILINE)] == [int(code) for code in ExitCode]
