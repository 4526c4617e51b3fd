"""The walker: reads plain values as the contract's types would be written, and tells everything that is wrong.

It is made from the types themselves, so there is one list of fields and bounds. Where msgspec's decoder stops at the
first violation, the walker goes on; where that decoder wants a plain number, the walker also reads a quantity with its
unit. What it hands back are plain values again: the decoder has the last word on them.
"""

from collections.abc import Callable, Iterator, Mapping
from contextlib import suppress
from functools import cache
from typing import Final

from msgspec import inspect

from burntally.model._leaves import Reader, boolean, choice_of, count_of, number_of, text_of
from burntally.model._parse import Doubled, Unbounded
from burntally.model._trail import Report, ReportFullError, Trail, kind_of, suggestion, tell
from burntally.model.errors import Violation
from burntally.model.scalars import UNIT_KEY

__all__ = ["walk"]


def walk(type_: object, value: object) -> tuple[object, list[Violation]]:
    """Read a plain value as a type of the contract.

    Parameters
    ----------
    type_ : type
        Struct, or any type that the contract uses.
    value : object
        Plain values, as a parser gives them.

    Returns
    -------
    tuple
        The same values with every quantity as a number, and the violations. With violations, the values mean nothing.
    """
    report = Report()
    with suppress(ReportFullError):
        value = _reader_of(type_)(value, report)
    return value, report.violations


@cache
def _reader_of(type_: object) -> Reader:
    return _made(inspect.type_info(type_), {})


def _made(info: inspect.Type, extra: Mapping[str, object]) -> Reader:
    if isinstance(info, inspect.Metadata):
        return _made(info.type, {**extra, **(info.extra_json_schema or {})})
    if isinstance(info, inspect.FloatType):
        return number_of(info, extra)
    if isinstance(info, inspect.UnionType):
        return _union_of(info, extra)
    make = _MAKERS.get(type(info))
    # What the contract does not use is left to the decoder.
    return _as_it_is if make is None else make(info)


def _as_it_is(value: object, _trail: Trail) -> object:
    return value


def _struct_of(info: inspect.StructType) -> Reader:
    cls = info.cls
    readers = {field.encode_name: _made(field.type, {}) for field in info.fields}
    required = tuple(field.encode_name for field in info.fields if field.required)
    names = tuple(readers)
    known = f"fields {', '.join(names)}"

    def read_stranger(key: object, value: object, trail: Trail) -> object:
        if key == info.tag_field:
            if value != info.tag:
                tell(trail, "is another kind than the one that is wanted", read=value, expected=repr(info.tag))
        elif info.forbid_unknown_fields:
            message = f"is not a field of {cls.__name__}{suggestion(key, names)}"
            tell(trail, message, read=value, expected=known)
        return value

    def read_struct(value: object, trail: Trail) -> object:
        if not isinstance(value, dict):
            tell(trail, f"is {kind_of(value)} where an object is wanted", read=value, expected=known)
            return value
        _tell_doubled(value, trail)
        made = {}
        for key, inner in value.items():
            reader = readers.get(key)
            if reader is None:
                made[key] = read_stranger(key, inner, (trail, key))
            else:
                made[key] = reader(inner, (trail, key))
        for name in required:
            if name not in value:
                tell((trail, name), "is missing", expected=f"field {name} of {cls.__name__}")
        return made

    return read_struct


def _tell_doubled(value: dict[object, object], trail: Trail) -> None:
    if isinstance(value, Doubled):
        for name in value.doubled:
            tell((trail, name), "is written more than once in the same object", expected="each field once")


def _tagged_of(infos: list[inspect.StructType]) -> Reader:
    tag_field = infos[0].tag_field or ""
    readers = {info.tag: _struct_of(info) for info in infos}
    kinds = tuple(str(tag) for tag in readers)
    expected = f"one of {', '.join(kinds)}"

    def read_tagged(value: object, trail: Trail) -> object:
        if not isinstance(value, dict):
            wanted = f"an object with {tag_field}, {expected}"
            tell(trail, f"is {kind_of(value)} where an object is wanted", read=value, expected=wanted)
            return value
        if tag_field not in value:
            tell((trail, tag_field), "is missing", expected=expected)
            return value
        tag = value[tag_field]
        reader = readers.get(tag) if isinstance(tag, str) else None
        if reader is None:
            message = f"is no {tag_field} that is known{suggestion(tag, kinds)}"
            tell((trail, tag_field), message, read=tag, expected=expected)
            return value
        return reader(value, trail)

    return read_tagged


