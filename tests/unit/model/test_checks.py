"""Rules that a schema cannot state: what is refused, and at which field."""

from collections.abc import Iterable
from typing import Any

import msgspec
import pytest

from burntally.model.checks import violations
from burntally.model.design import Design
from burntally.model.operations import PerformanceRequest, TransferRequest
from burntally.model.rules import Rules
from tests.unit.model.designs import TUG, pointers, with_value

STAGE = "/vehicle/stages/0"
LOAD = f"{STAGE}/propellants/1"
ENGINE = f"{STAGE}/engines/0"
LEGS = "/mission/legs"
ORBIT = {"semi_major_axis": 1e9}
TESSALY = {"name": "Tessaly", "gravitational_parameter": 3e14, "radius": 6e6}
ORRIN = {"name": "Orrin", "parent": "Tessaly", "gravitational_parameter": 5e12, "radius": 1.8e6, "orbit": ORBIT}


def found(value: Any, type_: Any = Design) -> list[str]:
    return pointers(tuple(violations(msgspec.convert(value, type_))))


def bent(changes: Iterable[tuple[str, Any]]) -> dict[str, Any]:
    design = TUG
    for pointer, value in changes:
        design = with_value(pointer, value, design)
    return design


def test_a_design_in_order_breaks_no_rule() -> None:
    assert found(TUG) == []


def item(**fields: Any) -> list[dict[str, Any]]:
    return [{"name": "frame", "mass": 1.0, **fields}]


def payload(**fields: Any) -> dict[str, Any]:
    return {"name": "beacon", "mass": 5.0, **fields}


