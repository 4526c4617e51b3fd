"""What the other operations take and answer: performance, transfers, bodies, rules, problems."""

from typing import Annotated

from msgspec import Meta, Struct

from burntally.model.budget import Caution, DryMass, Finding, Manoeuvre, StrategyCost
from burntally.model.errors import Violation
from burntally.model.mission import Deorbit, Location, System, Transfer
from burntally.model.rules import Rules
from burntally.model.scalars import Name, Number, Pressure, doc
from burntally.model.vehicle import Vehicle

__all__ = [
    "Bodies",
    "BodyRecord",
    "Performance",
    "PerformanceRequest",
    "Phase",
    "PresetRecord",
    "Presets",
    "Problem",
    "StagePerformance",
    "TransferAnswer",
    "TransferRequest",
]


class PerformanceRequest(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """A vehicle, to be burned stage by stage from the bottom."""

    vehicle: Annotated[Vehicle, doc("Vehicle.")]
    rules: Annotated[Rules, doc("Rules: growth, mass contingency and residuals are taken from them.")] = Rules()
    ambient_pressure: Annotated[Pressure, doc("Pressure around the first stage's engines.")] = 0.0
    gravity_of: Annotated[Name | None, doc("Body of the solar catalogue whose surface gravity weighs the stack.")] = (
        None
    )


class Phase(Struct, frozen=True, kw_only=True, omit_defaults=True):
    """One interval of one set of lit engines."""

    engines: Annotated[list[str], doc("Engines lit.")]
    mass_ignition: Annotated[Number, doc("Mass at ignition [kg].")]
    mass_burnout: Annotated[Number, doc("Mass at burn-out [kg].")]
    propellant: Annotated[Number, doc("Propellant burned [kg].")]
    thrust: Annotated[Number, doc("Thrust at the phase's ambient pressure [N].")]
    thrust_vacuum: Annotated[Number, doc("Thrust in vacuum [N].")]
    isp: Annotated[Number, doc("Specific impulse of the engines together, at that pressure [s].")]
    isp_vacuum: Annotated[Number, doc("The same in vacuum [s].")]
    mass_flow: Annotated[Number, doc("Mass flow [kg/s].")]
    burn_time: Annotated[Number, doc("Burn time [s].")]
    delta_v: Annotated[Number, doc("Ideal delta-v at that pressure [m/s].")]
    delta_v_vacuum: Annotated[Number, doc("Ideal delta-v in vacuum [m/s].")]
    thrust_to_weight_ignition: Annotated[Number, doc("Thrust over weight at ignition.")]
    thrust_to_weight_burnout: Annotated[Number, doc("Thrust over weight at burn-out.")]
    acceleration_burnout: Annotated[Number, doc("Acceleration at burn-out [m/s2].")]


class StagePerformance(Struct, frozen=True, kw_only=True, omit_defaults=True):
    """What one stage gives under the stack above it, all main engines lit until its usable load is spent."""

    name: Annotated[str, doc("Stage.")]
    dry_mass: Annotated[DryMass, doc("Dry mass.")]
    propellant: Annotated[Number, doc("Propellant loaded [kg].")]
    usable: Annotated[Number, doc("Propellant that can burn [kg].")]
    carried: Annotated[Number, doc("Mass above the stage and payloads riding on it [kg].")]
    mass_ratio: Annotated[Number, doc("Mass at ignition over mass at burn-out.")]
    propellant_fraction: Annotated[Number, doc("Propellant over propellant and dry mass.")]
    structural_coefficient: Annotated[Number, doc("Dry mass over propellant and dry mass.")]
    payload_ratio: Annotated[Number, doc("Mass carried over propellant and dry mass.")]
    delta_v: Annotated[Number, doc("Ideal delta-v, the first stage's at the ambient pressure [m/s].")]
    delta_v_vacuum: Annotated[Number, doc("Ideal delta-v in vacuum [m/s].")]
    phases: Annotated[list[Phase], doc("Phases.")]


class Performance(Struct, frozen=True, kw_only=True, omit_defaults=True):
    """What the vehicle gives, stage by stage."""

    initial_mass: Annotated[Number, doc("Mass at the start [kg].")]
    payload: Annotated[Number, doc("Payload [kg].")]
    payload_fraction: Annotated[Number, doc("Payload over initial mass.")]
    delta_v: Annotated[Number, doc("Sum of the stages' [m/s].")]
    delta_v_vacuum: Annotated[Number, doc("Sum of the stages', in vacuum [m/s].")]
    gravity: Annotated[Number, doc("Gravity that weighs the stack [m/s2].")]
    stages: Annotated[list[StagePerformance], doc("Stages, the first ignites first.")]
    findings: Annotated[list[Finding], doc("Findings.")]
    cautions: Annotated[list[Caution], doc("Cautions.")]


class TransferRequest(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """One leg flown from a location, with no vehicle."""

    system: Annotated[System | None, doc("Bodies; absent: the solar catalogue.")] = None
    start: Annotated[Location, doc("Where the leg starts.")]
    leg: Annotated[Transfer | Deorbit, doc("The leg.")]


class TransferAnswer(Struct, frozen=True, kw_only=True, omit_defaults=True):
    """What the leg costs, and where it ends; absent numbers: it could not be planned, and a finding says why."""

    strategy: Annotated[str | None, doc("Strategy taken.")] = None
    delta_v: Annotated[Number | None, doc("Ideal cost [m/s].")] = None
    duration: Annotated[Number | None, doc("Time that it takes [s].")] = None
    manoeuvres: Annotated[list[Manoeuvre], doc("Ideal manoeuvres.")]
    alternatives: Annotated[list[StrategyCost], doc("Other strategies that were weighed.")]
    end: Annotated[Location | None, doc("Where the leg ends.")] = None
    findings: Annotated[list[Finding], doc("Findings.")]
    cautions: Annotated[list[Caution], doc("Cautions.")]


class BodyRecord(Struct, frozen=True, kw_only=True, omit_defaults=True):
    """One body of the solar catalogue."""

    name: Annotated[str, doc("Name.")]
    parent: Annotated[str | None, doc("Body that it moves about.")] = None
    gravitational_parameter: Annotated[Number, doc("Gravitational parameter [m3/s2].")]
    radius: Annotated[Number, doc("Reference radius, from which altitudes count [m].")]
    radius_kind: Annotated[str, doc("Whether the reference radius is the equatorial or the mean one.")]
    atmosphere_top: Annotated[Number | None, doc("Height above which there is no air to speak of [m].")] = None
    semi_major_axis: Annotated[Number | None, doc("Semi-major axis of its orbit [m].")] = None
    sphere_of_influence: Annotated[Number | None, doc("Radius of its sphere of influence [m].")] = None
    source: Annotated[str, doc("Where the numbers come from.")]


class Bodies(Struct, frozen=True, kw_only=True):
    """The solar catalogue."""

    bodies: Annotated[list[BodyRecord], doc("Bodies.")]


class PresetRecord(Struct, frozen=True, kw_only=True):
    """A published margin policy as rules."""

    name: Annotated[str, doc("Name of the preset.")]
    title: Annotated[str, doc("Title of the policy.")]
    source: Annotated[str, doc("Where it was published.")]
    notes: Annotated[list[str], doc("What the rules cannot hold of it.")]
    rules: Annotated[Rules, doc("The rules.")]


class Presets(Struct, frozen=True, kw_only=True):
    """Every preset of rules."""

    presets: Annotated[list[PresetRecord], doc("Presets.")]


class Problem(Struct, frozen=True, kw_only=True, omit_defaults=True):
    """What went wrong with a request (RFC 9457)."""

    type: Annotated[str, doc("Where the problem is described.")]
    title: Annotated[str, doc("What kind of problem it is; the same for every problem of the type.")]
    status: Annotated[int, Meta(ge=400, le=599), doc("HTTP status.")]
    detail: Annotated[str | None, doc("This problem in words.")] = None
    code: Annotated[str, doc("Stable code.")]
    errors: Annotated[list[Violation], doc("Everything that is wrong, with pointers.")]
    request_id: Annotated[str | None, doc("Id of the request.")] = None
