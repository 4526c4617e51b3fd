"""Each remedy of a shortfall mends it: applied here, the finding is gone and the margin is the one that was told."""

from copy import deepcopy
from typing import Any

import pytest

from burntally.model.budget import Budget, Finding, Remedy
from tests.unit.budget.designs import branch, budget_of, burn, design, engine, findings, stage
from tests.unit.budget.faulty import FAULTY, pair, separated, two_fuels

Plain = dict[str, Any]

SHORTFALLS = frozenset(
    {
        "leg-unpaid",
        "reserve-unpaid",
        "payer-gone",
        "payer-inert",
        "payer-dry",
        "ignitions-exceeded",
        "boiled-dry",
        "release-short",
        "overfilled",
    }
)
PAYLOAD = {"payloads": [{"name": "pod", "mass": 300.0}]}


def home(*legs: Plain, **fields: Any) -> Plain:
    """Let the kick stage fly a branch of its own."""
    return separated(burn(10.0), branches=[{"of": "kick", "legs": list(legs), **fields}])


SHORT: dict[str, Plain] = {
    **{faulty.code: faulty.plain for faulty in FAULTY if faulty.code in SHORTFALLS},
    "several legs": design([burn(1500.0), burn(700.0), burn(40.0)], **PAYLOAD),
    "named payers of several legs": design([burn(700.0, "kick"), burn(300.0, "kick"), burn(10.0, "tug")], *pair()),
    "computed": design([{"kind": "transfer", "to": {"altitude": 3.6e7}}]),
    "computed and no propellant": design(
        [{"kind": "transfer", "to": {"altitude": 8e5}}], stage(propellants=[{"mass": 0.0}])
    ),
    "computed, alone, and in a full tank": design(
        [{"kind": "transfer", "to": {"altitude": 3.6e7}}],
        stage(propellants=[{"mass": 100.0, "capacity": 100.0}]),
    ),
    "computed, alone, and nobody has an engine": design(
        [{"kind": "transfer", "to": {"altitude": 8e5}}], {"name": "kick", "dry_mass": 50.0}
    ),
    "kilograms": design([{"kind": "allowance", "category": "gas", "propellant": 450.0}]),
    "upkeep": design([{"kind": "coast", "duration": 3.0 * 31557600.0, "upkeep_per_year": 900.0}]),
    "mixture": design([burn(2200.0)], two_fuels(150.0, 250.0)),
    "contingency": design([burn(1700.0)], contingency=[{"category": "deterministic", "fraction": 0.3}]),
    "reserve by fraction": design([burn(1700.0)], reserve={"fraction": 0.2}),
    "reserve without a leg to follow": design([{"kind": "coast", "duration": 1.0}], reserve={"delta_v": 2000.0}),
    "branch": home(burn(1900.0)),
    "reserve of a branch": home(burn(1700.0), reserve={"delta_v": 400.0}),
    "leg that names engines": design(
        [burn(10.0, "tug", engines=["vernier"]), burn(10.0, "tug", engines=["vernier"])],
        stage(engines=[engine(), engine(name="vernier", auxiliary=True, max_ignitions=1)]),
    ),
    "ignitions of many splits": design([burn(10.0, "tug", splits=9)], stage(engines=[engine(max_ignitions=4)])),
    "propellant released": design(
        [{"kind": "release", "propellants": [{"stage": "tug", "mass": 500.0}]}, burn(0.0)], stage()
    ),
    "overfilled and owing": design([burn(2500.0)], stage(propellants=[{"mass": 400.0, "capacity": 350.0}])),
    "nobody has an engine": design([burn(10.0)], {"name": "kick", "dry_mass": 50.0}),
    "named, gone and computed": separated({"kind": "transfer", "to": {"altitude": 8e5}, "paid_by": ["kick"]}),
    "boiled dry and named": design(
        [{"kind": "coast", "duration": 864000.0}, burn(10.0, "tug")],
        stage(propellants=[{"mass": 400.0, "boiloff_per_day": 50.0}]),
    ),
}


