"""Exit codes: what a script learns without reading a word."""

from enum import IntEnum

__all__ = ["ExitCode"]


class ExitCode(IntEnum):
    """How a command ends; of several files, the greatest code counts."""

    CLOSES = 0
    DOES_NOT_CLOSE = 1
    USAGE = 2
    BAD_INPUT = 3
    NOT_REACHABLE = 4
    INTERNAL = 5
