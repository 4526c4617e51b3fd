"""Faults that only a catalogue can tell: each is told, whatever else is wrong."""

import json
from typing import Any

import pytest

from burntally.model.errors import InconsistentError, UncomputableError
from burntally_service.operations import answer
from tests.unit.model.designs import TUG, with_value

ORRIN = {"name": "Orrin", "gravitational_parameter": 5e12, "radius": 1.8e6}
LEAVES = {"kind": "deorbit", "periapsis": 1e4}


def told(operation_id: str, request: Any) -> list[str]:
    with pytest.raises((InconsistentError, UncomputableError)) as caught:
        answer(operation_id, json.dumps(request).encode())
    return [violation.pointer for violation in caught.value.violations]


def bent(*changes: tuple[str, Any]) -> dict[str, Any]:
    design = TUG
    for pointer, value in changes:
        design = with_value(pointer, value, design)
    return design


def test_a_name_that_only_the_service_knows_is_told_beside_one_that_the_request_knows() -> None:
    design = bent(("/vehicle/payloads/0/on", "tog"), ("/rules/preset", "none"), ("/mission/start/body", "Orrin"))
    assert told("create_budget", design) == ["/vehicle/payloads/0/on", "/rules/preset", "/mission/start/body"]


def test_an_unknown_preset_is_told_beside_an_unknown_body() -> None:
    design = bent(("/rules/preset", "none"), ("/mission/start/body", "Orrin"))
    assert told("create_budget", design) == ["/rules/preset", "/mission/start/body"]


def test_a_system_that_contradicts_the_catalogue_is_told_beside_an_unknown_preset() -> None:
    moon = ORRIN | {"name": "moon", "parent": "earth", "orbit": {"semi_major_axis": 3e8}}
    design = bent(("/rules/preset", "none"), ("/mission/system", {"base": "solar", "bodies": [moon]}))
    assert told("create_budget", design) == ["/rules/preset", "/mission/system/bodies/0/name"]


def test_a_performance_is_told_its_preset_and_its_body_at_once() -> None:
    request = {"vehicle": TUG["vehicle"], "rules": {"preset": "none"}, "gravity_of": "Orrin"}
    assert told("compute_performance", request) == ["/rules/preset", "/gravity_of"]


def test_a_leg_alone_is_told_each_field_once() -> None:
    request = {
        "system": {"bodies": [ORRIN]},
        "start": {"kind": "orbit", "body": "earth", "altitude": 4e5},
        "leg": LEAVES,
    }
    assert told("plan_transfer", request) == ["/start/body"]
