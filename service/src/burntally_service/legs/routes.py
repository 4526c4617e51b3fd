"""The ways of a transfer whose burns all stand on one line through the body."""

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass

from burntally_service.kernels.ellipses import Place
from burntally_service.kernels.half_turns import (
    HalfTurn,
    TwoHalfTurns,
    half_turn,
    two_half_turns,
    widest_half_turn,
)
from burntally_service.legs.errand import Errand
from burntally_service.legs.path import Path, Step, apsidal_name, apsidal_place, path_of

__all__ = ["bielliptic_paths", "two_burn_paths"]

_GRID = 12
_GOLDEN = 0.5 * (math.sqrt(5.0) - 1.0)
# The cost is flat at its least: an interval shrunk by 1e5 leaves an error of some 1e-10 of it.
_GOLDEN_STEPS = 24


@dataclass(frozen=True, slots=True, kw_only=True)
class _End:
    """One end of a line of burns.

    `opposite` is the radius of the other apsis where the place is one; `argument` the direction of the place on the
    orbit before; `nu` its true anomaly on the orbit that it is on.
    """

    place: Place
    opposite: float | None
    argument: float
    nu: float
    side: int = 1


def two_burn_paths(errand: Errand) -> Iterator[Path]:
    """Yield the ways with two burns, half a revolution apart; some need only one of them."""
    for departure in _departures(errand):
        for arrival in _arrivals(errand, departure.argument + math.pi):
            flown = half_turn(errand.mu, departure.place, arrival.place, errand.turn.angle)
            path = path_of(_two_steps(departure, arrival, flown), bielliptic=False, apse=_final_apse(errand, arrival))
            if path is not None:
                yield path


def bielliptic_paths(errand: Errand, *, r_max: float, tof_max: float) -> Iterator[Path]:
    """Yield the ways with three burns, each by the intermediate radius that makes it cheapest within the bounds."""
    for departure in _departures(errand):
        for arrival in _arrivals(errand, departure.argument):
            low = max(departure.place.r, arrival.place.r)
            high = r_max
            if tof_max < math.inf:
                high = min(high, widest_half_turn(errand.mu, departure.place.r, arrival.place.r, tof_max))
            if not low < high < math.inf:
                continue
            path = _cheapest_bielliptic(errand, departure, arrival, low=low, high=high)
            if path is not None:
                yield path


def _cheapest_bielliptic(errand: Errand, departure: _End, arrival: _End, *, low: float, high: float) -> Path | None:
    """Way by the cheapest intermediate radius between two bounds."""

    def flown(r_b: float) -> TwoHalfTurns:
        return two_half_turns(errand.mu, departure.place, r_b, arrival.place, errand.turn.angle)

    r_b = _least(lambda r: flown(r).dv, low, high)
    steps = _three_steps(departure, arrival, r_b, flown(r_b))
    return path_of(steps, bielliptic=True, apse=_final_apse(errand, arrival))


def _departures(errand: Errand) -> Iterator[_End]:
    """Yield the places where the first burn may stand."""
    if errand.arriving is not None:
        yield _End(place=errand.arriving, opposite=None, argument=0.0, nu=0.0)
        return
    size = errand.initial
    for argument, side in _lines(errand):
        nu = argument - errand.apse_i
        place = size.place(errand.mu, nu)
        yield _End(place=place, opposite=_opposite(place, size.r_peri, size.r_apo), argument=argument, nu=nu, side=side)


def _lines(errand: Errand) -> Iterator[tuple[float, int]]:
    """Yield the directions in which the first burn may stand, and to which side the velocity turns there."""
    node = errand.turn.argument_i
    if errand.turns:
        yield node, 1
        if not errand.starts_on_circle or errand.asks_apse:
            yield node + math.pi, -1
        return
    yield errand.apse_i, 1
    if not errand.starts_on_circle:
        yield errand.apse_i + math.pi, 1
        if errand.asks_apse and errand.apse_f is not None:
            along = errand.apse_f - errand.carried(0.0)
            yield along, 1
            yield along + math.pi, 1


