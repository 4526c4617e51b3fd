"""The command line: what was typed, parsed and sent to its command, and how it ended as an exit code."""

import sys
from argparse import ArgumentParser, Namespace
from collections.abc import Sequence
from io import TextIOWrapper
from typing import Final

from burntally.cli import check, serve
from burntally.cli.exit_codes import ExitCode
from burntally.version import __version__

__all__ = ["main"]

_EPILOG: Final = (
    "exit codes: 0 closes, 1 does not close, 2 usage, 3 bad input, 4 service not reachable, 5 internal. "
    "Preliminary design estimates: not for flight safety, range safety, licensing or operations."
)


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command.

    Parameters
    ----------
    argv : sequence of str or None
        Arguments; None: those of the process.

    Returns
    -------
    int
        An :class:`ExitCode`.
    """
    for stream in (sys.stdout, sys.stderr):
        # A terminal that cannot show a sign gets its code point in place of a failure.
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")
    try:
        arguments = _parser().parse_args(argv)
    except SystemExit as stop:
        return ExitCode.USAGE if stop.code else ExitCode.CLOSES
    return _run(arguments)


def _parser() -> ArgumentParser:
    parser = ArgumentParser(prog="burntally", description=_DESCRIPTION, epilog=_EPILOG)
    parser.add_argument("--version", action="version", version=f"%(prog)s {__version__}")
    commands = parser.add_subparsers(title="commands", metavar="COMMAND", required=True)
    for name, command, line in (
        ("check", check, "say whether the budgets of design files close"),
        ("serve", serve, "run the installed service"),
    ):
        sub = commands.add_parser(name, help=line, description=line, epilog=_EPILOG)
        command.add_arguments(sub)
        sub.set_defaults(run=command.run)
    return parser


_DESCRIPTION: Final = "Delta-v and propellant budgets of multi-stage vehicles."


def _run(arguments: Namespace) -> ExitCode:
    # The tree of errors costs the import of the contract, which --version and --help do without.
    from burntally.client.errors import (
        ClientError,
        ConnectionFailed,
        NotFound,
        RateLimited,
        ServiceMissing,
        TimedOut,
        Unauthorized,
        Unavailable,
    )

    try:
        code: ExitCode = arguments.run(arguments)
        sys.stdout.flush()
    except (ConnectionFailed, RateLimited, ServiceMissing, TimedOut, Unauthorized, Unavailable) as error:
        return _told(error, ExitCode.NOT_REACHABLE)
    except NotFound:
        told = "nothing answers to this path; --server takes an address without one, as http://127.0.0.1:8463"
        return _told(told, ExitCode.NOT_REACHABLE)
    except ClientError as error:
        return _told(error, ExitCode.INTERNAL)
    except SystemExit as stop:
        # A server that cannot start leaves this way; its own codes mean other things than ours.
        return ExitCode.INTERNAL if stop.code else ExitCode.CLOSES
    except Exception:  # noqa: BLE001 -- an uncaught exception would end in 1, which says "does not close"
        import traceback  # a failure may take its time; --version may not

        traceback.print_exc()
        return ExitCode.INTERNAL
    return code


def _told(error: Exception | str, code: ExitCode) -> ExitCode:
    print(f"burntally: {error}", file=sys.stderr)
    return code
