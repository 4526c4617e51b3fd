"""Rules for a leg that a schema cannot state: the orbits that it names, what it costs, the parts that it speaks of."""

from collections.abc import Callable, Collection, Mapping
from datetime import datetime
from typing import Final, NamedTuple

from burntally.model._trail import Trail, suggestion, tell
from burntally.model._vehicle_checks import check_masses, check_on, check_unique
from burntally.model.mission import (
    Allowance,
    ChargedLeg,
    Coast,
    Leg,
    Orbit,
    PropellantMove,
    Release,
    Separate,
    TakeOn,
)
from burntally.model.vehicle import Load, Stage

__all__ = ["ANY_PARTS", "Parts", "check_date", "check_leg", "check_size"]

_LAST_YEAR: Final = 2200


class Parts(NamedTuple):
    """What the legs of a mission may name."""

    stages: Mapping[str, Stage]
    payloads: Collection[str]  # of the vehicle, and whatever a leg takes on
    branches: Collection[str]
    has_epoch: bool


class _AnyStages(dict[str, Stage]):
    """Stages that cannot be read: whatever a leg names may be one of them."""

    def __contains__(self, _name: object) -> bool:
        return True


ANY_PARTS: Final = Parts(stages=_AnyStages(), payloads=_AnyStages(), branches=_AnyStages(), has_epoch=True)
"""What the legs may name where the rest of the request cannot be read: anything."""


def check_leg(leg: Leg, trail: Trail, *, parts: Parts | None) -> None:
    """Check one leg.

    Parameters
    ----------
    leg : Leg
        The leg.
    trail : Report or tuple
        Where it stands.
    parts : Parts or None
        What it may name; None: there is no vehicle, and names are nobody's.
    """
    if isinstance(leg, ChargedLeg):
        target = getattr(leg, "to", None)
        if target is not None:
            check_size(target, (trail, "to"))
        if parts is not None and leg.paid_by is not None:
            _check_each(leg.paid_by, (trail, "paid_by"), known=parts.stages, what="stage of the vehicle")
        if leg.engines is not None:
            _check_lit(leg, (trail, "engines"), parts)
    check = _CHECKS.get(type(leg))
    if check is not None and parts is not None:
        check(leg, trail, parts)


def check_size(orbit: Orbit, trail: Trail) -> None:
    """Tell an orbit whose size is stated in two ways, or that is upside down.

    Parameters
    ----------
    orbit : Orbit
        A target, which may leave elements out, or a place.
    trail : Report or tuple
        Where it stands.
    """
    if orbit.altitude is not None:
        for name in ("periapsis", "apoapsis", "period"):
            if (value := getattr(orbit, name)) is not None:
                only = "altitude alone, for a circular orbit"
                tell((trail, name), "stands beside altitude", read=value, expected=only)
        return
    if orbit.period is not None and (orbit.apoapsis is not None or orbit.periapsis is None or orbit.period == 0.0):
        wanted = "a period above zero together with periapsis, and without apoapsis"
        tell((trail, "period"), "does not make an orbit with what stands beside it", read=orbit.period, expected=wanted)
    if orbit.periapsis is not None and orbit.apoapsis is not None and orbit.periapsis > orbit.apoapsis:
        least = f"at least the periapsis, {orbit.periapsis:g} m"
        tell((trail, "apoapsis"), "is below the periapsis", read=orbit.apoapsis, expected=least)


def check_date(text: str, trail: Trail) -> None:
    """Tell a date that no calendar has, or that lies beyond the years of the contract.

    Parameters
    ----------
    text : str
        Date, or date and time, in the form of an epoch.
    trail : Report or tuple
        Where it stands.
    """
    expected = f"a date and time of the calendar, years 1900 to {_LAST_YEAR}"
    try:
        year = datetime.fromisoformat(text.removesuffix("Z")).year
    except ValueError:
        tell(trail, "is no date of the calendar", read=text, expected=expected)
        return
    if year > _LAST_YEAR:
        tell(trail, "is too far ahead", read=text, expected=expected)


def _check_known(name: str, trail: Trail, *, known: Collection[str], what: str) -> None:
    if name not in known:
        tell(trail, f"is no {what}{suggestion(name, tuple(known))}", read=name, expected=f"the name of a {what}")


