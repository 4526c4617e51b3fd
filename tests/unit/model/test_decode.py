"""The border: what is read, what is refused, where, and all of it at once."""

import json
from datetime import UTC, date, datetime, timedelta, timezone
from typing import Any

import msgspec
import pytest

from burntally.model import operations
from burntally.model.budget import Budget
from burntally.model.decode import JSON, MSGPACK, decode, decode_builtins, encode, parse_json
from burntally.model.design import Design
from burntally.model.errors import ContractError, InconsistentError, UncomputableError
from burntally.model.operations import BodyRecord, PerformanceRequest, TransferRequest
from burntally.model.rules import Limits, Rules
from tests.unit.model.designs import TUG, pointers, refused, with_value

ENGINE = "/vehicle/stages/0/engines/0"
MASS = "/vehicle/stages/1/propellants/0/mass"


def test_a_design_in_order_is_what_msgspec_makes_of_it() -> None:
    data = json.dumps(TUG).encode()
    assert decode(Design, data) == msgspec.json.decode(data, type=Design)


def test_messagepack_and_json_are_the_same_design() -> None:
    assert decode(Design, msgspec.msgpack.encode(TUG), media_type=MSGPACK) == decode(Design, json.dumps(TUG).encode())


@pytest.mark.parametrize(
    "pointer, text, plain",
    [
        (MASS, "0.9 t", 900.0),
        (f"{ENGINE}/thrust", "9 kN", 9000.0),
        (f"{ENGINE}/isp", "321 s", 321.0),
        ("/mission/start/altitude", "400 km", 400000.0),
        ("/mission/start/inclination", "51.6 deg", 51.6),
        ("/mission/legs/1/duration", "1 d", 86400.0),
        ("/vehicle/stages/1/dry_mass", "340 kg", 340.0),
        ("/vehicle/stages/1/dry_mass/0/growth", "10 %", 0.1),
        ("/rules/residual_fraction", "1 %", 0.01),
        (f"{ENGINE}/count", 3.0, 3),
        ("/format", 1.0, 1),
    ],
)
@pytest.mark.parametrize("media_type", [JSON, MSGPACK])
def test_a_quantity_or_an_integral_float_is_the_plain_number(
    pointer: str, text: Any, plain: float, media_type: str
) -> None:
    write = msgspec.json.encode if media_type == JSON else msgspec.msgpack.encode
    bent = decode(Design, write(with_value(pointer, text)), media_type=media_type)
    assert bent == decode(Design, json.dumps(with_value(pointer, plain)).encode())


@pytest.mark.parametrize(
    "pointer, value",
    [
        (MASS, -1.0),
        (MASS, "-1 kg"),
        (MASS, 2e9),
        (MASS, "2e6 t"),
        (MASS, "5 m"),
        (MASS, "5 stone"),
        (MASS, "5"),
        (MASS, "٣ kg"),
        (MASS, "nan kg"),
        (MASS, "1e400 t"),
        (MASS, "5 kg\n"),
        (MASS, True),
        (MASS, None),
        (MASS, [1.0]),
        (MASS, {}),
        (MASS, 10**400),
        (f"{ENGINE}/thrust", 0.0),
        (f"{ENGINE}/thrust", "0 N"),
        (f"{ENGINE}/isp", "321 kg"),
        (f"{ENGINE}/count", 2.5),
        (f"{ENGINE}/count", "2"),
        (f"{ENGINE}/count", 0),
        (f"{ENGINE}/count", 65),
        (f"{ENGINE}/count", True),
        (f"{ENGINE}/auxiliary", 1),
        (f"{ENGINE}/feeds", {}),
        (f"{ENGINE}/feeds", [1.0]),
        (f"{ENGINE}/feeds/fuel", "1 kg"),
        (f"{ENGINE}/feeds/fuel", 0.0),
        (f"{ENGINE}/name", ""),
        (f"{ENGINE}/name", "x" * 65),
        (f"{ENGINE}/name", "main/engine"),
        (f"{ENGINE}/name", "engine\n"),
        (f"{ENGINE}/name", 5),
        ("/title", "x" * 501),
        ("/title", "\ud800"),
        ("/format", 2),
        ("/format", "1"),
        ("/format", True),
        ("/vehicle/stages", []),
        ("/vehicle/stages", {}),
        ("/vehicle", []),
        ("/vehicle/stages/1/separation", "when_spend"),
        ("/vehicle/stages/1/separation", 1),
        ("/mission/start/kind", "orbt"),
        ("/mission/start/kind", 5),
        ("/mission/start", "earth"),
        ("/mission/start/inclination", 181.0),
        ("/mission/legs/0/kind", "transfr"),
        ("/mission/legs/0/paid_by", []),
        ("/mission/epoch", "12 April 2031"),
        ("/mission/epoch", "1899-12-31"),
        ("/rules/contingency/0/category", "deterministic."),
        ("/vehicle/stages/1/dry_mass", []),
        ("/vehicle/stages/1/dry_mass", "heavy"),
    ],
)
def test_a_value_that_is_not_allowed_is_told_alone_with_its_place(pointer: str, value: Any) -> None:
    error = refused(with_value(pointer, value))
    assert (type(error), pointers(error.violations)) == (ContractError, [pointer])


