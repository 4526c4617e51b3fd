"""JSON Pointers into a design: the value at one, and the design with another value there."""

from typing import Any, TypeVar, cast

from msgspec import Struct, structs

__all__ = ["value_at", "with_value"]

_T = TypeVar("_T")


def _tokens(pointer: str) -> list[str]:
    """Tokens of a pointer (RFC 6901)."""
    return [token.replace("~1", "/").replace("~0", "~") for token in pointer.split("/")[1:]]


def _field(value: Struct, token: str) -> str:
    """Attribute that a key of the contract stands for."""
    for attribute, key in zip(value.__struct_fields__, value.__struct_encode_fields__, strict=True):
        if key == token:
            return attribute
    raise KeyError(token)


def value_at(root: Any, pointer: str) -> Any:  # noqa: ANN401  (a pointer may lead to anything)
    """Read the value that a pointer leads to.

    Parameters
    ----------
    root : struct, list or dict
        Where the pointer starts.
    pointer : str
        JSON Pointer.

    Returns
    -------
    object
        The value.

    Raises
    ------
    KeyError, IndexError
        If nothing is there.
    """
    value = root
    for token in _tokens(pointer):
        if isinstance(value, Struct):
            value = getattr(value, _field(value, token))
        else:
            value = value[int(token) if isinstance(value, list) else token]
    return value


def with_value(root: _T, pointer: str, value: object) -> _T:
    """Copy a value with another one where a pointer leads; all that is not on the way is shared.

    Parameters
    ----------
    root : struct, list or dict
        Where the pointer starts; not changed.
    pointer : str
        JSON Pointer.
    value : object
        What to put there.

    Returns
    -------
    struct, list or dict
        The copy.
    """
    return cast("_T", _replaced(root, _tokens(pointer), value))


def _replaced(root: Any, tokens: list[str], value: object) -> object:  # noqa: ANN401  (as above)
    """Copy along the way to a place."""
    if not tokens:
        return value
    token, rest = tokens[0], tokens[1:]
    if isinstance(root, Struct):
        attribute = _field(root, token)
        return structs.replace(root, **{attribute: _replaced(getattr(root, attribute), rest, value)})
    if isinstance(root, list):
        copied = list(cast("list[object]", root))
        copied[int(token)] = _replaced(copied[int(token)], rest, value)
        return copied
    return {**root, token: _replaced(root.get(token), rest, value)}
