"""What a vehicle gives: its stages burned down one after another, from the bottom."""

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from burntally.model.budget import Caution, DryMass, Finding
from burntally.model.errors import UncomputableError, Violation
from burntally.model.operations import Performance, PerformanceRequest, Phase, StagePerformance
from burntally.model.rules import Rules
from burntally.model.vehicle import Load, Stage, Vehicle
from burntally_service.kernels.constants import G0
from burntally_service.kernels.rocket import (
    ideal_delta_v,
    specific_impulse,
    thrust_to_weight,
)
from burntally_service.kernels.tally_burns import UNBALANCED_FRACTION
from burntally_service.vehicle.burndown import Interval, LitEngine, burn_down, main_engines
from burntally_service.vehicle.masses import dry_mass_of, payload_mass_of

__all__ = ["performance_of"]

_IDEAL = Caution(
    code="ideal-delta-v",
    message="ideal delta-v: no losses by gravity, drag or steering, and none at ignition",
)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Stacked:
    """A stage in its stack: what it weighs and what it carries [kg], and the pressure around its engines [Pa]."""

    stage: Stage
    index: int
    dry: DryMass
    usable: tuple[float, ...]
    carried: float
    p_a: float

    @property
    def loaded(self) -> float:
        """Propellant loaded [kg]."""
        return _sum(load.mass for load in self.stage.propellants)

    @property
    def mass(self) -> float:
        """Mass of the stack from this stage upward [kg]."""
        return self.carried + self.dry.allowable + self.loaded


def performance_of(request: PerformanceRequest, *, gravity: float = G0) -> Performance:
    """Burn a vehicle down, stage by stage from the bottom, all engines lit that are not auxiliary.

    Parameters
    ----------
    request : PerformanceRequest
        The vehicle, and the rules with their preset filled in.
    gravity : float
        Gravity that weighs the stack, [m/s2].

    Returns
    -------
    Performance
        Stages with their phases; growth and residuals as the rules say, ambient pressure on the first stage alone.

    Raises
    ------
    burntally.model.errors.UncomputableError
        If an engine states more specific impulse at sea level than in vacuum.
    """
    stacked = _stack(request.vehicle, request.rules, request.ambient_pressure)
    stages: list[StagePerformance] = []
    findings: list[Finding] = []
    for item in stacked:
        engines = main_engines(item.stage)
        _check_engines(engines, item.index)
        intervals, left = burn_down(item.usable, engines)
        stages.append(_stage(item, intervals, gravity))
        findings.extend(_pressure_findings(item, engines))
        findings.extend(_feed_findings(item, engines, left))
    payload = _sum(payload_mass_of(payload, request.rules) for payload in request.vehicle.payloads)
    return Performance(
        initial_mass=stacked[0].mass,
        payload=payload,
        payload_fraction=_ratio(payload, stacked[0].mass),
        delta_v=_sum(stage.delta_v for stage in stages),
        delta_v_vacuum=_sum(stage.delta_v_vacuum for stage in stages),
        gravity=gravity,
        stages=stages,
        findings=findings,
        cautions=[_IDEAL],
    )


def _stack(vehicle: Vehicle, rules: Rules, p_a: float) -> list[_Stacked]:
    """Weigh each stage with all that it carries: the stages above, and the payloads that ride on it."""
    last = vehicle.stages[-1].name
    riding = dict.fromkeys((stage.name for stage in vehicle.stages), 0.0)
    for payload in vehicle.payloads:
        riding[payload.on or last] += payload_mass_of(payload, rules)
    stacked: list[_Stacked] = []
    above = 0.0
    for index in reversed(range(len(vehicle.stages))):
        stage = vehicle.stages[index]
        item = _Stacked(
            stage=stage,
            index=index,
            dry=dry_mass_of(stage, rules),
            usable=tuple(_usable(load, rules) for load in stage.propellants),
            carried=above + riding[stage.name],
            p_a=p_a if index == 0 else 0.0,
        )
        stacked.insert(0, item)
        above = item.mass
    return stacked


def _usable(load: Load, rules: Rules) -> float:
    """Propellant of a load that can burn while its stage is attached [kg]."""
    fraction = rules.residual_fraction if load.residual_fraction is None else load.residual_fraction
    return max(0.0, load.mass - load.mass * (fraction or 0.0) - load.held_back)


def _stage(item: _Stacked, intervals: Sequence[Interval], gravity: float) -> StagePerformance:
    """Tell what a stage gives."""
    phases: list[Phase] = []
    mass = item.mass
    for interval in intervals:
        phases.append(_phase(interval, mass, item.p_a, gravity))
        mass = phases[-1].mass_burnout
    step = item.loaded + item.dry.allowable
    return StagePerformance(
        name=item.stage.name,
        dry_mass=item.dry,
        propellant=item.loaded,
        usable=_sum(item.usable),
        carried=item.carried,
        mass_ratio=_quotient(item.mass, mass) if phases else 1.0,
        propellant_fraction=_ratio(item.loaded, step),
        structural_coefficient=_ratio(item.dry.allowable, step),
        payload_ratio=_ratio(item.carried, step),
        delta_v=_sum(phase.delta_v for phase in phases),
        delta_v_vacuum=_sum(phase.delta_v_vacuum for phase in phases),
        phases=phases,
    )


