"""The vehicle: a stack of stages, what they carry, and what rides on them."""

from typing import Annotated, Literal

from msgspec import Meta, Struct, field

from burntally.model.scalars import (
    Area,
    Fraction,
    Growth,
    Isp,
    Mass,
    Name,
    Parts,
    Text,
    Thrust,
    doc,
)

__all__ = ["Engine", "Load", "MassItem", "MassList", "Payload", "Stage", "Vehicle"]


class MassItem(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """One line of a mass list, with the growth that its maturity calls for."""

    name: Annotated[Text, doc("What the item is.")]
    mass: Annotated[Mass, doc("Basic mass of each, as it is known today.")]
    count: Annotated[int, Meta(ge=1, le=10000), doc("How many of them there are.")] = 1
    growth: Annotated[Growth | None, doc("Mass growth allowance of this item; beats every rule.")] = None
    maturity: Annotated[Text | None, doc("Maturity, looked up in the rules' growth table.")] = None
    class_: Annotated[Text | None, doc("Class of equipment, looked up together with the maturity.")] = field(
        default=None, name="class"
    )


MassList = Mass | Annotated[list[MassItem], Meta(min_length=1, max_length=2000)]
"""A plain mass, or a list of items; a plain mass is one item that states neither growth nor maturity."""


class Load(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """One propellant in its tank."""

    name: Annotated[Name, doc("Name of the load, unique within its stage.")] = "propellant"
    mass: Annotated[Mass, doc("Propellant loaded.")]
    capacity: Annotated[Mass | None, doc("The most that the tank holds.")] = None
    residual_fraction: Annotated[
        Fraction | None, doc("Share of all loaded or taken on that never burns; absent: the rules'.")
    ] = None
    held_back: Annotated[Mass, doc("Kept until the stage has separated; then its own branch may burn it.")] = 0.0
    boiloff_per_day: Annotated[Mass, doc("Boil-off in a day, while any usable propellant is left.")] = 0.0


_Feeds = Annotated[dict[Name, Parts], Meta(title="Feeds", min_length=1, max_length=8)]
_Ignitions = Annotated[int, Meta(ge=1, le=10000)]


class Engine(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """One kind of engine of a stage; `count` of them burn together."""

    name: Annotated[Name, doc("Name of the engine, unique within its stage.")] = "engine"
    count: Annotated[int, Meta(ge=1, le=64), doc("How many of them are fitted.")] = 1
    thrust: Annotated[Thrust, doc("Thrust of each in vacuum, at full setting.")]
    isp: Annotated[Isp, doc("Specific impulse in vacuum; a speed is read as the effective exhaust speed.")]
    isp_sea_level: Annotated[Isp | None, doc("Specific impulse at 101 325 Pa; tells the exit area.")] = None
    exit_area: Annotated[Area | None, doc("Nozzle exit area of each; at most one of this and isp_sea_level.")] = None
    feeds: Annotated[
        _Feeds | None,
        doc("Loads that the engine draws on, with their parts by mass; absent: the stage's first load."),
    ] = None
    auxiliary: Annotated[bool, doc("Lit only where a leg names it.")] = False
    loss_per_ignition: Annotated[Mass, doc("Propellant lost at each ignition of each engine, without impulse.")] = 0.0
    max_ignitions: Annotated[_Ignitions | None, doc("Ignitions allowed; absent: no limit.")] = None


class Stage(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """One stage of the stack; stages that ignite first stand first."""

    name: Annotated[Name, doc("Name, unique among stages and payloads; `main` is taken.")]
    dry_mass: Annotated[MassList, doc("Inert mass: structure, engines, trapped gas; not residual propellant.")]
    propellants: Annotated[list[Load], Meta(max_length=8), doc("Loads; none: an inert stage, which never pays.")] = []
    engines: Annotated[list[Engine], Meta(max_length=16), doc("Kinds of engine.")] = []
    mass_growth: Annotated[Growth | None, doc("Growth of items that nothing else covers; absent: the rules'.")] = None
    separation: Annotated[
        Literal["when_spent", "by_leg"],
        doc("Whether a spent stage drops before the next payer's burn, or only where a leg says so."),
    ] = "when_spent"


class Payload(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """A named mass that rides on a stage and leaves with it."""

    name: Annotated[Name, doc("Name, unique among stages and payloads.")]
    mass: Annotated[MassList, doc("Mass, or list of items.")]
    on: Annotated[Name | None, doc("Stage that it rides on; absent: the last stage.")] = None


class Vehicle(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """A stack of stages and its payloads."""

    name: Annotated[Name, doc("Name of the vehicle.")]
    stages: Annotated[list[Stage], Meta(min_length=1, max_length=12), doc("Stages; the first ignites first.")]
    payloads: Annotated[list[Payload], Meta(max_length=64), doc("Payloads.")] = []
