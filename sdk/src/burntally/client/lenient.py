"""Reading an answer of a newer service: what this SDK does not know is passed over, not refused.

The typed decoder runs first and is enough for every answer of a service of the same version. Only if it refuses does
this walk run: it drops fields that a struct does not have and takes a word that a list of words does not have as it
stands. A wrong shape stays an error.
"""

from types import UnionType
from typing import Annotated, Any, Final, Literal, TypeGuard, TypeVar, Union, get_args, get_origin

import msgspec

__all__ = ["read_leniently"]

A = TypeVar("A")

_UNIONS: Final = (Union, UnionType)


def read_leniently(data: bytes, type_: type[A]) -> A:
    """Decode a JSON answer, passing over what this SDK does not know.

    Parameters
    ----------
    data : bytes
        JSON.
    type_ : type
        Struct of the answer.

    Returns
    -------
    object
        An instance of `type_`.

    Raises
    ------
    msgspec.DecodeError
        No JSON, or of another shape.
    """
    try:
        return msgspec.json.decode(data, type=type_)
    except msgspec.ValidationError:
        built: A = _build(type_, msgspec.json.decode(data))
        return built


def _build(type_: Any, value: Any) -> Any:  # noqa: ANN401 -- a walk over types meets every type and value
    arguments = get_args(type_)
    if get_origin(type_) is Annotated:
        return _build(arguments[0], value)
    if get_origin(type_) is Literal and isinstance(value, str):
        return value
    if get_origin(type_) in _UNIONS:
        return _build_choice(type_, value)
    if get_origin(type_) is list and _is_array(value):
        return [_build(arguments[0], item) for item in value]
    if _is_struct(type_) and _is_object(value):
        return _build_struct(type_, value)
    return msgspec.convert(value, type=type_)


def _is_array(value: object) -> TypeGuard[list[Any]]:
    return isinstance(value, list)


def _is_object(value: object) -> TypeGuard[dict[str, Any]]:
    return isinstance(value, dict)


def _is_struct(type_: object) -> TypeGuard[type[msgspec.Struct]]:
    return isinstance(type_, type) and issubclass(type_, msgspec.Struct)


def _build_struct(type_: type[msgspec.Struct], value: dict[str, Any]) -> msgspec.Struct:
    known = {row.name: row for row in msgspec.structs.fields(type_)}
    missing = [row.encode_name for row in known.values() if row.required and row.encode_name not in value]
    if missing:
        raise msgspec.ValidationError(f"{type_.__name__} lacks {', '.join(missing)}")
    present = {name: row for name, row in known.items() if row.encode_name in value}
    return type_(**{name: _build(row.type, value[row.encode_name]) for name, row in present.items()})


def _build_choice(type_: Any, value: Any) -> Any:  # noqa: ANN401 -- as above
    choices = get_args(type_)
    if not _is_object(value):
        literal = next((choice for choice in choices if get_origin(choice) is Literal), None)
        return msgspec.convert(value, type=type_) if literal is None else _build(literal, value)
    structs = [choice for choice in choices if _is_struct(choice)]
    chosen = next((kind for kind in structs if _answers_to(kind, value)), None)
    # A kind that is not known here stays as it came: its fields are still there to read.
    return value if chosen is None else _build_struct(chosen, value)


def _answers_to(type_: type[msgspec.Struct], value: dict[str, Any]) -> bool:
    config = type_.__struct_config__
    return config.tag_field is None or value.get(config.tag_field) == config.tag