@pytest.mark.parametrize("literal", ["NaN", "Infinity", "-Infinity", "1e400", "-1e400", "9" * 5000])
def test_a_number_that_no_double_holds_is_told_with_its_place(literal: str) -> None:
    error = refused(with_value(MASS, "@"), written=lambda design: json.dumps(design).replace('"@"', literal))
    assert pointers(error.violations) == [MASS]


def test_a_number_that_no_double_holds_is_shown_as_it_was_written() -> None:
    error = refused(with_value(MASS, "@"), written=lambda design: json.dumps(design).replace('"@"', "1e400"))
    assert error.violations[0].read == "1e400"


@pytest.mark.parametrize("value", [float("nan"), float("inf"), float("-inf")])
@pytest.mark.parametrize(
    "pointer", [MASS, f"{ENGINE}/thrust", f"{ENGINE}/feeds/fuel", "/mission/start/altitude", "/rules/residual_fraction"]
)
def test_messagepack_does_not_smuggle_non_finite_numbers_in(pointer: str, value: float) -> None:
    with pytest.raises(ContractError) as caught:
        decode(Design, msgspec.msgpack.encode(with_value(pointer, value)), media_type=MSGPACK)
    assert pointers(caught.value.violations) == [pointer]


def parts_of(type_: type) -> list[tuple[str, msgspec.inspect.Type]]:
    """Every type that a request holds, with the field that holds it."""
    found: list[tuple[str, msgspec.inspect.Type]] = []
    seen: set[type] = set()

    def look(info: msgspec.inspect.Type, where: str) -> None:
        found.append((where, info))
        if isinstance(info, msgspec.inspect.StructType) and info.cls not in seen:
            seen.add(info.cls)
            for field in info.fields:
                look(field.type, f"{info.cls.__name__}.{field.name}")
        for name in ("type", "item_type", "key_type", "value_type"):
            if hasattr(info, name):
                look(getattr(info, name), where)
        for option in getattr(info, "types", ()):
            look(option, where)

    look(msgspec.inspect.type_info(type_), type_.__name__)
    return found


@pytest.mark.parametrize("type_", [Design, PerformanceRequest, TransferRequest])
def test_every_number_of_a_request_has_both_bounds(type_: type) -> None:
    open_ended = [
        where
        for where, info in parts_of(type_)
        if isinstance(info, msgspec.inspect.FloatType)
        and ((info.ge is None and info.gt is None) or (info.le is None and info.lt is None))
    ]
    assert open_ended == []


@pytest.mark.parametrize("type_", [Design, PerformanceRequest, TransferRequest])
def test_every_struct_of_a_request_leaves_defaults_out_when_it_is_written(type_: type) -> None:
    # The quick look for doubled keys counts on it: what is written again holds no key that was not read.
    structs = {info.cls for _, info in parts_of(type_) if isinstance(info, msgspec.inspect.StructType)}
    assert [struct.__name__ for struct in structs if not struct.__struct_config__.omit_defaults] == []


def test_defaults_that_are_structs_or_lists_are_left_out_too() -> None:
    bare = {"name": "tug", "stages": [{"name": "tug", "dry_mass": 1.0}]}
    body = json.dumps({"vehicle": bare}).encode()
    assert msgspec.json.decode(encode(decode(PerformanceRequest, body))) == {"vehicle": bare}


