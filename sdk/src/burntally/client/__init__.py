"""Clients of a service, over HTTP or in the same process."""

from burntally.client import errors
from burntally.client.clients import AsyncClient, Client
from burntally.client.connecting import connect, connect_async
from burntally.client.messages import Answer

__all__ = ["Answer", "AsyncClient", "Client", "connect", "connect_async", "errors"]
