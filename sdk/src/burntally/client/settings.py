"""What a client is set to: its deadline, its tries, and the header fields that it sends."""

import time
from dataclasses import dataclass
from typing import TypeVar

from burntally.client.exchange import Body, request_for
from burntally.client.messages import Request
from burntally.client.operations import Operation
from burntally.client.retries import Retries
from burntally.model.decode import JSON

__all__ = ["ClientSettings"]

A = TypeVar("A")


@dataclass(frozen=True, slots=True, kw_only=True)
class ClientSettings:
    """Settings that every call of a client shares.

    Parameters
    ----------
    timeout_s : float
        Total deadline of a call, over all its tries.
    tries : int
        The most tries of a call.
    user_agent : str
        How the client names itself.
    """

    timeout_s: float
    tries: int
    user_agent: str

    def request(
        self,
        operation: Operation[A],
        body: Body | None,
        *,
        name: str | None = None,
        media_type: str = JSON,
        accept: str = JSON,
    ) -> Request:
        """Build a request with this client's header fields."""
        headers = {"accept": accept, "content-type": media_type, "user-agent": self.user_agent}
        return request_for(operation, body, name=name, headers=headers)

    def retries(self, timeout_s: float | None) -> Retries:
        """Start the tries of one call."""
        return Retries(
            timeout_s=self.timeout_s if timeout_s is None else timeout_s,
            tries=self.tries,
            clock=time.monotonic,
            wall_clock=time.time,
            spread=_spread,
        )


def _spread(least: float, most: float) -> float:
    from random import SystemRandom

    return SystemRandom().uniform(least, most)
