"""Presets of rules: published policies, as data."""

from burntally.model.rules import Rules

__all__ = ["preset_rules"]


def preset_rules(name: str) -> Rules | None:
    """Rules of a preset; None if there is none of the name."""
    return None
