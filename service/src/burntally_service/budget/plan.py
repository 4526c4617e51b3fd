"""The plan: what each leg asks, where and when, branch by branch; the vehicle is not seen here."""

from collections.abc import Mapping
from dataclasses import dataclass

from burntally.model.design import Design
from burntally.model.mission import Ascend, Branch, ChargedLeg, Leg, Location, Mission, TakeOn
from burntally.model.rules import Contingency, Reserve, Rules
from burntally_service.budget.rules import no_rule, rule_for
from burntally_service.bodies import Body
from burntally_service.legs import Clock, LegPlan, plan_leg

__all__ = ["BranchPlan", "Handoff", "PlannedLeg", "category_of", "plan_branch", "rule_pointer"]

OPEN_ACCOUNT: tuple[tuple[str, ...], tuple[str, ...]] = ((), ())


@dataclass(frozen=True, slots=True, kw_only=True)
class Handoff:
    """Where and when a branch starts: how the parent's books say that its part left."""

    location: Location | None
    elapsed: float
    stated_ascent: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class PlannedLeg:
    """A leg with its plan, its place in the design, and the rule that it takes."""

    leg: Leg
    index: int
    pointer: str
    start: Location | None
    elapsed: float
    plan: LegPlan
    category: str | None
    rule: Contingency
    rule_index: int

    @property
    def required(self) -> float:
        """Ideal cost of the leg [m/s]."""
        total = 0.0
        for manoeuvre in self.plan.manoeuvres:
            total += manoeuvre.delta_v
        return total

    @property
    def duration(self) -> float:
        """Time that the leg takes [s]."""
        total = self.plan.coast_after
        for manoeuvre in self.plan.manoeuvres:
            total += manoeuvre.coast_before
        return total

    @property
    def charged(self) -> bool:
        """Whether the leg is charged a delta-v: a manoeuvre, or what the rule adds to one that costs nothing."""
        if not self.plan.manoeuvres:
            return False
        on_leg = self.rule.floor if self.rule.floor_on == "leg" else 0.0
        return self.required > 0.0 or on_leg > 0.0 or self.rule.fixed > 0.0

    @property
    def kilograms(self) -> float:
        """Propellant that the leg draws [kg]."""
        return getattr(self.leg, "propellant", None) or 0.0

    @property
    def account(self) -> tuple[tuple[str, ...], tuple[str, ...]]:
        """Stages and engines that pay; empty for the open account."""
        if isinstance(self.leg, ChargedLeg) and self.leg.paid_by:
            return tuple(self.leg.paid_by), tuple(self.leg.engines or ())
        return OPEN_ACCOUNT


@dataclass(frozen=True, slots=True, kw_only=True)
class BranchPlan:
    """A branch with its planned legs; `part` is empty for the main one."""

    name: str
    part: str
    pointer: str
    legs: tuple[PlannedLeg, ...]
    reserve: Reserve
    reserve_pointer: str
    start_elapsed: float

    @property
    def end(self) -> Location | None:
        """Where the branch ends."""
        return self.legs[-1].plan.end if self.legs else None


def category_of(leg: Leg) -> str | None:
    """Category that a leg is charged under; None for a leg that is never charged."""
    if not isinstance(leg, ChargedLeg):
        return None
    return leg.category or type(leg).default_category


def rule_pointer(rules: Rules, index: int) -> str:
    """Where a rule stands in the design: itself, or the nearest ancestor where a preset gave it."""
    return f"/rules/contingency/{index}" if index < len(rules.contingency) else "/rules"


def plan_branch(
    design: Design,
    rules: Rules,
    *,
    branch: int,
    handoff: Handoff,
    bodies: Mapping[str, Body],
) -> BranchPlan:
    """Plan every leg of a branch, each from where the one before it ends.

    Parameters
    ----------
    design : Design
        The design as stated.
    rules : Rules
        Its rules, resolved.
    branch : int
        0 for the main branch, then the mission's branches in order.
    handoff : Handoff
        Where and when the branch starts.
    bodies : mapping of str to Body
        The mission's bodies.

    Returns
    -------
    BranchPlan
        The planned legs.
    """
    mission = design.mission
    of: Branch | None = mission.branches[branch - 1] if branch else None
    legs = of.legs if of else mission.legs
    base = f"/mission/branches/{branch - 1}" if of else "/mission"
    own_reserve = of.reserve if of else None
    location, elapsed = handoff.location, handoff.elapsed
    planned: list[PlannedLeg] = []
    for index, leg in enumerate(legs):
        plan = plan_leg(leg, location, bodies=bodies, clock=Clock(elapsed=elapsed, epoch=mission.epoch))
        category = category_of(leg)
        rule_index = -1 if category is None else rule_for(category, rules)
        row = PlannedLeg(
            leg=leg,
            index=index,
            pointer=f"{base}/legs/{index}",
            start=location,
            elapsed=elapsed,
            plan=plan,
            category=category,
            rule=no_rule() if rule_index < 0 else rules.contingency[rule_index],
            rule_index=rule_index,
        )
        planned.append(row)
        location, elapsed = plan.end, elapsed + row.duration
    return BranchPlan(
        name=of.of if of else "main",
        part=of.of if of else "",
        pointer=base,
        legs=tuple(planned),
        reserve=own_reserve or rules.reserve or Reserve(),
        reserve_pointer=f"{base}/reserve" if own_reserve else "/rules/reserve",
        start_elapsed=handoff.elapsed,
    )


def docked_branches(mission: Mission, leg: Leg) -> int:
    """Index of the branch that a leg docks; 0 if it docks none."""
    if isinstance(leg, TakeOn) and leg.branch is not None:
        for index, branch in enumerate(mission.branches):
            if branch.of == leg.branch:
                return index + 1
    return 0


def is_ascent(leg: Leg) -> bool:
    """Whether handing over within a leg is expected of it."""
    return isinstance(leg, Ascend)