@pytest.mark.parametrize(
    "pointer, value, expected",
    [
        # names
        (f"{STAGE}/name", "main", ["/vehicle/stages/0/name", f"{LEGS}/0/paid_by/0", f"{LEGS}/2/stages/0"]),
        ("/vehicle/payloads/0/name", "tug", ["/vehicle/payloads/0/name", f"{LEGS}/4/payload"]),
        (f"{LOAD}/name", "fuel", [f"{LOAD}/name", f"{ENGINE}/feeds/oxidiser"]),
        (f"{STAGE}/engines/1/name", "engine", [f"{STAGE}/engines/1/name"]),
        (f"{ENGINE}/feeds", {"water": 1.0}, [f"{ENGINE}/feeds/water"]),
        ("/vehicle/payloads/0/on", "tog", ["/vehicle/payloads/0/on"]),
        ("/vehicle/stages/1/propellants", [], ["/vehicle/stages/1/propellants"]),
        # engines
        (f"{ENGINE}/isp_sea_level", 322.0, [f"{ENGINE}/isp_sea_level"]),
        (f"{ENGINE}/isp_sea_level", 321.0, []),
        # masses
        ("/vehicle/stages/1/dry_mass", item(growth=0.1, maturity="flown"), ["/vehicle/stages/1/dry_mass/0/maturity"]),
        ("/vehicle/stages/1/dry_mass", item(**{"class": "wiring"}), ["/vehicle/stages/1/dry_mass/0/class"]),
        ("/vehicle/stages/1/dry_mass", item(**{"class": "wiring", "maturity": "flown"}), []),
        ("/vehicle/payloads/0/mass", item(growth=0.1, maturity="flown"), ["/vehicle/payloads/0/mass/0/maturity"]),
        (f"{LOAD}/held_back", 792.0, []),
        (f"{LOAD}/held_back", 792.1, [f"{LOAD}/held_back"]),
        # dates
        ("/mission/epoch", "2031-02-29", ["/mission/epoch"]),
        ("/mission/epoch", "2032-02-29", []),
        ("/mission/epoch", "2031-04-12T24:01", ["/mission/epoch"]),
        ("/mission/epoch", "2201-01-01", ["/mission/epoch"]),
        (f"{LEGS}/1", {"kind": "coast", "until": "2031-06-31"}, [f"{LEGS}/1/until"]),
        # where it starts
        ("/mission/start/body", None, ["/mission/start/body"]),
        ("/mission/start/altitude", None, ["/mission/start"]),
        ("/mission/start/periapsis", 1e5, ["/mission/start/periapsis"]),
        ("/mission/start", {"kind": "orbit", "body": "earth", "periapsis": 2e5}, ["/mission/start"]),
        ("/mission/start", {"kind": "orbit", "body": "earth", "periapsis": 2e5, "apoapsis": 3e5}, []),
        ("/mission/start", {"kind": "orbit", "body": "earth", "periapsis": 2e5, "period": 7000.0}, []),
        ("/mission/start", {"kind": "hyperbola", "body": "mars", "c3": 0.0}, ["/mission/start/c3"]),
        ("/mission/start", {"kind": "hyperbola", "body": "mars", "c3": 1.0}, []),
        ("/mission/start", {"kind": "site", "body": "earth", "latitude": 5.2}, []),
        # where a leg goes
        (f"{LEGS}/0/to", {}, []),
        (f"{LEGS}/0/to", {"periapsis": 2e5}, []),
        (f"{LEGS}/0/to", {"inclination": 28.5}, []),
        (f"{LEGS}/0/to", {"periapsis": 2e5, "period": 7000.0}, []),
        (f"{LEGS}/0/to", {"altitude": 2e5, "apoapsis": 3e5}, [f"{LEGS}/0/to/apoapsis"]),
        (f"{LEGS}/0/to", {"altitude": 2e5, "period": 7000.0}, [f"{LEGS}/0/to/period"]),
        (f"{LEGS}/0/to", {"apoapsis": 2e5, "periapsis": 1e5, "period": 7000.0}, [f"{LEGS}/0/to/period"]),
        (f"{LEGS}/0/to", {"period": 7000.0}, [f"{LEGS}/0/to/period"]),
        (f"{LEGS}/0/to", {"periapsis": 2e5, "period": 0.0}, [f"{LEGS}/0/to/period"]),
        (f"{LEGS}/0/to", {"periapsis": 3e5, "apoapsis": 2e5}, [f"{LEGS}/0/to/apoapsis"]),
        (f"{LEGS}/0/to", {"periapsis": 2e5, "apoapsis": 2e5}, []),
        # who pays
        (f"{LEGS}/0/paid_by", ["kick", "tog"], [f"{LEGS}/0/paid_by/1", f"{LEGS}/0/engines"]),
        (f"{LEGS}/0/paid_by", ["kick", "kick"], [f"{LEGS}/0/paid_by/1", f"{LEGS}/0/engines"]),
        (f"{LEGS}/0/paid_by", None, [f"{LEGS}/0/engines"]),
        (f"{LEGS}/0/engines", ["engin"], [f"{LEGS}/0/engines/0"]),
        (f"{LEGS}/0/engines", ["vernier", "engine"], []),
        (f"{LEGS}/0/engines", ["engine", "engine"], [f"{LEGS}/0/engines/1"]),
        # kinds of leg
        (f"{LEGS}/1/duration", None, [f"{LEGS}/1/duration"]),
        (f"{LEGS}/1/until", "2031-06-01", [f"{LEGS}/1/duration"]),
        (f"{LEGS}/1/upkeep_per_year", 5.0, []),
        (
            f"{LEGS}/1",
            {"kind": "coast", "duration": 1.0, "upkeep_per_year": 5.0, "delta_v": 1.0},
            [f"{LEGS}/1/delta_v"],
        ),
        (f"{LEGS}/3/propellant", 5.0, [f"{LEGS}/3/delta_v"]),
        (f"{LEGS}/3/delta_v", None, [f"{LEGS}/3/delta_v"]),
        (f"{LEGS}/3/category", None, [f"{LEGS}/3/category"]),
        (f"{LEGS}/2/stages", ["kick", "tog"], [f"{LEGS}/2/stages/1"]),
        (f"{LEGS}/2/stages", ["kick", "kick"], [f"{LEGS}/2/stages/1"]),
        (f"{LEGS}/4/payload", "relais", [f"{LEGS}/4/payload"]),
        (f"{LEGS}/4", {"kind": "release"}, [f"{LEGS}/4"]),
        (f"{LEGS}/4", {"kind": "release", "payload": "relay", "mass": 1.0}, []),
        (f"{LEGS}/4", {"kind": "release", "mass": 1.0}, [f"{LEGS}/4", f"{LEGS}/4/mass"]),
        (
            f"{LEGS}/4",
            {"kind": "release", "propellants": [{"stage": "tog"}]},
            [f"{LEGS}/4/propellants/0/stage", f"{LEGS}/4/propellants/0/mass"],
        ),
        (
            f"{LEGS}/4",
            {"kind": "release", "propellants": [{"stage": "kick", "mass": 1.0}]},
            [f"{LEGS}/4/propellants/0/load"],
        ),
        (f"{LEGS}/4", {"kind": "release", "propellants": [{"stage": "tug", "mass": 1.0}]}, []),
        (f"{LEGS}/4", {"kind": "take_on"}, [f"{LEGS}/4"]),
        (f"{LEGS}/4", {"kind": "take_on", "branch": "kick"}, []),
        (f"{LEGS}/4", {"kind": "take_on", "branch": "tug"}, [f"{LEGS}/4/branch"]),
        (f"{LEGS}/4", {"kind": "take_on", "payload": payload()}, []),
        (f"{LEGS}/4", {"kind": "take_on", "payload": payload(on="tog")}, [f"{LEGS}/4/payload/on"]),
        (f"{LEGS}/4", {"kind": "take_on", "payload": payload(name="relay")}, [f"{LEGS}/4/payload/name"]),
        (
            f"{LEGS}/4",
            {"kind": "take_on", "payload": payload(mass=item(growth=0.1, maturity="idea"))},
            [f"{LEGS}/4/payload/mass/0/maturity"],
        ),
        (
            f"{LEGS}/4",
            {"kind": "take_on", "propellants": [{"stage": "tug"}]},
            [f"{LEGS}/4/propellants/0/mass"],
        ),
        (f"{LEGS}/4", {"kind": "take_on", "propellants": [{"stage": "kick", "load": "oxidiser"}]}, []),
        (f"{LEGS}/4", {"kind": "take_on", "propellants": [{"stage": "tug", "mass": 1.0}]}, []),
        # branches
        ("/mission/branches/0/of", "tog", ["/mission/branches/0/of"]),
        ("/mission/branches/0/legs/0/paid_by", ["tog"], ["/mission/branches/0/legs/0/paid_by/0"]),
        # rules
        (
            "/rules/contingency",
            [{"category": "attitude"}, {"category": "attitude"}],
            ["/rules/contingency/1/category"],
        ),
        (
            "/rules/growth_table",
            [{"maturity": "flown", "growth": 0.1}, {"maturity": "flown", "class": "a", "growth": 0.1}],
            [],
        ),
        ("/rules/growth_table", [{"maturity": "flown", "growth": 0.1}] * 2, ["/rules/growth_table/1"]),
        # systems
        ("/mission/system", {"bodies": [TESSALY, ORRIN]}, []),
        ("/mission/system", {"bodies": [TESSALY, ORRIN, ORRIN]}, ["/mission/system/bodies/2/name"]),
        ("/mission/system", {"bodies": [TESSALY, {**ORRIN, "parent": None}]}, ["/mission/system/bodies/1/parent"]),
        ("/mission/system", {"bodies": [TESSALY, {**ORRIN, "parent": "Tesaly"}]}, ["/mission/system/bodies/1/parent"]),
        ("/mission/system", {"bodies": [TESSALY, {**ORRIN, "orbit": None}]}, ["/mission/system/bodies/1/orbit"]),
        (
            "/mission/system",
            {"bodies": [{**TESSALY, "parent": "Orrin", "orbit": ORBIT}, ORRIN]},
            ["/mission/system/bodies/0/parent", "/mission/system/bodies/1/parent", "/mission/system/bodies"],
        ),
        ("/mission/system", {"base": "solar", "bodies": [{**ORRIN, "parent": "earth"}]}, []),
        ("/mission/system", {"base": "solar", "bodies": [TESSALY]}, ["/mission/system/bodies/0/parent"]),
    ],
)
def test_a_rule_beyond_the_schema_is_told_at_the_field_at_fault(pointer: str, value: Any, expected: list[str]) -> None:
    design = with_value(pointer, value)
    if pointer == f"{STAGE}/name":
        design = with_value("/mission/branches", [], design)
    assert found(design) == expected


