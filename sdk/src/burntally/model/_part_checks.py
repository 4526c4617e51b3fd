"""Rules that a schema cannot state, held to those parts of a request that fit the schema where another part does not.

So a request is told all that is wrong with it, and not its schema's faults first and the others a round later. What is
told must stand whatever the faulty parts turn out to be: names are looked for only where all that could bear them was
read.
"""

from collections.abc import Sequence
from contextlib import suppress
from typing import Final, TypeVar, cast

import msgspec

from burntally.model._leg_checks import ANY_PARTS, check_date, check_leg
from burntally.model._mission_checks import check_start
from burntally.model._parse import is_list, is_object
from burntally.model._system_checks import check_system
from burntally.model._trail import Report, ReportFullError, Trail
from burntally.model.checks import check_design, check_rules, check_vehicle_alone
from burntally.model.design import Design
from burntally.model.errors import Violation
from burntally.model.mission import Leg, Location, Mission, System
from burntally.model.operations import PerformanceRequest, TransferRequest
from burntally.model.rules import Rules
from burntally.model.vehicle import Vehicle

__all__ = ["violations_in_parts"]

T = TypeVar("T")

# A union is read as a type is.
_LOCATION: Final = cast("type[Location]", Location)
_LEG: Final = cast("type[Leg]", Leg)


def violations_in_parts(type_: type, plain: object, found: Sequence[Violation]) -> list[Violation]:
    """Tell the rules that the faultless parts of a request break.

    Parameters
    ----------
    type_ : type
        Type of the request.
    plain : object
        Its plain values, as far as the walker could read them.
    found : sequence of Violation
        What the walker found to be wrong with them.

    Returns
    -------
    list of Violation
        What else is wrong; empty where the walker gave up, since then it is not known which parts are faultless.
    """
    report = Report()
    parts = _Parts(plain, found, report)
    with suppress(ReportFullError):
        if parts.is_faulty(()):
            return []
        if type_ is Design:
            _check_design_parts(parts)
        elif type_ is PerformanceRequest:
            _check_vehicle_parts(parts, parts.read(Rules, "rules") or Rules())
        elif type_ is TransferRequest:
            _check_places(parts)
            _check_leg_part(parts, "leg")
    return report.violations


class _Parts:
    """A request of which some parts are faulty."""

    def __init__(self, plain: object, found: Sequence[Violation], report: Report) -> None:
        self.report = report
        self._plain = plain
        self._faults = {violation.pointer for violation in found}
        self._spoiled = {front for pointer in self._faults for front in _fronts(pointer)}

    def is_faulty(self, path: tuple[str | int, ...]) -> bool:
        """Tell whether a part is the fault itself, or holds one, or lies within one."""
        pointer = "".join(f"/{step}" for step in path)
        return pointer in (self._spoiled if path else self._faults) or not self._faults.isdisjoint(_fronts(pointer))

    def value(self, *path: str | int) -> object:
        """What stands at a place; None: nothing."""
        value = self._plain
        for step in path:
            if is_object(value):
                value = value.get(step)
            elif is_list(value) and isinstance(step, int):
                value = value[step]
            else:
                return None
        return value

    def read(self, type_: type[T], *path: str | int) -> T | None:
        """Read a part; None where it is faulty or not there."""
        value = self.value(*path)
        if value is None or self.is_faulty(path):
            return None
        with suppress(msgspec.ValidationError):
            return msgspec.convert(value, type_)
        return None

    def trail(self, *path: str | int) -> Trail:
        """Give the way to a part."""
        trail: Trail = self.report
        for step in path:
            trail = (trail, step)
        return trail


def _fronts(pointer: str) -> list[str]:
    """Pointers of all that holds a place, and of the place itself; the whole request apart."""
    steps = pointer.split("/")
    return ["/".join(steps[:count]) for count in range(2, len(steps) + 1)]


def _check_design_parts(parts: _Parts) -> None:
    rules = parts.read(Rules, "rules") or Rules()
    vehicle, mission = parts.read(Vehicle, "vehicle"), parts.read(Mission, "mission")
    if vehicle is not None and mission is not None:
        check_design(Design(format=1, vehicle=vehicle, mission=mission, rules=rules), parts.report)
        return
    _check_vehicle_parts(parts, rules)
    _check_places(parts, "mission")
    epoch = parts.value("mission", "epoch")
    if isinstance(epoch, str) and not parts.is_faulty(("mission", "epoch")):
        check_date(epoch, parts.trail("mission", "epoch"))
    _check_legs(parts, "mission", "legs")
    for index in range(_length(parts.value("mission", "branches"))):
        _check_legs(parts, "mission", "branches", index, "legs")


def _check_vehicle_parts(parts: _Parts, rules: Rules) -> None:
    vehicle = parts.read(Vehicle, "vehicle")
    if vehicle is not None:
        check_vehicle_alone(vehicle, parts.trail("vehicle"), rules=rules)
    check_rules(rules, parts.trail("rules"))


def _check_places(parts: _Parts, *path: str) -> None:
    """Check the bodies, and where the first leg starts."""
    system = parts.read(System, *path, "system")
    if system is not None:
        check_system(system, parts.trail(*path, "system"))
    start = parts.read(_LOCATION, *path, "start")
    if start is not None:
        check_start(start, parts.trail(*path, "start"))


def _check_legs(parts: _Parts, *path: str | int) -> None:
    for index in range(_length(parts.value(*path))):
        _check_leg_part(parts, *path, index)


def _check_leg_part(parts: _Parts, *path: str | int) -> None:
    leg = parts.read(_LEG, *path)
    if leg is not None:
        check_leg(leg, parts.trail(*path), parts=ANY_PARTS)


def _length(value: object) -> int:
    return len(value) if is_list(value) else 0
