"""A body of one's own, and legs planned about it."""

import math

from burntally.model.mission import Leg, Location, Orbit, OrbitLocation, Transfer
from burntally_service.bodies import Body
from burntally_service.legs import Clock, LegPlan, plan_leg

MU_EARTH = 3.986004418e14
R_EARTH = 6378137.0
GEO = 42164e3 - R_EARTH


def world(mu: float = MU_EARTH, radius: float = R_EARTH, *, top: float = 0.0, soi: float = math.inf) -> dict[str, Body]:
    """Make a system of one body, called tessaly."""
    body = Body(
        name="tessaly",
        parent=None,
        mu=mu,
        mu_system=mu,
        radius=radius,
        radius_kind="stated",
        j2_radius=radius,
        atmosphere_top=top,
        soi_radius=soi,
    )
    return {"tessaly": body}


def flown(
    leg: Leg, start: Location | None, bodies: dict[str, Body] | None = None, *, clock: Clock | None = None
) -> LegPlan:
    """Plan a leg."""
    return plan_leg(leg, start, bodies=bodies or world(), clock=clock or Clock())


def orbit(**fields: float) -> OrbitLocation:
    """Make an orbit about the body."""
    return OrbitLocation(body="tessaly", **fields)


def transfer(**fields: float) -> Transfer:
    """Make a transfer that only has a target."""
    return Transfer(to=Orbit(body=None, **fields))


def codes(plan: LegPlan) -> list[str]:
    """List the codes of a plan's findings."""
    return [finding.code for finding in plan.findings]
