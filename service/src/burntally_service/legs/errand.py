"""What a transfer asks, in the terms of its geometry."""

from dataclasses import dataclass
from typing import Final

from burntally_service.kernels.ellipses import Place
from burntally_service.kernels.planes import Crossing
from burntally_service.legs.orbit import Size

__all__ = ["COPLANAR", "Errand"]

COPLANAR: Final = Crossing(0.0, 0.0, 0.0)
"""The planes are one."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Errand:
    """From one orbit to another about one body.

    Attributes
    ----------
    mu : float
        Gravitational parameter, [m3/s2].
    initial : Size
        Orbit before; on a hyperbola, the one after in its stead.
    arriving : Place or None
        Periapsis of the hyperbola before, if there is one.
    apse_i : float
        Argument of periapsis before, 0 where that means nothing, [rad].
    final : Size
        Orbit after.
    apse_f : float or None
        Argument of periapsis after; None where it is as the burns leave it, [rad].
    turn : Crossing
        Angle between the planes and the node where they meet.
    """

    mu: float
    initial: Size
    arriving: Place | None = None
    apse_i: float = 0.0
    final: Size
    apse_f: float | None = None
    turn: Crossing = COPLANAR

    @property
    def starts_on_circle(self) -> bool:
        """Whether the first burn may be anywhere on the orbit before."""
        return self.arriving is None and self.initial.is_circular

    @property
    def turns(self) -> bool:
        """Whether the plane changes."""
        return self.turn.angle > 0.0

    @property
    def asks_apse(self) -> bool:
        """Whether the apse line must end where no free choice of the first burn puts it."""
        if self.apse_f is None or self.final.is_circular or self.arriving is not None:
            return False
        return self.turns or not self.starts_on_circle

    def carried(self, argument: float) -> float:
        """Argument of latitude on the orbit after of a direction given on the orbit before [rad].

        The plane turns about the node, so that every direction keeps its angle from there.
        """
        return argument - self.turn.argument_i + self.turn.argument_f
