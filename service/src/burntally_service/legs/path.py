"""A way to fly a transfer: burns and the arcs between them."""

import math
from collections.abc import Sequence
from typing import Literal

from msgspec import Struct, structs

from burntally_service.kernels.half_turns import Arc, Impulse
from burntally_service.legs.planned import PlannedManoeuvre

__all__ = ["BURN_LEAST", "Path", "Step", "apsidal_name", "apsidal_place", "path_of"]

BURN_LEAST = 1e-9
"""A cheaper burn is rounding, and no burn [m/s]."""


class Step(Struct, frozen=True, kw_only=True):
    """One burn and the arc flown before it.

    Attributes
    ----------
    name : str
        What the burn does.
    place : str
        Where on the orbit before it.
    r : float
        Radius at which it is burned, [m].
    impulse : Impulse
        The burn.
    side : int
        1 where the velocity turns towards the orbit's normal, -1 at the node opposite.
    arc : Arc or None
        What is flown since the burn before; None for the first.
    """

    name: str
    place: str
    r: float
    impulse: Impulse
    side: int = 1
    arc: Arc | None = None

    def manoeuvre(self, body: str) -> PlannedManoeuvre:
        """Tell the burn as a manoeuvre about a body."""
        dv = self.impulse.dv
        turn = self.impulse.plane_change
        return PlannedManoeuvre(
            name=self.name,
            body=body,
            place=self.place,
            coast_before=self.arc.tof if self.arc else 0.0,
            delta_v=dv,
            direction=(
                _plain(self.impulse.radial / dv),
                _plain(self.impulse.transverse / dv),
                _plain(self.side * self.impulse.normal / dv),
            ),
            plane_change_deg=math.degrees(turn) if turn > 0.0 else None,
        )


class Path(Struct, frozen=True, kw_only=True):
    """A way to fly a transfer.

    Attributes
    ----------
    family : str
        Strategy that it belongs to.
    steps : tuple of Step
        Burns in order.
    apse : float or None
        Argument of periapsis at the end; None where it is free, or the orbit a circle, [rad].
    apart : bool
        Whether the plane or the apse line is turned in a burn of its own.
    """

    family: Literal["one_burn", "hohmann", "bielliptic"]
    steps: tuple[Step, ...]
    apse: float | None = None
    apart: bool = False

    @property
    def dv(self) -> float:
        """Sum of the velocity increments [m/s]."""
        total = 0.0
        for step in self.steps:
            total += step.impulse.dv
        return total

    @property
    def tof(self) -> float:
        """Time from the first burn to the last [s]."""
        total = 0.0
        for step in self.steps:
            total += step.arc.tof if step.arc else 0.0
        return total

    @property
    def r_min(self) -> float:
        """Least radius from the first burn to the last; infinite without a burn [m]."""
        return min((min(step.r, step.arc.r_min if step.arc else step.r) for step in self.steps), default=math.inf)

    @property
    def r_max(self) -> float:
        """Greatest radius from the first burn to the last; 0 without a burn [m]."""
        return max((max(step.r, step.arc.r_max if step.arc else step.r) for step in self.steps), default=0.0)

    @property
    def label(self) -> str:
        """What tells this way from others that were weighed."""
        start = f" from {self.steps[0].place}" if self.steps else ""
        return f"{self.family}{start}{', turned apart' if self.apart else ''}"


def path_of(steps: Sequence[Step], *, bielliptic: bool, apse: float | None, apart: bool = False) -> Path | None:
    """Path of some burns, those that cost nothing left out; None where one of them is not possible."""
    if not all(math.isfinite(step.impulse.dv) and (step.arc is None or math.isfinite(step.arc.tof)) for step in steps):
        return None
    burned = _without_empty(steps)
    few: Literal["one_burn", "hohmann"] = "hohmann" if len(burned) > 1 else "one_burn"
    return Path(family="bielliptic" if bielliptic else few, steps=burned, apse=apse, apart=apart)


def apsidal_name(r: float, before: float | None, after: float) -> str:
    """Name a burn at an apsis by what it does to the opposite one, which moves from one radius to another."""
    if before is None:
        return "capture"
    if _same(after, before):
        return "change plane"
    if _same(after, r):
        return "circularise"
    return f"{'raise' if after > before else 'lower'} {'apoapsis' if after > r else 'periapsis'}"


def apsidal_place(r: float, before: float | None, after: float) -> str:
    """Name the apsis of a burn, by the orbit before it, or the one after where that was a circle."""
    opposite = after if before is None or _same(before, r) else before
    if _same(opposite, r):
        return "node" if before is not None else "periapsis"
    return "periapsis" if opposite > r else "apoapsis"


def _without_empty(steps: Sequence[Step]) -> tuple[Step, ...]:
    """Leave out burns that cost nothing: the arc before one joins the next, save before the first burn."""
    kept: list[Step] = []
    pending: Arc | None = None
    for step in steps:
        arc = _joined(pending, step.arc)
        if step.impulse.dv > BURN_LEAST:
            kept.append(structs.replace(step, arc=arc if kept else None))
            pending = None
        else:
            pending = arc
    return tuple(kept)


def _plain(x: float) -> float:
    """Number without the sign of a negative zero."""
    return x + 0.0


def _same(r: float, other: float) -> bool:
    """Whether two radii are one, rounding apart."""
    return math.isclose(r, other, rel_tol=1e-9)


def _joined(first: Arc | None, second: Arc | None) -> Arc | None:
    """Two arcs as one."""
    if first is None or second is None:
        return second if first is None else first
    return Arc(first.tof + second.tof, min(first.r_min, second.r_min), max(first.r_max, second.r_max))
