"""The bodies of one mission: the solar catalogue, the user's own, or both."""

import math
from collections.abc import Iterator, Mapping
from types import MappingProxyType

from burntally.model import errors, mission
from burntally.model.names import unknown_name
from burntally_service.bodies.body import Body
from burntally_service.bodies.solar import catalogue
from burntally_service.kernels.orbits import soi_radius

__all__ = ["system_of"]


def system_of(system: mission.System | None, *, pointer: str = "/mission/system") -> Mapping[str, Body]:
    """Bodies of a mission, by name.

    Parameters
    ----------
    system : burntally.model.mission.System or None
        What the mission says; None means the solar catalogue.
    pointer : str
        JSON Pointer to it in the request, for errors.

    Returns
    -------
    Mapping of str to Body
        Read-only.

    Raises
    ------
    burntally.model.errors.InconsistentError
        If a name is taken, a parent unknown, a body its own ancestor, or the system has no root or several. It names
        all of them.

    Examples
    --------
    >>> tessaly = mission.Body(name="tessaly", gravitational_parameter=3e14, radius=6e6)
    >>> list(system_of(mission.System(bodies=[tessaly])))
    ['tessaly']
    """
    if system is None:
        return catalogue()
    known: Mapping[str, Body] = catalogue() if system.base == "solar" else {}
    if violations := list(_violations(system, known, f"{pointer}/bodies")):
        raise errors.InconsistentError(violations)
    stated = {body.name: body for body in system.bodies}
    mus = {name: body.mu for name, body in known.items()}
    mus |= {name: body.gravitational_parameter for name, body in stated.items()}
    return MappingProxyType({**known, **{name: _body(body, mus) for name, body in stated.items()}})


def _violations(system: mission.System, known: Mapping[str, Body], pointer: str) -> Iterator[errors.Violation]:
    """Yield all that a schema cannot state about the bodies of a system."""
    taken = set(known)
    root = next((name for name, body in known.items() if body.parent is None), None)
    parents = {body.name: body.parent for body in reversed(system.bodies)}
    for index, body in enumerate(system.bodies):
        here = f"{pointer}/{index}"
        if body.name in taken:
            yield _violation(f"{here}/name", "is the name of another body", f'"{body.name}"', "a name of its own")
        taken.add(body.name)
        if body.parent is None:
            yield from _root_violations(body, root, here)
            root = root or body.name
        elif body.parent not in known:
            yield from _parent_violations(body.name, body.parent, parents, f"{here}/parent")


def _root_violations(body: mission.Body, root: str | None, pointer: str) -> Iterator[errors.Violation]:
    """Yield what is wrong with a body that has no parent."""
    if root is not None:
        yield _violation(pointer, f"is a second root beside {root!r}", None, "a parent")
    elif body.orbit is not None:
        yield _violation(f"{pointer}/orbit", "is an orbit of the root, which moves about nothing", None, "no orbit")


def _parent_violations(
    name: str, parent: str, parents: Mapping[str, str | None], pointer: str
) -> Iterator[errors.Violation]:
    """Yield what is wrong with a parent that the user's own bodies must hold."""
    if parent not in parents:
        yield unknown_name("body", parent, known=sorted({*parents} - {name}), pointer=pointer)
    elif _is_own_ancestor(name, parents):
        yield _violation(pointer, "leads back to the body itself", f'"{parent}"', "a parent that leads to the root")


def _violation(pointer: str, message: str, read: str | None, expected: str) -> errors.Violation:
    """Say what is wrong with one field."""
    return errors.Violation(pointer=pointer, message=message, read=read, expected=expected)


def _is_own_ancestor(name: str, parents: Mapping[str, str | None]) -> bool:
    """Walk up from a body, at most once through every body."""
    above = parents.get(name)
    for _ in parents:
        if above is None or above == name:
            break
        above = parents.get(above)
    return above == name


def _body(body: mission.Body, mus: Mapping[str, float]) -> Body:
    """Turn a body of the contract into one that legs can use."""
    mu = body.gravitational_parameter
    sma = None if body.orbit is None else body.orbit.semi_major_axis
    bound = math.inf if sma is None or body.parent is None else soi_radius(sma, mu, mus[body.parent])
    return Body(
        name=body.name,
        parent=body.parent,
        mu=mu,
        mu_system=mu,
        radius=body.radius,
        radius_kind="stated",
        sma=sma,
        soi_radius=bound,
        j2_radius=body.radius,
        atmosphere_top=0.0 if body.atmosphere is None else body.atmosphere.top,
        source="stated",
    )
