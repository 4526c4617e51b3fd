"""Rules for a vehicle that a schema cannot state."""

from collections.abc import Collection, Sequence

from burntally.model._trail import Trail, suggestion, tell
from burntally.model.vehicle import Engine, Load, MassItem, Payload, Stage, Vehicle

__all__ = ["check_masses", "check_on", "check_unique", "check_vehicle"]

_ROUNDING = 1e-9


def check_unique(names: Sequence[object], trail: Trail, *, within: str, field: str | None = None) -> None:
    """Tell each name of a list that an earlier entry bears already.

    Parameters
    ----------
    names : sequence
        Names, or whatever must differ, in the order of the list.
    trail : Report or tuple
        Where the list stands.
    within : str
        What an entry is, for the message.
    field : str, optional
        The entry's field that holds the name; absent: the entry itself.
    """
    if len(set(names)) == len(names):
        return
    seen: set[object] = set()
    for index, name in enumerate(names):
        if name in seen:
            entry: Trail = (trail, index)
            place = entry if field is None else (entry, field)
            tell(place, f"is the same as in another {within}", read=name, expected="each of them once")
        seen.add(name)


def check_vehicle(vehicle: Vehicle, trail: Trail, *, residual_fraction: float) -> None:
    """Check the parts of a vehicle, each within itself and against the stages.

    Parameters
    ----------
    vehicle : Vehicle
        The vehicle.
    trail : Report or tuple
        Where the vehicle stands.
    residual_fraction : float
        The rules' share of residual propellant, for loads that state none.
    """
    stages: Trail = (trail, "stages")
    for index, stage in enumerate(vehicle.stages):
        _check_stage(stage, (stages, index), residual_fraction=residual_fraction)
    names = tuple(stage.name for stage in vehicle.stages)
    for index, payload in enumerate(vehicle.payloads):
        place = ((trail, "payloads"), index)
        check_on(payload, place, stages=names)
        check_masses(payload.mass, (place, "mass"))


def check_on(payload: Payload, trail: Trail, *, stages: Collection[str]) -> None:
    """Tell where a payload rides on a stage that there is not."""
    if payload.on is not None and payload.on not in stages:
        message = f"is no stage of the vehicle{suggestion(payload.on, tuple(stages))}"
        tell((trail, "on"), message, read=payload.on, expected="the name of a stage")


def check_masses(masses: float | list[MassItem], trail: Trail) -> None:
    """Tell items of a mass list that state their growth in two ways, or a class without a maturity."""
    if not isinstance(masses, list):
        return
    for index, item in enumerate(masses):
        place = (trail, index)
        if item.growth is not None and item.maturity is not None:
            message = "stands beside growth, which beats it"
            tell((place, "maturity"), message, read=item.maturity, expected="growth or maturity, not both")
        if item.class_ is not None and item.maturity is None:
            message = "means nothing without a maturity"
            tell((place, "class"), message, read=item.class_, expected="maturity beside class")


def _check_stage(stage: Stage, trail: Trail, *, residual_fraction: float) -> None:
    check_masses(stage.dry_mass, (trail, "dry_mass"))
    loads: Trail = (trail, "propellants")
    engines: Trail = (trail, "engines")
    check_unique([load.name for load in stage.propellants], loads, within="load of the stage", field="name")
    check_unique([engine.name for engine in stage.engines], engines, within="engine of the stage", field="name")
    if stage.engines and not stage.propellants:
        message = f"is missing: {stage.name!r} has engines and nothing that they could burn"
        tell(loads, message, expected="a load, or a stage without engines")
    for index, load in enumerate(stage.propellants):
        _check_load(load, (loads, index), residual_fraction=residual_fraction)
    for index, engine in enumerate(stage.engines):
        _check_engine(engine, (engines, index), stage=stage)


def _check_load(load: Load, trail: Trail, *, residual_fraction: float) -> None:
    fraction = load.residual_fraction if load.residual_fraction is not None else residual_fraction
    if load.held_back > load.mass * (1.0 - fraction) + load.mass * _ROUNDING:
        message = "is more than what is loaded and not residual"
        most = f"at most {load.mass * (1.0 - fraction):g} kg"
        tell((trail, "held_back"), message, read=load.held_back, expected=most)


def _check_engine(engine: Engine, trail: Trail, *, stage: Stage) -> None:
    if engine.isp_sea_level is not None:
        if engine.exit_area is not None:
            message = "stands beside isp_sea_level, which tells it already"
            only = "isp_sea_level or exit_area, not both"
            tell((trail, "exit_area"), message, read=engine.exit_area, expected=only)
        if engine.isp_sea_level > engine.isp:
            message = "is above isp, which is in vacuum"
            most = f"at most {engine.isp:g} s"
            tell((trail, "isp_sea_level"), message, read=engine.isp_sea_level, expected=most)
    if engine.feeds is not None:
        names = tuple(load.name for load in stage.propellants)
        for name in engine.feeds:
            if name not in names:
                message = f"is no load of {stage.name!r}{suggestion(name, names)}"
                tell(((trail, "feeds"), name), message, expected="the name of a load of the stage")
