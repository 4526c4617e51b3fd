"""The Earth's standard atmosphere, read once, when it is first asked for."""

import functools
from typing import Annotated

import msgspec
from msgspec import Meta, Struct, field

from burntally_service.kernels.atmosphere import (
    Air,
    AirLayer,
    MolarMassRow,
    geopotential_altitude,
    layer_pressure,
    layered_air,
    molar_mass_ratio,
)

__all__ = ["StandardAtmosphere", "air_at", "kinetic_temperature", "standard_atmosphere"]

_Positive = Annotated[float, Meta(gt=0.0)]
_Words = Annotated[str, Meta(min_length=1)]


class _LayerRow(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """Where a layer begins and how its temperature changes."""

    base_m: Annotated[float, Meta(ge=0.0)]
    lapse: float = field(name="lapse_K_per_m")


class _RatioRow(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """Molar mass at an altitude."""

    altitude_m: _Positive
    ratio: _Positive


class _Model(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """One atmosphere of the data file, its units in the keys."""

    title: _Words
    source: _Words
    earth_radius_m: _Positive
    gas_constant: _Positive = field(name="gas_constant_J_per_kmol_K")
    molar_mass_kg_per_kmol: _Positive
    heat_capacity_ratio: _Positive
    pressure: _Positive = field(name="sea_level_pressure_Pa")
    temperature: _Positive = field(name="sea_level_temperature_K")
    layers: Annotated[list[_LayerRow], Meta(min_length=2)]
    molar_mass: Annotated[list[_RatioRow], Meta(min_length=1)]


class _File(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """The data file as a whole."""

    ussa76: _Model


class StandardAtmosphere(Struct, frozen=True, kw_only=True):
    """An atmosphere in the tables that the kernels take.

    Attributes
    ----------
    source : str
        Where it was published.
    r_body : float
        Radius to which its gravity refers, [m].
    r_gas : float
        Specific gas constant, [J/(kg K)].
    gamma : float
        Ratio of heat capacities, [-].
    layers : tuple of AirLayer
        Layers by rising base; the last one marks the top.
    molar_mass : tuple of MolarMassRow
        Molar mass by rising geometric altitude.
    """

    source: str
    r_body: float
    r_gas: float
    gamma: float
    layers: tuple[AirLayer, ...]
    molar_mass: tuple[MolarMassRow, ...]


@functools.cache
def standard_atmosphere() -> StandardAtmosphere:
    """Tables of the U.S. Standard Atmosphere 1976, below 86 km.

    Returns
    -------
    StandardAtmosphere
        The same object on every call.

    Examples
    --------
    >>> round(standard_atmosphere().layers[1].pressure, 2)
    22632.06
    """
    # Imported here, since most designs never meet air.
    from importlib.resources import files

    text = files("burntally_service").joinpath("data/atmospheres.toml").read_bytes()
    model = msgspec.toml.decode(text, type=_File).ussa76
    r_gas = model.gas_constant / model.molar_mass_kg_per_kmol
    return StandardAtmosphere(
        source=model.source,
        r_body=model.earth_radius_m,
        r_gas=r_gas,
        gamma=model.heat_capacity_ratio,
        layers=_layers(model, r_gas),
        molar_mass=tuple(MolarMassRow(row.altitude_m, row.ratio) for row in model.molar_mass),
    )


def air_at(altitude: float) -> Air:
    """Air over the Earth.

    Parameters
    ----------
    altitude : float
        Geometric altitude, [m].

    Returns
    -------
    Air
        Molecular-scale temperature, pressure, density and speed of sound; NaN outside -5 to 86 km.

    Examples
    --------
    >>> round(air_at(10000.0).pressure)
    26500
    """
    model = standard_atmosphere()
    return layered_air(geopotential_altitude(altitude, model.r_body), model.layers, model.r_gas, model.gamma)


def kinetic_temperature(altitude: float) -> float:
    """Temperature of the air over the Earth.

    Parameters
    ----------
    altitude : float
        Geometric altitude, [m].

    Returns
    -------
    float
        Kinetic temperature, [K]; NaN outside -5 to 86 km.

    Examples
    --------
    >>> round(kinetic_temperature(86000.0), 2)
    186.87
    """
    return air_at(altitude).temperature * molar_mass_ratio(altitude, standard_atmosphere().molar_mass)


def _layers(model: _Model, r_gas: float) -> tuple[AirLayer, ...]:
    """Carry temperature and pressure up from the ground, layer by layer."""
    first, *above = model.layers
    layers = [AirLayer(first.base_m, model.temperature, first.lapse, model.pressure)]
    for row in above:
        below = layers[-1]
        temperature = below.temperature + below.lapse * (row.base_m - below.base)
        layers.append(AirLayer(row.base_m, temperature, row.lapse, layer_pressure(below, row.base_m, r_gas)))
    return tuple(layers)
