"""The solar catalogue against the figures that its sources give twice."""

import subprocess
import sys

import pytest

from burntally_service.bodies import catalogue
from burntally_service.kernels.orbits import period, soi_radius

# JPL SSD, known sidereal orbital periods of satellites, [s].
KNOWN_PERIODS = {
    "moon": 2360591.5,
    "phobos": 27553.824,
    "deimos": 109074.9,
    "io": 152853.52,
    "europa": 306822.04,
    "ganymede": 618153.38,
    "callisto": 1441931.1,
    "mimas": 81425.261,
    "enceladus": 118386.84,
    "tethys": 163106.09,
    "dione": 236469.46,
    "rhea": 390373.52,
    "titan": 1377684.4,
    "iapetus": 6853377.6,
    "triton": 507760.19,
    "charon": 551856.67,
    "miranda": 122124.59,
    "ariel": 217760.75,
    "umbriel": 358056.89,
    "titania": 752187.34,
    "oberon": 1163223.8,
}

# Curtis, Orbital Mechanics for Engineering Students, 3rd ed., table A.2, [m].
PRINTED_SPHERES = {
    "mercury": 112e6,
    "venus": 616e6,
    "earth": 925e6,
    "mars": 577e6,
    "jupiter": 48.2e9,
    "uranus": 51.8e9,
    "neptune": 86.6e9,
}


@pytest.mark.parametrize("name", catalogue())
def test_every_body_names_its_source(name: str) -> None:
    assert catalogue()[name].source
    assert catalogue()[name].confidence.startswith("verified")


@pytest.mark.parametrize("name", catalogue())
def test_every_body_hangs_on_the_sun(name: str) -> None:
    body = catalogue()[name]
    while body.parent is not None:
        body = catalogue()[body.parent]
    assert body.name == "sun"


@pytest.mark.parametrize("name, known", KNOWN_PERIODS.items())
def test_orbit_has_the_known_period(name: str, known: float) -> None:
    body = catalogue()[name]
    assert body.sma is not None
    mu = catalogue()[body.parent or ""].mu + body.mu_system
    # Mean elements differ from the two-body period by up to 0.14 %.
    assert period(mu, body.sma) == pytest.approx(known, rel=1.5e-3)


@pytest.mark.parametrize("name, printed", PRINTED_SPHERES.items())
def test_sphere_of_influence_is_the_printed_one(name: str, printed: float) -> None:
    # The printed ones are rounded to three digits and use older elements.
    assert catalogue()[name].soi_radius == pytest.approx(printed, rel=6e-3)


def test_satellites_count_for_the_sphere_of_their_planet() -> None:
    pluto, sun = catalogue()["pluto"], catalogue()["sun"]
    assert pluto.sma is not None
    assert pluto.soi_radius == soi_radius(pluto.sma, pluto.mu_system, sun.mu)


def test_an_oblate_body_is_measured_at_its_equator() -> None:
    assert (catalogue()["earth"].radius_kind, catalogue()["moon"].radius_kind) == ("equatorial", "mean")


def test_altitude_and_radius_are_inverse() -> None:
    earth = catalogue()["earth"]
    assert earth.altitude_at(earth.radius_at(400e3)) == pytest.approx(400e3, rel=1e-12)


def test_the_catalogue_is_read_only() -> None:
    with pytest.raises(TypeError):
        catalogue()["earth"] = catalogue()["mars"]  # type: ignore[index]  # the very point


def test_import_brings_no_numbers_library() -> None:
    code = "import sys, burntally_service.bodies as b; b.catalogue(); print({'numpy', 'numba'} & {*sys.modules})"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout == "set()\n"
