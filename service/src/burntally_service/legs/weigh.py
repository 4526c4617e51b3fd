"""Weighing the ways of a transfer: which are allowed, which is the cheapest, and what the others would cost."""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from burntally.model.budget import StrategyCost
from burntally.model.mission import Transfer
from burntally_service.bodies import Body
from burntally_service.legs.apart import flat, needs_turning_apart, turned_apart
from burntally_service.legs.errand import Errand
from burntally_service.legs.path import BURN_LEAST, Path
from burntally_service.legs.planned import PlanFinding
from burntally_service.legs.routes import bielliptic_paths, two_burn_paths

__all__ = ["Choice", "choose", "extent"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Choice:
    """The way taken, and what else was weighed.

    Attributes
    ----------
    path : Path or None
        The cheapest of the ways that keep to the leg's limits; None if there is none.
    alternatives : tuple of StrategyCost
        The others that keep to them, the cheapest of each kind, cheapest first.
    finding : PlanFinding or None
        Why there is no way, or what is wrong with the one taken.
    """

    path: Path | None
    alternatives: tuple[StrategyCost, ...] = ()
    finding: PlanFinding | None = None


def choose(errand: Errand, leg: Transfer, body: Body) -> Choice:
    """Choose the cheapest way that a leg allows.

    Parameters
    ----------
    errand : Errand
        What is asked.
    leg : Transfer
        The leg, with its strategy and limits.
    body : Body
        Body about which it is flown.

    Returns
    -------
    Choice
        Ways that meet the ground are taken only where no other is left, with a finding.
    """
    paths = _weighed(errand, leg, body)
    for limit in (_by_strategy, _by_apoapsis, _by_periapsis, _by_time):
        allowed, finding = limit(paths, errand, leg, body)
        if finding is not None:
            return Choice(path=None, finding=finding)
        paths = allowed
    over = [path for path in paths if extent(path, errand)[0] >= body.radius]
    best = _cheapest(over or paths)
    finding = None if over else _meets_ground(best, errand, body)
    return Choice(path=best, alternatives=_alternatives(over or paths, best), finding=finding)


def extent(path: Path, errand: Errand) -> tuple[float, float]:
    """Least and greatest radius of a way and of the orbit that it ends on [m]."""
    return min(path.r_min, errand.final.r_peri), max(path.r_max, errand.final.r_apo)


def _weighed(errand: Errand, leg: Transfer, body: Body) -> Sequence[Path]:
    """List the ways that the strategy calls for."""
    paths: list[Path] = []
    apart = needs_turning_apart(errand)
    if leg.strategy != "bielliptic":
        paths.extend(two_burn_paths(errand))
        if apart:
            paths.extend(turned_apart(errand, two_burn_paths(flat(errand))))
    if leg.strategy in {"cheapest", "bielliptic"}:
        r_max = math.inf if leg.apoapsis_max is None else body.radius_at(leg.apoapsis_max)
        tof_max = math.inf if leg.time_limit is None else leg.time_limit
        paths.extend(bielliptic_paths(errand, r_max=r_max, tof_max=tof_max))
        if apart:
            paths.extend(turned_apart(errand, bielliptic_paths(flat(errand), r_max=r_max, tof_max=tof_max)))
    return paths


_Limited = tuple[Sequence[Path], PlanFinding | None]


def _by_strategy(paths: Sequence[Path], _errand: Errand, leg: Transfer, _body: Body) -> _Limited:
    """Keep the ways of the strategy."""
    kept = paths
    if leg.strategy == "one_burn":
        kept = [path for path in paths if len(path.steps) <= 1]
    if kept:
        return kept, None
    least = f"; the cheapest of the others costs {_cheapest(paths).dv:.1f} m/s" if paths else ""
    message = f"no way of the strategy {leg.strategy} reaches the target{least}"
    return kept, PlanFinding(code="no-convergence", message=message, suffix="/strategy")


def _by_apoapsis(paths: Sequence[Path], errand: Errand, leg: Transfer, body: Body) -> _Limited:
    """Keep the ways below the highest radius that the leg allows."""

    def highest(path: Path) -> float:
        return body.altitude_at(extent(path, errand)[1])

    return _bounded(
        paths,
        highest,
        leg.apoapsis_max,
        PlanFinding(
            code="no-convergence", message="every way passes above apoapsis_max", suffix="/apoapsis_max", unit="m"
        ),
    )


def _by_periapsis(paths: Sequence[Path], errand: Errand, leg: Transfer, body: Body) -> _Limited:
    """Keep the ways above the lowest radius that the leg allows."""

    def depth(path: Path) -> float:
        return -body.altitude_at(extent(path, errand)[0])

    limit = None if leg.periapsis_min is None else -leg.periapsis_min
    allowed, finding = _bounded(
        paths,
        depth,
        limit,
        PlanFinding(
            code="periapsis-low", message="every way passes below periapsis_min", suffix="/periapsis_min", unit="m"
        ),
    )
    return allowed, finding and _mirrored(finding)


def _by_time(paths: Sequence[Path], _errand: Errand, leg: Transfer, _body: Body) -> _Limited:
    """Keep the ways that are quick enough."""
    message = "every way takes longer than time_limit"
    return _bounded(
        paths,
        lambda path: path.tof,
        leg.time_limit,
        PlanFinding(code="time-limit", message=message, suffix="/time_limit", unit="s"),
    )


def _bounded(
    paths: Sequence[Path], measure: Callable[[Path], float], limit: float | None, finding: PlanFinding
) -> _Limited:
    """Keep the ways whose measure is within a limit; where none is, the finding tells the least."""
    if limit is None:
        return paths, None
    # A way that was made to fit the limit may miss it by rounding.
    slack = 1e-9 * abs(limit) + 1e-6
    kept = [path for path in paths if measure(path) <= limit + slack]
    if kept:
        return kept, None
    least = min(measure(path) for path in paths)
    told = PlanFinding(
        code=finding.code,
        message=f"{finding.message}: {least:.6g} {finding.unit}, allowed {limit:.6g} {finding.unit}",
        suffix=finding.suffix,
        value=least,
        limit=limit,
        unit=finding.unit,
    )
    return kept, told


def _mirrored(finding: PlanFinding) -> PlanFinding:
    """Tell a depth as an altitude."""
    value, limit = -(finding.value or 0.0), -(finding.limit or 0.0)
    message = f"every way passes below periapsis_min: {value:.6g} m, allowed {limit:.6g} m"
    return PlanFinding(
        code=finding.code, message=message, suffix=finding.suffix, value=value, limit=limit, unit=finding.unit
    )


def _meets_ground(path: Path, errand: Errand, body: Body) -> PlanFinding:
    """Tell that a way meets the ground."""
    altitude = body.altitude_at(extent(path, errand)[0])
    message = f"the path meets the ground of {body.name}: its lowest point is at {altitude:.6g} m"
    return PlanFinding(
        code="periapsis-below-surface", message=message, suffix="/to", value=altitude, limit=0.0, unit="m"
    )


def _cheapest(paths: Sequence[Path]) -> Path:
    """Take the cheapest way; of equal ones the quicker, then the first."""
    best = paths[0]
    for path in paths[1:]:
        gain = best.dv - path.dv
        if gain > BURN_LEAST or (abs(gain) <= BURN_LEAST and path.tof < best.tof * (1.0 - 1e-12)):
            best = path
    return best


def _alternatives(paths: Sequence[Path], best: Path) -> tuple[StrategyCost, ...]:
    """List the cheapest way of each kind beside the best, cheapest first."""
    kinds = {path.label for path in paths} - {best.label}
    others = [_cheapest([path for path in paths if path.label == kind]) for kind in sorted(kinds)]
    costs = [StrategyCost(strategy=path.label, delta_v=path.dv, duration=path.tof) for path in others]
    return tuple(sorted(costs, key=lambda cost: cost.delta_v))
