"""The mission: where it starts, the row of legs, and the branches that fly on by themselves."""

from typing import Annotated, ClassVar, Literal

from msgspec import Meta, Struct

from burntally.model.rules import Reserve
from burntally.model.scalars import (
    C3,
    GM,
    Altitude,
    Angle,
    CategoryPath,
    DeltaV,
    Duration,
    Epoch,
    Inclination,
    Latitude,
    Length,
    Mass,
    Name,
    Text,
    doc,
)
from burntally.model.vehicle import Payload

__all__ = [
    "Allowance",
    "Ascend",
    "Atmosphere",
    "Body",
    "BodyOrbit",
    "Branch",
    "ChargedLeg",
    "Coast",
    "Deorbit",
    "Flyby",
    "Hyperbola",
    "Land",
    "Landing",
    "Leg",
    "Location",
    "Mission",
    "Orbit",
    "OrbitLocation",
    "PropellantMove",
    "Release",
    "Rendezvous",
    "Separate",
    "Site",
    "Spiral",
    "System",
    "TakeOn",
    "Transfer",
    "Transit",
]


class Orbit(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """A target orbit; an element that is absent is left where the burns leave it."""

    body: Annotated[Name | None, doc("Body; absent: the one that the leg starts at.")] = None
    altitude: Annotated[Altitude | None, doc("Height of a circular orbit over the reference radius.")] = None
    periapsis: Annotated[Altitude | None, doc("Height of the periapsis over the reference radius.")] = None
    apoapsis: Annotated[Altitude | None, doc("Height of the apoapsis over the reference radius.")] = None
    period: Annotated[Duration | None, doc("Orbital period, together with a periapsis.")] = None
    inclination: Annotated[Inclination | None, doc("Inclination to the body's equator.")] = None
    raan: Annotated[Angle | None, doc("Right ascension of the ascending node.")] = None
    argument_of_periapsis: Annotated[Angle | None, doc("Argument of periapsis.")] = None


class OrbitLocation(Orbit, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="orbit"):
    """In orbit about a body; the size is complete, an element that is absent is not known."""


class Site(
    Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True, tag_field="kind", tag="site"
):
    """At rest on the surface of a body."""

    body: Annotated[Name, doc("Body.")]
    latitude: Annotated[Latitude, doc("Latitude.")]
    longitude: Annotated[Angle, doc("Longitude, east positive.")] = 0.0
    altitude: Annotated[Altitude, doc("Height over the reference radius.")] = 0.0


class Hyperbola(
    Struct,
    frozen=True,
    kw_only=True,
    forbid_unknown_fields=True,
    omit_defaults=True,
    tag_field="kind",
    tag="hyperbola",
):
    """On a hyperbola about a body: injected by another vehicle, or arriving."""

    body: Annotated[Name, doc("Body.")]
    c3: Annotated[C3, doc("Characteristic energy, the square of the hyperbolic excess speed.")]
    periapsis: Annotated[Altitude | None, doc("Height of the periapsis; absent: not aimed.")] = None
    approaching: Annotated[bool, doc("Whether the periapsis is still ahead.")] = False


Location = Site | OrbitLocation | Hyperbola


class Landing(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """Where a landing ends, on the body that the leg starts at."""

    latitude: Annotated[Latitude, doc("Latitude.")]
    longitude: Annotated[Angle, doc("Longitude, east positive.")] = 0.0
    altitude: Annotated[Altitude, doc("Height over the reference radius.")] = 0.0


_Payers = Annotated[list[Name], Meta(min_length=1, max_length=12)]
_EngineNames = Annotated[list[Name], Meta(min_length=1, max_length=16)]


class ChargedLeg(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """What every leg that can be charged has: a category, and an account that pays."""

    default_category: ClassVar[str] = ""

    name: Annotated[Text | None, doc("Name of the leg.")] = None
    category: Annotated[CategoryPath | None, doc("Category, a dotted path; absent: the kind's own.")] = None
    paid_by: Annotated[
        _Payers | None,
        doc("Stages that pay, in any order; absent: the open account, all stages."),
    ] = None
    engines: Annotated[
        _EngineNames | None,
        doc("Engines lit, of the one stage in paid_by; absent: all that are not auxiliary."),
    ] = None
    splits: Annotated[int, Meta(ge=1, le=50), doc("Each manoeuvre is flown as so many ignitions.")] = 1


_Stated = Annotated[DeltaV, doc("Stated cost of the leg, all of it required.")]
_MayState = Annotated[DeltaV | None, doc("Stated cost, in place of the computed one; where the leg ends stays.")]


class Ascend(ChargedLeg, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="ascend"):
    """From a site to an orbit."""

    default_category: ClassVar[str] = "ascent"

    to: Annotated[Orbit, doc("Orbit reached.")]
    delta_v: _Stated


class Transfer(ChargedLeg, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="transfer"):
    """From the orbit flown to another about the same body; from an approaching hyperbola, capture."""

    default_category: ClassVar[str] = "deterministic"

    to: Annotated[Orbit, doc("Orbit reached.")]
    delta_v: _MayState = None
    strategy: Annotated[
        Literal["cheapest", "hohmann", "bielliptic", "one_burn"],
        doc("Which manoeuvres are weighed; a bi-elliptic transfer only within apoapsis_max or time_limit."),
    ] = "cheapest"
    time_limit: Annotated[Duration | None, doc("The longest that the leg may take.")] = None
    apoapsis_max: Annotated[Altitude | None, doc("The highest that a path of the leg may reach.")] = None
    periapsis_min: Annotated[Altitude | None, doc("The lowest that a path of the leg may pass.")] = None


class Rendezvous(ChargedLeg, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="rendezvous"):
    """To a target in orbit."""

    default_category: ClassVar[str] = "deterministic"

    to: Annotated[Orbit | None, doc("Orbit of the target; absent: the same orbit.")] = None
    delta_v: _Stated


class Deorbit(ChargedLeg, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="deorbit"):
    """One burn that lowers the periapsis."""

    default_category: ClassVar[str] = "deterministic"

    periapsis: Annotated[Altitude, doc("Height of the periapsis after the burn.")]
    delta_v: _MayState = None


class Land(ChargedLeg, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="land"):
    """From orbit to the surface."""

    default_category: ClassVar[str] = "deterministic.landing"

    site: Annotated[Landing | None, doc("Where it lands; absent: under the orbit.")] = None
    delta_v: _Stated


class Transit(ChargedLeg, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="transit"):
    """From an orbit about one body to another body."""

    default_category: ClassVar[str] = "deterministic.transit"

    to: Annotated[Orbit, doc("Orbit at the other body; without a size: an arrival that is not captured.")]
    delta_v: _Stated


class Flyby(ChargedLeg, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="flyby"):
    """Past the body that is being approached."""

    default_category: ClassVar[str] = "deterministic.flyby"

    delta_v: _Stated


class Spiral(ChargedLeg, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="spiral"):
    """To another orbit under continuous low thrust; it needs one ignition left and uses none."""

    default_category: ClassVar[str] = "low_thrust"

    to: Annotated[Orbit, doc("Orbit reached.")]
    delta_v: _Stated


class Coast(ChargedLeg, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="coast"):
    """Time that passes, with or without upkeep."""

    default_category: ClassVar[str] = "maintenance"

    duration: Annotated[Duration | None, doc("How long it takes; exactly one of this and until.")] = None
    until: Annotated[Epoch | None, doc("When it ends; needs mission.epoch.")] = None
    upkeep_per_year: Annotated[DeltaV | None, doc("Upkeep in a year of 365.25 days.")] = None
    delta_v: _MayState = None


class Allowance(ChargedLeg, frozen=True, kw_only=True, forbid_unknown_fields=True, tag_field="kind", tag="allowance"):
    """A stated cost that moves nothing: a delta-v, or a mass of propellant. Its category must be stated."""

    delta_v: Annotated[DeltaV | None, doc("Cost; exactly one of this and propellant.")] = None
    propellant: Annotated[Mass | None, doc("Propellant drawn as the payer's engines draw; lights nothing.")] = None


class Separate(
    Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True, tag_field="kind", tag="separate"
):
    """Stages that leave the stack, with all below them."""

    name: Annotated[Text | None, doc("Name of the leg.")] = None
    stages: Annotated[list[Name], Meta(min_length=1, max_length=12), doc("Stages that leave.")]


class PropellantMove(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """Propellant handed over, or taken on, in one load."""

    stage: Annotated[Name, doc("Stage.")]
    load: Annotated[Name, doc("Load of the stage.")] = "propellant"
    mass: Annotated[Mass | None, doc("Mass; absent when taking on: to the load's capacity.")] = None


class Release(
    Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True, tag_field="kind", tag="release"
):
    """A payload or propellant that is delivered, handed over, left or vented."""

    name: Annotated[Text | None, doc("Name of the leg.")] = None
    payload: Annotated[Name | None, doc("Payload released.")] = None
    mass: Annotated[Mass | None, doc("Part of the payload's mass; absent: all of it.")] = None
    propellants: Annotated[list[PropellantMove], Meta(max_length=16), doc("Propellant handed over.")] = []


class TakeOn(
    Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True, tag_field="kind", tag="take_on"
):
    """A payload, propellant, or what is left of a finished branch, taken aboard."""

    name: Annotated[Text | None, doc("Name of the leg.")] = None
    payload: Annotated[Payload | None, doc("Payload taken on.")] = None
    propellants: Annotated[list[PropellantMove], Meta(max_length=16), doc("Propellant taken on.")] = []
    branch: Annotated[Name | None, doc("Docks the finished branch of this part on top of the stack.")] = None


Leg = (
    Ascend
    | Transfer
    | Rendezvous
    | Deorbit
    | Land
    | Transit
    | Flyby
    | Spiral
    | Coast
    | Allowance
    | Separate
    | Release
    | TakeOn
)
"""Any leg, tagged on ``kind``."""


class Branch(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """Legs that a part flies after it has separated."""

    of: Annotated[Name, doc("Stage whose separation starts the branch.")]
    legs: Annotated[list[Leg], Meta(min_length=1, max_length=200), doc("Legs, in order.")]
    reserve: Annotated[Reserve | None, doc("Reserve of this branch; beats the rules'.")] = None


class BodyOrbit(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """How a body moves about its parent."""

    semi_major_axis: Annotated[Length, doc("Semi-major axis; bounds the body's sphere of influence.")]


class Atmosphere(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """The air of a body."""

    top: Annotated[Altitude, doc("Height above which there is no air to speak of.")]


class Body(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """A body of an invented system, or one that joins the solar catalogue."""

    name: Annotated[Name, doc("Name, unique in the system.")]
    parent: Annotated[Name | None, doc("Body that it moves about; absent: the root.")] = None
    gravitational_parameter: Annotated[GM, doc("Gravitational parameter of the body alone.")]
    radius: Annotated[Length, doc("Reference radius, from which altitudes count.")]
    orbit: Annotated[BodyOrbit | None, doc("Orbit about the parent.")] = None
    atmosphere: Annotated[Atmosphere | None, doc("Air; absent: none.")] = None


class System(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """The bodies of the mission."""

    base: Annotated[Literal["solar", "empty"], doc("Whether the bodies join the solar catalogue.")] = "empty"
    bodies: Annotated[list[Body], Meta(min_length=1, max_length=200), doc("Bodies.")]


class Mission(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """A start and a row of legs, with branches for parts that separate and fly on."""

    system: Annotated[System | None, doc("Bodies; absent: the solar catalogue.")] = None
    epoch: Annotated[Epoch | None, doc("When the mission starts.")] = None
    start: Annotated[Location, doc("Where the mission starts.")]
    legs: Annotated[list[Leg], Meta(min_length=1, max_length=200), doc("Legs, in order.")]
    branches: Annotated[list[Branch], Meta(max_length=16), doc("Branches.")] = []
