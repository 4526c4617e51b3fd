"""One body, as legs see it."""

import math
from typing import Literal

from msgspec import Struct

__all__ = ["Body"]


class Body(Struct, frozen=True, kw_only=True):
    """A body with gravity, in SI.

    Attributes
    ----------
    name : str
        Name, unique in its system.
    parent : str or None
        Body that it moves about; None for the root.
    mu : float
        Gravitational parameter of the body alone, [m3/s2].
    mu_system : float
        The same with its satellites, for what arrives from outside, [m3/s2].
    radius : float
        Reference radius, from which altitudes count, [m].
    radius_kind : str
        What the reference radius is: that of the equator, the mean one, or as the user stated it.
    sma : float or None
        Semi-major axis of its orbit about the parent, [m].
    ecc : float
        Eccentricity of that orbit, [-].
    soi_radius : float
        Radius of the sphere of influence, infinite without an orbit, [m].
    j2, j2_radius : float
        Second zonal harmonic, unnormalised, [-], and the radius that belongs to it, [m].
    rotation_period : float or None
        Sidereal period of rotation, negative if retrograde, [s].
    atmosphere_top : float
        Altitude above which there is no air to speak of, 0 without air, [m].
    source : str
        Where the figures were published.
    confidence : str
        Which of them were seen at their source.
    """

    name: str
    parent: str | None
    mu: float
    mu_system: float
    radius: float
    radius_kind: Literal["equatorial", "mean", "stated"]
    sma: float | None = None
    ecc: float = 0.0
    soi_radius: float = math.inf
    j2: float = 0.0
    j2_radius: float
    rotation_period: float | None = None
    atmosphere_top: float = 0.0
    source: str = ""
    confidence: str = ""

    def radius_at(self, altitude: float) -> float:
        """Distance from the centre at an altitude over the reference radius.

        Parameters
        ----------
        altitude : float
            Altitude, [m].

        Returns
        -------
        float
            Radius, [m].
        """
        return self.radius + altitude

    def altitude_at(self, r: float) -> float:
        """Altitude over the reference radius at a distance from the centre.

        Parameters
        ----------
        r : float
            Radius, [m].

        Returns
        -------
        float
            Altitude, [m].
        """
        return r - self.radius
