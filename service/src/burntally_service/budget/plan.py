"""The plan: what each leg asks, where and when, branch by branch; the vehicle is not seen here."""

from collections.abc import Mapping

from msgspec import Struct

from burntally.model.design import Design
from burntally.model.mission import Ascend, Branch, ChargedLeg, Coast, Leg, Location
from burntally.model.rules import Contingency, Reserve, Rules
from burntally_service.bodies import Body
from burntally_service.budget.rules import no_rule, rule_for
from burntally_service.legs.plan import plan_leg
from burntally_service.legs.planned import Clock, LegPlan

__all__ = ["OPEN_ACCOUNT", "BranchPlan", "Handoff", "PlanMemo", "PlannedLeg", "category_of", "is_quiet", "plan_branch"]

PlanMemo = dict[tuple[int, Location | None, float, str | None], tuple[Leg, LegPlan]]
"""Plans by the identity of the leg and where and when it starts; the leg is kept, so that its identity is not reused.

By identity, since a leg holds lists and cannot be hashed; and it serves, since a design that is changed in one field
shares all other legs, and its copies are drawn up many times for remedies.
"""

_QUIET = (Ascend, Coast)

OPEN_ACCOUNT: tuple[tuple[str, ...], tuple[str, ...]] = ((), ())


class Handoff(Struct, frozen=True, kw_only=True):
    """Where and when a branch starts, and in which branch and leg: how the parent's books say that its part left."""

    location: Location | None
    elapsed: float
    left_in: tuple[int, int] = (0, -1)


class PlannedLeg(Struct, frozen=True, kw_only=True):
    """A leg with its plan, its place in the design, the rule that it takes, and whether a delta-v is charged."""

    leg: Leg
    index: int
    pointer: str
    start: Location | None
    elapsed: float
    plan: LegPlan
    category: str | None
    rule: Contingency
    rule_index: int
    charged: bool

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


class BranchPlan(Struct, frozen=True, kw_only=True):
    """A branch with its planned legs; `part` is empty for the main one."""

    name: str
    part: str
    pointer: str
    legs: tuple[PlannedLeg, ...]
    reserve: Reserve
    reserve_pointer: str
    start_elapsed: float
    left_in: tuple[int, int]

    @property
    def end(self) -> Location | None:
        """Where the branch ends."""
        return self.legs[-1].plan.end if self.legs else None


def _is_charged(plan: LegPlan, rule: Contingency) -> bool:
    """Whether a leg is charged a delta-v: a manoeuvre, or what the rule adds to one that costs nothing."""
    if not plan.manoeuvres:
        return False
    on_leg = rule.floor if rule.floor_on == "leg" else 0.0
    return plan.delta_v > 0.0 or on_leg > 0.0 or rule.fixed > 0.0


def category_of(leg: Leg) -> str | None:
    """Category that a leg is charged under; None for a leg that is never charged."""
    if not isinstance(leg, ChargedLeg):
        return None
    return leg.category or type(leg).default_category


def plan_branch(
    design: Design,
    rules: Rules,
    *,
    branch: int,
    handoff: Handoff,
    bodies: Mapping[str, Body],
    memo: PlanMemo,
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
    memo : dict
        Plans made before of the same legs from the same places; changed.

    Returns
    -------
    BranchPlan
        The planned legs.
    """
    mission = design.mission
    of: Branch | None = mission.branches[branch - 1] if branch else None
    base = f"/mission/branches/{branch - 1}" if of else "/mission"
    own_reserve = of.reserve if of else None
    location, elapsed = handoff.location, handoff.elapsed
    planned: list[PlannedLeg] = []
    for index, leg in enumerate(of.legs if of else mission.legs):
        pointer = f"{base}/legs/{index}"
        key = (id(leg), location, elapsed, mission.epoch)
        known = memo.get(key)
        if known is None:
            clock = Clock(elapsed=elapsed, epoch=mission.epoch)
            known = memo[key] = leg, plan_leg(leg, location, bodies=bodies, clock=clock, pointer=pointer)
        plan = known[1]
        planned.append(_planned_leg(plan, rules, leg=leg, at=(index, pointer), start=(location, elapsed)))
        location, elapsed = plan.end, elapsed + plan.duration
    return BranchPlan(
        name=of.of if of else "main",
        part=of.of if of else "",
        pointer=base,
        legs=tuple(planned),
        reserve=own_reserve or rules.reserve or Reserve(),
        # Where a preset gave the reserve, the nearest ancestor in the design is told.
        reserve_pointer=f"{base}/reserve" if own_reserve else "/rules/reserve" if design.rules.reserve else "/rules",
        start_elapsed=handoff.elapsed,
        left_in=handoff.left_in,
    )


def _planned_leg(
    plan: LegPlan, rules: Rules, *, leg: Leg, at: tuple[int, str], start: tuple[Location | None, float]
) -> PlannedLeg:
    """A plan with the rule that its leg takes: `at` is index and pointer of the leg, `start` its place and time."""
    category = category_of(leg)
    rule_index = -1 if category is None else rule_for(category, rules)
    rule = no_rule() if rule_index < 0 else rules.contingency[rule_index]
    return PlannedLeg(
        leg=leg,
        index=at[0],
        pointer=at[1],
        start=start[0],
        elapsed=start[1],
        plan=plan,
        category=category,
        rule=rule,
        rule_index=rule_index,
        charged=_is_charged(plan, rule),
    )


def is_quiet(leg: Leg) -> bool:
    """Tell whether handing over within a leg is not worth telling: expected in an ascent, of no weight in upkeep."""
    return isinstance(leg, _QUIET)
