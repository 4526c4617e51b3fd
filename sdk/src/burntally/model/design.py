"""A design: what a budget is drawn up for."""

from typing import Annotated

from msgspec import Struct

from burntally.model.mission import Mission
from burntally.model.rules import Rules
from burntally.model.scalars import FormatVersion, Text, doc
from burntally.model.vehicle import Vehicle

__all__ = ["Design"]


class Design(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """A vehicle, a mission and the rules that the budget is drawn up under."""

    format: Annotated[FormatVersion, doc("Version of this format.")]
    title: Annotated[Text | None, doc("Title.")] = None
    vehicle: Annotated[Vehicle, doc("Vehicle.")]
    mission: Annotated[Mission, doc("Mission.")]
    rules: Annotated[Rules, doc("Rules; absent: none.")] = Rules()
