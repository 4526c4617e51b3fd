"""What a script sees: exit codes, and what stands on which stream."""

import json
from collections.abc import Callable
from contextlib import redirect_stdout
from io import StringIO
from pathlib import Path
from typing import Any

import msgspec
import pytest

from burntally import __version__
from burntally.cli import main
from burntally.cli.exit_codes import ExitCode
from burntally.cli.text import render
from burntally.client import errors
from burntally.client.inprocess import InProcessSender
from burntally.client.messages import Reply, Request
from burntally.model.budget import Budget
from burntally.model.errors import NotFoundError, UncomputableError, Violation
from tests.cli import made_budgets

DESIGN = """\
format = 1

[vehicle]
name = "Meridian tug"
stages = [{ name = "tug", dry_mass = "420 kg", propellants = [{ mass = "1 t" }], engines = [{ thrust = "2 kN", isp = 320 }] }]

[mission]
start = { kind = "orbit", body = "earth", altitude = "400 km" }
legs = [{ kind = "transfer", to = { altitude = "800 km" } }]
"""  # noqa: E501 -- a file as a person would write it

Installed = Callable[[Any], None]


@pytest.fixture
def design(tmp_path: Path) -> str:
    path = tmp_path / "tug.toml"
    path.write_text(DESIGN, encoding="utf-8")
    return str(path)


@pytest.fixture
def installed(monkeypatch: pytest.MonkeyPatch) -> Installed:
    """Put a function in place of the installed service."""

    def install(offer: Any) -> None:
        monkeypatch.setattr("burntally.client.connecting.installed", lambda _: offer)
        monkeypatch.setattr("burntally.client.inprocess.installed", lambda _: offer)

    return install


def answering(budget: Budget) -> Any:
    return lambda *_: msgspec.json.encode(budget)


def raising(error: BaseException) -> Any:
    def offer(*_: Any) -> bytes:
        raise error

    return offer


@pytest.mark.parametrize("name", made_budgets.__all__)
def test_the_exit_code_is_the_verdict(name: str, design: str, installed: Installed) -> None:
    budget = getattr(made_budgets, name)()
    installed(answering(budget))
    assert main(["check", design]) == (0 if budget.closes else 1)


@pytest.mark.parametrize(
    "argv",
    [
        [],
        ["check"],
        ["check", "--format", "pdf", "x.toml"],
        ["check", "--server", "nowhere", "x.toml"],
        ["polish"],
        ["serve", "--port", "many"],
        ["--polish"],
    ],
    ids=" ".join,
)
def test_what_cannot_be_parsed_is_usage(argv: list[str], capsys: pytest.CaptureFixture[str]) -> None:
    assert main(argv) == ExitCode.USAGE
    assert capsys.readouterr().out == ""


@pytest.mark.parametrize("argv", [["--help"], ["check", "--help"], ["serve", "--help"], ["--version"]], ids=" ".join)
def test_what_was_asked_for_is_told(argv: list[str], capsys: pytest.CaptureFixture[str]) -> None:
    assert main(argv) == 0
    assert capsys.readouterr().err == ""


def test_the_version_is_told(capsys: pytest.CaptureFixture[str]) -> None:
    main(["--version"])
    assert capsys.readouterr().out == f"burntally {__version__}\n"


@pytest.mark.parametrize(
    "content",
    ["", "format = ", "format = 1\n", DESIGN.replace("420 kg", "420 s"), DESIGN.replace('tug"', 'tug\u0000"')],
    ids=["empty", "no TOML", "half", "dimension", "no text"],
)
def test_a_file_that_cannot_be_read_as_a_design_is_bad_input(
    content: str, tmp_path: Path, installed: Installed
) -> None:
    installed(answering(made_budgets.closing()))
    path = tmp_path / "bad.toml"
    path.write_text(content, encoding="utf-8")
    assert main(["check", str(path)]) == ExitCode.BAD_INPUT


