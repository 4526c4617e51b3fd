"""Lowering: the numbers of a design and its plan, copied into the rows that the tally reads; nothing is computed."""

import math
from collections.abc import Sequence
from dataclasses import dataclass, field

from burntally.model.mission import Release, Separate, Spiral, TakeOn
from burntally.model.rules import Rules
from burntally.model.vehicle import Engine, MassList, Payload, Stage, Vehicle
from burntally_service.budget.plan import OPEN_ACCOUNT, BranchPlan, PlannedLeg, is_quiet
from burntally_service.kernels import tally_rows as rows
from burntally_service.vehicle.masses import growth_of, items_of

__all__ = ["Lowered", "lower"]

_Account = tuple[tuple[str, ...], tuple[str, ...]]

_OVER = -1
"""Stands for the end of a branch where a leg of it is asked for."""


@dataclass(slots=True, kw_only=True)
class Lowered:
    """The tables, and what their indices stand for."""

    tables: rows.Tables
    stages: list[Stage]
    payloads: list[Payload]
    loads: list[tuple[int, int]]
    engines: list[tuple[int, int]]
    legs: list[tuple[int, PlannedLeg | None]]
    accounts: list[_Account]
    branches: list[BranchPlan | None]


@dataclass(slots=True)
class _Draft:
    """Tables in the making."""

    vehicle: Vehicle
    rules: Rules
    payloads: list[Payload]
    branches: Sequence[BranchPlan | None]
    items: list[rows.ItemRow] = field(default_factory=list)
    stages: list[rows.StageRow] = field(default_factory=list)
    loads: list[rows.LoadRow] = field(default_factory=list)
    engines: list[rows.EngineRow] = field(default_factory=list)
    feeds: list[rows.FeedRow] = field(default_factory=list)
    load_names: list[tuple[int, int]] = field(default_factory=list)
    engine_names: list[tuple[int, int]] = field(default_factory=list)
    accounts: list[_Account] = field(default_factory=lambda: [OPEN_ACCOUNT])
    legs: list[rows.LegRow] = field(default_factory=list)
    leg_names: list[tuple[int, PlannedLeg | None]] = field(default_factory=list)
    steps: list[rows.StepRow] = field(default_factory=list)
    branch_rows: dict[int, rows.BranchRow] = field(default_factory=dict)
    emitted: set[int] = field(default_factory=set)
    passed: set[tuple[int, int]] = field(default_factory=set)
    stage_index: dict[str, int] = field(default_factory=dict)


def lower(vehicle: Vehicle, rules: Rules, branches: Sequence[BranchPlan | None]) -> Lowered:
    """Copy a vehicle, its rules and the plans of its branches into tables.

    Parameters
    ----------
    vehicle : Vehicle
        The stack.
    rules : Rules
        Rules, resolved.
    branches : sequence of BranchPlan or None
        The plans, the main branch first, then in the order of the mission; None where a branch is not planned.

    Returns
    -------
    Lowered
        The tables and the names of their rows.
    """
    draft = _Draft(vehicle, rules, [*vehicle.payloads, *_taken_on(branches)], branches)
    draft.stage_index = {stage.name: index for index, stage in enumerate(vehicle.stages)}
    for index, stage in enumerate(vehicle.stages):
        _lower_stage(draft, index, stage)
    for index, payload in enumerate(draft.payloads):
        _lower_items(draft, len(vehicle.stages) + index, payload.mass, (None, 0.0))
    _emit_branch(draft, 0)
    for branch in range(1, len(branches)):
        _emit_after_parent(draft, branch)
        _emit_branch(draft, branch)
    return _finished(draft)


def _taken_on(branches: Sequence[BranchPlan | None]) -> list[Payload]:
    """List the payloads that legs take on, which have rows from the start: the tally cannot add any."""
    return [
        row.leg.payload
        for plan in branches
        for row in (plan.legs if plan else ())
        if isinstance(row.leg, TakeOn) and row.leg.payload is not None
    ]


def _lower_items(draft: _Draft, part: int, masses: MassList, growth: tuple[float | None, float]) -> None:
    """Copy the items of one part; `growth` is the part's own fallback and the system contingency."""
    fallback, contingency = growth
    for item in items_of(masses):
        grown = growth_of(item, draft.rules, fallback=fallback)
        draft.items.append(rows.ItemRow(part, item.mass, item.count, grown or 0.0, contingency))