def test_an_exit_area_beside_a_sea_level_impulse_is_told() -> None:
    assert found(bent([(f"{ENGINE}/isp_sea_level", 300.0), (f"{ENGINE}/exit_area", 1.0)])) == [f"{ENGINE}/exit_area"]


def test_a_coast_until_a_date_needs_the_date_of_the_start() -> None:
    coast = {"kind": "coast", "until": "2031-06-01"}
    assert found(bent([("/mission/epoch", None), (f"{LEGS}/1", coast)])) == [f"{LEGS}/1/until"]


def test_a_payload_that_is_taken_on_may_be_released() -> None:
    take_on = {"kind": "take_on", "payload": payload()}
    assert found(bent([(f"{LEGS}/3", take_on), (f"{LEGS}/4/payload", "beacon")])) == []


def test_a_second_branch_of_a_stage_is_told() -> None:
    branch = TUG["mission"]["branches"][0]
    assert found(with_value("/mission/branches", [branch, branch])) == ["/mission/branches/1/of"]


def test_the_residual_of_a_load_beats_the_rules() -> None:
    load = {"name": "oxidiser", "mass": 800.0, "residual_fraction": 0.5, "held_back": 500.0}
    assert found(with_value(LOAD, load)) == [f"{LOAD}/held_back"]


