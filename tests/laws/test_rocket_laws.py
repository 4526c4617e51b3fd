"""What holds for every burn."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from burntally_service.kernels import rocket
from tests.laws.strategies import MASS, MASS_RATIO, V_EXHAUST

DV = st.floats(0.0, 2e4)


@given(V_EXHAUST, MASS_RATIO)
def test_delta_v_and_mass_ratio_are_inverse(c: float, ratio: float) -> None:
    assert rocket.mass_ratio(rocket.ideal_delta_v(c, ratio), c) == pytest.approx(ratio, rel=1e-13)


@given(V_EXHAUST, MASS_RATIO, MASS_RATIO)
def test_burns_in_a_row_add_up(c: float, first: float, second: float) -> None:
    whole = rocket.ideal_delta_v(c, first * second)
    assert rocket.ideal_delta_v(c, first) + rocket.ideal_delta_v(c, second) == pytest.approx(whole, rel=1e-12, abs=1e-9)


@given(MASS, DV, V_EXHAUST)
def test_propellant_is_the_same_seen_from_both_ends(m_initial: float, dv: float, c: float) -> None:
    burned = rocket.propellant_burned(m_initial, dv, c)
    m_final = m_initial / rocket.mass_ratio(dv, c)
    assert rocket.propellant_required(m_final, dv, c) == pytest.approx(burned, rel=1e-12)


@given(MASS, st.floats(1e-9, 1e-3), V_EXHAUST)
def test_a_tiny_burn_keeps_its_digits(m_initial: float, dv: float, c: float) -> None:
    x = dv / c
    assert rocket.propellant_burned(m_initial, dv, c) == pytest.approx(m_initial * x * (1.0 - x / 2.0), rel=1e-12)


@given(MASS_RATIO, V_EXHAUST, st.floats(1.001, 2.0))
def test_faster_exhaust_gives_more(ratio: float, c: float, gain: float) -> None:
    assert rocket.ideal_delta_v(gain * c, ratio) >= rocket.ideal_delta_v(c, ratio)


@given(V_EXHAUST, MASS_RATIO, st.floats(1.001, 2.0))
def test_a_greater_mass_ratio_gives_more(c: float, ratio: float, gain: float) -> None:
    assert rocket.ideal_delta_v(c, gain * ratio) > rocket.ideal_delta_v(c, ratio)


@given(MASS, DV, V_EXHAUST, st.floats(0.0, 0.05))
def test_a_load_pays_its_burn_and_keeps_its_residual(m_dry: float, dv: float, c: float, residual: float) -> None:
    load = rocket.propellant_load(m_dry, dv, c, residual)
    if load < 1e3 * m_dry:
        dead = m_dry + residual * load
        assert rocket.ideal_delta_v(c, (m_dry + load) / dead) == pytest.approx(dv, rel=1e-9, abs=1e-9)


@given(st.lists(st.tuples(st.floats(1.0, 1e7), V_EXHAUST), min_size=1, max_size=6))
def test_a_mixture_lies_between_its_engines(engines: list[tuple[float, float]]) -> None:
    speeds = [c for _, c in engines]
    mixed = rocket.mixed_exhaust_speed([thrust for thrust, _ in engines], speeds)
    assert min(speeds) * (1.0 - 1e-12) <= mixed <= max(speeds) * (1.0 + 1e-12)


@given(st.lists(st.tuples(st.floats(1.0, 1e7), V_EXHAUST), min_size=1, max_size=6))
def test_a_mixture_is_never_better_than_its_mean_by_thrust(engines: list[tuple[float, float]]) -> None:
    thrusts = [thrust for thrust, _ in engines]
    mean = math.fsum(thrust * c for thrust, c in engines) / math.fsum(thrusts)
    assert rocket.mixed_exhaust_speed(thrusts, [c for _, c in engines]) <= mean * (1.0 + 1e-12)
