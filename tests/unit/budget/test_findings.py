"""Each finding is told with its code, severity and place, where it is due and only there."""

from typing import Any

import pytest

from burntally.model.decode import decode_builtins
from burntally.model.design import Design
from burntally_service.budget.pointing import value_at
from tests.unit.budget.designs import branch, budget_of, burn, design, engine, findings, stage
from tests.unit.budget.faulty import FAULTY, Faulty, pair, separated

EACH = pytest.mark.parametrize("faulty", FAULTY, ids=lambda faulty: f"{faulty.code}{faulty.pointer}")


def covered() -> dict[str, Any]:
    """A design without a flaw."""
    rules = {"contingency": [{"category": "deterministic", "fraction": 0.05}], "mass_growth": 0.1}
    return design([burn(100.0)], **rules)


@EACH
def test_a_fault_is_told_once_at_its_place(faulty: Faulty) -> None:
    told = findings(budget_of(faulty.plain), faulty.code)
    assert [(found.severity, found.pointer) for found in told] == [(faulty.severity, faulty.pointer)]


@EACH
def test_the_place_of_a_fault_is_a_field_of_the_design(faulty: Faulty) -> None:
    value_at(decode_builtins(Design, faulty.plain), faulty.pointer)


@EACH
def test_errors_alone_keep_a_budget_from_closing(faulty: Faulty) -> None:
    budget = budget_of(faulty.plain)
    errors = [found for found in budget.findings if found.severity == "error"]
    assert budget.closes == (not errors)


@EACH
def test_errors_come_first(faulty: Faulty) -> None:
    severities = [found.severity for found in budget_of(faulty.plain).findings]
    assert severities == sorted(severities, key=["error", "warning", "note"].index)


def test_nothing_is_found_where_nothing_is_wrong() -> None:
    assert budget_of(covered()).findings == []


@pytest.mark.parametrize(
    "code, value, limit",
    [
        ("release-short", 90.0, 60.0),
        ("overfilled", 400.0, 350.0),
        ("duration-long", 172800.0, 86400.0),
        ("periapsis-low", 1e5, 2e5),
        ("ignitions-exceeded", 10.0, 0.0),
    ],
)
def test_a_fault_tells_what_is_and_what_may_be(code: str, value: float, limit: float) -> None:
    faulty = next(faulty for faulty in FAULTY if faulty.code == code)
    (found,) = findings(budget_of(faulty.plain), code)
    assert (found.value, found.limit) == pytest.approx((value, limit), rel=1e-12, abs=0.0)


def test_the_amount_owed_is_told() -> None:
    budget = budget_of(design([burn(2500.0)]))
    (found,) = findings(budget, "leg-unpaid")
    assert found.value == branch(budget).owed > 0.0


def test_a_payer_that_has_separated_is_gone_even_if_it_never_had_an_engine() -> None:
    ballast = {"name": "kick", "dry_mass": 50.0}
    plain = design([{"kind": "separate", "stages": ["kick"]}, burn(10.0, "kick")], ballast, stage())
    assert [found.code for found in budget_of(plain).findings if found.severity == "error"] == ["payer-gone"]


def test_a_payer_whose_engines_are_all_auxiliary_is_inert_unless_they_are_named() -> None:
    tug = stage(engines=[engine(auxiliary=True)])
    codes = [
        [found.code for found in budget_of(design([burn(10.0, "tug", **named)], tug)).findings]
        for named in ({}, {"engines": ["engine"]})
    ]
    assert ["payer-inert" in told for told in codes] == [True, False]


def test_what_an_open_account_lacks_an_ignition_for_is_handed_over() -> None:
    budget = budget_of(design([burn(10.0), burn(10.0)], *pair(engines=[engine(max_ignitions=1)])))
    assert [found.leg for found in findings(budget, "handover")] == [1]
    assert findings(budget, "ignitions-exceeded") == []