def test_a_file_that_is_not_there_is_bad_input(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "absent.toml"
    assert main(["check", str(path)]) == ExitCode.BAD_INPUT
    assert capsys.readouterr().err == f"{path}: cannot be read: No such file or directory\n"


def test_every_violation_has_its_line_on_stderr(
    design: str, installed: Installed, capsys: pytest.CaptureFixture[str]
) -> None:
    violations = [
        Violation(pointer="/a", message="is odd", read="3", expected="2"),
        Violation(pointer="", message="is empty"),
    ]
    installed(raising(UncomputableError(violations)))
    assert main(["check", design]) == ExitCode.BAD_INPUT
    told = capsys.readouterr()
    assert told.out == ""
    assert told.err == f"{design}: /a: is odd; read 3; expected 2\n{design}: /: is empty\n"


def test_a_violation_of_the_file_names_its_pointer(
    tmp_path: Path, installed: Installed, capsys: pytest.CaptureFixture[str]
) -> None:
    installed(answering(made_budgets.closing()))
    path = tmp_path / "bad.toml"
    path.write_text(DESIGN.replace("420 kg", "420 s").replace("2 kN", "2 kg"), encoding="utf-8")
    main(["check", str(path)])
    lines = capsys.readouterr().err.splitlines()
    assert [line.split(": ")[1] for line in lines] == [
        "/vehicle/stages/0/dry_mass",
        "/vehicle/stages/0/engines/0/thrust",
    ]


@pytest.mark.parametrize(
    "outcome",
    [
        errors.ConnectionFailed("refused"),
        errors.TimedOut("late"),
        Reply(status=503, body=b""),
        Reply(status=429, body=b""),
        Reply(status=401, body=b""),
    ],
    ids=repr,
)
def test_a_service_out_of_reach_has_its_code(
    outcome: Any, design: str, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    def send_once(*_: object) -> object:
        return outcome

    monkeypatch.setattr("burntally.client.http.HttpSender.send_once", send_once)
    monkeypatch.setattr("time.sleep", lambda _: None)
    assert main(["check", design, "--server", "http://127.0.0.1:1"]) == ExitCode.NOT_REACHABLE
    assert capsys.readouterr().out == ""


@pytest.mark.parametrize(
    "given,sent", [("a-token-of-ours", "a-token-of-ours"), ("new-token\nold-token\n", "new-token"), ("", None)]
)
def test_a_server_is_shown_the_token_of_the_environment(
    given: str, sent: str | None, design: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    shown: list[str | None] = []

    def connect(*_: object, token: str | None, **__: object) -> object:
        shown.append(token)
        raise errors.ConnectionFailed("no matter")

    monkeypatch.setattr("burntally.client.connect", connect)
    monkeypatch.setenv("BURNTALLY_TOKEN", given)
    main(["check", design, "--server", "http://127.0.0.1:1"])
    assert shown == [sent]


def test_a_token_that_cannot_be_sent_is_usage_and_not_told(
    design: str, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.setenv("BURNTALLY_TOKEN", "ünsafe")
    assert main(["check", design, "--server", "http://127.0.0.1:1"]) == ExitCode.USAGE
    told = capsys.readouterr()
    assert (told.out, "BURNTALLY_TOKEN" in told.err, "ünsafe" in told.err) == ("", True, False)


@pytest.mark.parametrize("argv", [["check", "x.toml"], ["serve"]], ids=" ".join)
def test_without_a_service_there_is_none_to_reach(argv: list[str], monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("importlib.metadata.entry_points", lambda **_: ())
    assert main(argv) == ExitCode.NOT_REACHABLE


@pytest.mark.parametrize("offer", [raising(ZeroDivisionError()), lambda *_: b"{}", lambda *_: b"\xff"])
def test_a_service_that_fails_is_internal(offer: Any, design: str, installed: Installed) -> None:
    installed(offer)
    assert main(["check", design]) == ExitCode.INTERNAL


def test_a_fault_of_the_command_itself_is_internal(
    design: str, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.setattr("burntally.cli.check.run", raising(ZeroDivisionError("odd")))
    assert main(["check", design]) == ExitCode.INTERNAL
    assert "ZeroDivisionError: odd" in capsys.readouterr().err


def test_text_is_what_the_budget_says(design: str, installed: Installed, capsys: pytest.CaptureFixture[str]) -> None:
    installed(answering(made_budgets.owing()))
    main(["check", design])
    assert capsys.readouterr().out == render(made_budgets.owing())


def test_json_is_the_services_own_bytes(design: str, installed: Installed, capfdbinary: Any) -> None:
    body = msgspec.json.encode(made_budgets.closing())
    installed(lambda *_: body)
    main(["check", design, "--format", "json"])
    assert capfdbinary.readouterr().out == body + b"\n"


def test_several_files_are_one_json_document_a_line(design: str, installed: Installed, capfd: Any) -> None:
    installed(answering(made_budgets.closing()))
    main(["check", "--format", "json", design, design])
    assert [json.loads(line)["closes"] for line in capfd.readouterr().out.splitlines()] == [True, True]


def test_a_bad_file_has_its_json_line_too(design: str, installed: Installed, tmp_path: Path, capfd: Any) -> None:
    installed(answering(made_budgets.closing()))
    main(["check", "--format", "json", str(tmp_path / "absent.toml"), design])
    assert [json.loads(line) is None for line in capfd.readouterr().out.splitlines()] == [True, False]


def test_a_server_without_the_path_is_no_service(design: str, installed: Installed) -> None:
    installed(raising(NotFoundError([Violation(pointer="", message="is nowhere")])))
    assert main(["check", design]) == ExitCode.NOT_REACHABLE


def test_several_files_have_their_names_above(
    design: str, installed: Installed, capsys: pytest.CaptureFixture[str]
) -> None:
    installed(answering(made_budgets.closing()))
    main(["check", design, design])
    text = f"{design}\n{'=' * len(design)}\n{render(made_budgets.closing())}\n"
    assert capsys.readouterr().out == text * 2


def test_of_several_files_the_worst_counts(design: str, installed: Installed, tmp_path: Path) -> None:
    installed(answering(made_budgets.closing()))
    assert main(["check", str(tmp_path / "absent.toml"), design]) == ExitCode.BAD_INPUT


def test_a_bad_file_does_not_keep_others_from_being_told(
    design: str, installed: Installed, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    installed(answering(made_budgets.closing()))
    main(["check", str(tmp_path / "absent.toml"), design])
    assert "closes, 94.2 m/s to spare" in capsys.readouterr().out


def test_what_the_check_sends_is_the_design(design: str, monkeypatch: pytest.MonkeyPatch, installed: Installed) -> None:
    sent: list[Request] = []

    def send_once(_: object, request: Request, __: float) -> Reply:
        sent.append(request)
        return Reply(status=200, body=msgspec.json.encode(made_budgets.closing()))

    installed(None)
    monkeypatch.setattr(InProcessSender, "send_once", send_once)
    main(["check", design])
    assert json.loads(sent[0].body)["vehicle"]["stages"][0]["dry_mass"] == 420.0


def test_serve_gives_the_service_what_was_typed(installed: Installed) -> None:
    typed: list[tuple[str | None, int | None]] = []
    installed(lambda host, port: typed.append((host, port)))
    assert main(["serve", "--port", "0"]) == 0
    assert typed == [(None, 0)]


@pytest.mark.parametrize(
    "error,code",
    [
        (ValueError("BURNTALLY_PORT: 'many'"), ExitCode.USAGE),
        (SystemExit(3), ExitCode.INTERNAL),
        (SystemExit(0), ExitCode.CLOSES),
        (OSError("address in use"), ExitCode.INTERNAL),
    ],
    ids=repr,
)
def test_a_server_that_cannot_start_says_why(error: BaseException, code: ExitCode, installed: Installed) -> None:
    installed(raising(error))
    assert main(["serve"]) == code


def test_a_stream_that_is_no_terminal_takes_the_text_too(design: str, installed: Installed) -> None:
    installed(answering(made_budgets.closing()))
    with redirect_stdout(StringIO()) as stream:
        main(["check", design])
    assert stream.getvalue() == render(made_budgets.closing())
