"""The server's own life: it says at once that it stops, and then loses nothing that it has taken."""

import asyncio
import ctypes
import socket
import struct
import sys
from collections.abc import Callable
from types import FrameType
from typing import Final

import uvicorn
from uvicorn.protocols.http.httptools_impl import HttpToolsProtocol

__all__ = ["Server"]

# Long enough for a caller who is in the middle of a talk to be told that the next request goes elsewhere.
_SERVE_ON_S: Final = 0.5
# Time for what was connected last to be asked.
_LAST_S: Final = 0.2
# What the application is given to tell those whose answers will not come.
_REFUSE_S: Final = 1.0
_CLOSE: Final = (b"connection", b"close")

# From Linux' <asm-generic/socket.h> and <linux/filter.h>: a filter of one instruction, which lets no packet pass.
_SO_ATTACH_FILTER: Final = 26
_BPF_RETURN: Final = 0x06
_BPF_INSTRUCTION: Final = struct.Struct("=HBBI")
_BPF_PROGRAM: Final = struct.Struct("@HP")


class Server(uvicorn.Server):
    """A server that drains before it stops.

    From the signal on it is not ready, and each answer says that its connection is closed; it serves on for a moment,
    then takes no new connections, and waits for what is in flight. What is not done in time is refused, not cut off.

    Parameters
    ----------
    config : uvicorn.Config
        What it serves.
    connection : type
        Protocol of a connection, the same that the configuration names.
    drain_timeout_s : float
        Longest that all of this may take.
    on_signal, on_late : callable
        Called when it is told to stop; and shortly before the time is over.
    """

    def __init__(
        self,
        config: uvicorn.Config,
        *,
        connection: type[HttpToolsProtocol],
        drain_timeout_s: float,
        on_signal: Callable[[], None],
        on_late: Callable[[], None],
    ) -> None:
        super().__init__(config)
        self._connection = connection
        self._drain_timeout_s = drain_timeout_s
        self._on_signal = on_signal
        self._on_late = on_late

    def handle_exit(self, sig: int, frame: FrameType | None) -> None:
        """Take a signal to stop."""
        self._on_signal()
        super().handle_exit(sig, frame)

    async def shutdown(self, sockets: list[socket.socket] | None = None) -> None:
        """Drain, and stop."""
        loop = asyncio.get_running_loop()
        ends_s = loop.time() + self._drain_timeout_s
        late = loop.call_later(max(0.0, self._drain_timeout_s - _REFUSE_S), self._on_late)
        # The list itself is changed, since requests in flight hold it.
        self.server_state.default_headers.append(_CLOSE)
        if self.server_state.connections:
            await asyncio.sleep(min(_SERVE_ON_S, self._drain_timeout_s))
        await self._take_last()
        self.config.timeout_graceful_shutdown = max(0, round(ends_s - loop.time()))
        await super().shutdown(sockets)
        late.cancel()

    async def _take_last(self) -> None:
        """Stop listening, and take all who were connected by then; the system would reset their connections."""
        listening = [shared.dup() for server in self.servers for shared in server.sockets]
        for server in self.servers:
            server.close()
        waiting = [connected for listener in listening for connected in _last_of(listener)]
        for connected in waiting:
            await asyncio.get_running_loop().connect_accepted_socket(self._protocol, connected)
        if waiting or self.server_state.connections:
            await asyncio.sleep(min(_LAST_S, self._drain_timeout_s))

    def _protocol(self) -> asyncio.Protocol:
        return self._connection(config=self.config, server_state=self.server_state, app_state=self.lifespan.state)


def _last_of(listener: socket.socket) -> list[socket.socket]:
    """Accept all who wait, and stop listening before anyone else can be there."""
    waiting: list[socket.socket] = []
    with listener:
        _close_door(listener)
        while True:
            try:
                connected = listener.accept()[0]
            except OSError:
                return waiting
            connected.settimeout(0.0)
            waiting.append(connected)


def _close_door(listener: socket.socket) -> None:
    """Let nobody else begin to connect, while who has connected still waits to be accepted.

    Between the last of them and the end of listening somebody could come in who would then be reset. With the door
    closed he is not heard, tries again after a second, and is refused by a port where nobody listens.
    """
    if sys.platform == "linux":
        drop_all = ctypes.create_string_buffer(_BPF_INSTRUCTION.pack(_BPF_RETURN, 0, 0, 0))
        listener.setsockopt(socket.SOL_SOCKET, _SO_ATTACH_FILTER, _BPF_PROGRAM.pack(1, ctypes.addressof(drop_all)))
