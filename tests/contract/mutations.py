"""Bodies that were requests once: each is an example with something done to it, and comes back from its seed."""

import random
import re
import struct
from collections.abc import Callable, Iterator
from functools import cache
from pathlib import Path
from typing import Any, Final, NamedTuple

import msgspec

from burntally.cli.files import read_design
from burntally.model.decode import JSON, MSGPACK, encode
from burntally_service.api.examples import requests_of

__all__ = ["Mutated", "mutated"]

_DESIGNS: Final = Path(__file__).parents[2] / "sdk" / "examples"
_TAKING_BODIES: Final = ("create_budget", "compute_performance", "plan_transfer")

_NUMBERS: Final = (
    *(0, -0.0, 1, -1, 1.0, 2**31, 2**53 + 1, -(2**63), 2**64 - 1, 5e-324, 2.2e-308, 1e-9, 1e15, 1.8e308, -1e300),
    *(360, 180, 90, 1e9, 3.2e10, 1e16, 1e25, float("nan"), float("inf"), float("-inf")),
)
_TEXTS: Final = (
    *(
        "",
        " ",
        "main",
        "earth",
        "nan",
        "inf kg",
        "1e400 t",
        "-1 kg",
        "5 %",
        "5 g",
        "1 km / s",
        "1e308 km",
        "٣ kg",
        "1 кг",
    ),
    *("\u0000", "\u202eabc", "\ufeff", "é", "e\u0301", "\U0001f680", "a\nb", "name\n", "\ud800", "../../x", "{{7*7}}"),
    *("transfer", "orbit", "2031-02-30", "2031-04-12T06:00:00Z", "2200-12-31T23:59:59.999999999Z", "~1", "/a~0b"),
    *("1" * 400 + " kg", "9" * 5000, "a" * 65, "x" * 20_000, "1 " + "m" * 500, "1 m" + "2" * 200, "(" * 300 + " m"),
)
_JSON_TOKENS: Final = (
    *(b"null", b"true", b"{}", b"[]", b'""', b"1e999", b"-1e999", b"NaN", b"Infinity", b"1.0", b"1e0", b"-0", b"01"),
    *(b"9" * 400, b"0." + b"0" * 400 + b"1", b'"\\ud800"', b'"\\u0000"', b'"\\ud83d\\ude80"', b'{"":{}}', b"1 2"),
    *(b"[" * 40 + b"]" * 40, b'{"a":' * 33 + b"1" + b"}" * 33, b"," * 3, b"/**/1", b"'a'", b"\xff", b"\xed\xa0\x80"),
)
_PACKED_TOKENS: Final = (
    *(
        b"\xc1",
        b"\xc0",
        b"\xdd\xff\xff\xff\xff",
        b"\xdf\xff\xff\xff\xff",
        b"\xdb\xff\xff\xff\xff",
        b"\xc6\xff\xff\xff\xff",
    ),
    *(b"\xc9\xff\xff\xff\xff\x01", b"\xd6\xff\x00\x00\x00\x00", b"\xc7\x0c\xff" + b"\xff" * 12, b"\xd4\x05\x00"),
    *(b"\xc4\x02ab", b"\xa2\xff\xfe", b"\xcb\x7f\xf8" + bytes(6), b"\xcb\xff\xf0" + bytes(6), b"\xca\x7f\x80\x00\x00"),
    *(
        b"\xcf" + b"\xff" * 8,
        b"\xd3\x80" + bytes(7),
        b"\x91" * 40 + b"\x01",
        b"\x81\xa1a" * 40 + b"\x01",
        b"\x80",
        b"\x90",
    ),
)
_TOKEN: Final = re.compile(rb'"(?:[^"\\]|\\.)*"|-?[0-9][0-9.eE+-]*|true|false|null|[{}\[\],:]')
_DEEPEST_WRAP: Final = 60


class Mutated(NamedTuple):
    """A body, with what it was made from and what was done to it."""

    operation_id: str
    media_type: str
    body: bytes
    done: str


def mutated(seed: int, count: int) -> Iterator[Mutated]:
    """Make so many bodies, the same for the same seed."""
    for index in range(count):
        # Each has a seed of its own, so that one body comes back without all before it.
        yield _one(random.Random(f"{seed}/{index}"))  # noqa: S311 - drawn to be repeated, not to be secret


