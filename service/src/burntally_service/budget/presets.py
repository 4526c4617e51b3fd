"""Presets of rules: published margin policies, as data."""

import functools
import hashlib
import tomllib
from importlib.resources import files
from typing import Any

import msgspec

from burntally.model.errors import NotFoundError
from burntally.model.names import unknown_name
from burntally.model.operations import PresetRecord, Presets
from burntally.model.rules import Rules

__all__ = ["list_presets", "preset_digest", "preset_named", "preset_names", "preset_rules"]

_READER_KEYS = frozenset({"title", "source", "url", "notes"})


@functools.cache
def _policies() -> dict[str, dict[str, Any]]:
    """Read the data file once."""
    text = files("burntally_service").joinpath("data", "presets.toml").read_text(encoding="utf-8")
    return tomllib.loads(text)


@functools.cache
def preset_rules(name: str) -> Rules | None:
    """Rules of a preset; None if there is none of the name."""
    policy = _policies().get(name)
    if policy is None:
        return None
    stated = {key: value for key, value in policy.items() if key not in _READER_KEYS}
    return msgspec.convert(stated, Rules)


def preset_names() -> tuple[str, ...]:
    """Names of all presets."""
    return tuple(_policies())


def preset_digest(name: str) -> str | None:
    """SHA-256 of a preset's rules in canonical JSON; None if there is none of the name."""
    rules = preset_rules(name)
    if rules is None:
        return None
    return hashlib.sha256(msgspec.json.encode(rules, order="deterministic")).hexdigest()


def preset_named(name: str) -> PresetRecord:
    """Record of one preset.

    Parameters
    ----------
    name : str
        Name of the preset.

    Returns
    -------
    PresetRecord
        Its rules, with where they were published.

    Raises
    ------
    NotFoundError
        If there is none of the name.
    """
    rules = preset_rules(name)
    if rules is None:
        raise NotFoundError([unknown_name("preset", name, known=preset_names(), pointer="/name")])
    policy = _policies()[name]
    return PresetRecord(
        name=name, title=policy["title"], source=policy["source"], notes=list(policy.get("notes", [])), rules=rules
    )


def list_presets() -> Presets:
    """Every preset, by name."""
    return Presets(presets=[preset_named(name) for name in sorted(_policies())])