def _lower_stage(draft: _Draft, index: int, stage: Stage) -> None:
    """Copy a stage with its loads and engines."""
    _lower_items(draft, index, stage.dry_mass, (stage.mass_growth, draft.rules.mass_contingency or 0.0))
    first_load, first_engine = len(draft.loads), len(draft.engines)
    for place, load in enumerate(stage.propellants):
        residual = draft.rules.residual_fraction if load.residual_fraction is None else load.residual_fraction
        capacity = math.inf if load.capacity is None else load.capacity
        draft.loads.append(
            rows.LoadRow(index, load.mass, capacity, residual or 0.0, load.held_back, load.boiloff_per_day)
        )
        draft.load_names.append((index, place))
    for place, engine in enumerate(stage.engines):
        _lower_engine(draft, stage, engine, first_load)
        draft.engine_names.append((index, place))
    by_leg = int(stage.separation == "by_leg")
    draft.stages.append(rows.StageRow(first_load, len(draft.loads), first_engine, len(draft.engines), by_leg))


def _lower_engine(draft: _Draft, stage: Stage, engine: Engine, first_load: int) -> None:
    """Copy an engine with its feeds; without feeds it draws on the first load."""
    first_feed = len(draft.feeds)
    names = [load.name for load in stage.propellants]
    parts = engine.feeds or dict.fromkeys(names[:1], 1.0)
    for name, part in parts.items():
        draft.feeds.append(rows.FeedRow(first_load + names.index(name), part))
    draft.engines.append(
        rows.EngineRow(
            engine.count,
            engine.thrust,
            engine.isp,
            engine.loss_per_ignition,
            math.inf if engine.max_ignitions is None else float(engine.max_ignitions),
            int(engine.auxiliary),
            first_feed,
            len(draft.feeds),
        )
    )


def _emit_branch(draft: _Draft, branch: int) -> None:
    """Write the steps of a branch, those of a branch that it docks before the docking leg."""
    plan = draft.branches[branch]
    if plan is None or branch in draft.emitted:
        return
    draft.emitted.add(branch)
    if branch:
        draft.steps.append(rows.StepRow(rows.START, -1, branch, 0.0, 1, 0))
    last = max((index for index, row in enumerate(plan.legs) if row.charged), default=-1)
    settling = _settling_legs(plan)
    for index, row in enumerate(plan.legs):
        docked = _docked(draft, row)
        if docked:
            _emit_after_parent(draft, docked)
        _lower_leg(draft, branch, row, (index in settling, index == last))
        draft.passed.add((branch, index))
    if last < 0:
        _hold_at_end(draft, branch)
    draft.branch_rows[branch] = rows.BranchRow(
        draft.stage_index[plan.part] if plan.part else -1,
        plan.reserve.fraction,
        plan.reserve.delta_v,
        len(draft.steps),
    )
    draft.passed.add((branch, _OVER))


def _emit_after_parent(draft: _Draft, branch: int) -> None:
    """Write the steps of a branch after those of the branch that its part left, if it has left by now."""
    plan = draft.branches[branch]
    if plan is None:
        return
    if plan.left_in[0] not in draft.emitted:
        _emit_after_parent(draft, plan.left_in[0])
    if plan.left_in in draft.passed:
        _emit_branch(draft, branch)


def _settling_legs(plan: BranchPlan) -> set[int]:
    """Legs at which the floor of a category is settled: the last that takes the rule and is charged."""
    last: dict[int, int] = {}
    for index, row in enumerate(plan.legs):
        if row.charged and row.rule_index >= 0 and row.rule.floor_on == "category":
            last[row.rule_index] = index
    return set(last.values())


def _docked(draft: _Draft, row: PlannedLeg) -> int:
    """Index of the branch that a leg docks; 0 if it docks none."""
    if isinstance(row.leg, TakeOn) and row.leg.branch is not None:
        for index, plan in enumerate(draft.branches):
            if plan and plan.part == row.leg.branch:
                return index
    return 0


def _account(draft: _Draft, account: _Account) -> int:
    """Index of an account, entered on first use."""
    if account not in draft.accounts:
        draft.accounts.append(account)
    return draft.accounts.index(account)


