"""The border: bytes or plain values in, values of the contract out, or everything that is wrong with them.

Contract fields are floats in the units of the contract; quantities as text exist outside the border alone.
"""

import re
from collections.abc import Callable
from contextlib import suppress
from typing import Any, Final, NamedTuple, TypeVar

import msgspec

from burntally.model import _parse
from burntally.model._msgpack import msgpack_values
from burntally.model._trail import Report, ReportFullError, Trail, tell
from burntally.model.checks import violations
from burntally.model.errors import ContractError, InconsistentError, UncomputableError

__all__ = ["JSON", "MSGPACK", "decode", "decode_builtins", "encode", "parse_json"]

T = TypeVar("T")

JSON: Final = "application/json"
MSGPACK: Final = "application/msgpack"

_PACKED: Final = "a MessagePack document, with keys that are text"

_REFUSALS: Final = (msgspec.MsgspecError, RecursionError, ValueError, OverflowError, TypeError)
"""What msgspec raises on a body: beside its own errors Python's, for numbers too long and keys that are no text."""


def decode(type_: type[T], data: bytes, *, media_type: str = JSON) -> T:
    """Read a body as a type of the contract.

    Parameters
    ----------
    type_ : type
        Struct of the contract.
    data : bytes
        The body.
    media_type : str, optional
        `application/json`, or `application/msgpack`.

    Returns
    -------
    T
        The value, with every quantity in the unit of the contract.

    Raises
    ------
    ContractError
        The body breaks the contract; all its violations are told.
    InconsistentError
        Every field is in order, and together they break a rule that no schema can state.
    ValueError
        The media type is another one.
    """
    wire = _wire_of(media_type)
    try:
        value: T = wire.read(data, type=type_)
    except _REFUSALS:
        return _decode_plain(type_, wire.in_full(data), is_tree=True)
    if wire.is_doubtful(data, value):
        return _decode_plain(type_, wire.in_full(data), is_tree=True)
    return _consistent(value)


def decode_builtins(type_: type[T], parsed: object) -> T:
    """Read plain values, as a parser of JSON, TOML or YAML gives them, as a type of the contract.

    Parameters
    ----------
    type_ : type
        Struct of the contract.
    parsed : object
        Dictionaries, lists and scalars; dates where an epoch is wanted.

    Returns
    -------
    T
        The value, with every quantity in the unit of the contract.

    Raises
    ------
    ContractError
        They break the contract; all violations are told.
    InconsistentError
        Every field is in order, and together they break a rule that no schema can state.
    """
    return _decode_plain(type_, parsed, is_tree=False)


def parse_json(data: bytes) -> object:
    """Parse JSON to plain values for `decode_builtins`, which then tells keys that are written twice.

    Parameters
    ----------
    data : bytes
        The document.

    Returns
    -------
    object
        Plain values.

    Raises
    ------
    ContractError
        The document is empty, not UTF-8, not JSON, or nested beyond reading.
    """
    return _parse.json_values(data)


def encode(value: object, *, media_type: str = JSON) -> bytes:
    """Write a value of the contract.

    Parameters
    ----------
    value : Struct
        Any value of the contract.
    media_type : str, optional
        `application/json`, or `application/msgpack`.

    Returns
    -------
    bytes
        The body.

    Raises
    ------
    UncomputableError
        A number is not finite: JSON cannot hold it, and no reader expects it.
    ValueError
        The media type is another one.
    """
    wire = _wire_of(media_type)
    data = wire.write(value)
    if wire.may_hold_non_finite(data):
        report = Report()
        with suppress(ReportFullError):
            _tell_non_finite(msgspec.to_builtins(value), report)
        if report.violations:
            raise UncomputableError(report.violations)
    return data


