"""Clients of a service, over HTTP or in the same process."""