def _lower_leg(draft: _Draft, branch: int, row: PlannedLeg, marks: tuple[bool, bool]) -> None:
    """Copy a leg and the steps that it takes."""
    leg = len(draft.legs)
    settles, reserves = marks
    rule = row.rule
    draft.legs.append(
        rows.LegRow(
            branch,
            _account(draft, row.account),
            int(row.charged),
            int(is_quiet(row.leg)),
            row.rule_index,
            rule.fraction,
            rule.floor,
            rule.fixed,
            int(rule.floor_on == "category"),
            int(settles),
            int(reserves),
        )
    )
    draft.leg_names.append((branch, row))
    draft.steps.append(rows.StepRow(rows.BEGIN, leg, 0, 0.0, 1, 0))
    _lower_manoeuvres(draft, leg, row)
    if row.kilograms > 0.0:
        draft.steps.append(rows.StepRow(rows.DRAW, leg, 0, row.kilograms, 1, rows.KILOGRAMS))
    _lower_exchange(draft, leg, row)
    draft.steps.append(rows.StepRow(rows.END, leg, 0, 0.0, 1, 0))


def _lower_manoeuvres(draft: _Draft, leg: int, row: PlannedLeg) -> None:
    """Copy the manoeuvres of a leg, with the time that passes before each and after the last."""
    splits = getattr(row.leg, "splits", 1)
    # Upkeep and low thrust need an ignition left and use none (P4).
    unlit = isinstance(row.leg, Spiral)
    for manoeuvre in row.plan.manoeuvres:
        if manoeuvre.coast_before > 0.0:
            draft.steps.append(rows.StepRow(rows.COAST, leg, 0, manoeuvre.coast_before, 1, 0))
        purpose = rows.UPKEEP if unlit or manoeuvre.purpose == "upkeep" else rows.MANOEUVRE
        count = 1 if purpose == rows.UPKEEP else splits
        draft.steps.append(rows.StepRow(rows.BURN, leg, 0, manoeuvre.delta_v, count, purpose))
    if row.plan.coast_after > 0.0:
        draft.steps.append(rows.StepRow(rows.COAST, leg, 0, row.plan.coast_after, 1, 0))


def _lower_exchange(draft: _Draft, leg: int, row: PlannedLeg) -> None:
    """Copy what a leg separates, releases or takes on."""
    model = row.leg
    if isinstance(model, Separate):
        # The highest first, so that it and all below it leave together, as one group.
        for stage in sorted((draft.stage_index[name] for name in model.stages), reverse=True):
            draft.steps.append(rows.StepRow(rows.SEPARATE, leg, stage, 0.0, 1, 0))
    elif isinstance(model, Release):
        _lower_release(draft, leg, model)
    elif isinstance(model, TakeOn):
        _lower_taking(draft, leg, model, _docked(draft, row))


def _lower_release(draft: _Draft, leg: int, model: Release) -> None:
    """Copy what a leg releases; an infinite mass stands for all of a payload."""
    if model.payload is not None:
        mass = math.inf if model.mass is None else model.mass
        payload = _payload(draft, model.payload)
        draft.steps.append(rows.StepRow(rows.RELEASE_PAYLOAD, leg, payload, mass, 1, 0))
    for move in model.propellants:
        load = _load(draft, move.stage, move.load)
        draft.steps.append(rows.StepRow(rows.RELEASE_PROPELLANT, leg, load, move.mass or 0.0, 1, 0))


def _lower_taking(draft: _Draft, leg: int, model: TakeOn, docked: int) -> None:
    """Copy what a leg takes on; an infinite mass stands for as much as there is room for."""
    if docked:
        is_over = float((docked, _OVER) in draft.passed)
        draft.steps.append(rows.StepRow(rows.DOCK, leg, docked, is_over, 1, 0))
    if model.payload is not None:
        payload = _payload(draft, model.payload.name)
        draft.steps.append(rows.StepRow(rows.TAKE_PAYLOAD, leg, payload, 0.0, 1, 0))
    for move in model.propellants:
        load = _load(draft, move.stage, move.load)
        mass = math.inf if move.mass is None else move.mass
        draft.steps.append(rows.StepRow(rows.TAKE_PROPELLANT, leg, load, mass, 1, 0))


def _payload(draft: _Draft, name: str) -> int:
    return next(index for index, payload in enumerate(draft.payloads) if payload.name == name)


def _load(draft: _Draft, stage: str, load: str) -> int:
    index = draft.stage_index[stage]
    names = [propellant.name for propellant in draft.vehicle.stages[index].propellants]
    return draft.stages[index].first_load + names.index(load)


