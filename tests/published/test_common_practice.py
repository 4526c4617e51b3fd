"""Figures of the trade. Common practice, no source: they bound, and validate nothing."""

import pytest

from burntally_service.kernels.constants import G0
from burntally_service.kernels.rocket import exhaust_speed, ideal_delta_v, thrust_to_weight


def test_a_small_burn_of_a_heavy_tug() -> None:
    assert ideal_delta_v(exhaust_speed(345.0), 7650.0 / 6850.0) == pytest.approx(374.0, abs=0.5)


def test_thrust_to_weight_of_a_heavy_tug() -> None:
    assert thrust_to_weight(60e3, 7650.0, G0) == pytest.approx(0.8, abs=0.005)
