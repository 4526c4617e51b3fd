"""Epochs of the contract: UTC, in days of 86 400 s; leap seconds are not counted."""

from datetime import UTC, datetime, timedelta

__all__ = ["epoch_after", "seconds_between"]


def seconds_between(earlier: str, later: str) -> float:
    """Time between two UTC epochs, in days of 86 400 s [s]."""
    start, start_fraction = _moment(earlier)
    end, end_fraction = _moment(later)
    return (end - start).total_seconds() + (end_fraction - start_fraction)


def epoch_after(epoch: str | None, elapsed: float) -> str | None:
    """UTC epoch some time after another, to the millisecond; None without an epoch, or past the calendar."""
    if epoch is None:
        return None
    moment, fraction = _moment(epoch)
    try:
        later = moment + timedelta(seconds=elapsed + fraction)
    except OverflowError:
        return None
    return later.isoformat(timespec="milliseconds").replace("+00:00", "Z")


def _moment(epoch: str) -> tuple[datetime, float]:
    """Read an epoch of the contract: the whole second, and the fraction, which may have nine digits [s]."""
    whole, _, fraction = epoch.removesuffix("Z").partition(".")
    return datetime.fromisoformat(whole).replace(tzinfo=UTC), float(f"0.{fraction or 0}")
