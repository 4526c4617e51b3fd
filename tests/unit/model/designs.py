"""The invented tug that the tests of the border bend out of shape."""

import json
from collections.abc import Callable
from copy import deepcopy
from typing import Any

from burntally.model.decode import decode
from burntally.model.design import Design
from burntally.model.errors import ContractError, Violation

__all__ = ["TUG", "pointers", "refused", "with_value"]

TUG: dict[str, Any] = {
    "format": 1,
    "title": "Meridian Haulage, delivery",
    "vehicle": {
        "name": "Meridian tug",
        "stages": [
            {
                "name": "kick",
                "dry_mass": 240.0,
                "propellants": [
                    {"name": "fuel", "mass": 500.0},
                    {"name": "oxidiser", "mass": 800.0, "capacity": 900.0},
                ],
                "engines": [
                    {"thrust": 9000.0, "isp": 321.0, "feeds": {"fuel": 1.0, "oxidiser": 1.6}},
                    {"name": "vernier", "thrust": 20.0, "isp": 290.0, "auxiliary": True},
                ],
            },
            {
                "name": "tug",
                "dry_mass": [{"name": "frame", "mass": 310.0, "growth": 0.1}],
                "propellants": [{"mass": 900.0}],
                "engines": [{"thrust": 2000.0, "isp": 322.0}],
            },
        ],
        "payloads": [{"name": "relay", "mass": 450.0, "on": "tug"}],
    },
    "mission": {
        "epoch": "2031-04-12T06:00:00Z",
        "start": {"kind": "orbit", "body": "earth", "altitude": 400000.0, "inclination": 51.6},
        "legs": [
            {"kind": "transfer", "to": {"apoapsis": 900000.0}, "paid_by": ["kick"], "engines": ["engine"]},
            {"kind": "coast", "duration": 86400.0},
            {"kind": "separate", "stages": ["kick"]},
            {"kind": "allowance", "delta_v": 12.0, "category": "attitude"},
            {"kind": "release", "payload": "relay"},
        ],
        "branches": [{"of": "kick", "legs": [{"kind": "deorbit", "periapsis": 50000.0, "delta_v": 90.0}]}],
    },
    "rules": {"contingency": [{"category": "deterministic", "fraction": 0.05}], "residual_fraction": 0.01},
}
"""A design in order; `with_value` bends a copy."""


def with_value(pointer: str, value: Any, design: dict[str, Any] = TUG) -> dict[str, Any]:
    """Give a copy of a design with another value at a pointer; Ellipsis takes the field away."""
    bent = deepcopy(design)
    *parents, last = pointer.split("/")[1:]
    place: Any = bent
    for part in parents:
        place = place[int(part) if isinstance(place, list) else part]
    if value is ...:
        del place[last]
    else:
        place[int(last) if isinstance(place, list) else last] = value
    return bent


def refused(value: Any, *, written: Callable[[Any], str] = json.dumps) -> ContractError:
    """Decode what must not be decoded, and give the error."""
    try:
        decode(Design, written(value).encode())
    except ContractError as error:
        return error
    raise AssertionError("was not refused")


def pointers(violations: tuple[Violation, ...]) -> list[str]:
    """Give the pointers of violations, in order."""
    return [violation.pointer for violation in violations]
