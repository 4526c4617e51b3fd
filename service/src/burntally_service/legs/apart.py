"""The ways of a transfer that turn the plane, or the apse line, in a burn of its own.

They are what remains where the apse line does not lie on the line where the planes meet: the size changes as if the
orbits lay in one plane, and each turn is made before or after, at the slower of the two places that it may have.
"""

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, replace
from itertools import product

from msgspec import structs

from burntally_service.kernels.ellipses import apse_turn, coasting_time
from burntally_service.kernels.half_turns import Arc, Impulse
from burntally_service.kernels.manoeuvres import combined_burn
from burntally_service.kernels.planes import Crossing
from burntally_service.legs.errand import COPLANAR, Errand
from burntally_service.legs.orbit import Size
from burntally_service.legs.path import Path, Step, path_of

__all__ = ["flat", "needs_turning_apart", "turned_apart"]

# An apse line nearer to where it is asked than this is there [rad].
_ALIGNED = 1e-12


@dataclass(slots=True, kw_only=True)
class _Flight:
    """Burns so far, and where the vehicle is: on which ellipse, its apse line, its anomaly (None: anywhere)."""

    mu: float
    size: Size
    apse: float
    nu: float | None
    steps: list[Step]

    def arc_to(self, nu: float) -> Arc | None:
        """Fly on to a true anomaly."""
        if self.nu is None:
            return None
        size = self.size
        tof = coasting_time(self.mu, size.r_peri, size.r_apo, self.nu, nu)
        return Arc(tof, size.r_peri, size.r_apo)

    def turn_plane(self, crossing: Crossing) -> None:
        """Turn the plane at the slower node."""
        nu, side = crossing.argument_i - self.apse, 1
        if math.cos(nu) > 0.0:
            nu, side = nu + math.pi, -1
        place = self.size.place(self.mu, nu)
        burn = combined_burn(place.v_transverse, 0.0, crossing.angle)
        impulse = Impulse(burn.dv, 0.0, burn.transverse, burn.normal, burn.plane_change)
        arc = self.arc_to(nu)
        self.steps.append(Step(name="change plane", place="node", r=place.r, impulse=impulse, side=side, arc=arc))
        self.nu = nu

    def turn_apse(self, angle: float) -> None:
        """Turn the apse line by an angle of at most half a turn, on the far side of the body."""
        dv = apse_turn(self.mu, self.size.r_peri, self.size.r_apo, abs(angle))
        nu = 0.5 * angle + math.pi
        impulse = Impulse(dv, math.copysign(dv, angle), 0.0, 0.0, 0.0)
        r = self.size.place(self.mu, nu).r
        self.steps.append(Step(name="turn apse line", place="crossing", r=r, impulse=impulse, arc=self.arc_to(nu)))
        self.nu = nu - angle
        self.apse += angle


def needs_turning_apart(errand: Errand) -> bool:
    """Whether burns on one line of apsides cannot do all that is asked."""
    if errand.arriving is not None:
        return False
    off_line = abs(math.sin(errand.apse_i - errand.turn.argument_i)) > _ALIGNED
    return errand.asks_apse or (errand.turns and off_line and not errand.starts_on_circle)


def flat(errand: Errand) -> Errand:
    """Same change of size in one plane, wherever the apse line ends."""
    return replace(errand, turn=COPLANAR, apse_f=None)


def turned_apart(errand: Errand, bases: Iterable[Path]) -> Iterator[Path]:
    """Yield the ways that change the size like some path in one plane, with each turn before or after it."""
    for base in bases:
        gap = _apse_gap(errand, base)
        plane_early = (True, False) if errand.turns else (False,)
        apse_early = (True, False) if gap != 0.0 and not errand.starts_on_circle else (False,)
        for early in product(plane_early, apse_early):
            path = _turned(errand, base, gap, plane_early=early[0], apse_early=early[1])
            if path is not None:
                yield path


def _turned(errand: Errand, base: Path, gap: float, *, plane_early: bool, apse_early: bool) -> Path | None:
    """Fly a base with its turns put before or after."""
    flight = _Flight(mu=errand.mu, size=errand.initial, apse=errand.apse_i, nu=None, steps=[])
    if apse_early:
        flight.turn_apse(gap)
    if plane_early:
        flight.turn_plane(errand.turn)
    _fly_base(errand, base, flight)
    if errand.turns and not plane_early:
        flight.turn_plane(errand.turn)
    if gap != 0.0 and not apse_early:
        flight.turn_apse(gap)
    apse = None if errand.final.is_circular else errand.carried(flight.apse)
    return path_of(flight.steps, bielliptic=base.family == "bielliptic", apse=apse, apart=True)


def _fly_base(errand: Errand, base: Path, flight: _Flight) -> None:
    """Change the size; the flight then is on the orbit after, its plane apart."""
    if not base.steps:
        return
    nu_i, nu_f, apse = _line_of(errand, base, flight)
    first = structs.replace(base.steps[0], arc=flight.arc_to(nu_i))
    flight.steps.extend((first, *base.steps[1:]))
    flight.size, flight.apse, flight.nu = errand.final, apse, nu_f


def _line_of(errand: Errand, base: Path, flight: _Flight) -> tuple[float, float, float]:
    """Anomaly of the first burn before it and of the last one after it, and the apse line after, before the turn."""
    nu_f = 0.0 if math.isclose(base.steps[-1].r, errand.final.r_peri, rel_tol=1e-12) else math.pi
    half_turns = math.pi * (len(base.steps) - 1)
    if errand.starts_on_circle:
        # The first burn is put where the apse line ends as asked.
        apse = (errand.apse_f or 0.0) - errand.carried(0.0)
        return apse + nu_f - half_turns - flight.apse, nu_f, apse
    size = flight.size
    nu_i = 0.0 if math.isclose(base.steps[0].r, size.r_peri, rel_tol=1e-12) else math.pi
    return nu_i, nu_f, flight.apse + nu_i + half_turns - nu_f


def _apse_gap(errand: Errand, base: Path) -> float:
    """Angle by which the apse line must be turned beside the change of size, from -pi to pi [rad]."""
    if not errand.asks_apse or errand.apse_f is None or errand.starts_on_circle:
        return 0.0
    reached = errand.apse_i if base.apse is None else base.apse
    gap = math.remainder(errand.apse_f - errand.carried(reached), math.tau)
    return gap if abs(gap) > _ALIGNED else 0.0
