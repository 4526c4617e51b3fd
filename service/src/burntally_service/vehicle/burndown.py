"""How the engines of one stage burn its loads down: intervals of one set of lit engines.

The tally burns a stage out as well (`tally_burns.burn_out`), from its own books, where ignitions and propellant may be
used up. Here a vehicle has flown nothing yet, and its nozzles may stand in air. A test holds the two to one another.
"""

from collections.abc import Sequence
from dataclasses import dataclass

from burntally.model.vehicle import Engine, Stage
from burntally_service.kernels.nozzle import exit_area, thrust_in_air
from burntally_service.kernels.rocket import burn_time, exhaust_speed, mass_flow
from burntally_service.kernels.tally_books import DRY_FRACTION

__all__ = ["Interval", "LitEngine", "burn_down", "main_engines"]


@dataclass(frozen=True, slots=True, kw_only=True)
class LitEngine:
    """One kind of engine with all its units burning at full thrust.

    Attributes
    ----------
    index : int
        Place of the engine in its stage.
    name : str
        Name of the engine.
    thrust : float
        Thrust of all units in vacuum, [N].
    v_exhaust : float
        Effective exhaust speed in vacuum, [m/s].
    feeds : tuple of (int, float)
        Loads drawn on, by their place in the stage, with their shares of the flow, which sum to 1.
    area_exit : float or None
        Exit area of all units' nozzles; None where the design does not tell it, [m2].
    """

    index: int
    name: str
    thrust: float
    v_exhaust: float
    feeds: tuple[tuple[int, float], ...]
    area_exit: float | None = None

    def thrust_at(self, p_a: float) -> float:
        """Thrust of all units at an ambient pressure; in vacuum where no exit area is known [N]."""
        return self.thrust if self.area_exit is None else thrust_in_air(self.thrust, self.area_exit, p_a)

    @property
    def mass_flow(self) -> float:
        """Propellant flow of all units, which no ambient pressure changes [kg/s]."""
        return mass_flow(self.thrust, self.v_exhaust)


@dataclass(frozen=True, slots=True, kw_only=True)
class Interval:
    """What burns between two changes of the set of lit engines.

    Attributes
    ----------
    engines : tuple of LitEngine
        Engines lit.
    duration : float
        Burn time, [s].
    propellant : float
        Propellant burned, [kg].
    """

    engines: tuple[LitEngine, ...]
    duration: float
    propellant: float


def main_engines(stage: Stage) -> tuple[LitEngine, ...]:
    """List the engines of a stage that burn without being named; without a load to draw on, none."""
    places = {load.name: place for place, load in enumerate(stage.propellants)}
    if not places:
        return ()
    return tuple(
        LitEngine(
            index=index,
            name=engine.name,
            thrust=engine.thrust * engine.count,
            v_exhaust=exhaust_speed(engine.isp),
            feeds=_shares(engine, places),
            area_exit=_area_exit(engine),
        )
        for index, engine in enumerate(stage.engines)
        if not engine.auxiliary
    )


def burn_down(usable: Sequence[float], engines: Sequence[LitEngine]) -> tuple[list[Interval], list[float]]:
    """Burn all engines until none can burn on.

    An engine goes out when a load that feeds it is dry; the others burn on, and what is left of its other loads is
    dead mass unless another engine draws on it.

    Parameters
    ----------
    usable : sequence of float
        Usable propellant of each load of the stage, [kg].
    engines : sequence of LitEngine
        Engines that are lit.

    Returns
    -------
    intervals : list of Interval
        The intervals in order; an engine that goes out ends one.
    left : list of float
        What is left of the usable propellant of each load, [kg].
    """
    left = list(usable)
    dry = [DRY_FRACTION * mass for mass in usable]
    intervals: list[Interval] = []
    burning = _burning(engines, left, dry)
    # A thrust so small that its flow is below all numbers burns nothing.
    while any(flow > 0.0 for flow in _flows(burning, len(left))):
        interval = _next_interval(left, burning)
        intervals.append(interval)
        burning = _burning(burning, left, dry)
    return intervals, left


def _next_interval(left: list[float], burning: tuple[LitEngine, ...]) -> Interval:
    """Burn until the next load is dry; `left` is brought up to date."""
    flows = _flows(burning, len(left))
    times = {load: burn_time(left[load], flow) for load, flow in enumerate(flows) if flow > 0.0}
    duration = min(times.values())
    burned = 0.0
    for load, time in times.items():
        # The load that ends the interval is emptied exactly, so that no rounding keeps its engine lit.
        drawn = left[load] if time <= duration else min(left[load], flows[load] * duration)
        burned += drawn
        left[load] -= drawn
    return Interval(engines=burning, duration=duration, propellant=burned)


def _burning(engines: Sequence[LitEngine], left: Sequence[float], dry: Sequence[float]) -> tuple[LitEngine, ...]:
    """List the engines none of whose loads is dry."""
    return tuple(engine for engine in engines if all(left[load] > dry[load] for load, _ in engine.feeds))


def _flows(engines: Sequence[LitEngine], loads: int) -> list[float]:
    """Sum the flow out of each load [kg/s]."""
    flows = [0.0] * loads
    for engine in engines:
        for load, share in engine.feeds:
            flows[load] += share * engine.mass_flow
    return flows


def _area_exit(engine: Engine) -> float | None:
    """Exit area of all units of an engine, stated or implied by the specific impulse at sea level [m2]."""
    if engine.exit_area is not None:
        return engine.exit_area * engine.count
    if engine.isp_sea_level is None:
        return None
    return exit_area(engine.thrust * engine.count, engine.isp, engine.isp_sea_level)


def _shares(engine: Engine, places: dict[str, int]) -> tuple[tuple[int, float], ...]:
    """Turn a mixture ratio as it is spoken into shares of the flow; absent, the first load feeds alone."""
    if engine.feeds is None:
        return ((0, 1.0),)
    whole = sum(engine.feeds.values())
    return tuple((places[name], parts / whole) for name, parts in engine.feeds.items())
