"""`burntally serve`: runs the service that is installed beside the SDK."""

import sys
from argparse import ArgumentParser, Namespace

from burntally.cli.exit_codes import ExitCode

__all__ = ["add_arguments", "run"]


def add_arguments(parser: ArgumentParser) -> None:
    """Say what the command takes."""
    parser.add_argument("--host", help="address to listen on; default: the setting BURNTALLY_HOST, else this machine")
    parser.add_argument("--port", type=int, help="port to listen on; default: the setting BURNTALLY_PORT, else 8463")


def run(arguments: Namespace) -> ExitCode:
    """Serve until a signal says stop.

    Parameters
    ----------
    arguments : Namespace
        Parsed by the arguments above.

    Returns
    -------
    ExitCode
        Success after a stop that was asked for; usage where a setting cannot be read.

    Raises
    ------
    ServiceMissing
        No service is installed.
    """
    from burntally.client.inprocess import installed

    serve = installed("serve")
    try:
        serve(arguments.host, arguments.port)
    except ValueError as error:
        print(f"burntally serve: {error}", file=sys.stderr)
        return ExitCode.USAGE
    return ExitCode.CLOSES
