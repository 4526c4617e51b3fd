"""What holds for every impulsive manoeuvre."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from burntally_service.kernels import manoeuvres, transfers
from burntally_service.kernels.ellipses import apsis_place
from burntally_service.kernels.half_turns import half_turn
from burntally_service.kernels.manoeuvres import Apsis, Burn
from burntally_service.kernels.orbits import apsis_speed, circular_speed
from burntally_service.kernels.transfers import Transfer
from tests.laws.strategies import ANGLE, APSIS, MU, SPAN

SPEED = st.floats(1.0, 1e5)


def turned(apsis: Apsis) -> Apsis:
    """The same orbit, seen from its other apsis."""
    return Apsis(apsis.r_opposite, apsis.r)


def burns(transfer: Transfer) -> tuple[Burn, Burn]:
    """The burns of a transfer."""
    return transfer.first, transfer.second


@given(MU, SPAN)
def test_no_change_costs_nothing(mu: float, r: float) -> None:
    assert transfers.hohmann(mu, r, r).dv == 0.0


@given(MU, APSIS)
def test_staying_on_an_ellipse_costs_nothing(mu: float, apsis: Apsis) -> None:
    # From one apsis to the other, the ellipse is its own transfer.
    assert transfers.apsis_transfer(mu, apsis, turned(apsis), 0.0).dv == 0.0


@given(MU, SPAN, SPAN)
def test_the_way_back_costs_the_same(mu: float, r_1: float, r_2: float) -> None:
    there, back = transfers.hohmann(mu, r_1, r_2), transfers.hohmann(mu, r_2, r_1)
    assert (back.dv, back.tof) == pytest.approx((there.dv, there.tof), rel=1e-12)


@given(MU, APSIS, APSIS, ANGLE)
def test_the_way_back_costs_the_same_between_ellipses(mu: float, one: Apsis, other: Apsis, angle: float) -> None:
    there, back = (
        transfers.apsis_transfer(mu, one, other, angle),
        transfers.apsis_transfer(mu, other, one, angle),
    )
    assert back.dv == pytest.approx(there.dv, rel=1e-11, abs=1e-9 * circular_speed(mu, one.r))


@given(MU, SPAN, SPAN)
def test_bielliptic_by_way_of_the_target_is_hohmann(mu: float, r_1: float, r_2: float) -> None:
    detour = transfers.bielliptic(mu, Apsis(r_1, r_1), r_2, Apsis(r_2, r_2), 0.0)
    direct = transfers.hohmann(mu, r_1, r_2)
    assert detour.dv == pytest.approx(direct.dv, rel=1e-14)


@given(MU, APSIS, APSIS, ANGLE)
def test_half_turns_between_apsides_are_apsis_transfers(mu: float, one: Apsis, other: Apsis, angle: float) -> None:
    along_apses = transfers.apsis_transfer(mu, one, other, angle)
    anywhere = half_turn(mu, apsis_place(mu, one.r, one.r_opposite), apsis_place(mu, other.r, other.r_opposite), angle)
    bound = 1e-9 * circular_speed(mu, min(one.r, other.r))
    assert anywhere.dv == pytest.approx(along_apses.dv, rel=1e-9, abs=bound)
    assert anywhere.arc.tof == pytest.approx(along_apses.tof, rel=1e-6)


@given(MU, APSIS, SPAN, ANGLE, st.floats(0.0, 1.0))
def test_a_turn_in_two_burns_never_costs_less(
    mu: float, apsis: Apsis, r_opposite: float, angle: float, part: float
) -> None:
    whole = manoeuvres.apsis_change(mu, apsis, r_opposite, angle)
    first = manoeuvres.apsis_change(mu, apsis, r_opposite, part * angle)
    v = apsis_speed(mu, apsis.r, r_opposite)
    assert first.dv + manoeuvres.plane_change(v, (1.0 - part) * angle) >= whole.dv * (1.0 - 1e-9)


@given(MU, SPAN, SPAN, SPAN, SPAN)
def test_raises_at_one_apsis_add_up(mu: float, r: float, a: float, b: float, c: float) -> None:
    low, middle, high = sorted((a, b, c))
    steps = manoeuvres.apsis_change(mu, Apsis(r, low), middle, 0.0).dv
    steps += manoeuvres.apsis_change(mu, Apsis(r, middle), high, 0.0).dv
    assert steps == pytest.approx(manoeuvres.apsis_change(mu, Apsis(r, low), high, 0.0).dv, rel=1e-9, abs=1e-9)


@given(SPEED, st.floats(-1.0, 10.0), ANGLE)
def test_the_parts_of_a_burn_make_its_whole(v: float, part: float, angle: float) -> None:
    burn = manoeuvres.combined_burn(v, part * v, angle)
    assert math.hypot(burn.transverse, burn.normal) == pytest.approx(burn.dv, rel=1e-9, abs=1e-12 * v)


@given(SPEED, st.floats(-1.0, 10.0), ANGLE)
def test_a_burn_leaves_the_speed_that_it_should(v: float, part: float, angle: float) -> None:
    burn = manoeuvres.combined_burn(v, part * v, angle)
    assert math.hypot(v + burn.transverse, burn.normal) == pytest.approx((1.0 + part) * v, rel=1e-9, abs=1e-12 * v)


@given(SPEED, ANGLE, ANGLE)
def test_a_greater_turn_costs_more(v: float, one: float, other: float) -> None:
    low, high = sorted((one, other))
    assert manoeuvres.plane_change(v, low) <= manoeuvres.plane_change(v, high)


@given(MU, APSIS, APSIS, ANGLE)
def test_the_shares_of_a_turn_make_its_whole(mu: float, one: Apsis, other: Apsis, angle: float) -> None:
    transfer = transfers.apsis_transfer(mu, one, other, angle)
    assert sum(burn.plane_change for burn in burns(transfer)) == pytest.approx(angle, rel=1e-14, abs=1e-300)


@given(MU, APSIS, APSIS, ANGLE)
def test_a_turn_costs_at_least_the_flat_transfer(mu: float, one: Apsis, other: Apsis, angle: float) -> None:
    flat = transfers.apsis_transfer(mu, one, other, 0.0).dv
    assert transfers.apsis_transfer(mu, one, other, angle).dv >= flat


@given(MU, APSIS, APSIS, ANGLE)
def test_the_cheapest_pair_is_no_dearer_than_any(mu: float, one: Apsis, other: Apsis, angle: float) -> None:
    best = transfers.cheapest_transfer(mu, one, other, angle)
    pairs = [(a, b) for a in (one, turned(one)) for b in (other, turned(other))]
    assert best.dv == min(transfers.apsis_transfer(mu, a, b, angle).dv for a, b in pairs)


@given(MU, APSIS, APSIS)
def test_scales_of_length_and_time_change_nothing(mu: float, one: Apsis, other: Apsis) -> None:
    plain = transfers.apsis_transfer(mu, one, other, 0.1)
    # Lengths and times doubled: mu grows by 8/4, and every speed stays.
    twice = transfers.apsis_transfer(
        2.0 * mu, Apsis(2.0 * one.r, 2.0 * one.r_opposite), Apsis(2.0 * other.r, 2.0 * other.r_opposite), 0.1
    )
    assert (twice.dv, twice.tof) == pytest.approx((plain.dv, 2.0 * plain.tof), rel=1e-12)


@given(MU, APSIS, st.floats(-3.0, 3.0), st.integers(1, 50))
def test_more_turns_make_phasing_cheaper(mu: float, apsis: Apsis, shift: float, count: int) -> None:
    quick = transfers.phasing(mu, apsis, shift, float(count))
    slow = transfers.phasing(mu, apsis, shift, float(count + 1))
    assert math.isnan(quick.dv) or slow.dv <= quick.dv


@given(MU, APSIS)
def test_no_shift_costs_nothing(mu: float, apsis: Apsis) -> None:
    path = transfers.phasing(mu, apsis, 0.0, 3.0)
    assert (path.dv, path.r_opposite) == (0.0, apsis.r_opposite)
