"""MessagePack as plain values with every key that was written: the parser of msgspec keeps the last of two equal keys.

It runs on bodies alone that msgspec has parsed and that are not in their shortest form, so it trusts their form.

References
----------
.. [1] MessagePack specification, 2017, https://github.com/msgpack/msgpack/blob/master/spec.md, "Formats".
"""

import struct
from typing import Final

from burntally.model._parse import is_list, is_object, object_of

__all__ = ["msgpack_values"]

_LAST_POSITIVE: Final = 0x7F
_LAST_MAP: Final = 0x8F
_LAST_LIST: Final = 0x9F
_LAST_TEXT: Final = 0xBF
_FIRST_NEGATIVE: Final = 0xE0
# First byte of each format: what its header holds, and what follows as many times (or bytes) as the header says.
_B, _H, _I = (struct.Struct(f">{kind}") for kind in "BHI")
_SCALARS: Final = {first: struct.Struct(f">{kind}") for first, kind in enumerate("fdBHIQbhiq", 0xCA)}
_TEXTS: Final = {0xD9: _B, 0xDA: _H, 0xDB: _I}
_BINARIES: Final = {0xC4: _B, 0xC5: _H, 0xC6: _I}
_EXTENSIONS: Final = {0xC7: _B, 0xC8: _H, 0xC9: _I}
_LISTS: Final = {0xDC: _H, 0xDD: _I}
_MAPS: Final = {0xDE: _H, 0xDF: _I}
_NIL_TO_TRUE: Final = {0xC0: None, 0xC2: False, 0xC3: True}


def msgpack_values(data: bytes) -> object:
    """Parse MessagePack without losing a key.

    Parameters
    ----------
    data : bytes
        A well-formed document that is nested no deeper than can be read.

    Returns
    -------
    object
        Plain values; `Doubled` for an object with a key twice, bytes for what no contract holds.
    """
    return _Reader(data).value()


class _Reader:
    def __init__(self, data: bytes) -> None:
        self._data = data
        self._at = 0

    def value(self) -> object:
        first = self._data[self._at]
        self._at += 1
        if first <= _LAST_POSITIVE:
            return first
        if first >= _FIRST_NEGATIVE:
            return first - 0x100
        if first in _NIL_TO_TRUE:
            return _NIL_TO_TRUE[first]
        if first in _SCALARS:
            return self._number(_SCALARS[first])
        return self._counted(first)

    def _counted(self, first: int) -> object:
        if first <= _LAST_MAP or first in _MAPS:
            count = self._count(first, _MAPS, 0x0F)
            return object_of([(self._key(), self.value()) for _ in range(count)])
        if first <= _LAST_LIST or first in _LISTS:
            return [self.value() for _ in range(self._count(first, _LISTS, 0x0F))]
        if first <= _LAST_TEXT or first in _TEXTS:
            return self._bytes(self._count(first, _TEXTS, 0x1F)).decode()
        if first in _BINARIES:
            return self._bytes(self._count(first, _BINARIES, 0))
        size = self._count(first, _EXTENSIONS, 0) if first in _EXTENSIONS else 1 << (first - 0xD4)
        return self._bytes(1 + size)

    def _key(self) -> object:
        key = self.value()
        return repr(key) if is_list(key) or is_object(key) else key

    def _count(self, first: int, headers: dict[int, struct.Struct], mask: int) -> int:
        header = headers.get(first)
        return first & mask if header is None else int(self._number(header))

    def _number(self, header: struct.Struct) -> int | float:
        number: int | float = header.unpack_from(self._data, self._at)[0]
        self._at += header.size
        return number

    def _bytes(self, count: int) -> bytes:
        self._at += count
        return self._data[self._at - count : self._at]
