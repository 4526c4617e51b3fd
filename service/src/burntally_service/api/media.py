"""Media types: what a body is written in, and what an answer may be written in (RFC 9110, sections 8.3 and 12.5.1)."""

from collections.abc import Iterator, Sequence
from functools import lru_cache
from typing import Final

from burntally.model.decode import JSON, MSGPACK

__all__ = ["body_media_type", "chosen_media_type"]

_READ_AS: Final = {
    JSON: JSON,
    MSGPACK: MSGPACK,
    # Names that MessagePack went by before it was settled, still sent by clients in the field.
    "application/x-msgpack": MSGPACK,
    "application/vnd.msgpack": MSGPACK,
}
_CACHED_HEADERS: Final = 256


@lru_cache(_CACHED_HEADERS)
def body_media_type(content_type: str) -> str | None:
    """Return what a body is written in, by the name that the decoder knows, or None where it cannot be read.

    A `charset` other than UTF-8 cannot be read; other parameters mean nothing to either format.
    """
    name, _, parameters = content_type.partition(";")
    charset = next((value for key, value in _parameters(parameters) if key == "charset"), "utf-8")
    if charset.lower() not in {"utf-8", "utf8"}:
        return None
    return _READ_AS.get(name.strip().lower())


@lru_cache(_CACHED_HEADERS)
def chosen_media_type(accept: str, offered: Sequence[str] = (JSON, MSGPACK)) -> str | None:
    """Return the offered media type that `Accept` likes best, or None where it refuses them all.

    Parameters
    ----------
    accept
        The header's value; empty: everything is welcome.
    offered
        Media types on offer; of two that are equally welcome, the earlier one is chosen.
    """
    if not accept.strip():
        return offered[0]
    ranges = list(_ranges(accept))
    weights = [_weight(media_type, ranges) for media_type in offered]
    best = max(weights)
    return offered[weights.index(best)] if best > 0.0 else None


def _parameters(text: str) -> Iterator[tuple[str, str]]:
    for part in text.split(";"):
        key, _, value = part.partition("=")
        yield key.strip().lower(), value.strip().strip('"')


def _ranges(accept: str) -> Iterator[tuple[str, float]]:
    for part in accept.split(","):
        name, _, parameters = part.partition(";")
        quality = next((value for key, value in _parameters(parameters) if key == "q"), "1")
        name = name.strip().lower()
        yield _READ_AS.get(name, name), _quality(quality)


def _quality(text: str) -> float:
    try:
        quality = float(text)
    except ValueError:
        return 0.0
    return quality if 0.0 <= quality <= 1.0 else 0.0


def _weight(media_type: str, ranges: list[tuple[str, float]]) -> float:
    """Weight of the most specific range that covers the media type."""
    for pattern in (media_type, media_type.partition("/")[0] + "/*", "*/*"):
        weights = [quality for name, quality in ranges if name == pattern]
        if weights:
            return max(weights)
    return 0.0