def _arrivals(errand: Errand, argument: float) -> Iterator[_End]:
    """Yield the places on the orbit after where the last burn may stand, in a direction given on the orbit before."""
    size = errand.final
    if errand.asks_apse and errand.apse_f is not None:
        anomalies = [errand.carried(argument) - errand.apse_f]
    else:
        anomalies = [0.0] if size.is_circular else [0.0, math.pi]
    for nu in anomalies:
        place = size.place(errand.mu, nu)
        yield _End(place=place, opposite=_opposite(place, size.r_peri, size.r_apo), argument=argument, nu=nu)


def _opposite(place: Place, r_peri: float, r_apo: float) -> float | None:
    """Radius of the other apsis, if the place is an apsis."""
    if place.r == r_peri:
        return r_apo
    return r_peri if place.r == r_apo else None


def _final_apse(errand: Errand, arrival: _End) -> float | None:
    """Argument of periapsis after [rad]; None where the start leaves the direction of the line open."""
    if errand.apse_f is not None:
        return errand.apse_f
    if errand.final.is_circular or errand.starts_on_circle or errand.arriving is not None:
        return None
    return errand.carried(arrival.argument) - arrival.nu


def _two_steps(departure: _End, arrival: _End, flown: HalfTurn) -> tuple[Step, ...]:
    """Burns of half a turn."""
    r_1, r_2 = departure.place.r, arrival.place.r
    first = _named(departure, r_2, arriving=False)
    second = _named(arrival, r_1, arriving=True)
    return (
        Step(name=first[0], place=first[1], r=r_1, impulse=flown.first, side=departure.side),
        Step(name=second[0], place=second[1], r=r_2, impulse=flown.second, side=-departure.side, arc=flown.arc),
    )


def _three_steps(departure: _End, arrival: _End, r_b: float, flown: TwoHalfTurns) -> tuple[Step, ...]:
    """Burns of two half turns."""
    r_1, r_2 = departure.place.r, arrival.place.r
    side = departure.side
    first = _named(departure, r_b, arriving=False)
    third = _named(arrival, r_b, arriving=True)
    middle = apsidal_name(r_b, r_1, r_2)
    return (
        Step(name=first[0], place=first[1], r=r_1, impulse=flown.first, side=side),
        Step(name=middle, place="apoapsis", r=r_b, impulse=flown.second, side=-side, arc=flown.arc_1),
        Step(name=third[0], place=third[1], r=r_2, impulse=flown.third, side=side, arc=flown.arc_2),
    )


def _named(end: _End, r_other: float, *, arriving: bool) -> tuple[str, str]:
    """Name and place of a burn at one end of an arc that leads from or to a radius on the other side."""
    r = end.place.r
    if end.opposite is None:
        if not arriving and end.nu == 0.0:
            return apsidal_name(r, None, r_other), apsidal_place(r, None, r_other)
        return ("arrive" if arriving else "depart"), "node"
    before, after = (r_other, end.opposite) if arriving else (end.opposite, r_other)
    return apsidal_name(r, before, after), apsidal_place(r, before, after)


def _least(cost: Callable[[float], float], low: float, high: float) -> float:
    """Argument of the least cost between two bounds, both included, on a scale of logarithms."""
    ratio = high / low
    grid = [low * math.pow(ratio, k / _GRID) for k in range(_GRID)] + [high]
    costs = [cost(x) for x in grid]
    best = min(range(len(grid)), key=costs.__getitem__)
    a, b = grid[max(best - 1, 0)], grid[min(best + 1, _GRID)]
    x = _golden(cost, a, b)
    return x if cost(x) < costs[best] else grid[best]


def _golden(cost: Callable[[float], float], a: float, b: float) -> float:
    """Argument of the least cost of a function with one valley between two bounds (golden section)."""
    x, y = b - _GOLDEN * (b - a), a + _GOLDEN * (b - a)
    cost_x, cost_y = cost(x), cost(y)
    for _ in range(_GOLDEN_STEPS):
        if cost_x < cost_y:
            b, y, cost_y = y, x, cost_x
            x = b - _GOLDEN * (b - a)
            cost_x = cost(x)
        else:
            a, x, cost_x = x, y, cost_y
            y = a + _GOLDEN * (b - a)
            cost_y = cost(y)
    return 0.5 * (a + b)
