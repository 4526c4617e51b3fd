"""The end of listening: who has connected is taken, and nobody else comes in."""

import socket

import pytest

from burntally_service.api import server


def test_behind_a_closed_door_only_those_wait_who_had_connected() -> None:
    with socket.create_server(("127.0.0.1", 0)) as listener, socket.create_connection(listener.getsockname()) as early:
        listener.settimeout(1.0)
        server._close_door(listener)
        with pytest.raises(TimeoutError):
            socket.create_connection(listener.getsockname(), timeout=0.2)
        accepted, address = listener.accept()
        accepted.close()
        assert address == early.getsockname()


def test_all_who_wait_are_taken_and_then_nobody_listens() -> None:
    listener = socket.create_server(("127.0.0.1", 0))
    listener.settimeout(0.0)
    address = listener.getsockname()
    callers = [socket.create_connection(address) for _ in range(3)]
    waiting = server._last_of(listener)
    assert len(waiting) == len(callers)
    with pytest.raises(ConnectionRefusedError):
        socket.create_connection(address, timeout=1.0)
    for connected in [*waiting, *callers]:
        connected.close()