def _one(rng: random.Random) -> Mutated:
    operation_id = rng.choice(_TAKING_BODIES)
    media_type = rng.choice((JSON, MSGPACK))
    value = msgspec.json.decode(rng.choice(_examples(operation_id)))
    done: list[str] = []
    # Half of them stay near enough to the contract to be computed.
    is_mild = rng.random() < 0.5
    for _ in range(rng.choice((0, 1, 1, 1, 2, 3, 8))):
        change = rng.choice(_MILD if is_mild else _OF_VALUES)
        done.append(change.__name__)
        value = change(value, rng)
    body = _written(value, rng) if media_type == JSON else _packed(value, rng, rng.choice((0.0, 0.0, 0.02)))
    if is_mild and done:
        return Mutated(operation_id, media_type, body, ", ".join(done))
    for _ in range(rng.choice((0, 0, 0, 0, 1, 2)) if done else rng.choice((1, 2, 20))):
        change_bytes = rng.choice(_OF_BYTES)
        done.append(change_bytes.__name__)
        body = change_bytes(body, rng, media_type)
    if rng.random() < 0.01:
        done.append("the other media type")
        media_type = JSON if media_type == MSGPACK else MSGPACK
    return Mutated(operation_id, media_type, body, ", ".join(done))


@cache
def _examples(operation_id: str) -> list[bytes]:
    examples = [msgspec.json.encode(example["value"]) for example in requests_of(operation_id).values()]
    if operation_id == "create_budget":
        examples += [encode(read_design(path)) for path in sorted(_DESIGNS.iterdir()) if path.is_file()]
    return examples


# what is done to values


def _places(value: Any) -> list[tuple[Any, Any]]:
    """Every place of a value: a container, and the key or index in it."""
    keys = list(value) if isinstance(value, dict) else list(range(len(value))) if isinstance(value, list) else []
    return [(value, key) for key in keys] + [place for key in keys for place in _places(value[key])]


def _place(value: Any, rng: random.Random) -> tuple[Any, Any]:
    root = [value]
    # A value that holds nothing any more is changed itself, and then stays as it was.
    return rng.choice(_places(value) or [(root, 0)])


def _replace_with_number(value: Any, rng: random.Random) -> Any:
    held, key = _place(value, rng)
    held[key] = rng.choice(_NUMBERS)
    return value


def _scale(value: Any, rng: random.Random) -> Any:
    numbers = [(held, key) for held, key in _places(value) if isinstance(held[key], int | float)]
    if numbers:
        held, key = rng.choice(numbers)
        held[key] = held[key] * rng.choice((0.0, -1.0, 1e-3, 0.5, 1.5, 10.0, 1e6, 1e300))
    return value


def _replace_with_text(value: Any, rng: random.Random) -> Any:
    held, key = _place(value, rng)
    held[key] = rng.choice(_TEXTS)
    return value


def _replace_with_other(value: Any, rng: random.Random) -> Any:
    held, key = _place(value, rng)
    held[key] = rng.choice((None, True, False, {}, [], [[]], {"kind": "coast"}, [None] * 300, b"\x00\xff"))
    return value


def _drop(value: Any, rng: random.Random) -> Any:
    held, key = _place(value, rng)
    del held[key]
    return value


def _swap(value: Any, rng: random.Random) -> Any:
    (held, key), (other, other_key) = _place(value, rng), _place(value, rng)
    # Copies, so that nothing holds itself.
    held[key], other[other_key] = _copied(other[other_key]), _copied(held[key])
    return value


def _copied(value: Any) -> Any:
    if isinstance(value, dict):
        return {key: _copied(inner) for key, inner in value.items()}
    return [_copied(inner) for inner in value] if isinstance(value, list) else value


def _repeat(value: Any, rng: random.Random) -> Any:
    lists = [held[key] for held, key in _places(value) if isinstance(held[key], list) and held[key]]
    if lists:
        chosen = rng.choice(lists)
        chosen.extend(_copied(rng.choice(chosen)) for _ in range(rng.choice((1, 2, 8, 20))))
    return value


def _rename(value: Any, rng: random.Random) -> Any:
    objects = [held for held, _ in _places(value) if isinstance(held, dict) and held]
    if objects:
        held = rng.choice(objects)
        key = rng.choice(list(held))
        held[rng.choice((f"{key}_", key.upper() if isinstance(key, str) else 7, "kind", "", "\u0000", "~/"))] = (
            held.pop(key)
        )
    return value


def _nest(value: Any, rng: random.Random) -> Any:
    held, key = _place(value, rng)
    for _ in range(rng.choice((1, 20, 31, 33, _DEEPEST_WRAP))):
        held[key] = [held[key]] if rng.random() < 0.5 else {"a": held[key]}
    return value


_OF_VALUES: Final[tuple[Callable[[Any, random.Random], Any], ...]] = (
    _replace_with_number,
    _scale,
    _replace_with_text,
    _replace_with_other,
    _drop,
    _swap,
    _repeat,
    _rename,
    _nest,
)
_MILD: Final = (_scale, _scale, _scale, _repeat, _drop, _swap)


# how they are written


