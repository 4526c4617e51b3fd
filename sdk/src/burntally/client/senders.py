"""What a way in must do: HTTP, in-process, and whatever a test puts in their place."""

from typing import Protocol

from burntally.client.messages import Request
from burntally.client.retries import Outcome

__all__ = ["AsyncSender", "Sender"]


class Sender(Protocol):
    """One way in: sends once, and never raises what the retry rule should weigh."""

    def send_once(self, request: Request, timeout_s: float) -> Outcome:
        """Send once."""
        ...

    def close(self) -> None:
        """Let go of the connection."""
        ...


class AsyncSender(Protocol):
    """The same for an event loop."""

    async def send_once(self, request: Request, timeout_s: float) -> Outcome:
        """Send once."""
        ...

    async def close(self) -> None:
        """Let go of the connection."""
        ...