def test_a_performance_is_checked_in_vehicle_and_rules() -> None:
    request = {
        "vehicle": with_value(f"{ENGINE}/feeds", {"water": 1.0})["vehicle"],
        "rules": {"contingency": [{"category": "attitude"}] * 2},
    }
    assert found(request, PerformanceRequest) == [f"{ENGINE}/feeds/water", "/rules/contingency/1/category"]


def test_a_transfer_is_checked_in_system_start_and_leg() -> None:
    request = {
        "system": {"bodies": [TESSALY, {**ORRIN, "orbit": None}]},
        "start": {"kind": "orbit", "body": "Tessaly"},
        "leg": {"kind": "transfer", "to": {"altitude": 1e5, "apoapsis": 1e6}, "paid_by": ["nobody"]},
    }
    expected = ["/system/bodies/1/orbit", "/start", "/leg/to/apoapsis"]
    assert found(request, TransferRequest) == expected


def test_engines_of_a_transfer_without_a_vehicle_need_a_payer_too() -> None:
    request = {"start": TUG["mission"]["start"], "leg": {"kind": "deorbit", "periapsis": 5e4, "engines": ["a"]}}
    assert found(request, TransferRequest) == ["/leg/engines"]


def test_engines_of_a_transfer_without_a_vehicle_are_nobodys() -> None:
    leg = {"kind": "deorbit", "periapsis": 5e4, "engines": ["a"], "paid_by": ["b"]}
    assert found({"start": TUG["mission"]["start"], "leg": leg}, TransferRequest) == []


def test_a_transfer_in_the_solar_system_needs_none_of_its_own() -> None:
    request = {"start": TUG["mission"]["start"], "leg": {"kind": "deorbit", "periapsis": 5e4}}
    assert found(request, TransferRequest) == []


def test_a_body_that_leads_into_a_ring_is_not_blamed_for_it() -> None:
    ring = [{**ORRIN, "name": name, "parent": parent} for name, parent in (("b", "c"), ("c", "b"), ("a", "b"))]
    expected = [f"/mission/system/bodies/{index}/parent" for index in (1, 2)]
    assert found(with_value("/mission/system", {"bodies": [TESSALY, *ring]})) == expected


def test_what_is_no_request_breaks_no_rule() -> None:
    assert found({}, Rules) == []


def test_the_telling_stops_where_it_would_only_keep_a_server_busy() -> None:
    release = {"kind": "release", "payload": "relais", "propellants": [{"stage": "tog"}] * 16}
    assert len(found(with_value(LEGS, [release] * 200))) == 201
