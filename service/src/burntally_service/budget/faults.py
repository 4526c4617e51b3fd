"""Faults of a request that only a catalogue can tell: names of presets and bodies, systems of bodies, starts.

A computation stops at the first of them. Here each is looked for by itself, once it is known that there is one, so that
a request is told all that keeps it from being computed.
"""

from collections.abc import Callable, Iterator
from functools import partial

from burntally.model.design import Design
from burntally.model.errors import InconsistentError, UncomputableError, Violation
from burntally.model.mission import Location, System
from burntally.model.names import unknown_name
from burntally.model.operations import PerformanceRequest, TransferRequest
from burntally_service.bodies import catalogue, system_of
from burntally_service.budget.rules import resolve
from burntally_service.legs import check_start
from burntally_service.vehicle.masses import items_of

__all__ = ["all_faults", "surface_gravity", "weightless"]


def all_faults(request: object, known: tuple[Violation, ...]) -> list[Violation]:
    """Add to the faults that are known of a request those that its names have.

    Parameters
    ----------
    request
        A request that fits its schema; of what is none of ours nothing more is told.
    known
        What is known to be wrong with it.

    Returns
    -------
    list of Violation
        Those that are known first; of a field that they name already, nothing more.
    """
    pointers = {violation.pointer for violation in known}
    return [*known, *(violation for violation in _looked_up(request) if violation.pointer not in pointers)]


def surface_gravity(name: str) -> float:
    """Gravity at the reference radius of a body of the solar catalogue [m/s2]; it refuses a name that is not there."""
    body = catalogue().get(name)
    if body is None:
        raise InconsistentError([unknown_name("body", name, known=catalogue(), pointer="/gravity_of")])
    return body.mu / (body.radius * body.radius)


def weightless(request: object) -> Violation | None:
    """Tell of the topmost stage if it would burn away to nothing, which no speed belongs to.

    Parameters
    ----------
    request
        A request that arithmetic could not end.

    Returns
    -------
    Violation or None
        None where the topmost stage has a dry mass or carries something, so that the reason is another one.
    """
    if not isinstance(request, Design | PerformanceRequest):
        return None
    top = len(request.vehicle.stages) - 1
    stage = request.vehicle.stages[top]
    carried = sum(item.mass * item.count for payload in request.vehicle.payloads for item in items_of(payload.mass))
    if carried > 0.0 or any(item.mass > 0.0 for item in items_of(stage.dry_mass)):
        return None
    return Violation(
        pointer=f"/vehicle/stages/{top}/dry_mass",
        message="is nothing, and so is what the stage carries: burned empty it would weigh nothing, at no finite speed",
        read="0",
        expected="a mass above zero, or a payload",
    )


def _looked_up(request: object) -> Iterator[Violation]:
    for look_up in _look_ups(request):
        try:
            look_up()
        except (InconsistentError, UncomputableError) as error:
            yield from error.violations


def _look_ups(request: object) -> Iterator[Callable[[], object]]:
    if isinstance(request, Design):
        yield partial(resolve, request.rules)
        yield partial(_start, request.mission.system, request.mission.start, "/mission")
    elif isinstance(request, PerformanceRequest):
        yield partial(resolve, request.rules)
        if request.gravity_of is not None:
            yield partial(surface_gravity, request.gravity_of)
    elif isinstance(request, TransferRequest):
        yield partial(_start, request.system, request.start, "")


def _start(system: System | None, start: Location, pointer: str) -> None:
    bodies = system_of(system, pointer=f"{pointer}/system")
    check_start(start, bodies, pointer=f"{pointer}/start")
