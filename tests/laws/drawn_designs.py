"""Designs drawn at random: stacks of up to four stages, and all that a mission of stated legs may do with them."""

from typing import Any

from hypothesis import strategies as st

from tests.unit.budget.designs import design

__all__ = ["designs", "plain_stages", "simple_designs"]

Plain = dict[str, Any]

NAMES = ("stage-one", "stage-two", "stage-three", "stage-four")
PODS = ("pod-one", "pod-two")
DAY = 86400.0


def some(low: float, high: float, absent: float | None = None) -> st.SearchStrategy[float | None]:
    """A number, or as often none."""
    return st.one_of(st.just(absent), st.floats(low, high))


# Made once: a strategy costs more to make than to draw from.
SPEED = some(0.1, 900.0, 0.0)
KILOGRAMS = some(0.1, 200.0, 0.0)
CATEGORY = st.sampled_from(["deterministic", "deterministic.landing", "maintenance", "attitude"])
FEW = st.integers(1, 3)
THRUST = st.floats(50.0, 5e4)
ISP = st.floats(60.0, 460.0)
DRY_MASS = st.floats(20.0, 2000.0)
FUELLED = st.floats(20.0, 3000.0)
LOADED = st.one_of(st.just(0.0), FUELLED, FUELLED)
ROOM = some(1.0, 1.5)
RESIDUAL = some(0.0, 0.1)
HELD_BACK = some(0.0, 0.4)
BOILOFF = some(0.01, 30.0)
IGNITION_LOSS = some(0.01, 3.0)
IGNITIONS = st.one_of(st.none(), st.none(), st.integers(1, 4))
RATIO = st.floats(0.5, 6.0)
KIND_OF_STAGE = st.sampled_from(["inert", "one", "one", "one", "mixture", "two"])
SEPARATION = st.sampled_from(["when_spent", "when_spent", "by_leg"])
PAYERS_ANY = st.sampled_from(["open", "open", "some", "engines"])
PAYERS_SIMPLE = st.sampled_from(["open", "open", "one", "engines"])
KIND_OF_LEG = st.sampled_from(["burn", "burn", "burn", "coast", "kilograms"])
DAYS = st.floats(0.0, 30.0)
UPKEEP = some(0.0, 900.0)
CATEGORIES = st.lists(CATEGORY, unique=True, max_size=3)
FRACTION = some(0.0, 1.0, 0.0)
FLOOR = some(0.1, 60.0, 0.0)
FIXED = some(0.1, 20.0, 0.0)
FLOOR_ON = st.sampled_from(["leg", "category"])
RESERVE = some(0.1, 90.0)
SHARE = some(0.0, 0.1)
SMALL_SHARE = some(0.0, 0.05)
GROWTH = some(0.0, 0.3)
POD_MASS = st.floats(1.0, 400.0)
STAGES = st.integers(1, len(NAMES))
PAYLOADS = st.integers(0, len(PODS))
OFTEN = st.sampled_from([True, True, True, False])


def told(**fields: Any) -> Plain:
    """Leave out what has no value."""
    return {name: value for name, value in fields.items() if value is not None}


def part_of(mass: float, share: float | None) -> float | None:
    """Take a share of a mass, if there is one."""
    return None if share is None else share * mass


@st.composite
def loads(draw: st.DrawFn, name: str, *, simple: bool) -> Plain:
    """One load, of which some may be residual, held back, or boil off."""
    mass = draw(LOADED)
    return told(
        name=name,
        mass=mass,
        capacity=part_of(mass, draw(ROOM)),
        residual_fraction=draw(RESIDUAL),
        held_back=None if simple else part_of(mass, draw(HELD_BACK)),
        boiloff_per_day=draw(BOILOFF),
    )


@st.composite
def engines(draw: st.DrawFn, name: str, feeds: Plain | None, *, simple: bool) -> Plain:
    """One kind of engine; a simple one may be lit as often as one likes, at no loss."""
    limits = {} if simple else {"loss_per_ignition": draw(IGNITION_LOSS), "max_ignitions": draw(IGNITIONS)}
    return told(
        name=name,
        count=draw(FEW),
        thrust=draw(THRUST),
        isp=draw(ISP),
        feeds=feeds,
        **limits,
    )


@st.composite
def plain_stages(draw: st.DrawFn, name: str, *, simple: bool = False) -> Plain:
    """One stage: inert, of one load, or of a mixture beside a load of its own for an auxiliary engine."""
    dry_mass = draw(DRY_MASS)
    kind = draw(KIND_OF_STAGE)
    separation = draw(SEPARATION)
    stage: Plain = {"name": name, "dry_mass": dry_mass, "separation": separation}
    if kind == "inert":
        return stage
    names = ["propellant"] if kind == "one" else ["fuel", "oxidiser"]
    ratio = draw(RATIO)
    feeds = {"one": None, "mixture": {"fuel": 1.0, "oxidiser": ratio}, "two": {"oxidiser": 1.0}}[kind]
    stage["propellants"] = [draw(loads(each, simple=simple)) for each in names]
    stage["engines"] = [draw(engines("main", feeds, simple=simple))]
    if kind == "two":
        stage["engines"].append(draw(engines("second", {"fuel": 1.0}, simple=simple)))
    if draw(st.booleans()):
        stage["engines"].append({**draw(engines("vernier", None, simple=simple)), "auxiliary": True})
    return stage