def _hold_at_end(draft: _Draft, branch: int) -> None:
    """Add a leg that charges nothing, whose open account holds the reserve of a branch without a charged leg (C4)."""
    leg = len(draft.legs)
    draft.legs.append(
        rows.LegRow(
            branch,
            account=0,
            charged=0,
            quiet=0,
            rule=-1,
            fraction=0.0,
            floor=0.0,
            fixed=0.0,
            floor_on_category=0,
            settles=0,
            reserves=1,
        )
    )
    draft.leg_names.append((branch, None))
    draft.steps.append(rows.StepRow(rows.BEGIN, leg, 0, 0.0, 1, 0))
    draft.steps.append(rows.StepRow(rows.END, leg, 0, 0.0, 1, 0))


def _lit_engines(draft: _Draft, account: _Account, stage: int) -> list[int]:
    """Engines that an account lights on a stage: those named, or all that are not auxiliary."""
    names, engines = account
    model = draft.vehicle.stages[stage]
    if names and model.name not in names:
        return []
    first = draft.stages[stage].first_engine
    return [
        first + place
        for place, engine in enumerate(model.engines)
        if (engine.name in engines if engines else not engine.auxiliary)
    ]


def _finished(draft: _Draft) -> Lowered:
    """Close the tables."""
    burners, lit, burner_of = _burners(draft)
    riding = [_riding(draft, index, payload) for index, payload in enumerate(draft.payloads)]
    boilers = [index for index, load in enumerate(draft.loads) if load.boiloff_per_day > 0.0]
    unplanned = rows.BranchRow(-2, 0.0, 0.0, 0)
    tables = rows.Tables(
        items=draft.items,
        stages=draft.stages,
        loads=draft.loads,
        engines=draft.engines,
        feeds=draft.feeds,
        payloads=riding,
        burners=burners,
        lit=lit,
        burner_of=burner_of,
        last_named=_last_named(draft),
        boilers=boilers,
        branches=[draft.branch_rows.get(index, unplanned) for index in range(len(draft.branches))],
        legs=draft.legs,
        steps=draft.steps,
        n_items=len(draft.items),
        n_stages=len(draft.stages),
        n_loads=len(draft.loads),
        n_engines=len(draft.engines),
        n_feeds=len(draft.feeds),
        n_payloads=len(riding),
        n_boilers=len(boilers),
        n_branches=len(draft.branches),
        n_legs=len(draft.legs),
        n_rules=len(draft.rules.contingency),
        n_steps=len(draft.steps),
    )
    return Lowered(
        tables=tables,
        stages=draft.vehicle.stages,
        payloads=draft.payloads,
        loads=draft.load_names,
        engines=draft.engine_names,
        legs=draft.leg_names,
        accounts=draft.accounts,
        branches=list(draft.branches),
    )


def _burners(draft: _Draft) -> tuple[list[rows.BurnerRow], list[int], list[int]]:
    """Engines that each account lights on each stage, and where they stand."""
    burners: list[rows.BurnerRow] = []
    lit: list[int] = []
    burner_of: list[int] = []
    for account in draft.accounts:
        for stage in range(len(draft.stages)):
            engines = _lit_engines(draft, account, stage)
            burner_of.append(len(burners) if engines else -1)
            if engines:
                burners.append(_burner(draft, stage, engines, len(lit)))
                lit.extend(engines)
    return burners, lit, burner_of


def _burner(draft: _Draft, stage: int, engines: list[int], first_lit: int) -> rows.BurnerRow:
    """The burner of some engines of a stage; a kind of engine alone on one load is marked."""
    end_lit = first_lit + len(engines)
    if len(engines) == 1:
        row = draft.engines[engines[0]]
        if row.end_feed - row.first_feed == 1:
            mask = 1 << (engines[0] - draft.stages[stage].first_engine)
            return rows.BurnerRow(stage, first_lit, end_lit, draft.feeds[row.first_feed].load, mask)
    return rows.BurnerRow(stage, first_lit, end_lit)


def _riding(draft: _Draft, index: int, payload: Payload) -> rows.PayloadRow:
    """Where a payload rides: the last stage of the vehicle, or the topmost aboard for one that is taken on."""
    aboard = int(index < len(draft.vehicle.payloads))
    if payload.on is not None:
        return rows.PayloadRow(draft.stage_index[payload.on], aboard)
    return rows.PayloadRow(len(draft.stages) - 1 if aboard else -1, aboard)


def _last_named(draft: _Draft) -> list[int]:
    """Last leg of each branch that names each stage as a payer."""
    stages = len(draft.stages)
    last = [-1] * (len(draft.branches) * stages)
    for leg, row in enumerate(draft.legs):
        for name in draft.accounts[row.account][0]:
            last[row.branch * stages + draft.stage_index[name]] = leg
    return last