def _written(value: Any, rng: random.Random) -> bytes:
    """Write JSON that may hold what JSON cannot."""
    if isinstance(value, dict):
        pairs = [_written(str(key), rng) + b":" + _written(inner, rng) for key, inner in value.items()]
        if pairs and rng.random() < 0.005:
            pairs.append(rng.choice(pairs))
        return b"{" + b",".join(pairs) + b"}"
    if isinstance(value, list):
        return b"[" + b",".join(_written(inner, rng) for inner in value) + b"]"
    if isinstance(value, float) and value - value != 0.0:
        return rng.choice((b"NaN", b"1e999", b"-1e999", b"-Infinity"))
    if isinstance(value, bytes):
        return b'"\xff"'
    if isinstance(value, str):
        return _quoted(value)
    return msgspec.json.encode(value)


def _quoted(text: str) -> bytes:
    try:
        return msgspec.json.encode(text)
    except UnicodeEncodeError:
        return b'"\\ud800"'


def _packed(value: Any, rng: random.Random, oddity: float) -> bytes:
    """Write MessagePack, now and then in a longer form than need be, with a key twice or one that is no text."""
    is_odd = rng.random() < oddity
    if isinstance(value, dict):
        keys = [b"\x01" if rng.random() < oddity / 4 else _packed(str(key), rng, oddity) for key in value]
        pairs = [key + _packed(inner, rng, oddity) for key, inner in zip(keys, value.values(), strict=True)]
        pairs += pairs[:1] if is_odd else []
        return b"\xdf" + struct.pack(">I", len(pairs)) + b"".join(pairs)
    if isinstance(value, list):
        return b"\xdc" + struct.pack(">H", len(value)) + b"".join(_packed(inner, rng, oddity) for inner in value)
    if isinstance(value, str):
        text = value.encode("utf-8", "surrogatepass")
        return (b"\xdb" + struct.pack(">I", len(text)) + text) if is_odd else _shortest(value, text)
    if isinstance(value, int) and not -(2**63) <= value < 2**64:
        return msgspec.msgpack.encode(float(value))
    return msgspec.msgpack.encode(value)


def _shortest(text: str, encoded: bytes) -> bytes:
    try:
        return msgspec.msgpack.encode(text)
    except UnicodeEncodeError:
        return bytes((0xD9, len(encoded))) + encoded


# what is done to bytes


def _span(body: bytes, rng: random.Random) -> tuple[int, int]:
    start = rng.randrange(len(body) + 1)
    return start, min(len(body), start + rng.choice((0, 1, 1, 2, 8, 100)))


def _flip(body: bytes, rng: random.Random, _media_type: str) -> bytes:
    if not body:
        return body
    at = rng.randrange(len(body))
    return body[:at] + bytes((body[at] ^ (1 << rng.randrange(8)),)) + body[at + 1 :]


def _cut(body: bytes, rng: random.Random, _media_type: str) -> bytes:
    start, end = _span(body, rng)
    return body[:start] + body[end:]


def _truncate(body: bytes, rng: random.Random, _media_type: str) -> bytes:
    return body[: rng.randrange(len(body) + 1)]


def _double(body: bytes, rng: random.Random, _media_type: str) -> bytes:
    start, end = _span(body, rng)
    return body[:end] + body[start:]


def _insert(body: bytes, rng: random.Random, _media_type: str) -> bytes:
    start, _ = _span(body, rng)
    return body[:start] + rng.randbytes(rng.choice((1, 1, 4, 40))) + body[start:]


def _splice(body: bytes, rng: random.Random, media_type: str) -> bytes:
    other = rng.choice(_examples(rng.choice(_TAKING_BODIES)))
    if media_type == MSGPACK:
        other = msgspec.msgpack.encode(msgspec.json.decode(other))
    return body[: rng.randrange(len(body) + 1)] + other[rng.randrange(len(other)) :]


def _replace_token(body: bytes, rng: random.Random, media_type: str) -> bytes:
    if media_type == JSON:
        found = list(_TOKEN.finditer(body))
        start, end = rng.choice(found).span() if found else (0, len(body))
        return body[:start] + rng.choice(_JSON_TOKENS) + body[end:]
    start, end = _span(body, rng)
    return body[:start] + rng.choice(_PACKED_TOKENS) + body[end:]


def _swap_tokens(body: bytes, rng: random.Random, _media_type: str) -> bytes:
    found = [match.span() for match in _TOKEN.finditer(body)]
    if len(found) < 2:
        return body
    (start, end), (other_start, other_end) = sorted(rng.sample(found, 2))
    return body[:start] + body[other_start:other_end] + body[end:other_start] + body[start:end] + body[other_end:]


_OF_BYTES: Final[tuple[Callable[[bytes, random.Random, str], bytes], ...]] = (
    _flip,
    _cut,
    _truncate,
    _double,
    _insert,
    _splice,
    _replace_token,
    _replace_token,
    _swap_tokens,
)
