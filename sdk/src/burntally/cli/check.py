"""`burntally check`: the budgets of design files, and an exit code that says whether they close."""

import os
import sys
from argparse import ArgumentParser, ArgumentTypeError, Namespace
from pathlib import Path
from typing import TYPE_CHECKING, Final

from burntally.cli.exit_codes import ExitCode

if TYPE_CHECKING:
    from burntally.client import Client
    from burntally.model.budget import Budget

__all__ = ["add_arguments", "run"]

# A person, or a pipeline that pays by the minute, waits: fewer tries than a program would make.
_TRIES: Final = 3
_VARIABLE: Final = "BURNTALLY_TOKEN"


def add_arguments(parser: ArgumentParser) -> None:
    """Say what the command takes."""
    parser.add_argument("files", nargs="+", metavar="FILE", type=Path, help="design file: TOML, YAML or JSON")
    parser.add_argument(
        "--format",
        choices=("text", "json"),
        default="text",
        help="text for people (default), or JSON: one line for each file, null where it is no design",
    )
    parser.add_argument(
        "--server",
        metavar="URL",
        type=_address,
        help=f"ask the service at this address, with the token in {_VARIABLE} if any, not the installed one",
    )


def _address(text: str) -> str:
    if not text.startswith(("http://", "https://")):
        raise ArgumentTypeError(f"an address starts with http:// or https://, not {text!r}")
    return text


def run(arguments: Namespace) -> ExitCode:
    """Check every file.

    Parameters
    ----------
    arguments : Namespace
        Parsed by the arguments above.

    Returns
    -------
    ExitCode
        The worst of all files; usage where there is a token that cannot be sent.

    Raises
    ------
    ClientError
        No service could be asked, or it failed; the other files would fare no better.
    """
    from burntally.client import connect

    # From the environment alone, since every process of the machine may read another's arguments. A service that is
    # started from the same environment may take several tokens; the first is as good as any.
    tokens = os.environ.get(_VARIABLE, "").split()
    try:
        connected = connect(arguments.server, tries=_TRIES, token=tokens[0] if tokens else None)
    except ValueError as error:
        print(f"burntally check: {_VARIABLE}: {error}", file=sys.stderr)
        return ExitCode.USAGE
    with connected as client:
        return max(_check(client, path, arguments) for path in arguments.files)


def _check(client: "Client", path: Path, arguments: Namespace) -> ExitCode:
    from burntally.cli.blame import BLAMED_ON_INPUT, lines_of
    from burntally.cli.files import read_design
    from burntally.client.exchange import decoded
    from burntally.client.operations import CREATE_BUDGET

    try:
        answer = client.call(CREATE_BUDGET.id, read_design(path))
    except BLAMED_ON_INPUT as error:
        print(*lines_of(path, error), sep="\n", file=sys.stderr)
        if arguments.format == "json":
            # The lines stand for the files by their order, so a file without a budget has one too.
            print("null")
        return ExitCode.BAD_INPUT
    budget = decoded(CREATE_BUDGET, answer)
    _write(path, answer.body, budget, arguments)
    return ExitCode.CLOSES if budget.closes else ExitCode.DOES_NOT_CLOSE


def _write(path: Path, body: bytes, budget: "Budget", arguments: Namespace) -> None:
    from burntally.cli.text import render

    if arguments.format == "json":
        sys.stdout.flush()
        sys.stdout.buffer.write(body + b"\n")
    elif len(arguments.files) == 1:
        sys.stdout.write(render(budget))
    else:
        sys.stdout.write(f"{path}\n{'=' * len(str(path))}\n{render(budget)}\n")