@pytest.mark.parametrize(
    "leg, start",
    [
        (
            {"kind": "ascend", "to": {"altitude": 2e5}, "delta_v": 1000.0},
            {"kind": "site", "body": "Tessaly", "latitude": 0.0},
        ),
        ({"kind": "coast", "duration": 86400.0, "delta_v": 1000.0}, None),
        ({"kind": "allowance", "category": "gas", "propellant": 500.0}, None),
    ],
    ids=["ascent", "upkeep", "kilograms"],
)
def test_a_handover_is_not_told_where_it_is_expected(leg: dict[str, Any], start: dict[str, Any] | None) -> None:
    stages = pair(engines=[engine(thrust=2e4)])
    plain = design([leg], *stages, **({"start": start} if start else {}))
    budget = budget_of(plain)
    assert len(branch(budget).legs[0].payers) == 2
    assert findings(budget, "handover") == []


def test_a_category_without_a_rule_is_told_once_at_its_first_leg() -> None:
    legs = [burn(1.0), burn(1.0, category="attitude"), burn(1.0), burn(1.0, category="attitude")]
    told = findings(budget_of(design(legs)), "no-contingency")
    assert [found.leg for found in told] == [0, 1]


def test_a_leg_that_costs_nothing_needs_no_rule() -> None:
    assert findings(budget_of(design([burn(0.0), burn(1.0)])), "no-contingency")[0].leg == 1


def test_a_branch_that_never_starts_needs_no_rule() -> None:
    never = {"of": "kick", "legs": [burn(1.0, category="attitude")]}
    told = findings(budget_of(design([burn(1.0)], *pair(), branches=[never])), "no-contingency")
    assert [found.branch for found in told] == ["main"]


def test_masses_without_growth_are_told_once() -> None:
    plain = design([burn(1.0)], *pair(), payloads=[{"name": "pod", "mass": 10.0}])
    assert len(findings(budget_of(plain), "no-growth")) == 1


def test_a_payload_without_growth_is_told_where_the_stages_have_theirs() -> None:
    plain = design([burn(1.0)], stage(mass_growth=0.1), payloads=[{"name": "pod", "mass": 10.0}])
    assert findings(budget_of(plain), "no-growth")[0].pointer == "/vehicle/payloads/0/mass"


def test_a_limit_that_a_preset_gave_is_told_at_the_rules() -> None:
    tug = stage(propellants=[{"mass": 340.0, "capacity": 350.0, "residual_fraction": 0.0}])
    (found,) = findings(budget_of(design([burn(1.0)], tug, preset="esa-2012")), "overfilled")
    assert found.limit == pytest.approx(350.0 / 1.1, rel=1e-12, abs=0.0)


def test_an_overfilled_load_tells_the_share_of_its_capacity() -> None:
    tug = stage(propellants=[{"mass": 400.0, "capacity": 400.0}])
    (found,) = findings(budget_of(design([burn(1.0)], tug, limits={"fill_max": 0.9})), "overfilled")
    assert found.message.endswith("pass the 360 kg that may be loaded: fill_max 0.9 of 400 kg")


def test_a_lifted_limit_is_not_held() -> None:
    tug = stage(propellants=[{"mass": 340.0, "capacity": 350.0}])
    plain = design([burn(1.0)], tug, preset="esa-2012", limits={"fill_max": None})
    assert findings(budget_of(plain), "overfilled") == []


def test_propellant_taken_on_may_overfill() -> None:
    tug = stage(propellants=[{"mass": 300.0, "capacity": 350.0}])
    more = {"kind": "take_on", "propellants": [{"stage": "tug", "mass": 100.0}]}
    (found,) = findings(budget_of(design([burn(1.0), more], tug)), "overfilled")
    assert found.pointer == "/vehicle/stages/0/propellants/0/mass"


def test_a_limit_is_told_once_for_each_leg_that_passes_it() -> None:
    plain = design([burn(900.0, splits=3), burn(100.0)], limits={"acceleration_max": 4.5})
    assert [found.leg for found in findings(budget_of(plain), "acceleration-high")] == [0, 1]


