"""Rules of the contract that a schema cannot state: names that refer, fields that exclude each other, dates, trees."""

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

__all__ = ["violations"]

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
            _check_design(value, report)
        elif isinstance(value, PerformanceRequest):
            _check_performance(value, report)
        elif isinstance(value, TransferRequest):
            _check_transfer(value, report)
    return report.violations


def _check_design(design: Design, trail: Trail) -> None:
    vehicle: Trail = (trail, "vehicle")
    mission: Trail = (trail, "mission")
    residual_fraction = design.rules.residual_fraction or 0.0
    check_vehicle(design.vehicle, vehicle, residual_fraction=residual_fraction)
    aboard = [
        *_named(design, vehicle),
        *(((place, "name"), load.name) for place, load in taken_on(design.mission, mission)),
    ]
    _check_names(aboard)
    check_mission(design.mission, mission, vehicle=design.vehicle)
    _check_rules(design.rules, (trail, "rules"))


def _check_performance(request: PerformanceRequest, trail: Trail) -> None:
    vehicle: Trail = (trail, "vehicle")
    check_vehicle(request.vehicle, vehicle, residual_fraction=request.rules.residual_fraction or 0.0)
    _check_names(_named(request, vehicle))
    _check_rules(request.rules, (trail, "rules"))


def _check_transfer(request: TransferRequest, trail: Trail) -> None:
    if request.system is not None:
        check_system(request.system, (trail, "system"))
    check_start(request.start, (trail, "start"))
    check_leg(request.leg, (trail, "leg"), parts=None)


def _named(request: Design | PerformanceRequest, trail: Trail) -> list[tuple[Trail, object]]:
    vehicle = request.vehicle
    return [
        *(((((trail, "stages"), index), "name"), stage.name) for index, stage in enumerate(vehicle.stages)),
        *(((((trail, "payloads"), index), "name"), payload.name) for index, payload in enumerate(vehicle.payloads)),
    ]


def _check_names(named: list[tuple[Trail, object]]) -> None:
    check_unique(named, within="stage or payload")
    for trail, name in named:
        if name == _TAKEN:
            tell(trail, "is the name of the first branch", read=name, expected=f"any name but {_TAKEN!r}")


def _check_rules(rules: Rules, trail: Trail) -> None:
    place: Trail = (trail, "contingency")
    categories = [(((place, index), "category"), rule.category) for index, rule in enumerate(rules.contingency)]
    check_unique(categories, within="rule")
    table: Trail = (trail, "growth_table")
    rows = [((table, index), (row.maturity, row.class_)) for index, row in enumerate(rules.growth_table)]
    check_unique(rows, within="row of the table")
