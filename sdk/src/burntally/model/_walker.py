"""The walker: reads plain values as the contract's types would be written, and tells everything that is wrong.

It is made from the types themselves, so there is one list of fields and bounds. Where msgspec's decoder stops at the
first violation, the walker goes on; where that decoder wants a plain number, the walker also reads a quantity with its
unit. What it hands back are plain values again: the decoder has the last word on them.
"""

from collections.abc import Callable, Iterator, Mapping
from contextlib import suppress
from functools import cache
from typing import Any, Final

from msgspec import inspect

from burntally.model._leaves import Reader, boolean, choice_of, count_of, number_of, text_of
from burntally.model._parse import Doubled, Unbounded, is_list, is_object
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
        return _made(*_unwrapped(info, extra))
    if isinstance(info, inspect.FloatType):
        return number_of(info, extra)
    if isinstance(info, inspect.UnionType):
        return _union_of(info, extra)
    make = _MAKERS.get(type(info))
    # What the contract does not use is left to the decoder.
    return _as_it_is if make is None else make(info)


def _boolean_of(_info: inspect.BoolType) -> Reader:
    return boolean


def _as_it_is(value: object, _trail: Trail) -> object:
    return value


def _wanted_by(reader: Reader) -> str | None:
    """Say what a reader wants, in its own words: it refuses null, which no field takes that must be there."""
    refusal = Report()
    reader(None, refusal)
    return refusal.violations[0].expected if refusal.violations else "any value but null"


class _StructReader:
    """Reads an object as a struct, field by field."""

    def __init__(self, info: inspect.StructType) -> None:
        self._info = info
        self._readers = {field.encode_name: _made(field.type, {}) for field in info.fields}
        self._required = tuple(field.encode_name for field in info.fields if field.required)
        self._names = tuple(self._readers)
        self._known = f"fields {', '.join(self._names)}"

    def __call__(self, value: object, trail: Trail) -> object:
        if not is_object(value):
            tell(trail, f"is {kind_of(value)} where an object is wanted", read=value, expected=self._known)
            return value
        _tell_doubled(value, trail)
        made: dict[object, object] = {}
        for key, inner in value.items():
            reader = self._readers.get(key, self._read_stranger) if isinstance(key, str) else self._read_stranger
            made[key] = reader(inner, (trail, key))
        for name in self._required:
            if name not in value:
                tell((trail, name), "is missing", expected=_wanted_by(self._readers[name]))
        return made

    def _read_stranger(self, value: object, trail: Trail) -> object:
        key = trail[1] if isinstance(trail, tuple) else None
        if isinstance(key, str) and key == self._info.tag_field:
            if value != self._info.tag:
                tell(trail, "is another kind than is wanted", read=value, expected=repr(self._info.tag))
        elif self._info.forbid_unknown_fields:
            message = f"is not a field of {self._info.cls.__name__}{suggestion(key, self._names)}"
            tell(trail, message, read=value, expected=self._known)
        return value


def _tell_doubled(value: dict[object, object], trail: Trail) -> None:
    if isinstance(value, Doubled):
        for name in value.doubled:
            tell((trail, name), "is written more than once in the same object", expected="each field once")


def _tagged_of(infos: list[inspect.StructType]) -> Reader:
    tag_field = infos[0].tag_field or ""
    readers = {info.tag: _StructReader(info) for info in infos}
    kinds = tuple(str(tag) for tag in readers)
    expected = f"one of {', '.join(kinds)}"

    def read_tagged(value: object, trail: Trail) -> object:
        if not is_object(value):
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
    expected = f"a list{_sizes(info)}"

    def read_list(value: object, trail: Trail) -> object:
        if not is_list(value):
            tell(trail, f"is {kind_of(value)} where a list is wanted", read=value, expected=expected)
        elif not _fits(len(value), info):
            tell(trail, f"has {len(value)} entries", read=value, expected=expected)
        else:
            return [read_item(item, (trail, index)) for index, item in enumerate(value)]
        return value

    return read_list


def _dict_of(info: inspect.DictType) -> Reader:
    read_key, read_value = _made(info.key_type, {}), _made(info.value_type, {})
    expected = f"an object{_sizes(info)}"

    def read_dict(value: object, trail: Trail) -> object:
        if not is_object(value):
            tell(trail, f"is {kind_of(value)} where an object is wanted", read=value, expected=expected)
        elif not _fits(len(value), info):
            tell(trail, f"has {len(value)} entries", read=value, expected=expected)
        else:
            _tell_doubled(value, trail)
            return {read_key(key, (trail, key)): read_value(inner, (trail, key)) for key, inner in value.items()}
        return value

    return read_dict


def _fits(count: int, info: inspect.ListType | inspect.DictType) -> bool:
    return count >= (info.min_length or 0) and (info.max_length is None or count <= info.max_length)


def _sizes(info: inspect.ListType | inspect.DictType) -> str:
    return f" of {info.min_length or 0} to {info.max_length} entries" if info.max_length is not None else ""


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
        yield (dict, Doubled), _tagged_of(structs) if len(structs) > 1 else _StructReader(structs[0])


def _unwrapped(info: inspect.Type, extra: Mapping[str, object]) -> tuple[inspect.Type, Mapping[str, object]]:
    while isinstance(info, inspect.Metadata):
        typed: Any = info  # the library leaves open what the schema's extras hold
        info, extra = info.type, {**extra, **(typed.extra_json_schema or {})}
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
    inspect.StructType: _StructReader,
    inspect.BoolType: _boolean_of,
    inspect.IntType: count_of,
    inspect.StrType: text_of,
    inspect.LiteralType: choice_of,
    inspect.ListType: _list_of,
    inspect.DictType: _dict_of,
}