def _phase(interval: Interval, mass: float, p_a: float, gravity: float) -> Phase:
    """Tell one interval of one set of lit engines."""
    flow = _sum(engine.mass_flow for engine in interval.engines)
    vacuum = _sum(engine.thrust for engine in interval.engines)
    thrust = _sum(engine.thrust_at(p_a) for engine in interval.engines)
    # The mixture of unlike engines has the quotient of the sums, never the mean of their specific impulses.
    speed, speed_vacuum = thrust / flow, vacuum / flow
    after = mass - interval.propellant
    mass_ratio = _quotient(mass, after)
    return Phase(
        engines=[engine.name for engine in interval.engines],
        mass_ignition=mass,
        mass_burnout=after,
        propellant=interval.propellant,
        thrust=thrust,
        thrust_vacuum=vacuum,
        isp=specific_impulse(speed) if thrust > 0.0 else 0.0,
        isp_vacuum=specific_impulse(speed_vacuum),
        mass_flow=flow,
        burn_time=interval.duration,
        delta_v=ideal_delta_v(speed, mass_ratio) if thrust > 0.0 else 0.0,
        delta_v_vacuum=ideal_delta_v(speed_vacuum, mass_ratio),
        thrust_to_weight_ignition=thrust_to_weight(thrust, mass, gravity),
        thrust_to_weight_burnout=_quotient(thrust / gravity, after),
        acceleration_burnout=_quotient(thrust, after),
    )


def _check_engines(engines: Sequence[LitEngine], stage: int) -> None:
    """Refuse a nozzle that would gain thrust from the air."""
    violations = [
        Violation(
            pointer=f"/vehicle/stages/{stage}/engines/{engine.index}/isp_sea_level",
            message="is above the specific impulse in vacuum",
            expected="at most isp",
        )
        for engine in engines
        if engine.area_exit is not None and math.isnan(engine.area_exit)
    ]
    if violations:
        raise UncomputableError(violations)


def _pressure_findings(item: _Stacked, engines: Sequence[LitEngine]) -> Iterator[Finding]:
    """Yield what the ambient pressure does to the engines, or why that is not known."""
    if item.p_a <= 0.0:
        return
    for engine in engines:
        pointer = f"/vehicle/stages/{item.index}/engines/{engine.index}"
        if engine.area_exit is None:
            message = f"{engine.name} burns in air and states neither isp_sea_level nor exit_area: vacuum thrust taken"
            yield _warning("no-pressure-data", message, pointer)
        elif engine.thrust_at(item.p_a) <= 0.0:
            message = f"the ambient pressure takes all thrust from {engine.name}"
            most = engine.thrust / engine.area_exit
            yield _warning("pressure-exceeds-thrust", message, pointer, value=item.p_a, limit=most, unit="Pa")


def _feed_findings(item: _Stacked, engines: Sequence[LitEngine], left: Sequence[float]) -> Iterator[Finding]:
    """Yield the engines that went out with propellant left in another of their loads, one finding each."""
    for engine in engines:
        load = max((load for load, _ in engine.feeds), key=left.__getitem__)
        stated = item.stage.propellants[load]
        limit = UNBALANCED_FRACTION * stated.mass
        if left[load] > limit:
            message = f"{engine.name} goes out with {left[load]:.6g} kg of {stated.name} left"
            pointer = f"/vehicle/stages/{item.index}/engines/{engine.index}/feeds"
            yield _warning("feed-unbalanced", message, pointer, value=left[load], limit=limit, unit="kg")


def _warning(
    code: str,
    message: str,
    pointer: str,
    *,
    value: float | None = None,
    limit: float | None = None,
    unit: str | None = None,
) -> Finding:
    """Finding of severity warning."""
    return Finding(
        code=code,
        severity="warning",
        message=message,
        pointer=pointer,
        value=value,
        limit=limit,
        unit=unit,
        remedies=[],
    )


def _sum(terms: Sequence[float] | Iterator[float]) -> float:
    """Sum in order; Python's own sum compensates in later versions, and would then give other bits."""
    total = 0.0
    for term in terms:
        total += term
    return total


def _ratio(part: float, whole: float) -> float:
    """Part of a whole; 0 of nothing."""
    return part / whole if whole > 0.0 else 0.0


def _quotient(above: float, below: float) -> float:
    """Quotient that is infinite over nothing, and then told as an error of the result."""
    return above / below if below > 0.0 else math.inf
