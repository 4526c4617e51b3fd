"""The solar catalogue, read once, when it is first asked for."""

import functools
import hashlib
import math
from collections.abc import Mapping
from types import MappingProxyType
from typing import Annotated, Literal

import msgspec
from msgspec import Meta, Struct

from burntally_service.bodies.body import Body
from burntally_service.kernels.orbits import soi_radius

__all__ = ["catalogue", "table_digest"]

_Positive = Annotated[float, Meta(gt=0.0)]
_Words = Annotated[str, Meta(min_length=1)]


class _Row(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """One body of the data file, its units in the keys."""

    name: Annotated[str, Meta(pattern="^[a-z]+$")]
    parent: str | None = None
    mu_m3_per_s2: _Positive
    mu_system_m3_per_s2: _Positive | None = None
    radius_m: _Positive
    radius_kind: Literal["equatorial", "mean"]
    j2: _Positive | None = None
    j2_radius_m: _Positive | None = None
    rotation_period_s: float | None = None
    semi_major_axis_m: _Positive | None = None
    eccentricity: Annotated[float, Meta(ge=0.0, lt=1.0)] = 0.0
    atmosphere_top_m: _Positive | None = None
    source: _Words
    confidence: _Words


class _File(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """The data file as a whole."""

    bodies: Annotated[list[_Row], Meta(min_length=1)]


@functools.cache
def catalogue() -> Mapping[str, Body]:
    """Bodies of the solar system by lower-case name, each after its parent.

    Returns
    -------
    Mapping of str to Body
        Read-only; the same object on every call.

    Examples
    --------
    >>> round(catalogue()["moon"].soi_radius, -6)
    66000000.0
    """
    text = _text()
    bodies: dict[str, Body] = {}
    for row in msgspec.toml.decode(text, type=_File).bodies:
        bodies[row.name] = _body(row, None if row.parent is None else bodies[row.parent])
    return MappingProxyType(bodies)


@functools.cache
def table_digest() -> str:
    """SHA-256 of the data file, in hexadecimal digits."""
    return hashlib.sha256(_text()).hexdigest()


def _text() -> bytes:
    """Read the data file."""
    # Imported here, since a mission of invented bodies alone never reads the file.
    from importlib.resources import files

    return files("burntally_service").joinpath("data/bodies.toml").read_bytes()


def _body(row: _Row, parent: Body | None) -> Body:
    """Turn a row of the file into a body."""
    mu_system = row.mu_system_m3_per_s2 or row.mu_m3_per_s2
    orbit = row.semi_major_axis_m
    return Body(
        name=row.name,
        parent=row.parent,
        mu=row.mu_m3_per_s2,
        mu_system=mu_system,
        radius=row.radius_m,
        radius_kind=row.radius_kind,
        sma=orbit,
        ecc=row.eccentricity,
        # The satellites go where their planet goes, so they count for its sphere; those of the parent do not.
        soi_radius=math.inf if parent is None or orbit is None else soi_radius(orbit, mu_system, parent.mu),
        j2=row.j2 or 0.0,
        j2_radius=row.j2_radius_m or row.radius_m,
        rotation_period=row.rotation_period_s,
        atmosphere_top=row.atmosphere_top_m or 0.0,
        source=row.source,
        confidence=row.confidence,
    )
