"""One module per kind of leg: which manoeuvres it needs from a location."""

from burntally_service.legs.orbit import check_start
from burntally_service.legs.plan import plan_leg
from burntally_service.legs.planned import Clock, LegPlan, PlanFinding, PlannedManoeuvre
from burntally_service.legs.single import transfer_of

__all__ = ["Clock", "LegPlan", "PlanFinding", "PlannedManoeuvre", "check_start", "plan_leg", "transfer_of"]
