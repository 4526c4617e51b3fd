"""The budget: what each leg is charged, who pays, what is left, and what is wrong."""

from typing import Annotated, Literal

from msgspec import Struct

from burntally.model.mission import Location
from burntally.model.scalars import Number, doc

__all__ = [
    "BranchBook",
    "Budget",
    "Burn",
    "Caution",
    "ContingencyBook",
    "Delivery",
    "DeltaVBook",
    "DryMass",
    "Event",
    "Finding",
    "LegBook",
    "Limiting",
    "LoadBook",
    "Losses",
    "Manoeuvre",
    "Payer",
    "Provenance",
    "Remedy",
    "ReserveBook",
    "RuleUsed",
    "Separated",
    "StageBook",
    "StrategyCost",
    "TableUsed",
]


class Limiting(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """Where the margin is least: the first leg at the least slack, or the first that owes."""

    branch: Annotated[str, doc("Branch.")]
    leg: Annotated[int | None, doc("Index of the leg in its branch; absent: the reserve.")] = None


class RuleUsed(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """The contingency rule that a leg took."""

    category: Annotated[str, doc("Category of the rule.")]
    clause: Annotated[str | None, doc("Clause of the policy.")] = None


class Losses(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """What a leg loses beside its ideal manoeuvres [m/s]; a loss that was not estimated is absent."""

    finite_burn: Annotated[Number | None, doc("Loss of burns that take time [m/s].")] = None


class ContingencyBook(Struct, frozen=True, kw_only=True, gc=False):
    """What each part of the rule adds [m/s]."""

    fraction: Annotated[Number, doc("Added by the rule's fraction [m/s].")]
    floor: Annotated[Number, doc("Added to reach the rule's floor [m/s].")]
    fixed: Annotated[Number, doc("Added by the rule's fixed part [m/s].")]


class Payer(Struct, frozen=True, kw_only=True, gc=False):
    """What one stage gave to a leg and its contingency."""

    stage: Annotated[str, doc("Stage.")]
    engines: Annotated[list[str], doc("Engines lit.")]
    delta_v: Annotated[Number, doc("Delta-v given [m/s].")]
    propellant: Annotated[Number, doc("Propellant spent, losses at ignition apart [kg].")]


class Manoeuvre(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """One ideal manoeuvre of a leg."""

    name: Annotated[str, doc("What it does.")]
    body: Annotated[str | None, doc("Body.")] = None
    place: Annotated[str | None, doc("Where on the orbit.")] = None
    time: Annotated[Number | None, doc("Since the mission's start [s].")] = None
    delta_v: Annotated[Number, doc("Ideal cost [m/s].")]
    direction: Annotated[
        list[float] | None, doc("Unit vector: radial, transverse, normal, at the orbit before the burn.")
    ] = None
    plane_change: Annotated[Number | None, doc("Change of plane [deg].")] = None


class StrategyCost(Struct, frozen=True, kw_only=True, gc=False):
    """What another way of flying the leg would cost."""

    strategy: Annotated[str, doc("Strategy.")]
    delta_v: Annotated[Number, doc("Ideal cost [m/s].")]
    duration: Annotated[Number, doc("Time that it takes [s].")]


class Burn(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """One interval of one set of lit engines."""

    stage: Annotated[str, doc("Stage.")]
    engines: Annotated[list[str], doc("Engines lit.")]
    purpose: Annotated[Literal["manoeuvre", "contingency", "reserve", "upkeep"], doc("What it is burned for.")]
    delta_v: Annotated[Number, doc("Delta-v [m/s].")]
    propellant: Annotated[Number, doc("Propellant [kg].")]
    burn_time: Annotated[Number, doc("Time at full thrust [s].")]
    time: Annotated[Number, doc("Since the mission's start [s].")]
    mass_before: Annotated[Number, doc("Mass at ignition [kg].")]
    mass_after: Annotated[Number, doc("Mass at burn-out [kg].")]
    thrust: Annotated[Number, doc("Vacuum thrust [N].")]
    thrust_to_weight_ignition: Annotated[
        Number | None, doc("Thrust over weight at ignition, in the local gravity; absent away from a known place.")
    ] = None
    thrust_to_weight_burnout: Annotated[Number | None, doc("The same at burn-out.")] = None
    acceleration_burnout: Annotated[Number, doc("Acceleration at burn-out [m/s2].")]


class Event(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """Something that happens within a leg, in order."""

    kind: Annotated[
        Literal["ignition", "separation", "release", "take_on", "boiloff", "propellant"], doc("What happens.")
    ]
    part: Annotated[str, doc("Stage, payload, load or engine that it happens to.")]
    mass: Annotated[Number, doc("Mass that leaves, comes or is lost [kg].")]
    time: Annotated[Number, doc("Since the mission's start [s].")]


class LegBook(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """The ledger line of one leg; `mass_after` is after its contingency and before a reserve."""

    name: Annotated[str | None, doc("Name of the leg.")] = None
    kind: Annotated[str, doc("Kind of leg.")]
    pointer: Annotated[str, doc("JSON Pointer to the leg in the design.")]
    category: Annotated[str | None, doc("Category charged.")] = None
    rule: Annotated[RuleUsed | None, doc("Contingency rule taken.")] = None
    source: Annotated[Literal["computed", "stated", "none"], doc("Where the cost comes from.")]
    paid: Annotated[bool, doc("Whether all that is charged was paid.")]
    slack: Annotated[Number | None, doc("The most that could be added at the leg's end and still be paid [m/s].")] = (
        None
    )
    owed: Annotated[Number, doc("What no account pays [m/s].")]
    start: Annotated[Location | None, doc("Where the leg starts.")] = None
    end: Annotated[Location | None, doc("Where the leg ends.")] = None
    start_epoch: Annotated[str | None, doc("When it starts, UTC.")] = None
    end_epoch: Annotated[str | None, doc("When it ends, UTC.")] = None
    elapsed: Annotated[Number, doc("Time since the mission's start, at the leg's start [s].")]
    duration: Annotated[Number, doc("Time that the leg takes [s].")]
    required: Annotated[Number, doc("Ideal manoeuvres [m/s].")]
    losses: Annotated[Losses, doc("Losses.")]
    contingency: Annotated[ContingencyBook, doc("Contingency.")]
    charged: Annotated[Number, doc("Required, losses and contingency [m/s].")]
    payers: Annotated[list[Payer], doc("Who paid.")]
    mass_before: Annotated[Number, doc("Mass when the leg starts [kg].")]
    mass_after: Annotated[Number, doc("Mass when the leg ends [kg].")]
    manoeuvres: Annotated[list[Manoeuvre], doc("Ideal manoeuvres.")]
    alternatives: Annotated[list[StrategyCost], doc("Other strategies that were weighed.")]
    burns: Annotated[list[Burn], doc("Burns.")]
    events: Annotated[list[Event], doc("Events.")]


class ReserveBook(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """What a branch holds at its end."""

    charged: Annotated[Number, doc("Reserve [m/s].")]
    owed: Annotated[Number, doc("What the account cannot hold [m/s].")]
    slack: Annotated[Number | None, doc("What could be added and still be paid [m/s].")] = None


class BranchBook(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """The books of one branch; `charged` is the legs', the reserve stands beside it."""

    name: Annotated[str, doc("`main`, or the part that the branch is of.")]
    closes: Annotated[bool, doc("Whether the branch closes.")]
    margin: Annotated[Number | None, doc("Least slack, or minus the sum owed; absent: nothing to pay [m/s].")] = None
    owed: Annotated[Number, doc("Sum owed [m/s].")]
    charged: Annotated[Number, doc("Sum charged by the legs [m/s].")]
    reserve: Annotated[ReserveBook | None, doc("Reserve; absent: the branch never started.")] = None
    legs: Annotated[list[LegBook], doc("Legs.")]
    end: Annotated[Location | None, doc("Where the branch ends.")] = None
    end_epoch: Annotated[str | None, doc("When the branch ends, UTC.")] = None
    end_mass: Annotated[Number | None, doc("Mass at the end; absent: the branch never started [kg].")] = None


class DryMass(Struct, frozen=True, kw_only=True, gc=False):
    """Dry mass as written, with growth, and with the system contingency."""

    basic: Annotated[Number, doc("As written [kg].")]
    predicted: Annotated[Number, doc("With the growth of each item [kg].")]
    allowable: Annotated[Number, doc("With the system contingency; the books use it [kg].")]


class DeltaVBook(Struct, frozen=True, kw_only=True, gc=False):
    """What a stage can give, gave and keeps, in vacuum [m/s]."""

    capability: Annotated[Number, doc("Ideal delta-v of the usable load under the stack as first flown [m/s].")]
    spent: Annotated[Number, doc("Delta-v given [m/s].")]
    left: Annotated[Number, doc("Ideal delta-v of what is left, under the stack that it is in at the end [m/s].")]


class LoadBook(Struct, frozen=True, kw_only=True, gc=False):
    """Where the propellant of one load went; loaded + taken on = the sum of the rest [kg]."""

    name: Annotated[str, doc("Load.")]
    loaded: Annotated[Number, doc("Loaded at the start [kg].")]
    taken_on: Annotated[Number, doc("Taken on [kg].")]
    burned: Annotated[Number, doc("Burned or drawn [kg].")]
    ignition_loss: Annotated[Number, doc("Lost at ignitions [kg].")]
    boiled_off: Annotated[Number, doc("Boiled off [kg].")]
    handed_over: Annotated[Number, doc("Handed over [kg].")]
    residual: Annotated[Number, doc("Residual, which never burns [kg].")]
    held_back: Annotated[Number, doc("Still held back at the end [kg].")]
    left: Annotated[Number, doc("Usable propellant left [kg].")]


class Separated(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """Where and when a stage left the stack."""

    branch: Annotated[str, doc("Branch that it left.")]
    leg: Annotated[int, doc("Leg in which it left.")]
    time: Annotated[Number, doc("Since the mission's start [s].")]
    left_behind: Annotated[Number, doc("Usable propellant that left with it and that no branch burns [kg].")]


class StageBook(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """What one stage has, gave and keeps."""

    name: Annotated[str, doc("Stage.")]
    booster_of: Annotated[str | None, doc("Stage that a booster group belongs to.")] = None
    count: Annotated[int, doc("Number of units; the book is of one.")]
    dry_mass: Annotated[DryMass, doc("Dry mass.")]
    delta_v: Annotated[DeltaVBook, doc("Delta-v.")]
    ignitions: Annotated[dict[str, int], doc("Ignitions used, by engine.")]
    loads: Annotated[list[LoadBook], doc("Loads.")]
    separated: Annotated[Separated | None, doc("Absent: it stayed.")] = None


class Delivery(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """A payload released, and where."""

    name: Annotated[str, doc("Payload.")]
    mass: Annotated[Number, doc("Mass released [kg].")]
    branch: Annotated[str, doc("Branch.")]
    leg: Annotated[int, doc("Leg.")]
    location: Annotated[Location | None, doc("Where.")] = None
    epoch: Annotated[str | None, doc("When, UTC.")] = None


_Value = float | int | str | bool | list[str]


class Remedy(Struct, frozen=True, kw_only=True, omit_defaults=True, rename={"from_": "from"}):
    """A change of one field that mends a finding; it was run again with the change in place."""

    pointer: Annotated[str, doc("Field to change.")]
    from_: Annotated[_Value | None, doc("Its value now; absent: not written in the design.")] = None
    to: Annotated[_Value | None, doc("The value that mends it; absent: the field goes.")] = None
    margin: Annotated[Number | None, doc("Margin of the budget with the change [m/s].")] = None
    message: Annotated[str, doc("The change in words.")]


class Finding(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """Something about the design that is wrong, doubtful or worth knowing."""

    code: Annotated[str, doc("Stable code.")]
    severity: Annotated[Literal["error", "warning", "note"], doc("Severity; an error keeps a budget from closing.")]
    message: Annotated[str, doc("What it is, in words; not stable.")]
    pointer: Annotated[str, doc("JSON Pointer to the field whose change would mend it.")]
    value: Annotated[Number | None, doc("The number found.")] = None
    limit: Annotated[Number | None, doc("The number that it is held against.")] = None
    unit: Annotated[str | None, doc("Unit of both.")] = None
    branch: Annotated[str | None, doc("Branch.")] = None
    leg: Annotated[int | None, doc("Leg.")] = None
    remedies: Annotated[list[Remedy], doc("Changes that would mend it.")]


class Caution(Struct, frozen=True, kw_only=True, gc=False):
    """A bound on what the numbers are valid for; it never judges the design."""

    code: Annotated[str, doc("Stable code.")]
    message: Annotated[str, doc("In words.")]


class TableUsed(Struct, frozen=True, kw_only=True, gc=False):
    """A table of data that the numbers rest on."""

    name: Annotated[str, doc("Table.")]
    digest: Annotated[str, doc("SHA-256 of its file.")]


class Provenance(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """What the budget was made from and by."""

    format: Annotated[int, doc("Version of the design format.")]
    version: Annotated[str, doc("Version of the service.")]
    design_digest: Annotated[str, doc("SHA-256 of the design in canonical JSON.")]
    preset: Annotated[str | None, doc("Preset of the rules.")] = None
    preset_digest: Annotated[str | None, doc("SHA-256 of the preset in canonical JSON.")] = None
    tables: Annotated[list[TableUsed], doc("Tables of data.")]


class Budget(Struct, frozen=True, kw_only=True, omit_defaults=True, gc=False):
    """Whether every burn can be paid, by whom, with what margin, and what is wrong."""

    closes: Annotated[bool, doc("No margin below zero and no finding of severity error.")]
    margin: Annotated[Number | None, doc("Least margin of the branches; absent: nothing to pay [m/s].")] = None
    limiting: Annotated[Limiting | None, doc("What holds the margin down.")] = None
    initial_mass: Annotated[Number, doc("Mass at the start [kg].")]
    payload_fraction: Annotated[Number, doc("Payload carried at the start over initial mass.")]
    branches: Annotated[list[BranchBook], doc("Branches; the first is `main`.")]
    stages: Annotated[list[StageBook], doc("Stages.")]
    deliveries: Annotated[list[Delivery], doc("Payloads released.")]
    findings: Annotated[list[Finding], doc("Findings.")]
    cautions: Annotated[list[Caution], doc("Cautions.")]
    provenance: Annotated[Provenance, doc("Provenance.")]