@pytest.mark.parametrize(
    "body, told",
    [
        (b"", "empty"),
        (b"  \n", "empty"),
        (b"{", "line 1, column 2"),
        (b'{"format": 1,}', "not JSON"),
        (b'{"format": 1} x', "Extra data"),
        (b"\xff", "not UTF-8, at byte 0"),
        (b'{"title": "\xed\xa0\x80"}', "not UTF-8"),
        (b"\xef\xbb\xbf{}", "BOM"),
        (b"[" * 100_000, "too deep"),
        (b"[" * 33 + b"]" * 33, "too deep"),
        (b'{"a":' * 40 + b"1" + b"}" * 40, "too deep"),
    ],
)
def test_what_is_no_json_document_is_one_violation_of_the_whole(body: bytes, told: str) -> None:
    with pytest.raises(ContractError, match=told) as caught:
        decode(Design, body)
    assert pointers(caught.value.violations) == [""]


@pytest.mark.parametrize(
    "body, told",
    [
        (b"", "empty"),
        (b"\xc1", "not MessagePack"),
        (b"\x80\x80", "trailing"),
        (b"\x81", "truncated"),
        (b"\xa2\xff\xfe", "UTF-8"),
        (b"\x91" * 100_000, "too deep"),
        (b"\x91" * 40 + b"\x90", "too deep"),
    ],
)
def test_what_is_no_messagepack_document_is_one_violation_of_the_whole(body: bytes, told: str) -> None:
    with pytest.raises(ContractError, match=told) as caught:
        decode(Design, body, media_type=MSGPACK)
    assert pointers(caught.value.violations) == [""]


@pytest.mark.parametrize("body", [b"null", b"1", b'"x"', b"[]", b"true", b"NaN"])
def test_a_document_that_is_no_object_is_one_violation_of_the_whole(body: bytes) -> None:
    with pytest.raises(ContractError) as caught:
        decode(Design, body)
    assert pointers(caught.value.violations) == [""]


def test_everything_that_is_wrong_is_told_at_once() -> None:
    bent = with_value(MASS, "5 m")
    bent = with_value(f"{ENGINE}/isp", -3, bent)
    bent = with_value("/mission/legs/0/kind", "transfr", bent)
    bent = with_value("/mission/start/altitud", 1, bent)
    bent = with_value("/vehicle/name", ..., bent)
    assert sorted(pointers(refused(bent).violations)) == [
        "/mission/legs/0/kind",
        "/mission/start/altitud",
        "/vehicle/name",
        f"{ENGINE}/isp",
        MASS,
    ]


def test_a_violation_says_what_was_read_and_what_was_expected() -> None:
    told = refused(with_value(MASS, "5 m")).violations[0]
    assert (told.read, told.expected) == (
        '"5 m"',
        "a number from 0 to 1e9 in kg, or text with a unit (kg, t, g, mg, Mg)",
    )


def test_an_unknown_field_is_told_with_the_one_that_was_meant() -> None:
    told = refused(with_value(f"{ENGINE}/isp_sealevel", 300.0)).violations[0]
    assert "isp_sea_level" in told.message


def test_a_pointer_escapes_what_separates_its_parts() -> None:
    error = refused(with_value(f"{ENGINE}/feeds", {"a/b~c": 1.0}))
    assert pointers(error.violations) == [f"{ENGINE}/feeds/a~1b~0c"]


def test_a_missing_field_is_told_where_it_should_be() -> None:
    assert pointers(refused(with_value(f"{ENGINE}/isp", ...)).violations) == [f"{ENGINE}/isp"]


@pytest.mark.parametrize("pointer", [f"{ENGINE}/isp", "/vehicle/name", "/vehicle/stages", "/mission/start"])
def test_a_missing_field_is_told_with_what_a_wrong_one_is_told(pointer: str) -> None:
    missing, wrong = (refused(with_value(pointer, value)).violations[0] for value in (..., True))
    assert missing.expected == wrong.expected


def test_a_missing_kind_is_told_with_the_kinds_that_there_are() -> None:
    told = refused(with_value("/mission/start/kind", ...)).violations[0]
    assert (told.pointer, told.expected) == ("/mission/start/kind", "one of site, orbit, hyperbola")


