"""Rules of the contract that a schema cannot state: names that refer, fields that exclude each other, dates, trees."""

from collections.abc import Sequence
from contextlib import suppress

from burntally.model._leg_checks import check_leg
from burntally.model._mission_checks import check_mission, check_start, taken_on
from burntally.model._system_checks import check_system
from burntally.model._trail import Report, ReportFullError, Trail, tell
from burntally.model._vehicle_checks import check_unique, check_vehicle
from burntally.model.design import Design
from burntally.model.errors import Violation
from burntally.model.operations import PerformanceRequest, TransferRequest
from burntally.model.rules import Rules
from burntally.model.vehicle import Payload, Vehicle

__all__ = ["check_design", "check_rules", "check_vehicle_alone", "violations"]

_TAKEN = "main"


def violations(value: object) -> list[Violation]:
    """Tell every rule that a request breaks although each of its fields is in order.

    Parameters
    ----------
    value : object
        A design, a request for a performance or for a transfer; whatever else breaks no such rule.

    Returns
    -------
    list of Violation
        What is wrong, with pointers; empty: nothing.
    """
    report = Report()
    with suppress(ReportFullError):
        if isinstance(value, Design):
            check_design(value, report)
        elif isinstance(value, PerformanceRequest):
            check_vehicle_alone(value.vehicle, (report, "vehicle"), rules=value.rules)
            check_rules(value.rules, (report, "rules"))
        elif isinstance(value, TransferRequest):
            _check_transfer(value, report)
    return report.violations


def check_design(design: Design, trail: Trail) -> None:
    """Check a design: its vehicle, its mission, and the names by which one speaks of the other."""
    vehicle: Trail = (trail, "vehicle")
    mission: Trail = (trail, "mission")
    taken = list(taken_on(design.mission, mission))
    payloads = [payload.name for payload in design.vehicle.payloads]
    payloads += [payload.name for _, payload in taken]
    check_vehicle(design.vehicle, vehicle, residual_fraction=design.rules.residual_fraction or 0.0)
    _check_names(design.vehicle, vehicle, taken=taken)
    check_mission(design.mission, mission, stages=design.vehicle.stages, payloads=payloads)
    check_rules(design.rules, (trail, "rules"))


def check_vehicle_alone(vehicle: Vehicle, trail: Trail, *, rules: Rules) -> None:
    """Check a vehicle that nothing else of the request speaks of."""
    check_vehicle(vehicle, trail, residual_fraction=rules.residual_fraction or 0.0)
    _check_names(vehicle, trail, taken=[])


def check_rules(rules: Rules, trail: Trail) -> None:
    """Check the rules, within themselves."""
    categories = [rule.category for rule in rules.contingency]
    check_unique(categories, (trail, "contingency"), within="rule", field="category")
    rows = [(row.maturity, row.class_) for row in rules.growth_table]
    check_unique(rows, (trail, "growth_table"), within="row of the table")


def _check_transfer(request: TransferRequest, trail: Trail) -> None:
    if request.system is not None:
        check_system(request.system, (trail, "system"))
    check_start(request.start, (trail, "start"))
    check_leg(request.leg, (trail, "leg"), parts=None)


def _check_names(vehicle: Vehicle, trail: Trail, *, taken: Sequence[tuple[Trail, Payload]]) -> None:
    stages: Trail = (trail, "stages")
    payloads: Trail = (trail, "payloads")
    named: list[tuple[Trail, str]] = [((stages, index), stage.name) for index, stage in enumerate(vehicle.stages)]
    named += [((payloads, index), payload.name) for index, payload in enumerate(vehicle.payloads)]
    named += [(place, payload.name) for place, payload in taken]
    seen = {_TAKEN}
    for place, name in named:
        if name in seen:
            message = "is the name of another stage or payload, or of the first branch"
            tell((place, "name"), message, read=name, expected=f"a name of its own, and not {_TAKEN!r}")
        seen.add(name)
