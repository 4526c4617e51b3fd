"""Rules for a system of bodies that a schema cannot state."""

from collections.abc import Mapping

from burntally.model._trail import Trail, suggestion, tell
from burntally.model._vehicle_checks import check_unique
from burntally.model.mission import Body, System

__all__ = ["check_system"]


def check_system(system: System, trail: Trail) -> None:
    """Check that the bodies make one tree, and that each of them is somewhere.

    Parameters
    ----------
    system : System
        The bodies. With the base `solar`, a parent may be a body of the catalogue, which is not known here.
    trail : Report or tuple
        Where the system stands.
    """
    place: Trail = (trail, "bodies")
    named = {body.name: body for body in system.bodies}
    check_unique([body.name for body in system.bodies], place, within="body of the system", field="name")
    roots_left = 0 if system.base == "solar" else 1
    for index, body in enumerate(system.bodies):
        if body.parent is None:
            roots_left -= 1
            if roots_left < 0:
                wanted = "one root: the bodies of the mission, or the solar catalogue, have theirs already"
                tell(((place, index), "parent"), "is missing, and there is another root", expected=wanted)
        else:
            _check_child(body, (place, index), named=named, is_closed=system.base == "empty")
    if roots_left > 0:
        tell(place, "have no root", expected="one body without a parent")


def _check_child(body: Body, trail: Trail, *, named: Mapping[str, Body], is_closed: bool) -> None:
    if body.orbit is None:
        tell((trail, "orbit"), "is missing: the body moves about a parent", expected="an orbit")
    if is_closed and body.parent not in named:
        message = f"is no body of the system{suggestion(body.parent, tuple(named))}"
        tell((trail, "parent"), message, read=body.parent, expected="the name of a body")
    if _circles(body, named):
        message = "leads back to the body itself"
        tell((trail, "parent"), message, read=body.parent, expected="a parent nearer to the root")


def _circles(body: Body, named: Mapping[str, Body]) -> bool:
    ancestor: Body | None = body
    for _ in range(len(named)):
        if ancestor is None or ancestor.parent is None:
            return False
        ancestor = named.get(ancestor.parent)
        if ancestor is not None and ancestor.name == body.name:
            return True
    return False