def test_null_stands_for_an_absent_field() -> None:
    assert decode(Design, json.dumps(with_value("/title", None)).encode()).title is None


def test_null_stays_apart_from_absent_where_it_lifts_a_limit() -> None:
    limits = decode(Rules, b'{"limits": {"burn_time_max": null, "acceleration_max": "4 g0"}}').limits
    assert limits == Limits(burn_time_max=None, acceleration_max=39.2266)


@pytest.mark.parametrize(
    "written, pointer",
    [
        ('{"format": 1, "format": 1, ', "/format"),
        ('{"title": "a", "title": "b", "format": 1, ', "/title"),
        ('{"titl\\u0065": "a", "title": "b", "format": 1, ', "/title"),
        ('{"title": "a:\\u003a", "title": "b", "format": 1, ', "/title"),
    ],
)
def test_a_key_written_twice_is_refused(written: str, pointer: str) -> None:
    body = written + json.dumps(with_value("/title", ..., with_value("/format", ...)))[1:]
    with pytest.raises(ContractError) as caught:
        decode(Design, body.encode())
    assert pointers(caught.value.violations) == [pointer]


def test_a_key_written_twice_is_refused_deep_down() -> None:
    body = json.dumps(TUG).replace('"isp": 321.0', '"isp": 300.0, "isp": 321.0').encode()
    with pytest.raises(ContractError) as caught:
        decode(Design, body)
    assert pointers(caught.value.violations) == [f"{ENGINE}/isp"]


def test_a_load_fed_twice_is_refused() -> None:
    body = json.dumps(TUG).replace('"fuel": 1.0', '"fuel": 1.0, "fuel": 1.0').encode()
    with pytest.raises(ContractError) as caught:
        decode(Design, body)
    assert pointers(caught.value.violations) == [f"{ENGINE}/feeds/fuel"]


def test_a_default_that_is_written_out_is_no_doubled_key() -> None:
    assert decode(Design, json.dumps(with_value(f"{ENGINE}/count", 1)).encode()).vehicle.stages[0].engines[0].count == 1


def test_a_key_written_twice_in_messagepack_is_refused() -> None:
    title = msgspec.msgpack.encode("title") + msgspec.msgpack.encode("a")
    body = msgspec.msgpack.encode(TUG)
    with pytest.raises(ContractError) as caught:
        decode(Design, bytes([body[0] + 1]) + title + body[1:], media_type=MSGPACK)
    assert pointers(caught.value.violations) == ["/title"]


@pytest.mark.parametrize(
    "long_form",
    [
        b"\xcc\x01",  # uint 8
        b"\xcd\x00\x01",
        b"\xce\x00\x00\x00\x01",
        b"\xcf\x00\x00\x00\x00\x00\x00\x00\x01",
        b"\xd0\x01",  # int 8
        b"\xd1\x00\x01",
        b"\xd2\x00\x00\x00\x01",
        b"\xd3\x00\x00\x00\x00\x00\x00\x00\x01",
        b"\xca\x3f\x80\x00\x00",  # float 32
        b"\xcb\x3f\xf0\x00\x00\x00\x00\x00\x00",
    ],
)
def test_a_number_of_messagepack_is_the_same_in_every_width(long_form: bytes) -> None:
    format_ = msgspec.msgpack.encode("format")
    body = msgspec.msgpack.encode(TUG).replace(format_ + b"\x01", format_ + long_form)
    assert decode(Design, body, media_type=MSGPACK) == decode(Design, json.dumps(TUG).encode())


@pytest.mark.parametrize(
    "short, long_form",
    [
        (msgspec.msgpack.encode("format"), b"\xd9\x06format"),
        (msgspec.msgpack.encode("format"), b"\xda\x00\x06format"),
        (msgspec.msgpack.encode("format"), b"\xdb\x00\x00\x00\x06format"),
        (b"\xa6stages\x92", b"\xa6stages\xdc\x00\x02"),
        (b"\xa6stages\x92", b"\xa6stages\xdd\x00\x00\x00\x02"),
        (b"\xa5feeds\x82", b"\xa5feeds\xde\x00\x02"),
        (b"\xa5feeds\x82", b"\xa5feeds\xdf\x00\x00\x00\x02"),
        (b"\xa9auxiliary\xc3", b"\xd9\x09auxiliary\xc3"),
    ],
)
def test_text_lists_and_objects_of_messagepack_are_the_same_in_every_width(short: bytes, long_form: bytes) -> None:
    body = msgspec.msgpack.encode(TUG).replace(short, long_form)
    assert decode(Design, body, media_type=MSGPACK) == decode(Design, json.dumps(TUG).encode())


