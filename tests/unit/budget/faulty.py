"""One small design for each finding, with where the finding must point."""

from collections.abc import Callable
from typing import Any, Final, Literal, NamedTuple

from tests.unit.budget.designs import TESSALY, burn, design, engine, stage

__all__ = ["FAULTY", "Faulty"]

Plain = dict[str, Any]

DAY: Final = 86400.0
LEG: Final = "/mission/legs/0"
LOAD: Final = "/vehicle/stages/0/propellants/0"


class Faulty(NamedTuple):
    """What a budget must find, and in which design."""

    code: str
    severity: Literal["error", "warning", "note"]
    pointer: str
    made: Callable[[], Plain]

    @property
    def plain(self) -> Plain:
        """The design, made anew, so that a test may change it."""
        return self.made()


def pair(**lower: Any) -> tuple[Plain, Plain]:
    """A kick stage below a tug."""
    return stage("kick", **lower), stage("tug")


def two_fuels(fuel: float, oxidiser: float) -> Plain:
    """A stage that burns one part of fuel with two of oxidiser."""
    return stage(
        propellants=[{"name": "fuel", "mass": fuel}, {"name": "oxidiser", "mass": oxidiser}],
        engines=[engine(feeds={"fuel": 1.0, "oxidiser": 2.0})],
    )


def transfer(**fields: Any) -> Plain:
    """Describe a transfer to 800 km."""
    return {"kind": "transfer", "to": {"altitude": 8e5}, **fields}


def from_orbit(leg: Plain, **start: Any) -> Plain:
    """Fly one leg from an orbit about Tessaly that knows no more of itself."""
    return design([leg], start={"kind": "orbit", "body": "Tessaly", **start})


def lift_off(thrust: float, **fields: Any) -> Plain:
    """Ascend from the ground with a thrust."""
    ascent = {"kind": "ascend", "to": {"altitude": 2e5}, "delta_v": 1000.0}
    start = {"kind": "site", "body": "Tessaly", "latitude": 0.0}
    return design([ascent], stage(engines=[engine(thrust=thrust)]), start=start, **fields)


def about(bodies: list[Plain], plain: Plain) -> Plain:
    """Fly a design among other bodies."""
    return {**plain, "mission": {**plain["mission"], "system": {"bodies": bodies}}}


def with_air() -> Plain:
    """Go on from an orbit that dips into the air."""
    air = {"atmosphere": {"top": 1e5}}
    return about([{**TESSALY, **air}], from_orbit(transfer(to={"apoapsis": 8e5}), periapsis=5e4, apoapsis=4e5))


def dated() -> Plain:
    """Coast until a date that has passed."""
    return design([{"kind": "coast", "until": "2031-01-01T00:00:00Z"}], epoch="2031-02-01T00:00:00Z")


def two_bodies() -> Plain:
    """Transfer to the moon, which is another body."""
    orrin = {
        "name": "Orrin",
        "parent": "Tessaly",
        "gravitational_parameter": 4.9e12,
        "radius": 1.7e6,
        "orbit": {"semi_major_axis": 3.9e8},
    }
    return about([TESSALY, orrin], design([transfer(to={"body": "Orrin", "altitude": 1e5})]))


def separated(*legs: Plain, **fields: Any) -> Plain:
    """Drop the kick stage, then fly."""
    return design([{"kind": "separate", "stages": ["kick"]}, *legs], *pair(), **fields)


