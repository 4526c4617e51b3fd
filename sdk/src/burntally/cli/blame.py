"""Whose fault it is: which errors are blamed on a design file, and how they are told."""

from pathlib import Path
from typing import Final

from burntally.client.errors import ContractError, InvalidRequest, TooLarge, Uncomputable, UncomputableError, Violation

__all__ = ["BLAMED_ON_INPUT", "lines_of"]

BLAMED_ON_INPUT: Final = (
    ContractError,
    UncomputableError,
    InvalidRequest,
    Uncomputable,
    TooLarge,
    OSError,
)
"""Errors that another file might not have raised; an ``OSError`` can only be the file's, a client wraps its own."""


def lines_of(path: Path, error: Exception) -> list[str]:
    """Tell everything that is wrong with a file, one line for each.

    Parameters
    ----------
    path : Path
        The file, as it was given.
    error : Exception
        One of those above.

    Returns
    -------
    list of str
        File, JSON Pointer, message, what was read and what was expected.
    """
    violations: tuple[Violation, ...] = getattr(error, "violations", ())
    if isinstance(error, OSError):
        return [f"{path}: cannot be read: {error.strerror or error}"]
    return [f"{path}: {_line(violation)}" for violation in violations] or [f"{path}: {error}"]


def _line(violation: Violation) -> str:
    read = "" if violation.read is None else f"; read {violation.read}"
    expected = "" if violation.expected is None else f"; expected {violation.expected}"
    return f"{violation.pointer or '/'}: {violation.message}{read}{expected}"
