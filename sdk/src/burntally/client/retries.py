"""When to try again: a table of what is safe, and pauses bounded by tries and by one total deadline."""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Final

from burntally.client.errors import ClientError, ConnectionFailed
from burntally.client.messages import Reply

__all__ = ["PAUSE_MAX_S", "PAUSE_MIN_S", "Attempt", "Outcome", "Retries", "retry_after_s", "worth_retrying"]

PAUSE_MIN_S: Final = 0.5
PAUSE_MAX_S: Final = 8.0

_RETRIED_STATUSES: Final = frozenset({408, 429})
_FIRST_SERVER_STATUS: Final = 500

Outcome = Reply | ClientError
"""What one try ends in."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Attempt:
    """One try: wait `pause_s`, then send, and give up after `timeout_s`."""

    pause_s: float
    timeout_s: float


def worth_retrying(outcome: Outcome) -> bool:
    """Tell whether the same request may do better; every operation is a pure function, so that none does harm."""
    if isinstance(outcome, Reply):
        return outcome.status in _RETRIED_STATUSES or outcome.status >= _FIRST_SERVER_STATUS
    return isinstance(outcome, ConnectionFailed)


def retry_after_s(outcome: Outcome, *, now_s: float) -> float | None:
    """Read how long the service asks to wait (RFC 9110, 10.2.3).

    Parameters
    ----------
    outcome : Reply or ClientError
        What the last try ended in.
    now_s : float
        Seconds since the Unix epoch, which a date in the field is held against.

    Returns
    -------
    float or None
        Seconds to wait, >= 0; None where the field is absent or unreadable.
    """
    asked = outcome.headers.get("retry-after") if isinstance(outcome, Reply) else None
    if asked is None:
        return None
    if asked.isascii() and asked.isdigit():
        return float(asked)
    from email.utils import parsedate_to_datetime

    try:
        return max(0.0, parsedate_to_datetime(asked).timestamp() - now_s)
    except ValueError:
        return None


class Retries:
    """The tries of one request.

    Parameters
    ----------
    timeout_s : float
        Total deadline, over all tries and pauses.
    tries : int
        The most tries, >= 1.
    clock : callable
        Monotonic seconds.
    wall_clock : callable
        Seconds since the Unix epoch.
    spread : callable
        Draws a pause between two bounds, so that many clients do not come back at once.
    """

    def __init__(
        self,
        *,
        timeout_s: float,
        tries: int,
        clock: Callable[[], float],
        wall_clock: Callable[[], float],
        spread: Callable[[float, float], float],
    ) -> None:
        self._clock = clock
        self._wall_clock = wall_clock
        self._spread = spread
        self._deadline_s = clock() + timeout_s
        self._tries = tries
        self._tried = 0

    def first(self) -> Attempt | None:
        """Start at once; None where there is no time at all."""
        return self._attempt(pause_s=0.0)

    def after(self, outcome: Outcome) -> Attempt | None:
        """Say whether and when to try again.

        A service that asks for a longer wait than the deadline allows is not asked again: to come back sooner
        than it wants would add to its load.

        Parameters
        ----------
        outcome : Reply or ClientError
            What the last try ended in.

        Returns
        -------
        Attempt or None
            The next try; None where the outcome stands.
        """
        if self._tried >= self._tries or not worth_retrying(outcome):
            return None
        ceiling_s = min(PAUSE_MAX_S, PAUSE_MIN_S * 2.0**self._tried)
        asked_s = retry_after_s(outcome, now_s=self._wall_clock())
        drawn_s = self._spread(PAUSE_MIN_S, ceiling_s)
        return self._attempt(pause_s=drawn_s if asked_s is None else max(asked_s, drawn_s))

    def _attempt(self, *, pause_s: float) -> Attempt | None:
        left_s = self._deadline_s - self._clock() - pause_s
        if left_s <= 0.0:
            return None
        self._tried += 1
        return Attempt(pause_s=pause_s, timeout_s=left_s)
