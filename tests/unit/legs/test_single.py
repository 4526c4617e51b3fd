"""One leg by itself: what the transfer operation answers."""

import math

import pytest

from burntally.model.errors import UncomputableError
from burntally.model.mission import Body, Hyperbola, Location, Orbit, OrbitLocation, System, Transfer
from burntally.model.operations import TransferRequest
from burntally_service.legs import transfer_of
from burntally_service.legs.orbit import Size

SYSTEM = System(bodies=[Body(name="tessaly", gravitational_parameter=3e14, radius=6e6)])
LEG = Transfer(to=Orbit(altitude=9e6))


def request(start: Location, leg: Transfer = LEG) -> TransferRequest:
    return TransferRequest(system=SYSTEM, start=start, leg=leg)


def test_manoeuvres_tell_their_time() -> None:
    answer = transfer_of(request(OrbitLocation(body="tessaly", altitude=4e5)))
    assert [burn.time for burn in answer.manoeuvres] == [0.0, answer.duration]


def test_the_answer_sums_its_manoeuvres() -> None:
    answer = transfer_of(request(OrbitLocation(body="tessaly", altitude=4e5)))
    assert answer.delta_v == sum(burn.delta_v for burn in answer.manoeuvres)


def test_a_catalogue_body_serves_where_no_system_is_stated() -> None:
    start = OrbitLocation(body="earth", altitude=4e5)
    assert transfer_of(TransferRequest(start=start, leg=LEG)).strategy == "hohmann"


def test_nothing_to_do_is_told_as_zero() -> None:
    answer = transfer_of(request(OrbitLocation(body="tessaly", altitude=9e6)))
    assert (answer.delta_v, answer.duration, answer.strategy) == (0.0, 0.0, None)


def test_what_cannot_be_planned_has_no_numbers() -> None:
    answer = transfer_of(request(Hyperbola(body="tessaly", c3=1.0)))
    assert (answer.delta_v, answer.duration, answer.end) == (None, None, None)


def test_a_finding_points_into_the_request() -> None:
    leg = Transfer(to=Orbit(altitude=9e6, inclination=3.0))
    answer = transfer_of(request(OrbitLocation(body="tessaly", altitude=4e5), leg))
    assert [found.pointer for found in answer.findings] == ["/leg/to/inclination"]


@pytest.mark.parametrize(
    "start, pointer",
    [
        (OrbitLocation(body="orrin", altitude=4e5), "/start/body"),
        (OrbitLocation(altitude=4e5), "/start/body"),
        (OrbitLocation(body="tessaly", periapsis=4e5, period=60.0), "/start/period"),
        (Hyperbola(body="tessaly", c3=1.0, periapsis=-7e6), "/start/periapsis"),
    ],
)
def test_a_start_that_is_none_cannot_be_computed(start: Location, pointer: str) -> None:
    with pytest.raises(UncomputableError) as caught:
        transfer_of(request(start))
    assert [violation.pointer for violation in caught.value.violations] == [pointer]


@pytest.mark.parametrize("r_peri, r_apo", [(0.0, 1.0), (2.0, 1.0), (1.0, math.inf), (math.nan, 1.0)])
def test_a_size_cannot_hold_nonsense(r_peri: float, r_apo: float) -> None:
    with pytest.raises(ValueError, match="no ellipse"):
        Size(r_peri=r_peri, r_apo=r_apo)
