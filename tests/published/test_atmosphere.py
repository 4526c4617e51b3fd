"""The standard atmosphere, against the tables of its report."""

import pytest

from burntally_service.bodies.standard_air import air_at, kinetic_temperature, standard_atmosphere
from burntally_service.kernels.atmosphere import geometric_altitude, geopotential_altitude
from burntally_service.kernels.constants import G0
from tests.published.cases import cases

CASES = cases("atmosphere")


def test_atm_01_sea_level() -> None:
    air = air_at(CASES["atm-01"].inputs["altitude_geometric_m"])
    CASES["atm-01"].agree(
        {
            "temperature_K": kinetic_temperature(0.0),
            "pressure_Pa": air.pressure,
            "density_kg_per_m3": air.density,
            "speed_of_sound_m_per_s": air.sound_speed,
            "gravity_m_per_s2": G0,
        }
    )


@pytest.mark.parametrize("name", ["atm-02", "atm-03", "atm-04", "atm-05"])
def test_atm_02_atm_03_atm_04_atm_05_table_i(name: str) -> None:
    altitudes = CASES[name].inputs["altitude_geometric_m"]
    airs = [air_at(altitude) for altitude in altitudes]
    CASES[name].agree(
        {
            "temperature_K": [kinetic_temperature(altitude) for altitude in altitudes],
            "pressure_Pa": [air.pressure for air in airs],
            "density_kg_per_m3": [air.density for air in airs],
            "speed_of_sound_m_per_s": [air.sound_speed for air in airs],
        }
    )


def test_atm_06_layers() -> None:
    model = standard_atmosphere()
    heights = CASES["atm-06"].inputs["altitude_geopotential_m"]
    temperatures = [air_at(geometric_altitude(height, model.r_body)).temperature for height in heights]
    CASES["atm-06"].agree(
        {
            "molecular_scale_temperature_K": temperatures,
            "lapse_rate_K_per_m": [layer.lapse for layer in model.layers],
        }
    )


def test_atm_08_geopotential_altitude() -> None:
    altitudes, r_body = CASES["atm-08"].inputs["altitude_geometric_m"], standard_atmosphere().r_body
    heights = [geopotential_altitude(altitude, r_body) for altitude in altitudes]
    CASES["atm-08"].agree({"altitude_geopotential_m": heights})