@st.composite
def accounts(draw: st.DrawFn, stages: list[Plain], *, simple: bool) -> Plain:
    """Who pays: anybody, some stages, or one stage with named engines."""
    names = [stage["name"] for stage in stages]
    kind = draw(PAYERS_SIMPLE if simple else PAYERS_ANY)
    if kind == "open":
        return {}
    if kind == "some":
        return {"paid_by": draw(st.lists(st.sampled_from(names), min_size=1, max_size=3, unique=True))}
    stage = draw(st.sampled_from(stages))
    lit = [engine["name"] for engine in stage.get("engines", [])]
    if kind == "one" or not lit:
        return {"paid_by": [stage["name"]]}
    return {"paid_by": [stage["name"]], "engines": draw(st.lists(st.sampled_from(lit), min_size=1, unique=True))}


@st.composite
def charged_legs(draw: st.DrawFn, stages: list[Plain], *, simple: bool) -> Plain:
    """A leg that costs something."""
    account = draw(accounts(stages, simple=simple))
    kind = draw(KIND_OF_LEG)
    if kind == "coast":
        return told(kind="coast", duration=draw(DAYS) * DAY, upkeep_per_year=draw(UPKEEP), **account)
    if kind == "kilograms":
        return {"kind": "allowance", "category": "gas", "propellant": draw(KILOGRAMS), **account}
    splits = {} if simple else {"splits": draw(FEW)}
    return {"kind": "allowance", "category": draw(CATEGORY), "delta_v": draw(SPEED), **splits, **account}


@st.composite
def exchanges(draw: st.DrawFn, stages: list[Plain], pods: list[Plain], branches: list[str]) -> Plain:
    """A leg that moves parts or propellant."""
    fuelled = [stage for stage in stages if stage.get("propellants")]
    kinds = ["separate"]
    kinds += ["release"] * bool(pods) + ["hand over", "take on"] * bool(fuelled) + ["dock"] * bool(branches)
    kind = draw(st.sampled_from(kinds))
    if kind == "separate":
        return {"kind": "separate", "stages": [draw(st.sampled_from(stages))["name"]]}
    if kind == "release":
        return told(
            kind="release", payload=draw(st.sampled_from(pods))["name"], mass=draw(st.one_of(st.none(), KILOGRAMS))
        )
    if kind == "dock":
        return {"kind": "take_on", "branch": draw(st.sampled_from(branches))}
    stage = draw(st.sampled_from(fuelled))
    load = draw(st.sampled_from(stage["propellants"]))
    moved = {"stage": stage["name"], "load": load["name"], "mass": draw(KILOGRAMS)}
    if kind == "take on" and "capacity" in load and draw(st.booleans()):
        del moved["mass"]
    return {"kind": "release" if kind == "hand over" else "take_on", "propellants": [moved]}


@st.composite
def rules(draw: st.DrawFn, *, simple: bool) -> Plain:
    """Rules; simple ones add fractions alone."""
    contingency = []
    for category in draw(CATEGORIES):
        rule = {"category": category, "fraction": draw(FRACTION)}
        if not simple:
            rule |= {"floor": draw(FLOOR), "fixed": draw(FIXED), "floor_on": draw(FLOOR_ON)}
        contingency.append(rule)
    reserve = told(delta_v=draw(RESERVE), fraction=None if simple else draw(SHARE))
    return told(
        contingency=contingency,
        reserve=reserve or None,
        residual_fraction=draw(SMALL_SHARE),
        mass_contingency=draw(GROWTH),
        mass_growth=draw(GROWTH),
    )


@st.composite
def designs(draw: st.DrawFn, *, simple: bool = False) -> Plain:
    """Any design whose legs state their cost.

    A simple one has engines without losses and limits, named payers of one stage, and no floors: what is added to one
    of its legs costs what it says, and nothing else. Its first leg is small enough for it to pay.
    """
    names = NAMES[: draw(STAGES)]
    stages = [draw(plain_stages(name, simple=simple)) for name in names]
    if simple:
        load = {"name": "propellant", "mass": draw(FUELLED)}
        stages[-1] |= {"propellants": [load], "engines": [draw(engines("main", None, simple=True))]}
    pods = [
        {"name": name, "mass": draw(POD_MASS), "on": draw(st.sampled_from(names))} for name in PODS[: draw(PAYLOADS)]
    ]
    flown = draw(st.lists(st.sampled_from(names), unique=True, max_size=2))
    paying = charged_legs(stages, simple=simple)
    any_leg = st.one_of(paying, paying, exchanges(stages, pods, flown))
    branches = [{"of": name, "legs": draw(st.lists(paying, min_size=1, max_size=2))} for name in flown]
    legs = draw(st.lists(any_leg, min_size=2, max_size=6))
    if simple:
        legs.insert(0, {"kind": "allowance", "category": "deterministic", "delta_v": 0.1})
    for name in flown:
        if draw(OFTEN):
            legs.insert(draw(st.integers(0, len(legs))), {"kind": "separate", "stages": [name]})
    return design(legs, *stages, payloads=pods, branches=branches, **draw(rules(simple=simple)))


def simple_designs() -> st.SearchStrategy[Plain]:
    """Designs in which an addition to a leg costs what it says, and nothing else."""
    return designs(simple=True)