def _check_each(names: list[str], trail: Trail, *, known: Collection[str], what: str) -> None:
    for index, name in enumerate(names):
        _check_known(name, (trail, index), known=known, what=what)
    check_unique(names, trail, within="entry of the list")


def _check_lit(leg: ChargedLeg, trail: Trail, parts: Parts | None) -> None:
    if leg.paid_by is None or len(leg.paid_by) != 1:
        tell(trail, "are named without the one stage that they belong to", expected="one stage in paid_by")
        return
    stage = parts.stages.get(leg.paid_by[0]) if parts is not None else None
    if stage is not None and leg.engines is not None:
        known = [engine.name for engine in stage.engines]
        _check_each(leg.engines, trail, known=known, what=f"engine of {stage.name!r}")


def _check_coast(leg: Coast, trail: Trail, parts: Parts) -> None:
    if (leg.duration is None) == (leg.until is None):
        message = "is missing, and so is until" if leg.duration is None else "stands beside until"
        tell((trail, "duration"), message, expected="exactly one of duration and until")
    if leg.upkeep_per_year is not None and leg.delta_v is not None:
        only = "at most one of upkeep_per_year and delta_v"
        tell((trail, "delta_v"), "stands beside upkeep_per_year", read=leg.delta_v, expected=only)
    if leg.until is not None:
        check_date(leg.until, (trail, "until"))
        if not parts.has_epoch:
            tell((trail, "until"), "needs the date of the mission's start", read=leg.until, expected="mission.epoch")


def _check_allowance(leg: Allowance, trail: Trail, _parts: Parts) -> None:
    if (leg.delta_v is None) == (leg.propellant is None):
        message = "is missing, and so is propellant" if leg.delta_v is None else "stands beside propellant"
        tell((trail, "delta_v"), message, expected="exactly one of delta_v and propellant")
    if leg.category is None:
        tell((trail, "category"), "is missing: an allowance has none of its own", expected="a category")


def _check_separate(leg: Separate, trail: Trail, parts: Parts) -> None:
    _check_each(leg.stages, (trail, "stages"), known=parts.stages, what="stage of the vehicle")


def _check_release(leg: Release, trail: Trail, parts: Parts) -> None:
    if leg.payload is None and not leg.propellants:
        tell(trail, "releases nothing", expected="payload or propellants")
    if leg.payload is not None:
        _check_known(leg.payload, (trail, "payload"), known=parts.payloads, what="payload")
    elif leg.mass is not None:
        tell((trail, "mass"), "stands without a payload", read=leg.mass, expected="payload beside mass")
    for index, move in enumerate(leg.propellants):
        place: Trail = ((trail, "propellants"), index)
        _moved(move, place, parts)
        if move.mass is None:
            tell((place, "mass"), "is missing", expected="the mass that is released")


def _check_take_on(leg: TakeOn, trail: Trail, parts: Parts) -> None:
    if leg.payload is None and not leg.propellants and leg.branch is None:
        tell(trail, "takes on nothing", expected="payload, propellants or branch")
    if leg.payload is not None:
        place: Trail = (trail, "payload")
        check_on(leg.payload, place, stages=parts.stages)
        check_masses(leg.payload.mass, (place, "mass"))
    if leg.branch is not None:
        _check_known(leg.branch, (trail, "branch"), known=parts.branches, what="branch of the mission")
    for index, move in enumerate(leg.propellants):
        place = ((trail, "propellants"), index)
        load = _moved(move, place, parts)
        if load is not None and move.mass is None and load.capacity is None:
            wanted = "a mass, or a capacity of the load"
            tell((place, "mass"), "is missing, and the load has no capacity to fill to", expected=wanted)


def _moved(move: PropellantMove, trail: Trail, parts: Parts) -> Load | None:
    stage = parts.stages.get(move.stage)
    if stage is None:
        _check_known(move.stage, (trail, "stage"), known=parts.stages, what="stage of the vehicle")
        return None
    loads = {load.name: load for load in stage.propellants}
    _check_known(move.load, (trail, "load"), known=loads, what=f"load of {stage.name!r}")
    return loads.get(move.load)


_CHECKS: Final[Mapping[type, Callable[..., None]]] = {
    Coast: _check_coast,
    Allowance: _check_allowance,
    Separate: _check_separate,
    Release: _check_release,
    TakeOn: _check_take_on,
}