def test_propellant_held_back_for_a_branch_is_no_surprise() -> None:
    kick = {"propellants": [{"mass": 400.0, "held_back": 50.0}]}
    home = {"of": "kick", "legs": [burn(100.0)]}
    plain = design([{"kind": "separate", "stages": ["kick"]}, burn(1.0)], *pair(**kick), branches=[home])
    assert findings(budget_of(plain), "held-back-unused") == []


def test_propellant_that_a_branch_flies_on_with_is_not_left_behind() -> None:
    assert (
        findings(budget_of(separated(burn(1.0), branches=[{"of": "kick", "legs": [burn(1.0)]}])), "left-behind") == []
    )


def test_a_spent_stage_leaves_nothing_behind() -> None:
    assert findings(budget_of(design([burn(1200.0)], *pair())), "left-behind") == []


def test_a_mixture_that_runs_out_evenly_is_balanced() -> None:
    tug = stage(
        propellants=[{"name": "fuel", "mass": 100.0}, {"name": "oxidiser", "mass": 200.4}],
        engines=[engine(feeds={"fuel": 1.0, "oxidiser": 2.0})],
    )
    assert findings(budget_of(design([burn(2500.0)], tug)), "feed-unbalanced") == []


def test_boil_off_that_leaves_enough_is_no_fault() -> None:
    tug = stage(propellants=[{"mass": 400.0, "boiloff_per_day": 50.0}])
    plain = design([{"kind": "coast", "duration": 86400.0}, burn(10.0)], tug)
    assert findings(budget_of(plain), "boiled-dry") == []


def test_boil_off_after_the_last_charge_needs_nothing() -> None:
    tug = stage(propellants=[{"mass": 400.0, "boiloff_per_day": 50.0}])
    plain = design([burn(10.0), {"kind": "coast", "duration": 864000.0}], tug)
    assert findings(budget_of(plain), "boiled-dry") == []


def test_a_branch_that_leaves_with_another_has_not_started() -> None:
    legs = [{"kind": "separate", "stages": ["kick"]}, burn(1.0, "tug")]
    ballast = {"name": "ballast", "dry_mass": 10.0}
    branches = [{"of": "kick", "legs": [burn(1.0)]}, {"of": "ballast", "legs": [burn(1.0)]}]
    (found,) = findings(budget_of(design(legs, ballast, *pair(), branches=branches)), "branch-not-started")
    assert found.pointer == "/mission/branches/1/of"


def test_not_all_payers_are_gone_while_one_without_an_engine_is_aboard() -> None:
    legs = [{"kind": "separate", "stages": ["kick"]}, burn(10.0, "kick", "frame")]
    plain = design(legs, stage("kick"), {"name": "frame", "dry_mass": 50.0}, stage())
    assert [found.code for found in budget_of(plain).findings if found.severity == "error"] == ["payer-dry"]


@pytest.mark.parametrize("delta_v, owed", [(9e-10, 0.0), (2e-9, 2e-9)])
def test_a_trifle_is_not_owed(delta_v: float, owed: float) -> None:
    assert branch(budget_of(design([burn(delta_v)], {"name": "kick", "dry_mass": 50.0}))).owed == owed


GAS = {"kind": "allowance", "category": "gas", "propellant": 5.0}


def test_kilograms_are_owed_where_nobody_has_an_engine() -> None:
    budget = budget_of(design([GAS], {"name": "kick", "dry_mass": 50.0}))
    assert [found.code for found in budget.findings if found.severity == "error"] == ["leg-unpaid"]


def test_kilograms_are_owed_where_nothing_is_aboard_any_more() -> None:
    budget = budget_of(design([{"kind": "separate", "stages": ["tug"]}, GAS]))
    assert [found.leg for found in findings(budget, "leg-unpaid")] == [1]
