"""What is told of a name that leads nowhere, whoever knows the names that there are."""

from collections.abc import Iterable

from burntally.model._trail import shown, suggestion
from burntally.model.errors import Violation

__all__ = ["unknown_name"]


def unknown_name(noun: str, name: str, *, known: Iterable[str], pointer: str) -> Violation:
    """Say that nothing of a kind has this name, and which name is nearest to it.

    Parameters
    ----------
    noun : str
        What it would be the name of.
    name : str
        The name that was read.
    known : iterable of str
        Names that would have been right.
    pointer : str
        JSON Pointer to the field that holds it.

    Returns
    -------
    burntally.model.errors.Violation
        The violation.

    Examples
    --------
    >>> unknown_name("body", "erth", known=["earth", "moon"], pointer="/body").message
    "is no body that is known; did you mean 'earth'?"
    """
    names = tuple(known)
    message = f"is no {noun} that is known{suggestion(name, names)}"
    return Violation(pointer=pointer, message=message, read=shown(name), expected=", ".join(names))