@pytest.mark.parametrize(
    "value, read",
    [
        (b"\xc4\x01a", "binary data"),
        (b"\xc5\x00\x01a", "binary data"),
        (b"\xd6\xff\x00\x00\x00\x00", "binary data"),
        (b"\xc7\x01\x05a", "binary data"),
        (b"\xc0", None),
        (b"\xc2", "false"),
        (b"\xff", "-1"),
    ],
)
def test_what_messagepack_holds_beyond_the_contract_is_refused_where_it_stands(value: bytes, read: str | None) -> None:
    format_ = msgspec.msgpack.encode("format")
    body = msgspec.msgpack.encode(TUG).replace(format_ + b"\x01", b"\xd9\x06format" + value)
    with pytest.raises(ContractError) as caught:
        decode(Design, body, media_type=MSGPACK)
    assert (pointers(caught.value.violations), caught.value.violations[0].read) == (["/format"], read or "null")


def test_a_key_of_messagepack_that_is_no_text_is_refused() -> None:
    with pytest.raises(ContractError) as caught:
        decode(Rules, b"\x82\x01\x02\x91\x01\xcc\x02", media_type=MSGPACK)
    assert pointers(caught.value.violations) == ["/1", "/[1]"]


def test_a_name_with_a_newline_at_its_end_is_refused_in_messagepack_too() -> None:
    body = msgspec.msgpack.encode(with_value("/vehicle/name", "tug\n"))
    with pytest.raises(ContractError) as caught:
        decode(Design, body, media_type=MSGPACK)
    assert pointers(caught.value.violations) == ["/vehicle/name"]


def test_a_newline_within_a_free_text_is_kept() -> None:
    assert decode(Design, json.dumps(with_value("/title", "a\nb")).encode()).title == "a\nb"


def test_half_a_character_in_a_key_does_not_break_the_answer() -> None:
    error = refused(with_value("/\ud800", 1))
    assert msgspec.json.encode(error.violations)


def test_the_telling_stops_where_it_would_only_keep_a_server_busy() -> None:
    error = refused({f"field {index}": 1 for index in range(5000)})
    assert len(error.violations) == 201


def test_rules_beyond_the_schema_are_an_error_of_their_own() -> None:
    error = refused(with_value("/mission/legs/4/payload", "relais"))
    assert (type(error), pointers(error.violations)) == (InconsistentError, ["/mission/legs/4/payload"])


def test_another_media_type_is_a_fault_of_the_caller() -> None:
    with pytest.raises(ValueError, match="text/csv"):
        decode(Design, b"", media_type="text/csv")


@pytest.mark.parametrize(
    "value, text",
    [
        (date(2031, 4, 12), "2031-04-12"),
        (datetime(2031, 4, 12, 6, tzinfo=UTC), "2031-04-12T06:00:00"),
        (datetime(2031, 4, 12, 8, tzinfo=timezone(timedelta(hours=2))), "2031-04-12T06:00:00"),
        (datetime(2031, 4, 12, 6), "2031-04-12T06:00:00"),  # noqa: DTZ001 -- as TOML gives a date without an offset
    ],
)
def test_a_date_of_a_file_is_read_where_an_epoch_is_wanted(value: date, text: str) -> None:
    assert decode_builtins(Design, with_value("/mission/epoch", value)).mission.epoch == text


def test_a_date_of_a_file_is_refused_where_free_text_is_wanted() -> None:
    with pytest.raises(ContractError) as caught:
        decode_builtins(Design, with_value("/title", date(2031, 4, 12)))
    assert caught.value.violations[0].read == "a date"


def test_parsed_json_keeps_keys_that_were_written_twice() -> None:
    with pytest.raises(ContractError) as caught:
        decode_builtins(Rules, parse_json(b'{"mass_growth": 1, "mass_growth": 1}'))
    assert pointers(caught.value.violations) == ["/mass_growth"]


