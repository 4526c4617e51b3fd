"""Designs of Meridian Haulage's tugs, as plain values, and their budgets."""

from collections.abc import Sequence
from typing import Any

from burntally.model.budget import BranchBook, Budget, Finding
from burntally.model.decode import decode_builtins
from burntally.model.design import Design
from burntally_service.budget import draw_up

__all__ = ["branch", "budget_of", "burn", "design", "engine", "findings", "stage"]

Plain = dict[str, Any]

TESSALY: Plain = {"name": "Tessaly", "gravitational_parameter": 4.2e14, "radius": 6.5e6}
ORBIT: Plain = {"kind": "orbit", "body": "Tessaly", "altitude": 4e5}


def engine(**fields: Any) -> Plain:
    """Describe an engine."""
    return {"thrust": 4000.0, "isp": 320.0, **fields}


def stage(name: str = "tug", **fields: Any) -> Plain:
    """Describe a stage with one load and one engine."""
    return {"name": name, "dry_mass": 500.0, "propellants": [{"mass": 400.0}], "engines": [engine()], **fields}


def burn(delta_v: float, *payers: str, **fields: Any) -> Plain:
    """Describe an allowance of delta-v, of the open account without payers."""
    paid_by = {"paid_by": list(payers)} if payers else {}
    return {"kind": "allowance", "category": "deterministic", "delta_v": delta_v, **paid_by, **fields}


def design(legs: Sequence[Plain], *stages: Plain, **fields: Any) -> Plain:
    """Describe a design, of one tug unless stages are given; fields go to the vehicle, the mission or the rules."""
    vehicle = {"name": "tug", "stages": list(stages) or [stage()]}
    mission = {"system": {"bodies": [TESSALY]}, "start": ORBIT, "legs": list(legs)}
    rules: Plain = {"finite_burn": False}
    for name, value in fields.items():
        owner = vehicle if name == "payloads" else mission if name in {"branches", "start", "epoch"} else rules
        owner[name] = value
    return {"format": 1, "vehicle": vehicle, "mission": mission, "rules": rules}


def budget_of(plain: Plain) -> Budget:
    """Draw up the budget of a design."""
    return draw_up(decode_builtins(Design, plain))


def branch(budget: Budget, name: str = "main") -> BranchBook:
    """Find the book of a branch."""
    return next(book for book in budget.branches if book.name == name)


def findings(budget: Budget, code: str) -> list[Finding]:
    """List the findings of a code."""
    return [finding for finding in budget.findings if finding.code == code]
