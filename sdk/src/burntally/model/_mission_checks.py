"""Rules for a mission that a schema cannot state: where it starts, and which branches it has."""

from collections.abc import Collection, Iterator, Sequence

from burntally.model._leg_checks import Parts, check_date, check_leg, check_size
from burntally.model._system_checks import check_system
from burntally.model._trail import Trail, suggestion, tell
from burntally.model._vehicle_checks import check_unique
from burntally.model.mission import Hyperbola, Leg, Location, Mission, OrbitLocation, TakeOn
from burntally.model.vehicle import Payload, Stage

__all__ = ["check_mission", "check_start", "taken_on"]


def taken_on(mission: Mission, trail: Trail) -> Iterator[tuple[Trail, Payload]]:
    """Give every payload that a leg takes on, with the place where it is described."""
    for place, legs in _rows(mission, trail):
        for index, leg in enumerate(legs):
            if isinstance(leg, TakeOn) and leg.payload is not None:
                yield ((place, index), "payload"), leg.payload


def check_mission(mission: Mission, trail: Trail, *, stages: Sequence[Stage], payloads: Collection[str]) -> None:
    """Check a mission, within itself and against the vehicle that flies it.

    Parameters
    ----------
    mission : Mission
        The mission.
    trail : Report or tuple
        Where it stands.
    stages : sequence of Stage
        Stages of the vehicle.
    payloads : collection of str
        Payloads of the vehicle, and those that legs take on.
    """
    if mission.system is not None:
        check_system(mission.system, (trail, "system"))
    if mission.epoch is not None:
        check_date(mission.epoch, (trail, "epoch"))
    check_start(mission.start, (trail, "start"))
    parts = Parts(
        stages={stage.name: stage for stage in stages},
        payloads=payloads,
        branches={branch.of for branch in mission.branches},
        has_epoch=mission.epoch is not None,
    )
    _check_branches(mission, trail, parts)
    for place, legs in _rows(mission, trail):
        for index, leg in enumerate(legs):
            check_leg(leg, (place, index), parts=parts)


def check_start(location: Location, trail: Trail) -> None:
    """Tell a start that leaves open how large the orbit is, or that is no hyperbola.

    Parameters
    ----------
    location : Location
        Where something starts.
    trail : Report or tuple
        Where it stands.
    """
    if isinstance(location, OrbitLocation):
        check_size(location, trail)
        if location.body is None:
            tell((trail, "body"), "is missing", expected="the body that the orbit is about")
        if location.altitude is None and (
            location.periapsis is None or (location.apoapsis is None and location.period is None)
        ):
            wanted = "altitude, periapsis and apoapsis, or periapsis and period"
            tell(trail, "does not say how large the orbit is", expected=wanted)
    elif isinstance(location, Hyperbola) and location.c3 <= 0.0:
        tell((trail, "c3"), "is not above zero, as it is on a hyperbola", read=location.c3, expected="above 0 m2/s2")


def _rows(mission: Mission, trail: Trail) -> Iterator[tuple[Trail, list[Leg]]]:
    yield (trail, "legs"), mission.legs
    for index, branch in enumerate(mission.branches):
        yield (((trail, "branches"), index), "legs"), branch.legs


def _check_branches(mission: Mission, trail: Trail, parts: Parts) -> None:
    place: Trail = (trail, "branches")
    names = [branch.of for branch in mission.branches]
    check_unique(names, place, within="branch of the mission", field="of")
    for index, name in enumerate(names):
        if name not in parts.stages:
            known = tuple(parts.stages)
            message = f"is no stage of the vehicle{suggestion(name, known)}"
            tell(((place, index), "of"), message, read=name, expected="the name of a stage")
