"""Systems that the user makes."""

import math

import pytest

from burntally.model.errors import InconsistentError
from burntally.model.mission import Atmosphere, Body, BodyOrbit, System
from burntally_service.bodies import catalogue, system_of
from burntally_service.kernels.orbits import soi_radius


def body(name: str, parent: str | None = None, sma: float | None = None) -> Body:
    orbit = None if sma is None else BodyOrbit(semi_major_axis=sma)
    return Body(name=name, parent=parent, gravitational_parameter=3e14, radius=6e6, orbit=orbit)


def pointers(*bodies: Body, base: str = "empty") -> list[str]:
    with pytest.raises(InconsistentError) as caught:
        system_of(System(base="solar" if base == "solar" else "empty", bodies=list(bodies)))
    return [violation.pointer for violation in caught.value.violations]


def test_without_a_system_the_catalogue_serves() -> None:
    assert system_of(None) is catalogue()


def test_an_empty_system_holds_its_own_bodies_alone() -> None:
    assert list(system_of(System(bodies=[body("tessaly"), body("orrin", "tessaly")]))) == ["tessaly", "orrin"]


def test_a_solar_system_gains_bodies() -> None:
    assert {*system_of(System(base="solar", bodies=[body("orrin", "earth")]))} == {*catalogue(), "orrin"}


def test_a_moon_has_a_sphere_of_influence() -> None:
    orrin = system_of(System(bodies=[body("tessaly"), body("orrin", "tessaly", 4e8)]))["orrin"]
    assert orrin.soi_radius == soi_radius(4e8, 3e14, 3e14)


def test_a_moon_may_be_listed_before_its_planet() -> None:
    assert system_of(System(bodies=[body("orrin", "tessaly", 4e8), body("tessaly")]))["orrin"].soi_radius > 0.0


def test_the_root_has_no_bounds() -> None:
    assert system_of(System(bodies=[body("tessaly")]))["tessaly"].soi_radius == math.inf


def test_air_ends_at_its_top() -> None:
    air = Body(name="tessaly", gravitational_parameter=3e14, radius=6e6, atmosphere=Atmosphere(top=9e4))
    assert system_of(System(bodies=[air]))["tessaly"].atmosphere_top == 9e4


def test_a_name_is_taken_once() -> None:
    assert pointers(body("tessaly"), body("orrin", "tessaly"), body("orrin", "tessaly")) == [
        "/mission/system/bodies/2/name"
    ]


def test_a_name_of_the_catalogue_is_taken() -> None:
    assert pointers(body("earth", "sun"), base="solar") == ["/mission/system/bodies/0/name"]


def test_a_parent_must_be_known() -> None:
    assert pointers(body("tessaly"), body("orrin", "nowhere")) == ["/mission/system/bodies/1/parent"]


def test_a_system_has_one_root() -> None:
    assert pointers(body("tessaly"), body("orrin")) == ["/mission/system/bodies/1"]


def test_the_sun_is_the_root_of_the_solar_system() -> None:
    assert pointers(body("tessaly"), base="solar") == ["/mission/system/bodies/0"]


def test_the_root_has_no_orbit() -> None:
    assert pointers(body("tessaly", sma=1e9)) == ["/mission/system/bodies/0/orbit"]


def test_bodies_must_not_move_about_each_other() -> None:
    assert pointers(body("tessaly"), body("orrin", "ebb"), body("ebb", "orrin")) == [
        "/mission/system/bodies/1/parent",
        "/mission/system/bodies/2/parent",
    ]


def test_a_moon_of_bodies_that_move_about_each_other_is_not_at_fault() -> None:
    assert pointers(body("tessaly"), body("orrin", "ebb"), body("ebb", "orrin"), body("flow", "ebb")) == [
        "/mission/system/bodies/1/parent",
        "/mission/system/bodies/2/parent",
    ]


def test_a_body_must_not_move_about_itself() -> None:
    assert pointers(body("tessaly"), body("orrin", "orrin")) == ["/mission/system/bodies/1/parent"]


def test_the_pointer_leads_into_the_request() -> None:
    with pytest.raises(InconsistentError) as caught:
        system_of(System(bodies=[body("a"), body("b")]), pointer="/system")
    assert caught.value.violations[0].pointer == "/system/bodies/1"
