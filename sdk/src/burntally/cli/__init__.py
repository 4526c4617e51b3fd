"""The commands: a client like any other."""

from burntally.cli.command_line import main

__all__ = ["main"]
