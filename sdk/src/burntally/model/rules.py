"""The rules: what is added, what is held, and what must not be passed."""

from typing import Annotated, Literal

from msgspec import UNSET, Meta, Struct, UnsetType, field

from burntally.model.scalars import (
    Acceleration,
    Altitude,
    CategoryPath,
    DeltaV,
    Duration,
    Fraction,
    Growth,
    LoadRatio,
    Name,
    Ratio,
    Text,
    doc,
)

__all__ = ["Contingency", "GrowthRow", "Limits", "Reserve", "Rules"]


class Contingency(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """What a rule adds to the legs of one category."""

    category: Annotated[CategoryPath, doc("Dotted path; a leg takes the rule with the longest matching front.")]
    fraction: Annotated[Growth, doc("Share of required and losses that is added.")] = 0.0
    floor: Annotated[DeltaV, doc("The least that the fraction adds.")] = 0.0
    floor_on: Annotated[
        Literal["leg", "category"], doc("Whether the floor holds for each leg, or once for the branch.")
    ] = "leg"
    fixed: Annotated[DeltaV, doc("Added to every leg of the category.")] = 0.0
    clause: Annotated[Text | None, doc("Clause of the policy.")] = None


class GrowthRow(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """Growth of one maturity, for one class or for all."""

    maturity: Annotated[Text, doc("Maturity.")]
    class_: Annotated[Text | None, doc("Class of equipment; absent: the row serves all.")] = field(
        default=None, name="class"
    )
    growth: Annotated[Growth, doc("Mass growth allowance.")]


class Reserve(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """What is held at the end of a branch; the two add."""

    fraction: Annotated[Fraction, doc("Share of all that is charged in the branch.")] = 0.0
    delta_v: Annotated[DeltaV, doc("Held whatever is charged.")] = 0.0


class Limits(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """What a budget must keep to; ``null`` lifts a preset's limit."""

    liftoff_thrust_to_weight_min: Annotated[
        Ratio | UnsetType | None, doc("Least thrust-to-weight at lift-off, in local gravity.")
    ] = UNSET
    acceleration_max: Annotated[Acceleration | UnsetType | None, doc("Greatest acceleration at any burn-out.")] = UNSET
    burn_time_max: Annotated[Duration | UnsetType | None, doc("Longest single burn.")] = UNSET
    duration_max: Annotated[Duration | UnsetType | None, doc("Longest a branch may take.")] = UNSET
    periapsis_min: Annotated[Altitude | UnsetType | None, doc("Lowest periapsis, deorbits and landings apart.")] = UNSET
    fill_max: Annotated[LoadRatio | UnsetType | None, doc("Greatest load over capacity.")] = UNSET


class Rules(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """The policy that a budget is drawn up under."""

    preset: Annotated[Name | None, doc("A published policy that these rules refine; GET /v1/rules lists them.")] = None
    contingency: Annotated[
        list[Contingency], Meta(max_length=64), doc("Contingency by category; replaces the preset's rule whole.")
    ] = []
    mass_growth: Annotated[Growth | None, doc("Growth of items that nothing else covers.")] = None
    mass_contingency: Annotated[Growth | None, doc("System contingency on the dry mass of stages.")] = None
    residual_fraction: Annotated[Fraction | None, doc("Residual share of loads that state none.")] = None
    growth_table: Annotated[list[GrowthRow], Meta(max_length=500), doc("The project's own growth figures.")] = []
    reserve: Annotated[Reserve | None, doc("Held at the end of every branch.")] = None
    finite_burn: Annotated[
        bool,
        doc("Whether losses of finite burns are wanted; they are not estimated, and if wanted a caution says so."),
    ] = True
    limits: Annotated[Limits | None, doc("Limits.")] = None