def _decode_plain(type_: type[T], parsed: object, *, is_tree: bool) -> T:
    from burntally.model._walker import walk  # as slow to load as the rest of the border, and often not needed

    if _parse.depth_of(parsed, is_tree=is_tree) > _parse.DEEPEST:
        raise _parse.too_deep()
    plain, found = walk(type_, parsed)
    if found:
        from burntally.model._part_checks import violations_in_parts

        raise ContractError([*found, *violations_in_parts(type_, plain, found)])
    try:
        value = msgspec.convert(plain, type_)
    except msgspec.ValidationError as error:
        raise _parse.one_violation(str(error)) from error
    return _consistent(value)


class _Wire(NamedTuple):
    read: Callable[..., Any]
    is_doubtful: Callable[[bytes, object], bool]
    in_full: Callable[[bytes], object]
    write: Callable[[object], bytes]
    may_hold_non_finite: Callable[[bytes], object]


def _wire_of(media_type: str) -> _Wire:
    wire = _WIRES.get(media_type)
    if wire is None:
        raise ValueError(f"{media_type!r} is neither {JSON} nor {MSGPACK}")
    return wire


def _consistent(value: T) -> T:
    found = violations(value)
    if found:
        raise InconsistentError(found, request=value)
    return value


def _json_is_doubtful(data: bytes, value: object) -> bool:
    # The parser keeps the last of two equal keys without a word: written again, the document then has fewer colons.
    # What is left out when it is written again, because it is the default, is found by a second look. An escape may
    # hide a colon, and a newline that `$` in a pattern lets pass.
    if b"\\" in data:
        return True
    colons = data.count(b":")
    if colons == msgspec.json.encode(value).count(b":"):
        return False
    return colons != msgspec.json.encode(msgspec.json.decode(data)).count(b":")


def _msgpack_is_doubtful(data: bytes, value: object) -> bool:
    # As above, with lengths: what was written in its shortest form and without equal keys is as long again.
    if b"\\" in msgspec.json.encode(value):
        return True
    length = len(data)
    if length == len(msgspec.msgpack.encode(value)):
        return False
    return length != len(msgspec.msgpack.encode(msgspec.msgpack.decode(data)))


def _json_in_full(data: bytes) -> object:
    # The quick parser first: what was refused is most often a quantity with its unit.
    with suppress(*_REFUSALS):
        parsed: object = msgspec.json.decode(data)
        if not _json_is_doubtful(data, parsed):
            return parsed
    return _parse.json_values(data)


def _msgpack_in_full(data: bytes) -> object:
    if not data:
        raise _parse.one_violation("the body is empty", expected=_PACKED)
    try:
        parsed = msgspec.msgpack.decode(data)
        is_doubtful = len(data) != len(msgspec.msgpack.encode(parsed))
    except RecursionError as error:
        raise _parse.too_deep() from error
    except _REFUSALS as error:
        raise _parse.one_violation(f"the body is not MessagePack: {error}", expected=_PACKED) from error
    return msgpack_values(data) if is_doubtful else parsed


def _tell_non_finite(value: object, trail: Trail) -> None:
    if isinstance(value, float) and value - value != 0.0:
        tell(trail, "is not a finite number", read=value, expected="a finite result")
    elif _parse.is_object(value):
        for key, inner in value.items():
            _tell_non_finite(inner, (trail, key))
    elif _parse.is_list(value):
        for index, inner in enumerate(value):
            _tell_non_finite(inner, (trail, index))


# NaN and infinity are written as `null` in JSON; in MessagePack they are doubles of the highest exponent. What merely
# looks like one is looked at closely.
_WIRES: Final = {
    JSON: _Wire(
        read=msgspec.json.decode,
        is_doubtful=_json_is_doubtful,
        in_full=_json_in_full,
        write=msgspec.json.encode,
        may_hold_non_finite=re.compile(b"null").search,
    ),
    MSGPACK: _Wire(
        read=msgspec.msgpack.decode,
        is_doubtful=_msgpack_is_doubtful,
        in_full=_msgpack_in_full,
        write=msgspec.msgpack.encode,
        may_hold_non_finite=re.compile(rb"[\xca\xcb][\x7f\xff][\x80-\xff]").search,
    ),
}
