"""The standard atmosphere against poliastro's."""

import pytest

from burntally_service.bodies.standard_air import air_at, kinetic_temperature
from tests.crosscheck.conftest import Ask


def test_air_below_86_km(ask: Ask) -> None:
    altitudes = [500.0 * place for place in range(172)]
    answers = ask([{"kind": "air", "altitude": altitude} for altitude in altitudes])
    ours = [(kinetic_temperature(z), air_at(z).pressure, air_at(z).density) for z in altitudes]
    # The referee carries the printed base pressures of the layers, in five digits, and whole air up to the top.
    assert ours == [pytest.approx((a["temperature"], a["pressure"], a["density"]), rel=1e-3) for a in answers]