def mended(plain: Plain, remedy: Remedy) -> Budget:
    """Draw up a design with a remedy in place; what is to go has no new value."""
    changed = deepcopy(plain)
    *parents, last = remedy.pointer.split("/")[1:]
    place: Any = changed
    for token in parents:
        place = place[int(token)] if isinstance(place, list) else place[token]
    at: Any = int(last) if isinstance(place, list) else last
    if remedy.to is None:
        del place[at]
    else:
        place[at] = remedy.to
    return budget_of(changed)


def shortfalls(budget: Budget) -> list[Finding]:
    return [found for found in budget.findings if found.code in SHORTFALLS]


EACH = pytest.mark.parametrize("plain", SHORT.values(), ids=SHORT.keys())


@EACH
def test_every_shortfall_has_a_remedy(plain: Plain) -> None:
    short = shortfalls(budget_of(plain))
    assert short
    assert [found.code for found in short if not found.remedies] == []


@EACH
def test_every_remedy_mends_its_finding(plain: Plain) -> None:
    for found in shortfalls(budget_of(plain)):
        for remedy in found.remedies:
            again = findings(mended(plain, remedy), found.code)
            assert [other for other in again if (other.branch, other.leg) == (found.branch, found.leg)] == []


@EACH
def test_every_remedy_tells_the_margin_that_it_brings(plain: Plain) -> None:
    for found in shortfalls(budget_of(plain)):
        for remedy in found.remedies:
            margin = mended(plain, remedy).margin
            assert remedy.margin == (margin and pytest.approx(margin, rel=1e-9, abs=1e-9)), remedy.message


@EACH
def test_every_remedy_tells_what_is_written_now(plain: Plain) -> None:
    for found in shortfalls(budget_of(plain)):
        for remedy in found.remedies:
            place: Any = plain
            for token in remedy.pointer.split("/")[1:]:
                place = place[int(token)] if isinstance(place, list) else place.get(token)
            # What goes as a whole is not repeated.
            assert remedy.from_ == (None if isinstance(place, dict) else place)


def test_the_smallest_load_that_pays_is_told() -> None:
    (found,) = findings(budget_of(design([burn(2500.0)])), "leg-unpaid")
    told = next(remedy for remedy in found.remedies if remedy.pointer.endswith("propellants/0/mass"))
    assert isinstance(told.to, float)
    less = design([burn(2500.0)], stage(propellants=[{"mass": told.to - 0.2}]))
    assert branch(budget_of(less)).owed > 0.0


def test_a_load_is_never_told_above_its_capacity() -> None:
    plain = design([burn(2500.0)], stage(propellants=[{"mass": 400.0, "capacity": 500.0}]))
    (found,) = findings(budget_of(plain), "leg-unpaid")
    assert [remedy for remedy in found.remedies if remedy.pointer.endswith("propellants/0/mass")] == []


def test_a_lighter_payload_may_be_told() -> None:
    plain = design([burn(1500.0)], stage(propellants=[{"mass": 400.0, "capacity": 400.0}]), **PAYLOAD)
    (found,) = findings(budget_of(plain), "leg-unpaid")
    assert "/vehicle/payloads/0/mass" in [remedy.pointer for remedy in found.remedies]


def test_a_leg_may_be_left_out_where_no_number_mends_it() -> None:
    climb = {"kind": "transfer", "to": {"altitude": 3.6e7}}
    plain = design([climb, climb], {"name": "kick", "dry_mass": 50.0})
    (found,) = findings(budget_of(plain), "leg-unpaid")
    (remedy,) = found.remedies
    assert (remedy.pointer, remedy.to) == ("/mission/legs/0", None)
    assert remedy.margin == mended(plain, remedy).margin


def test_what_does_not_fall_short_has_no_remedy() -> None:
    assert [found for found in budget_of(design([burn(10.0)])).findings if found.remedies] == []


@pytest.mark.parametrize("field,unit", [("isp", "s"), ("mass", "kg")])
def test_a_changed_quantity_is_told_in_its_unit(field: str, unit: str) -> None:
    found = shortfalls(budget_of(design([burn(2500.0)], stage())))
    messages = [remedy.message for each in found for remedy in each.remedies if remedy.pointer.endswith(field)]
    assert messages
    assert [message for message in messages if not message.endswith(f" {unit}")] == []
