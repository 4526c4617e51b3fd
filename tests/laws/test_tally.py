"""What holds for the books of every design whose legs state their cost."""

import json
import math
from collections.abc import Iterator
from copy import deepcopy
from typing import Any

import msgspec
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from msgspec import structs

from burntally.model.decode import decode_builtins
from burntally.model.design import Design
from burntally_service.budget import draw_up
from burntally_service.budget.drawing import Drawn, Line, draw
from burntally_service.budget.leg_books import branch_books
from burntally_service.budget.stage_books import stage_books
from burntally_service.kernels import tally_rows as rows
from burntally_service.kernels.constants import G0
from burntally_service.kernels.tally import tally
from burntally_service.kernels.tally_books import blank_books, stage_mass
from burntally_service.kernels.tally_search import owed_with, slack_by_search
from tests.laws.drawn_designs import NAMES, designs, plain_stages, simple_designs
from tests.unit.budget.designs import burn, design, engine, stage

Plain = dict[str, Any]

FEWER = settings(max_examples=settings().max_examples * 3 // 5)
"""For laws that draw up each design more than once."""

LOST = frozenset(
    {
        rows.LINE_BURN,
        rows.LINE_DRAW,
        rows.LINE_IGNITION,
        rows.LINE_SEPARATION,
        rows.LINE_RELEASE,
        rows.LINE_HANDED,
        rows.LINE_BOILED,
    }
)
GAINED = frozenset({rows.LINE_TAKEN_PAYLOAD, rows.LINE_TAKEN, rows.LINE_DOCKED})


def drawn(plain: Plain, *, with_slack: bool = False) -> Drawn:
    """Draw up the books of a design."""
    return draw(decode_builtins(Design, plain), with_slack=with_slack)


def margin(books: Drawn, branch: int = 0) -> float | None:
    """Least slack of a branch, or minus what it owes."""
    legs = len(books.lowered.tables.legs)
    if books.books.branch_owed[branch] > 0.0:
        return -books.books.branch_owed[branch]
    marks = [leg for leg, row in enumerate(books.lowered.tables.legs) if row.branch == branch]
    found = [books.slack[mark] for mark in [*marks, legs + branch]]
    return min((slack for slack in found if slack is not None), default=None)


def whereabouts(books: Drawn) -> Iterator[tuple[Line, int, int]]:
    """Give each line of the ledger with its branch, and the branch that its part was in before."""
    where = [0] * len(books.lowered.stages)
    for line in books.lines:
        branch = books.lowered.legs[line.leg][0]
        before = where[line.part] if line.kind in {rows.LINE_SEPARATION, rows.LINE_DOCKED} else branch
        if line.kind == rows.LINE_SEPARATION:
            where[line.part] = line.purpose
        elif line.kind == rows.LINE_DOCKED:
            where[line.part] = branch
        yield line, branch, before


def numbers(value: Any) -> Iterator[float]:
    """Give every number of an answer."""
    if isinstance(value, dict):
        value = list(value.values())
    if isinstance(value, list):
        for part in value:
            yield from numbers(part)
    elif isinstance(value, float):
        yield value


@given(designs())
def test_every_load_is_accounted_for(plain: Plain) -> None:
    for book in stage_books(drawn(plain)):
        for load in book.loads:
            gone = load.burned + load.ignition_loss + load.boiled_off + load.handed_over
            kept = load.residual + load.held_back + load.left
            assert gone + kept == pytest.approx(load.loaded + load.taken_on, rel=1e-9, abs=1e-9)


@given(designs())
def test_no_load_is_ever_below_empty(plain: Plain) -> None:
    books = drawn(plain).books
    kept = [*books.usable, *books.held, *books.residual]
    assert [kg for kg in kept if kg < 0.0] == []


@given(designs())
def test_what_a_branch_loses_is_what_happened_in_it(plain: Plain) -> None:
    books = drawn(plain)
    mass = [0.0] * len(books.books.branch_mass)
    mass[0] = books.initial_mass
    for line, branch, before in whereabouts(books):
        if line.kind in LOST:
            mass[branch] -= line.kg
            if line.kind == rows.LINE_SEPARATION and line.purpose >= 0:
                mass[line.purpose] += line.kg
        elif line.kind in GAINED:
            mass[branch] += line.kg
            if line.kind == rows.LINE_DOCKED:
                mass[before] -= line.kg
    assert mass == pytest.approx(books.books.branch_mass, rel=1e-9, abs=1e-9 * books.initial_mass)


@given(designs())
def test_a_branch_weighs_what_its_stages_weigh(plain: Plain) -> None:
    books = drawn(plain)
    tables = books.lowered.tables
    mass = [0.0] * len(tables.branches)
    for part, branch in enumerate(books.books.where):
        if branch >= 0:
            mass[branch] += stage_mass(tables, books.books, part)
    assert mass == pytest.approx(books.books.branch_mass, rel=1e-9, abs=1e-9 * books.initial_mass)


def charge(books: Drawn, leg: int) -> float:
    """What a leg requires and what its rule adds."""
    kept = books.books
    return kept.required[leg] + kept.by_fraction[leg] + kept.by_floor[leg] + kept.by_fixed[leg]


@given(designs())
def test_what_is_charged_is_paid_or_owed(plain: Plain) -> None:
    books = drawn(plain)
    paid = [0.0] * len(books.lowered.branches)
    for line in books.lines:
        if line.kind == rows.LINE_BURN:
            paid[books.lowered.legs[line.leg][0]] += line.delta_v
    owed = list(books.books.reserve_owed)
    for leg, (branch, row) in enumerate(books.lowered.legs):
        # What is owed of kilograms was never charged as a delta-v.
        owed[branch] += 0.0 if row and row.kilograms > 0.0 else books.books.owed[leg]
    charged = list(books.books.reserve)
    for leg, (branch, _) in enumerate(books.lowered.legs):
        charged[branch] += charge(books, leg)
    # Below 1e-9 m/s nothing is owed, and that may happen at every burn.
    assert [sum(pair) for pair in zip(paid, owed, strict=True)] == pytest.approx(charged, rel=1e-9, abs=1e-7)


@given(designs())
def test_a_branch_is_charged_what_its_legs_are(plain: Plain) -> None:
    books = drawn(plain)
    charged = [0.0] * len(books.lowered.branches)
    for leg, (branch, _) in enumerate(books.lowered.legs):
        charged[branch] += charge(books, leg)
    assert charged == pytest.approx(books.books.branch_charged, rel=1e-12, abs=0.0)


@given(designs())
def test_every_leg_has_the_contingency_of_its_rule(plain: Plain) -> None:
    books = drawn(plain)
    for leg, (_, row) in enumerate(books.lowered.legs):
        if row and row.charged and row.rule.floor_on == "leg":
            required = books.books.required[leg]
            added = max(row.rule.fraction * required, row.rule.floor) + row.rule.fixed
            assert charge(books, leg) == pytest.approx(required + added, rel=1e-12, abs=0.0)


@given(designs())
def test_a_floor_on_a_category_is_reached_once_in_a_branch(plain: Plain) -> None:
    books = drawn(plain)
    for branch in range(len(books.lowered.branches)):
        legs = [(leg, row) for leg, row in books.legs_of(branch) if row.charged and row.rule.floor_on == "category"]
        for rule in {row.rule_index: row.rule for _, row in legs}.values():
            took = [leg for leg, row in legs if row.rule is rule]
            shares = sum(rule.fraction * books.books.required[leg] for leg in took)
            added = sum(charge(books, leg) - books.books.required[leg] - rule.fixed for leg in took)
            assert added == pytest.approx(max(shares, rule.floor), rel=1e-9, abs=1e-9)


@given(designs())
def test_masses_only_fall_in_a_burn(plain: Plain) -> None:
    for branch in branch_books(drawn(plain, with_slack=True), set()):
        for leg in branch.legs:
            assert [burned for burned in leg.burns if not 0.0 < burned.mass_after <= burned.mass_before] == []


def lit_in(books: Drawn, line: Line) -> list[rows.EngineRow]:
    """Engines that a line says were lit."""
    tables = books.lowered.tables
    first = tables.stages[tables.burners[line.part].stage].first_engine
    return [row for place, row in enumerate(tables.engines[first:]) if line.mask >> place & 1]


@given(designs())
def test_every_burn_obeys_the_rocket_equation(plain: Plain) -> None:
    books = drawn(plain)
    for line in books.lines:
        if line.kind == rows.LINE_BURN:
            lit = lit_in(books, line)
            thrust = sum(row.count * row.thrust for row in lit)
            flow = sum(row.count * row.thrust / (row.isp * G0) for row in lit)
            gained = -thrust / flow * math.log1p(-line.kg / line.mass)
            assert line.delta_v == pytest.approx(gained, rel=1e-9, abs=1e-9)


def answers(plain: Plain) -> list[Any]:
    """Books of the branches and of the stages."""
    books = drawn(plain, with_slack=True)
    return [branch_books(books, set()), stage_books(books)]


@FEWER
@given(designs())
def test_names_of_stages_mean_nothing(plain: Plain) -> None:
    new = dict(zip(NAMES, ("d", "c", "b", "a"), strict=True))
    text = json.dumps(plain)
    for name, other in new.items():
        text = text.replace(name, f"renamed-{other}")
    told = [msgspec.json.encode(answers(each)) for each in (plain, json.loads(text))]
    again = told[1].decode()
    for name, other in new.items():
        again = again.replace(f"renamed-{other}", name)
    assert again == told[0].decode()


def halved(plain: Plain, place: int, share: float) -> Plain:
    """Fly a leg in two parts, one after the other."""
    parted = deepcopy(plain)
    legs = parted["mission"]["legs"]
    delta_v = legs[place]["delta_v"]
    first = {**legs[place], "delta_v": share * delta_v}
    legs[place : place + 1] = [first, {**legs[place], "delta_v": delta_v - first["delta_v"]}]
    return parted


@FEWER
@given(simple_designs(), st.floats(0.05, 0.95), st.data())
def test_a_leg_in_two_parts_costs_the_same(plain: Plain, share: float, data: st.DataObject) -> None:
    burns = [place for place, leg in enumerate(plain["mission"]["legs"]) if leg.get("delta_v")]
    whole, parted = drawn(plain), drawn(halved(plain, data.draw(st.sampled_from(burns)), share))
    assert parted.books.usable == pytest.approx(whole.books.usable, rel=1e-9, abs=1e-6)
    assert parted.books.branch_mass == pytest.approx(whole.books.branch_mass, rel=1e-9, abs=1e-6)


@FEWER
@given(simple_designs(), st.floats(0.05, 0.95), st.data())
def test_a_leg_in_two_parts_has_the_same_margin(plain: Plain, share: float, data: st.DataObject) -> None:
    burns = [place for place, leg in enumerate(plain["mission"]["legs"]) if leg.get("delta_v")]
    parted = halved(plain, data.draw(st.sampled_from(burns)), share)
    whole = margin(drawn(plain, with_slack=True))
    assert margin(drawn(parted, with_slack=True)) == pytest.approx(whole, rel=1e-7, abs=1e-6)


MASSES = frozenset({"mass", "dry_mass", "capacity", "held_back", "boiloff_per_day", "loss_per_ignition", "propellant"})


def scaled(value: Any, factor: float) -> Any:
    """Scale every mass and every thrust of a design."""
    if isinstance(value, dict):
        return {
            name: factor * part if name in MASSES | {"thrust"} and isinstance(part, float) else scaled(part, factor)
            for name, part in value.items()
        }
    return [scaled(part, factor) for part in value] if isinstance(value, list) else value


@FEWER
@given(designs(), st.sampled_from([0.125, 0.5, 2.0, 16.0]))
def test_a_larger_vehicle_of_the_same_proportions_has_the_same_margin(plain: Plain, factor: float) -> None:
    # A factor that is a power of two changes no digit.
    assert drawn(scaled(plain, factor), with_slack=True).slack == drawn(plain, with_slack=True).slack


@FEWER
@given(designs(), st.sampled_from([0.125, 0.5, 2.0, 16.0]))
def test_a_larger_vehicle_of_the_same_proportions_has_the_same_books(plain: Plain, factor: float) -> None:
    small, large = drawn(plain).books, drawn(scaled(plain, factor)).books
    assert large.owed == small.owed
    assert large.branch_mass == [factor * kg for kg in small.branch_mass]
    assert large.usable == [factor * kg for kg in small.usable]


def with_addition(plain: Plain, place: int, added: float) -> Plain:
    """Add a delta-v right after a leg, to the same account and under no rule."""
    changed = deepcopy(plain)
    legs = changed["mission"]["legs"]
    account = {name: legs[place][name] for name in ("paid_by", "engines") if name in legs[place]}
    legs.insert(place + 1, {"kind": "allowance", "category": "added", "delta_v": added, **account})
    return changed


def owed_after(plain: Plain, place: int, added: float) -> float:
    """What the main branch owes once a delta-v is added after a leg."""
    return drawn(with_addition(plain, place, added)).books.branch_owed[0]


def payable(plain: Plain) -> Plain:
    """Leave out what the main branch cannot pay."""
    eased = deepcopy(plain)
    while True:
        books = drawn(eased)
        owing = [row.index for leg, row in books.legs_of(0) if books.books.owed[leg] > 0.0]
        if owing:
            del eased["mission"]["legs"][owing[0]]
        elif books.books.reserve_owed[0] > 0.0:
            del eased["rules"]["reserve"]
        else:
            return eased
        if not eased["mission"]["legs"]:
            eased["mission"]["legs"] = [burn(0.0)]


@st.composite
def slack_legs(draw: st.DrawFn) -> tuple[Plain, int, float]:
    """A design whose main branch is paid, one of its legs, and the slack of that leg."""
    plain = payable(draw(simple_designs()))
    books = drawn(plain, with_slack=True)
    found = [(row.index, slack) for leg, row in books.legs_of(0) if (slack := books.slack[leg]) is not None]
    assume(found)
    return plain, *draw(st.sampled_from(found))


@FEWER
@given(slack_legs(), st.floats(0.0, 1.0))
def test_all_of_the_slack_can_be_added(drawn_leg: tuple[Plain, int, float], share: float) -> None:
    plain, place, slack = drawn_leg
    assert owed_after(plain, place, slack * (1.0 - 1e-6) * share) == 0.0


@FEWER
@given(slack_legs())
def test_no_more_than_the_slack_can_be_added(drawn_leg: tuple[Plain, int, float]) -> None:
    plain, place, slack = drawn_leg
    assert owed_after(plain, place, slack + 1e-3) > 0.0


@given(designs())
def test_slack_is_what_a_search_over_the_books_finds(plain: Plain) -> None:
    books = drawn(plain, with_slack=True)
    tables = books.lowered.tables
    scratch = blank_books(tables, 0)
    told = [(mark, slack) for mark, slack in enumerate(books.slack) if slack is not None]
    found = [slack_by_search(tables, scratch, mark) for mark, _ in told]
    assert [slack for _, slack in told] == pytest.approx(found, rel=1e-8, abs=1e-6)


KEPT_FLOWS = frozenset({"flow", "flow_of", "flow_thrust", "flow_mdot", "flow_mask"})
"""What only the long way keeps."""


@FEWER
@given(designs())
def test_one_engine_on_one_load_burns_as_engines_on_loads_do(plain: Plain) -> None:
    short = drawn(plain).lowered.tables
    long = structs.replace(short, burners=[structs.replace(row, lone=-1, mask=0) for row in short.burners])
    books = [blank_books(tables, 500) for tables in (short, long)]
    for tables, blank in zip((short, long), books, strict=True):
        tally(tables, blank)
    for name in set(rows.Books.__struct_fields__) - KEPT_FLOWS:
        found, expected = (getattr(book, name) for book in books)
        assert found == pytest.approx(expected, rel=1e-10, abs=1e-7), name


@FEWER
@given(designs())
def test_adding_nothing_owes_what_is_owed_anyway(plain: Plain) -> None:
    books = drawn(plain)
    tables = books.lowered.tables
    scratch = blank_books(tables, 0)
    for leg, row in enumerate(tables.legs):
        assert owed_with(tables, scratch, leg, 0.0) == books.books.branch_owed[row.branch]


@st.composite
def lone_stages(draw: st.DrawFn) -> Plain:
    """A design of one stage with one load, whose legs all have the open account."""
    name = NAMES[0]
    loaded = st.floats(50.0, 3000.0)
    tug = stage(
        name,
        dry_mass=draw(st.floats(20.0, 2000.0)),
        propellants=[{"mass": draw(loaded), "residual_fraction": draw(st.floats(0.0, 0.2))}],
        engines=[engine(isp=draw(st.floats(60.0, 460.0)), loss_per_ignition=draw(st.floats(0.0, 2.0)))],
    )
    legs = [burn(draw(st.floats(1.0, 900.0))), {"kind": "release", "payload": "pod"}, burn(draw(st.floats(1.0, 900.0)))]
    return design(legs, tug, payloads=[{"name": "pod", "mass": draw(st.floats(0.0, 500.0))}])


@given(lone_stages(), st.floats(1.0, 3.0))
def test_more_propellant_never_lowers_the_margin_of_a_single_stage(plain: Plain, factor: float) -> None:
    more = deepcopy(plain)
    more["vehicle"]["stages"][0]["propellants"][0]["mass"] *= factor
    before, after = (margin(drawn(each, with_slack=True)) for each in (plain, more))
    assert before is not None
    assert after is not None
    assert after >= before - 1e-6


@given(plain_stages("tug", simple=True), st.floats(0.0, 500.0))
def test_the_capability_of_a_stage_is_what_it_spent_and_has_left(tug: Plain, payload: float) -> None:
    plain = design([burn(0.1)], tug, payloads=[{"name": "pod", "mass": payload}])
    books = drawn(plain)
    told = stage_books(books)[0].delta_v
    assert told.capability == pytest.approx(told.spent + told.left, rel=1e-9, abs=1e-9)


@FEWER
@given(designs())
def test_a_budget_is_drawn_up_for_every_design_and_its_numbers_are_finite(plain: Plain) -> None:
    budget = msgspec.to_builtins(draw_up(decode_builtins(Design, plain)))
    assert [number for number in numbers(budget) if not math.isfinite(number)] == []
