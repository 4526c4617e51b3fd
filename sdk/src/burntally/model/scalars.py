"""The scalar types of the contract: bounds, unit and meaning of each, written once.

A scalar is a finite number in its ``x-unit``; on the wire it may also be a string that carries its own unit
(:mod:`burntally.model.quantity`). Past the decoder there are floats in these units alone.
"""

from typing import Annotated, Final, Literal

from msgspec import Meta

__all__ = [
    "C3",
    "GM",
    "Acceleration",
    "Altitude",
    "Angle",
    "Area",
    "DeltaV",
    "Duration",
    "Epoch",
    "Fraction",
    "Growth",
    "Inclination",
    "Isp",
    "Latitude",
    "Length",
    "LoadRatio",
    "Mass",
    "Name",
    "Number",
    "Parts",
    "Pointer",
    "Pressure",
    "Speed",
    "Text",
    "Thrust",
    "doc",
]

UNIT_KEY: Final = "x-unit"
OR_UNIT_KEY: Final = "x-unit-or"
"""Unit of another dimension that a string may carry as well: a speed for a specific impulse."""


def doc(text: str) -> Meta:
    """Describe one field of a struct, in the schema and for the reader alike."""
    return Meta(description=text)


def _unit(name: str, *, or_unit: str | None = None) -> dict[str, str]:
    return {UNIT_KEY: name} if or_unit is None else {UNIT_KEY: name, OR_UNIT_KEY: or_unit}


Mass = Annotated[float, Meta(ge=0.0, le=1e9, extra_json_schema=_unit("kg"))]
Thrust = Annotated[float, Meta(gt=0.0, le=1e9, extra_json_schema=_unit("N"))]
Isp = Annotated[float, Meta(ge=1.0, le=1e6, extra_json_schema=_unit("s", or_unit="m/s"))]
DeltaV = Annotated[float, Meta(ge=0.0, le=1e6, extra_json_schema=_unit("m/s"))]
Speed = Annotated[float, Meta(ge=0.0, le=1e6, extra_json_schema=_unit("m/s"))]
Altitude = Annotated[float, Meta(ge=-1e5, le=1e13, extra_json_schema=_unit("m"))]
Length = Annotated[float, Meta(gt=0.0, le=1e16, extra_json_schema=_unit("m"))]
Area = Annotated[float, Meta(ge=0.0, le=1e6, extra_json_schema=_unit("m2"))]
Angle = Annotated[float, Meta(ge=-360.0, le=360.0, extra_json_schema=_unit("deg"))]
Latitude = Annotated[float, Meta(ge=-90.0, le=90.0, extra_json_schema=_unit("deg"))]
Inclination = Annotated[float, Meta(ge=0.0, le=180.0, extra_json_schema=_unit("deg"))]
Duration = Annotated[float, Meta(ge=0.0, le=3.2e10, extra_json_schema=_unit("s"))]
Acceleration = Annotated[float, Meta(ge=0.0, le=1e5, extra_json_schema=_unit("m/s2"))]
Pressure = Annotated[float, Meta(ge=0.0, le=1e9, extra_json_schema=_unit("Pa"))]
C3 = Annotated[float, Meta(ge=-1e12, le=1e12, extra_json_schema=_unit("m2/s2"))]
GM = Annotated[float, Meta(gt=0.0, le=1e25, extra_json_schema=_unit("m3/s2"))]

Fraction = Annotated[float, Meta(ge=0.0, le=1.0, extra_json_schema=_unit("1"))]
Growth = Annotated[float, Meta(ge=0.0, le=3.0, extra_json_schema=_unit("1"))]
LoadRatio = Annotated[float, Meta(gt=0.0, le=1.0, extra_json_schema=_unit("1"))]
Parts = Annotated[float, Meta(gt=0.0, le=1e6)]
Ratio = Annotated[float, Meta(ge=0.0, le=1e3)]

Number = Annotated[float, Meta(ge=-1e300, le=1e300)]
"""A computed number; the answers' fields give its unit."""

Name = Annotated[str, Meta(min_length=1, max_length=64, pattern=r"^[A-Za-z0-9 _.\-]+$")]
Text = Annotated[str, Meta(max_length=500)]
CategoryPath = Annotated[str, Meta(min_length=1, max_length=200, pattern=r"^[A-Za-z0-9_\-]+(\.[A-Za-z0-9_\-]+)*$")]
Pointer = Annotated[str, Meta(max_length=2000, pattern=r"^(/[^/]*)*$")]
Epoch = Annotated[
    str,
    Meta(
        max_length=40,
        pattern=r"^(19|20|21|22)[0-9]{2}-[0-9]{2}-[0-9]{2}(T[0-9]{2}:[0-9]{2}(:[0-9]{2}(\.[0-9]{1,9})?)?)?Z?$",
        description="ISO 8601 date or date and time, UTC, years 1900 to 2200.",
    ),
]

FormatVersion = Literal[1]