FAULTY: Final = [
    Faulty("leg-unpaid", "error", LEG, lambda: design([burn(2500.0)])),
    Faulty("reserve-unpaid", "error", "/rules/reserve", lambda: design([burn(1800.0)], reserve={"delta_v": 100.0})),
    Faulty("payer-gone", "error", "/mission/legs/1/paid_by", lambda: separated(burn(100.0, "kick"))),
    Faulty(
        "payer-inert",
        "error",
        f"{LEG}/paid_by",
        lambda: design([burn(100.0, "kick")], {"name": "kick", "dry_mass": 50.0}, stage()),
    ),
    Faulty("payer-dry", "error", f"{LEG}/paid_by", lambda: design([burn(1500.0, "kick")], *pair())),
    Faulty(
        "ignitions-exceeded",
        "error",
        "/vehicle/stages/0/engines/0",
        lambda: design([burn(10.0, "tug"), burn(10.0, "tug")], stage(engines=[engine(max_ignitions=1)])),
    ),
    Faulty(
        "part-absent",
        "error",
        "/mission/legs/1",
        lambda: separated({"kind": "separate", "stages": ["kick"]}, burn(10.0)),
    ),
    Faulty(
        "release-short",
        "error",
        LEG,
        lambda: design(
            [{"kind": "release", "payload": "pod", "mass": 90.0}, burn(10.0)], payloads=[{"name": "pod", "mass": 60.0}]
        ),
    ),
    Faulty(
        "branch-not-started",
        "error",
        "/mission/branches/0/of",
        lambda: design([burn(10.0)], *pair(), branches=[{"of": "kick", "legs": [burn(10.0)]}]),
    ),
    Faulty("handover", "note", LEG, lambda: design([burn(1200.0)], *pair())),
    Faulty("left-behind", "note", f"{LOAD}/mass", lambda: separated(burn(10.0))),
    Faulty(
        "held-back-unused",
        "note",
        f"{LOAD}/held_back",
        lambda: design([burn(10.0)], stage(propellants=[{"mass": 400.0, "held_back": 50.0}])),
    ),
    Faulty("unlit-aboard", "note", LEG, lambda: design([burn(10.0, "tug")], *pair())),
    Faulty(
        "feed-unbalanced",
        "warning",
        "/vehicle/stages/0/engines/0/feeds",
        lambda: design([burn(1500.0)], two_fuels(200.0, 200.0)),
    ),
    Faulty(
        "boiled-dry",
        "error",
        f"{LOAD}/boiloff_per_day",
        lambda: design(
            [{"kind": "coast", "duration": 10.0 * DAY}, burn(10.0)],
            stage(propellants=[{"mass": 400.0, "boiloff_per_day": 50.0}]),
        ),
    ),
    Faulty(
        "overfilled",
        "error",
        f"{LOAD}/mass",
        lambda: design([burn(10.0)], stage(propellants=[{"mass": 400.0, "capacity": 350.0}])),
    ),
    Faulty("nothing-to-pay", "note", "/mission/legs", lambda: design([{"kind": "coast", "duration": DAY}])),
    Faulty("no-contingency", "note", LEG, lambda: design([burn(10.0)])),
    Faulty("no-growth", "note", "/vehicle/stages/0/dry_mass", lambda: design([burn(10.0)])),
    Faulty("cannot-lift-off", "error", LEG, lambda: lift_off(5e3)),
    Faulty(
        "thrust-to-weight-low",
        "error",
        "/rules/limits/liftoff_thrust_to_weight_min",
        lambda: lift_off(1e4, limits={"liftoff_thrust_to_weight_min": 1.3}),
    ),
    Faulty(
        "acceleration-high",
        "error",
        "/rules/limits/acceleration_max",
        lambda: design([burn(1000.0)], limits={"acceleration_max": 5.0}),
    ),
    Faulty(
        "burn-time-long",
        "error",
        "/rules/limits/burn_time_max",
        lambda: design([burn(1000.0)], limits={"burn_time_max": 60.0}),
    ),
    Faulty(
        "duration-long",
        "error",
        "/rules/limits/duration_max",
        lambda: design([burn(10.0), {"kind": "coast", "duration": 2.0 * DAY}], limits={"duration_max": DAY}),
    ),
    Faulty(
        "location-unknown",
        "error",
        LEG,
        lambda: design([transfer()], start={"kind": "hyperbola", "body": "Tessaly", "c3": 1e6}),
    ),
    Faulty(
        "plane-unknown",
        "error",
        f"{LEG}/to/inclination",
        lambda: from_orbit(transfer(to={"inclination": 30.0}), altitude=4e5),
    ),
    Faulty(
        "node-unknown",
        "error",
        f"{LEG}/to/raan",
        lambda: from_orbit(transfer(to={"raan": 30.0}), altitude=4e5, inclination=20.0),
    ),
    Faulty("wrong-body", "error", f"{LEG}/to/body", two_bodies),
    Faulty("time-limit", "error", f"{LEG}/time_limit", lambda: from_orbit(transfer(time_limit=60.0), altitude=4e5)),
    Faulty("time-limit", "error", f"{LEG}/until", dated),
    Faulty(
        "periapsis-below-surface",
        "error",
        f"{LEG}/to",
        lambda: from_orbit(transfer(to={"periapsis": -5e4}), altitude=4e5),
    ),
    Faulty(
        "periapsis-low",
        "error",
        "/rules/limits/periapsis_min",
        lambda: design([transfer(to={"periapsis": 1e5})], limits={"periapsis_min": 2e5}),
    ),
    Faulty(
        "periapsis-low",
        "error",
        f"{LEG}/periapsis_min",
        lambda: from_orbit(transfer(periapsis_min=6e5), altitude=4e5),
    ),
    Faulty("entering", "note", LEG, with_air),
    Faulty(
        "no-convergence",
        "error",
        f"{LEG}/strategy",
        lambda: from_orbit(transfer(strategy="one_burn"), altitude=4e5),
    ),
    Faulty(
        "no-convergence",
        "error",
        f"{LEG}/apoapsis_max",
        lambda: from_orbit(transfer(apoapsis_max=7e5), altitude=4e5),
    ),
]
"""In the order in which the contract lists the codes."""
