"""The table of operations, and the way in that all others share."""

import subprocess
import sys

import msgspec
import pytest

from burntally.model.errors import ContractError, InconsistentError, NotFoundError, UncomputableError
from burntally.model.operations import BodyRecord
from burntally_service import operations
from burntally_service.operations import OPERATIONS, answer, operation_named

VEHICLE = {
    "name": "Tug",
    "stages": [
        {
            "name": "tug",
            "dry_mass": 100.0,
            "propellants": [{"mass": 100.0}],
            "engines": [{"thrust": 1000.0, "isp": 300.0}],
        }
    ],
}


def performance(**fields: object) -> dict[str, float]:
    body = msgspec.json.encode({"vehicle": VEHICLE, **fields})
    told: dict[str, float] = msgspec.json.decode(answer("compute_performance", body))
    return told


def test_each_row_is_found_by_its_own_id() -> None:
    assert all(operation_named(row.id) is row for row in OPERATIONS.values())


def test_no_two_rows_share_a_place() -> None:
    assert len({(row.method, row.path) for row in OPERATIONS.values()}) == len(OPERATIONS)


def test_an_unknown_operation_is_told_those_that_there_are() -> None:
    with pytest.raises(LookupError, match="create_budget"):
        answer("launch", b"")


def test_a_name_is_a_request_like_any_other() -> None:
    told = msgspec.json.decode(answer("get_body", b'{"name":"moon"}'), type=BodyRecord)
    assert (told.name, told.parent) == ("moon", "earth")


def test_messagepack_goes_in_and_comes_out() -> None:
    body = msgspec.msgpack.encode({"name": "moon"})
    packed = answer("get_body", body, "application/msgpack", "application/msgpack")
    assert msgspec.msgpack.decode(packed) == msgspec.json.decode(answer("get_body", b'{"name":"moon"}'))


@pytest.mark.parametrize("operation_id", ["get_body", "get_rules"])
def test_an_unknown_name_is_not_found(operation_id: str) -> None:
    with pytest.raises(NotFoundError) as caught:
        answer(operation_id, b'{"name":"tessaly"}')
    assert [violation.pointer for violation in caught.value.violations] == ["/name"]


def test_what_breaks_the_contract_is_refused() -> None:
    with pytest.raises(ContractError):
        answer("get_body", b"{}")


def test_a_stack_is_weighed_in_standard_gravity() -> None:
    assert performance()["gravity"] == 9.80665


def test_a_stack_is_weighed_where_the_request_says() -> None:
    # Archinal et al. 2018 and DE440: GM 4.9028e12 m3/s2, mean radius 1 737.4 km.
    assert performance(gravity_of="moon")["gravity"] == pytest.approx(4.9028e12 / 1737.4e3**2, rel=1e-4)


def test_a_body_that_is_none_weighs_nothing() -> None:
    with pytest.raises(InconsistentError) as caught:
        performance(gravity_of="tessaly")
    assert [violation.pointer for violation in caught.value.violations] == ["/gravity_of"]


def test_a_preset_counts_for_a_performance_too() -> None:
    plain, with_preset = performance(), performance(rules={"preset": "esa-2012"})
    assert with_preset["initial_mass"] > plain["initial_mass"]


def test_the_table_loads_nothing_heavy() -> None:
    heavy = {"numpy", "numba", "astropy", "litestar", "uvicorn", "httpx2"}
    code = f"import sys, burntally_service.operations; print(sorted({heavy} & set(sys.modules)))"
    told = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert told.stdout.strip() == "[]"


def failing_with(error: Exception, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail() -> object:
        raise error

    row = msgspec.structs.replace(OPERATIONS["list_bodies"], function=fail)
    monkeypatch.setattr(operations, "OPERATIONS", {row.id: row})


@pytest.mark.parametrize(
    "error", [ZeroDivisionError("division by zero"), OverflowError("too large"), ValueError("math domain error")]
)
def test_what_arithmetic_cannot_do_has_no_answer_and_is_logged(
    error: Exception, monkeypatch: pytest.MonkeyPatch, caplog: pytest.LogCaptureFixture
) -> None:
    failing_with(error, monkeypatch)
    with pytest.raises(UncomputableError):
        answer("list_bodies", b"")
    assert [(record.name, record.exc_info and record.exc_info[1]) for record in caplog.records] == [
        ("burntally.operations", error)
    ]


@pytest.mark.parametrize("operation", ["create_budget", "compute_performance"])
@pytest.mark.parametrize("delta_v", [100.0, 9e5])
def test_a_stage_that_would_burn_away_to_nothing_is_named(operation: str, delta_v: float) -> None:
    stage = {"name": "tug", "dry_mass": 0, "propellants": [{"mass": 900}], "engines": [{"thrust": 400, "isp": 311}]}
    leg = {"kind": "allowance", "delta_v": delta_v, "category": "navigation"}
    plain: dict[str, object] = {"vehicle": {"name": "tug", "stages": [stage]}}
    if operation == "create_budget":
        plain |= {"format": 1, "mission": {"start": {"kind": "orbit", "body": "earth", "altitude": 4e5}, "legs": [leg]}}
    with pytest.raises(UncomputableError) as caught:
        answer(operation, msgspec.json.encode(plain))
    assert [violation.pointer for violation in caught.value.violations] == ["/vehicle/stages/0/dry_mass"]


def test_any_other_failure_stays_what_it_is(monkeypatch: pytest.MonkeyPatch) -> None:
    failing_with(ValueError("no such thing"), monkeypatch)
    with pytest.raises(ValueError, match="no such thing"):
        answer("list_bodies", b"")
