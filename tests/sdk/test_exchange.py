"""Requests are built and answers are read without any I/O."""

import math
from datetime import UTC, datetime
from typing import Any

import msgspec
import pytest
from astropy import units  # type: ignore[import-untyped] # it ships none

from burntally import Design, Transfer
from burntally.client import errors
from burntally.client.exchange import Body, answer_of, decoded, request_for
from burntally.client.messages import Reply
from burntally.client.operations import CREATE_BUDGET, GET_BODY, LIST_BODIES, OPERATIONS, PLAN_TRANSFER
from burntally.model.decode import JSON, MSGPACK, decode

HEADERS = {"content-type": JSON, "accept": JSON}


def design(**stage: Any) -> dict[str, Any]:
    return {
        "format": 1,
        "vehicle": {
            "name": "Meridian tug",
            "stages": [
                {
                    "name": "tug",
                    "dry_mass": 420.0,
                    "propellants": [{"mass": 1000.0}],
                    "engines": [{"thrust": 2000.0, "isp": 320.0}],
                }
                | stage
            ],
        },
        "mission": {
            "start": {"kind": "orbit", "body": "earth", "altitude": 400e3},
            "legs": [{"kind": "transfer", "to": {"altitude": 800e3}}],
        },
    }


def body_of(body: Body) -> Design:
    return decode(Design, request_for(CREATE_BUDGET, body, headers=HEADERS).body)


def test_a_struct_and_builtins_are_one_request() -> None:
    struct = msgspec.convert(design(), Design)
    assert body_of(struct) == body_of(design()) == struct


def test_bytes_go_as_they_are() -> None:
    assert request_for(CREATE_BUDGET, b" {} ", headers=HEADERS).body == b" {} "


@pytest.mark.parametrize("mass", ["0.42 t", 0.42 * units.t, 420, 420.0], ids=str)
def test_builtins_may_carry_units(mass: Any) -> None:
    assert body_of(design(dry_mass=mass)).vehicle.stages[0].dry_mass == pytest.approx(420.0, rel=1e-12)


@pytest.mark.parametrize("mass", ["3 s", 3.0 * units.s, math.nan, -1.0, "heavy"], ids=str)
def test_a_wrong_field_fails_before_it_is_sent(mass: Any) -> None:
    with pytest.raises(errors.InvalidRequest) as caught:
        request_for(CREATE_BUDGET, design(dry_mass=mass), headers=HEADERS)
    assert [row.pointer for row in caught.value.violations] == ["/vehicle/stages/0/dry_mass"]


def test_fields_that_do_not_fit_together_have_their_own_class() -> None:
    twice = design()
    twice["vehicle"]["stages"] *= 2
    with pytest.raises(errors.InconsistentRequest) as caught:
        request_for(CREATE_BUDGET, twice, headers=HEADERS)
    assert caught.value.status == 422


def test_a_number_that_is_not_finite_in_a_struct_breaks_the_contract() -> None:
    wrong = msgspec.structs.replace(msgspec.convert(design(), Design), format=math.inf)
    with pytest.raises(errors.InvalidRequest) as caught:
        request_for(CREATE_BUDGET, wrong, headers=HEADERS)
    assert (caught.value.status, caught.value.problem_code) == (400, "invalid-request")


def test_what_no_contract_holds_is_refused() -> None:
    with pytest.raises(TypeError):
        request_for(CREATE_BUDGET, design(dry_mass=object()), headers=HEADERS)


def test_a_date_is_an_epoch() -> None:
    dated = design()
    dated["mission"]["epoch"] = datetime(2031, 5, 4, tzinfo=UTC)
    assert (body_of(dated).mission.epoch or "").startswith("2031-05-04")


def test_messagepack_is_written_where_it_is_asked_for() -> None:
    request = request_for(CREATE_BUDGET, design(), headers={**HEADERS, "content-type": MSGPACK})
    assert decode(Design, request.body, media_type=MSGPACK).vehicle.name == "Meridian tug"


def test_a_name_in_a_path_is_quoted() -> None:
    assert request_for(GET_BODY, name="a/b c", headers=HEADERS).path == "/v1/bodies/a%2Fb%20c"


def test_a_request_without_a_body_has_none() -> None:
    assert request_for(LIST_BODIES, headers=HEADERS).body == b""


def test_the_table_is_keyed_by_its_own_ids() -> None:
    assert [row.id for row in OPERATIONS.values()] == list(OPERATIONS)


def answer(body: object) -> Any:
    request = request_for(PLAN_TRANSFER, b"", headers=HEADERS)
    return decoded(PLAN_TRANSFER, answer_of(request, Reply(status=200, body=msgspec.json.encode(body))))


TRANSFER: dict[str, Any] = {
    "delta_v": 100.0,
    "duration": 60.0,
    "manoeuvres": [],
    "alternatives": [],
    "findings": [],
    "cautions": [],
}


def test_an_answer_is_read_into_its_struct() -> None:
    end = {"kind": "orbit", "body": "earth", "altitude": 8e5}
    assert answer(TRANSFER | {"end": end}).end.altitude == 8e5


def test_fields_of_a_newer_service_are_passed_over() -> None:
    end = {"kind": "orbit", "body": "earth", "altitude": 8e5, "season": "spring"}
    assert answer(TRANSFER | {"end": end, "mood": 1}).end.altitude == 8e5


def test_words_of_a_newer_service_are_taken_as_they_stand() -> None:
    finding = {"code": "x", "severity": "hint", "message": "m", "pointer": "", "remedies": []}
    assert answer(TRANSFER | {"findings": [finding]}).findings[0].severity == "hint"


def test_a_kind_of_a_newer_service_stays_as_it_came() -> None:
    assert answer(TRANSFER | {"end": {"kind": "wormhole", "mouth": 2}}).end == {"kind": "wormhole", "mouth": 2}


def test_a_nested_choice_of_plain_values_is_read() -> None:
    remedy = {"pointer": "/a", "from": 1, "to": "x", "message": "m", "new": 0}
    finding = {"code": "x", "severity": "hint", "message": "m", "pointer": "", "remedies": [remedy]}
    read = answer(TRANSFER | {"findings": [finding]}).findings[0].remedies[0]
    assert (read.from_, read.to) == (1, "x")


@pytest.mark.parametrize("field,value", [("delta_v", "much"), ("findings", {}), ("findings", None)])
def test_another_shape_is_no_answer(field: str, value: object) -> None:
    with pytest.raises(errors.DecodingError):
        answer(TRANSFER | {field: value})


def test_a_struct_that_lacks_a_field_is_no_answer() -> None:
    with pytest.raises(errors.DecodingError):
        answer({key: value for key, value in TRANSFER.items() if key != "findings"})


def test_a_leg_is_written_with_its_kind() -> None:
    struct = msgspec.convert(design(), Design)
    assert isinstance(body_of(struct).mission.legs[0], Transfer)
