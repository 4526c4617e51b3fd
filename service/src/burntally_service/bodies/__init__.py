"""The system of bodies: the solar catalogue, or one that the user makes."""

from burntally_service.bodies.body import Body
from burntally_service.bodies.records import body_named, list_bodies
from burntally_service.bodies.solar import catalogue, table_digest
from burntally_service.bodies.system import system_of

__all__ = ["Body", "body_named", "catalogue", "list_bodies", "system_of", "table_digest"]