def test_values_that_hold_themselves_are_nested_too_deep() -> None:
    loop: dict[str, Any] = {}
    loop["a"] = loop
    with pytest.raises(ContractError, match="too deep"):
        decode_builtins(Rules, loop)


def test_values_that_stand_in_many_places_are_looked_at_once() -> None:
    laughs: list[Any] = ["ha"]
    for _ in range(31):
        laughs = [laughs] * 10
    with pytest.raises(ContractError, match="an object is wanted"):
        decode_builtins(Rules, laughs)


RECORD = BodyRecord(name="Tessaly", gravitational_parameter=1.0, radius=1.0, radius_kind="mean", source="made up")


@pytest.mark.parametrize("media_type", [JSON, MSGPACK])
def test_an_answer_is_written_as_msgspec_writes_it(media_type: str) -> None:
    write = msgspec.json.encode if media_type == JSON else msgspec.msgpack.encode
    assert encode(RECORD, media_type=media_type) == write(RECORD)


@pytest.mark.parametrize("value", [float("nan"), float("inf"), float("-inf")])
@pytest.mark.parametrize("media_type", [JSON, MSGPACK])
def test_an_answer_with_a_number_that_is_not_finite_is_not_written(media_type: str, value: float) -> None:
    bodies = operations.Bodies(bodies=[RECORD, msgspec.structs.replace(RECORD, radius=value)])
    with pytest.raises(UncomputableError) as caught:
        encode(bodies, media_type=media_type)
    assert pointers(caught.value.violations) == ["/bodies/1/radius"]


@pytest.mark.parametrize("media_type", [JSON, MSGPACK])
def test_an_answer_that_merely_looks_like_one_is_written(media_type: str) -> None:
    record = msgspec.structs.replace(RECORD, source="null", radius=1.7e308)
    write = msgspec.json.encode if media_type == JSON else msgspec.msgpack.encode
    assert encode(record, media_type=media_type) == write(record)


def test_so_many_numbers_that_are_not_finite_are_not_all_told() -> None:
    bodies = operations.Bodies(bodies=[msgspec.structs.replace(RECORD, radius=float("nan"))] * 300)
    with pytest.raises(UncomputableError) as caught:
        encode(bodies)
    assert len(caught.value.violations) == 201


def test_an_answer_is_read_with_fields_that_are_not_known_yet() -> None:
    body = msgspec.json.encode({**msgspec.to_builtins(RECORD), "colour": "red", "name": "Orrin\n"})
    assert decode(BodyRecord, body).name == "Orrin\n"


def test_values_of_several_kinds_are_read_as_they_are() -> None:
    remedy = {"pointer": "/a", "from": "text", "to": True, "message": "x\ny"}
    finding = {"code": "c", "severity": "note", "message": "m", "pointer": "", "remedies": [remedy]}
    from burntally.model.budget import Finding

    assert decode(Finding, msgspec.json.encode(finding)).remedies[0].from_ == "text"


def test_a_lone_kind_is_compared_where_it_is_written() -> None:
    from burntally.model.mission import Deorbit

    with pytest.raises(ContractError) as caught:
        decode(Deorbit, b'{"kind": "land", "periapsis": 5}')
    assert pointers(caught.value.violations) == ["/kind"]


class Log(msgspec.Struct, frozen=True, kw_only=True):
    when: datetime


def test_what_the_contract_does_not_use_is_left_to_the_decoder() -> None:
    with pytest.raises(ContractError, match="datetime"):
        decode_builtins(Log, {"when": "soon"})


def test_the_budget_is_a_type_that_can_be_read() -> None:
    with pytest.raises(ContractError):
        decode(Budget, b"{}")


LEGS = "/mission/legs"
LATE = "/mission/branches/0/legs/0"
ORRIN = {"name": "Orrin", "gravitational_parameter": 5e12, "radius": 1.8e6, "parent": "Tessaly"}


def bent(*changes: tuple[str, Any]) -> dict[str, Any]:
    design = TUG
    for pointer, value in changes:
        design = with_value(pointer, value, design)
    return design


