"""Haste: what a request may cost where it arrived, before it is handed to a thread."""

__all__ = ["NeedsTimeError"]


class NeedsTimeError(Exception):
    """The answer takes more than a closed form, so that it would hold up other requests where this one arrived."""
