"""What holds for every staging."""

import math

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from burntally_service.kernels import staging
from burntally_service.kernels.rocket import ideal_delta_v, mass_ratio
from tests.laws.strategies import V_EXHAUST

COEFFICIENT = st.floats(0.02, 0.5)
STAGES = st.lists(st.tuples(st.floats(2000.0, 4600.0), COEFFICIENT), min_size=1, max_size=4)
Stages = list[tuple[float, float]]


def ratios(stages: Stages, multiplier: float) -> list[float]:
    """Mass ratio of each stage."""
    return [staging.optimal_mass_ratio(c, eps, multiplier) for c, eps in stages]


def initial_mass(stages: Stages, mass_ratios: list[float]) -> float:
    """Mass of the vehicle for a payload of one."""
    mass = 1.0
    for (_, eps), ratio in reversed(list(zip(stages, mass_ratios, strict=True))):
        mass += staging.step_mass(ratio, eps, mass)
    return mass


def multiplier_for(stages: Stages, dv: float) -> float:
    """Multiplier of the lightest vehicle, where there is one."""
    p = staging.staging_multiplier(dv, [c for c, _ in stages], [eps for _, eps in stages])
    assume(not math.isnan(p))
    return p


@given(STAGES, st.floats(100.0, 12000.0))
def test_the_lightest_vehicle_gives_its_delta_v(stages: Stages, dv: float) -> None:
    found = ratios(stages, multiplier_for(stages, dv))
    given_by = sum(ideal_delta_v(c, ratio) for (c, _), ratio in zip(stages, found, strict=True))
    assert given_by == pytest.approx(dv, rel=1e-9)


@given(STAGES, st.floats(100.0, 12000.0), st.floats(1.0, 300.0))
def test_no_shift_between_two_stages_makes_it_lighter(stages: Stages, dv: float, shift: float) -> None:
    assume(len(stages) > 1)
    found = ratios(stages, multiplier_for(stages, dv))
    (low, _), (high, _), *_ = stages
    given_by = [ideal_delta_v(low, found[0]), ideal_delta_v(high, found[1])]
    assume(given_by[0] > shift)
    shifted = [mass_ratio(given_by[0] - shift, low), mass_ratio(given_by[1] + shift, high), *found[2:]]
    assert initial_mass(stages, shifted) >= initial_mass(stages, found) * (1.0 - 1e-9)


@given(STAGES)
def test_no_vehicle_reaches_beyond_its_structure(stages: Stages) -> None:
    bound = sum(ideal_delta_v(c, 1.0 / eps) for c, eps in stages)
    p = staging.staging_multiplier(bound * 1.001, [c for c, _ in stages], [eps for _, eps in stages])
    assert math.isnan(p)


@given(V_EXHAUST, COEFFICIENT, st.floats(1e-3, 0.5), st.integers(1, 50))
def test_more_similar_stages_give_more_and_never_all(c: float, eps: float, payload: float, count: int) -> None:
    def gain(stages: int) -> float:
        share = staging.stage_payload_fraction(payload, float(stages))
        return stages * ideal_delta_v(c, staging.stage_mass_ratio(eps, share))

    assert gain(count) < gain(count + 1) < staging.endless_staging_delta_v(c, eps, payload) * (1.0 + 1e-12)