@pytest.mark.parametrize(
    "schema_fault, other_fault, pointer",
    [
        # a fault of the mission, and what the vehicle and the rules break by themselves
        ((f"{LEGS}/0/splits", 0), ("/vehicle/payloads/0/on", "tog"), "/vehicle/payloads/0/on"),
        ((f"{LEGS}/0/splits", 0), ("/vehicle/stages/0/name", "tug"), "/vehicle/stages/1/name"),
        (("/mission/start/body", 7), ("/rules/contingency", [{"category": "a"}] * 2), "/rules/contingency/1/category"),
        # a fault of the vehicle, and what each part of the mission breaks by itself
        (("/vehicle/name", 7), ("/mission/start/body", None), "/mission/start/body"),
        (("/vehicle/name", 7), ("/mission/epoch", "2031-02-30"), "/mission/epoch"),
        (("/vehicle/name", 7), (f"{LEGS}/1/duration", None), f"{LEGS}/1/duration"),
        (("/vehicle/name", 7), (f"{LEGS}/3/category", None), f"{LEGS}/3/category"),
        (("/vehicle/name", 7), (f"{LATE}/engines", ["engine"]), f"{LATE}/engines"),
        (("/vehicle/name", 7), ("/mission/system", {"bodies": [ORRIN]}), "/mission/system/bodies/0/orbit"),
        # one leg's fault, and another leg's
        ((f"{LEGS}/0/splits", 0), (f"{LEGS}/1/duration", None), f"{LEGS}/1/duration"),
        # a fault of neither: names are looked for as if there were none
        (("/rules/reserve", {"fraction": 2}), (f"{LEGS}/4/payload", "rely"), f"{LEGS}/4/payload"),
        (("/surprise", 1), (f"{LEGS}/0/paid_by", ["kik"]), f"{LEGS}/0/paid_by/0"),
    ],
)
def test_what_no_schema_states_is_told_beside_a_fault_of_the_schema(
    schema_fault: tuple[str, Any], other_fault: tuple[str, Any], pointer: str
) -> None:
    told = pointers(refused(bent(schema_fault, other_fault)).violations)
    assert told[0].startswith(schema_fault[0])
    assert pointer in told[1:]


def leaves(value: Any, pointer: str = "") -> list[str]:
    inner = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    return [leaf for key, held in inner for leaf in leaves(held, f"{pointer}/{key}")] or [pointer]


def told_by_the_schema(design: Any) -> list[str]:
    """Pointers of a 400; none where each field could be read."""
    try:
        decode(Design, json.dumps(design).encode())
    except InconsistentError:
        return []
    except ContractError as error:
        return pointers(error.violations)
    return []


@pytest.mark.parametrize("wrong", [[], -7, "?"], ids=["a list", "a number", "text"])
@pytest.mark.parametrize("pointer", leaves(TUG))
def test_a_field_that_cannot_be_read_is_told_alone(pointer: str, wrong: Any) -> None:
    # What cannot be read may be just what a leg or a payload speaks of, so nothing may be said of that.
    assert told_by_the_schema(with_value(pointer, wrong)) in ([pointer], [])


def test_a_vehicle_alone_is_told_what_no_schema_states_beside_a_fault_of_the_schema() -> None:
    vehicle = bent(("/vehicle/payloads/0/on", "tog"))["vehicle"]
    with pytest.raises(ContractError) as caught:
        decode_builtins(PerformanceRequest, {"vehicle": vehicle, "gravity_of": 7})
    assert pointers(caught.value.violations) == ["/gravity_of", "/vehicle/payloads/0/on"]


def test_a_leg_alone_is_told_what_no_schema_states_beside_a_fault_of_the_schema() -> None:
    orbit = {"kind": "orbit", "body": 7, "altitude": 4e5}
    leg = {"kind": "transfer", "to": {"altitude": 5e5, "period": 6000.0}}
    with pytest.raises(ContractError) as caught:
        decode_builtins(TransferRequest, {"start": orbit, "leg": leg})
    assert pointers(caught.value.violations) == ["/start/body", "/leg/to/period"]


def test_nothing_is_added_where_the_reading_stopped() -> None:
    many = [{"name": "strut", "mass": -1.0}] * 300
    told = refused(bent(("/vehicle/stages/1/dry_mass", many), (f"{LEGS}/1/duration", None))).violations
    assert (len(told), told[-1].pointer) == (201, "")
