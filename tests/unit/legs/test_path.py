"""A way of burns and arcs: what is left out, and what it is called."""

import math

import pytest

from burntally_service.kernels.half_turns import Arc, Impulse
from burntally_service.legs.path import Path, Step, apsidal_name, apsidal_place, path_of

FIRST, SECOND = Arc(10.0, 7e6, 9e6), Arc(20.0, 6e6, 8e6)


def step(dv: float, arc: Arc | None = None, r: float = 7e6) -> Step:
    return Step(name="burn", place="periapsis", r=r, impulse=Impulse(dv, 0.0, dv, 0.0, 0.0), arc=arc)


def way(*steps: Step, bielliptic: bool = False) -> Path:
    path = path_of(steps, bielliptic=bielliptic, apse=None)
    assert path is not None
    return path


def test_its_cost_and_time_are_those_of_its_burns_and_arcs() -> None:
    path = way(step(1.0), step(2.0, FIRST), step(4.0, SECOND))
    assert (path.dv, path.tof, path.r_min, path.r_max) == (7.0, 30.0, 6e6, 9e6)


def test_a_first_burn_that_costs_nothing_goes_with_the_arc_after_it() -> None:
    path = way(step(0.0), step(2.0, FIRST), step(4.0, SECOND))
    assert (len(path.steps), path.tof) == (2, 20.0)


def test_a_last_burn_that_costs_nothing_goes_with_the_arc_before_it() -> None:
    path = way(step(1.0), step(2.0, FIRST), step(0.0, SECOND))
    assert (len(path.steps), path.tof) == (2, 10.0)


def test_around_a_burn_in_the_middle_that_costs_nothing_the_arcs_join() -> None:
    path = way(step(1.0), step(0.0, FIRST), step(4.0, SECOND))
    assert [burn.arc for burn in path.steps] == [None, Arc(30.0, 6e6, 9e6)]


def test_without_a_burn_it_takes_nothing_and_goes_nowhere() -> None:
    path = way(step(0.0), step(0.0, FIRST))
    assert (path.steps, path.dv, path.tof, path.r_min, path.r_max) == ((), 0.0, 0.0, math.inf, 0.0)


@pytest.mark.parametrize("steps", [(step(math.nan),), (step(1.0), step(1.0, Arc(math.nan, 1.0, 1.0)))])
def test_what_cannot_be_flown_is_no_way(steps: tuple[Step, ...]) -> None:
    assert path_of(steps, bielliptic=False, apse=None) is None


@pytest.mark.parametrize(
    "path, label",
    [
        (way(step(1.0)), "one_burn from periapsis"),
        (way(step(1.0), step(1.0, FIRST)), "hohmann from periapsis"),
        (way(step(1.0), bielliptic=True), "bielliptic from periapsis"),
        (way(step(0.0)), "one_burn"),
        (Path(family="hohmann", steps=(), apart=True), "hohmann, turned apart"),
    ],
)
def test_its_label_tells_it_from_others(path: Path, label: str) -> None:
    assert path.label == label


@pytest.mark.parametrize(
    "before, after, name, place",
    [
        (None, 9.0, "capture", "periapsis"),
        (None, 7.0, "capture", "periapsis"),
        (7.0, 9.0, "raise apoapsis", "periapsis"),
        (7.0, 5.0, "lower periapsis", "apoapsis"),
        (9.0, 7.0, "circularise", "periapsis"),
        (5.0, 7.0, "circularise", "apoapsis"),
        (9.0, 8.0, "lower apoapsis", "periapsis"),
        (5.0, 6.0, "raise periapsis", "apoapsis"),
        (5.0, 9.0, "raise apoapsis", "apoapsis"),
        (9.0, 9.0, "change plane", "periapsis"),
        (7.0, 7.0, "change plane", "node"),
    ],
)
def test_a_burn_is_named_by_what_it_moves_and_where(before: float | None, after: float, name: str, place: str) -> None:
    assert (apsidal_name(7.0, before, after), apsidal_place(7.0, before, after)) == (name, place)
