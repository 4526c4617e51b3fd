"""Quotas: how many requests a caller may make, as a bucket that fills at a steady rate for each of them."""

import math
import time
from collections import OrderedDict
from collections.abc import Callable
from dataclasses import dataclass
from typing import Final

__all__ = ["Quota", "Quotas"]

_MINUTE_S: Final = 60.0
_CALLERS_MAX: Final = 10_000


@dataclass(frozen=True, slots=True, kw_only=True)
class Quota:
    """What is left to a caller after a request."""

    is_spent: bool
    left: int
    more_in_s: int
    per_minute: int

    @property
    def headers(self) -> dict[str, str]:
        """Fields of draft-ietf-httpapi-ratelimit-headers-10: the policy, and what is left until there is more."""
        fields = {
            "RateLimit-Policy": f'"default";q={self.per_minute};w={_MINUTE_S:.0f}',
            "RateLimit": f'"default";r={self.left};t={self.more_in_s}',
        }
        return fields | ({"Retry-After": str(self.more_in_s)} if self.is_spent else {})


class Quotas:
    """The buckets of all callers, each as large as a minute's requests.

    The table is bounded: where it is full, the caller who has been away longest is forgotten, and starts anew with a
    full bucket.

    Parameters
    ----------
    per_minute : int
        Requests that a bucket holds, and that flow into it in a minute, > 0.
    callers_max : int
        The most buckets.
    clock : callable
        Monotonic seconds.
    """

    def __init__(
        self, per_minute: int, *, callers_max: int = _CALLERS_MAX, clock: Callable[[], float] = time.monotonic
    ) -> None:
        self._per_minute = per_minute
        self._callers_max = callers_max
        self._clock = clock
        # Of each caller: when the bucket will be full again, which is all that a steadily filling bucket needs.
        self._full_at_s: OrderedDict[str, float] = OrderedDict()

    def __len__(self) -> int:
        return len(self._full_at_s)

    def charge(self, caller: str) -> Quota:
        """Take one request out of the caller's bucket, unless it is empty."""
        now_s, each_s = self._clock(), _MINUTE_S / self._per_minute
        wanting_s = max(0.0, self._full_at_s.pop(caller, now_s) - now_s)
        # A rounding error in the clock's difference must not take a whole request away.
        is_spent = wanting_s + each_s > _MINUTE_S * (1.0 + 1e-9)
        if not is_spent:
            wanting_s += each_s
        self._full_at_s[caller] = now_s + wanting_s
        if len(self._full_at_s) > self._callers_max:
            self._full_at_s.popitem(last=False)
        left = math.floor((_MINUTE_S - wanting_s) / each_s + 1e-6)
        more_in_s = (left + 1) * each_s - (_MINUTE_S - wanting_s)
        return Quota(
            is_spent=is_spent, left=left, more_in_s=max(1, math.ceil(more_in_s - 1e-6)), per_minute=self._per_minute
        )