def _list_of(info: inspect.ListType) -> Reader:
    read_item = _made(info.item_type, {})
    least, most = info.min_length or 0, info.max_length
    expected = f"a list of {least} to {most}" if most is not None else "a list"

    def read_list(value: object, trail: Trail) -> object:
        if not isinstance(value, list | tuple):
            tell(trail, f"is {kind_of(value)} where a list is wanted", read=value, expected=expected)
            return value
        if len(value) < least or (most is not None and len(value) > most):
            tell(trail, f"has {len(value)} entries", read=value, expected=expected)
            return value
        return [read_item(item, (trail, index)) for index, item in enumerate(value)]

    return read_list


def _dict_of(info: inspect.DictType) -> Reader:
    read_key, read_value = _made(info.key_type, {}), _made(info.value_type, {})
    least, most = info.min_length or 0, info.max_length
    expected = f"an object of {least} to {most} entries" if most is not None else "an object"

    def read_dict(value: object, trail: Trail) -> object:
        if not isinstance(value, dict):
            tell(trail, f"is {kind_of(value)} where an object is wanted", read=value, expected=expected)
            return value
        _tell_doubled(value, trail)
        if len(value) < least or (most is not None and len(value) > most):
            tell(trail, f"has {len(value)} entries", read=value, expected=expected)
            return value
        for key in value:
            read_key(key, (trail, key))
        return {key: read_value(inner, (trail, key)) for key, inner in value.items()}

    return read_dict


def _union_of(info: inspect.UnionType, extra: Mapping[str, object]) -> Reader:
    options = list(_options_of(info, extra))
    by_kind = {kind: reader for kinds, reader in options for kind in kinds}
    if info.includes_none:
        by_kind[type(None)] = _as_it_is
    if float in by_kind:
        by_kind.setdefault(int, by_kind[float])
    # Where none fits, the first option tells what it wants.
    fallback = options[0][1]

    def read_union(value: object, trail: Trail) -> object:
        return by_kind.get(type(value), fallback)(value, trail)

    return read_union


def _options_of(info: inspect.UnionType, extra: Mapping[str, object]) -> Iterator[tuple[tuple[type, ...], Reader]]:
    structs: list[inspect.StructType] = []
    for option in info.types:
        bare, more = _unwrapped(option, extra)
        if isinstance(bare, inspect.StructType):
            structs.append(bare)
        elif not isinstance(bare, inspect.NoneType):
            has_unit = isinstance(bare, inspect.FloatType) and UNIT_KEY in more
            yield (*_KINDS.get(type(bare), ()), *((str,) if has_unit else ())), _made(bare, more)
    if structs:
        yield (dict, Doubled), _tagged_of(structs) if len(structs) > 1 else _struct_of(structs[0])


def _unwrapped(info: inspect.Type, extra: Mapping[str, object]) -> tuple[inspect.Type, Mapping[str, object]]:
    if isinstance(info, inspect.Metadata):
        return _unwrapped(info.type, {**extra, **(info.extra_json_schema or {})})
    return info, extra


_KINDS: Final[dict[type, tuple[type, ...]]] = {
    inspect.BoolType: (bool,),
    inspect.IntType: (int,),
    inspect.FloatType: (float, Unbounded),
    inspect.StrType: (str,),
    inspect.LiteralType: (str, int),
    inspect.ListType: (list,),
    inspect.DictType: (dict, Doubled),
}

_MAKERS: Final[dict[type, Callable[..., Reader]]] = {
    inspect.StructType: _struct_of,
    inspect.BoolType: lambda _: boolean,
    inspect.IntType: count_of,
    inspect.StrType: text_of,
    inspect.LiteralType: choice_of,
    inspect.ListType: _list_of,
    inspect.DictType: _dict_of,
}
