"""Design files: three languages, parts in files of their own, and nothing read outside the project."""

import json
import sys
from pathlib import Path

import pytest

from burntally.cli.files import DesignFileError, read_design, read_design_file
from burntally.model.errors import ContractError

TOML = """\
format = 1

[vehicle]
name = "Meridian tug"
stages = [{ name = "tug", dry_mass = "420 kg", propellants = [{ mass = "1 t" }], engines = [{ thrust = 2000, isp = 320 }] }]
payloads = [{ name = "relay", mass = 50.5, on = "tug" }]

[mission]
epoch = 2031-04-12T08:00:00+02:00
start = { kind = "orbit", body = "Tessaly", altitude = "400 km" }
legs = [{ kind = "transfer", to = { altitude = "800 km" } }, { kind = "coast", until = 2031-04-20 }]
system = { bodies = [{ name = "Tessaly", gravitational_parameter = 3e14, radius = "6000 km" }] }

[rules]
residual_fraction = "1 %"
finite_burn = false
"""  # noqa: E501 -- a file as a person would write it

YAML = """\
format: 1
vehicle:
  name: Meridian tug
  stages:
    - name: tug
      dry_mass: 420 kg
      propellants: [{mass: 1 t}]
      engines: [{thrust: 2000, isp: 320}]
  payloads:
    - {name: relay, mass: 50.5, on: tug}
mission:
  epoch: 2031-04-12 08:00:00+02:00
  start: {kind: orbit, body: Tessaly, altitude: 400 km}
  legs:
    - {kind: transfer, to: {altitude: 800 km}}
    - {kind: coast, until: 2031-04-20}
  system:
    bodies: [{name: Tessaly, gravitational_parameter: 3.0e+14, radius: 6000 km}]
rules:
  residual_fraction: 1 %
  finite_burn: false
"""

VEHICLE = {"name": "tug", "stages": [{"name": "tug", "dry_mass": 420.0, "propellants": [{"mass": 1000.0}]}]}
MISSION = {
    "start": {"kind": "orbit", "body": "earth", "altitude": 4e5},
    "legs": [{"kind": "allowance", "delta_v": 1.0, "category": "attitude"}],
}
DESIGN = {"format": 1, "vehicle": VEHICLE, "mission": MISSION}


def written(path: Path, text: str) -> Path:
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_text(text, encoding="utf-8")
    return path


def referring(path: Path, reference: str) -> Path:
    return written(path, json.dumps({**DESIGN, "vehicle": {"file": reference}}))


@pytest.mark.parametrize("suffix", [".yaml", ".yml", ".YAML"])
def test_toml_and_yaml_of_one_design_are_equal(tmp_path: Path, suffix: str) -> None:
    assert read_design(written(tmp_path / f"a{suffix}", YAML)) == read_design(written(tmp_path / "a.toml", TOML))


def test_toml_and_json_of_one_design_are_equal(tmp_path: Path) -> None:
    text = json.dumps(
        {
            "format": 1,
            "vehicle": {
                "name": "Meridian tug",
                "stages": [
                    {
                        "name": "tug",
                        "dry_mass": 420,
                        "propellants": [{"mass": 1e3}],
                        "engines": [{"thrust": 2e3, "isp": 320}],
                    }
                ],
                "payloads": [{"name": "relay", "mass": 50.5, "on": "tug"}],
            },
            "mission": {
                "epoch": "2031-04-12T06:00:00",
                "start": {"kind": "orbit", "body": "Tessaly", "altitude": 4e5},
                "legs": [
                    {"kind": "transfer", "to": {"altitude": 8e5}},
                    {"kind": "coast", "until": "2031-04-20"},
                ],
                "system": {"bodies": [{"name": "Tessaly", "gravitational_parameter": 3e14, "radius": 6e6}]},
            },
            "rules": {"residual_fraction": 0.01, "finite_burn": False},
        }
    )
    assert read_design(written(tmp_path / "a.json", text)) == read_design(written(tmp_path / "a.toml", TOML))


def test_a_byte_order_mark_is_passed_over(tmp_path: Path) -> None:
    path = tmp_path / "a.toml"
    path.write_text(TOML, encoding="utf-8-sig")
    assert read_design(path).format == 1


def test_yes_and_on_are_text_in_yaml(tmp_path: Path) -> None:
    design = read_design(written(tmp_path / "a.yaml", YAML.replace("tug", "yes").replace("relay", "on")))
    assert (design.vehicle.payloads[0].name, design.vehicle.payloads[0].on) == ("on", "yes")


@pytest.mark.parametrize(
    "name, text, place",
    [
        ("a.toml", "format = 1\nformat = 1\n", (2, 11)),
        ("a.toml", "format = \n", (1, 10)),
        ("a.toml", "epoch = 2031-02-30\n", (1, 9)),
        ("a.yaml", "format: 1\nformat: 1\n", (2, 1)),
        ("a.yaml", "a: [1,\n b: 2", (2, 6)),
        ("a.yaml", "a: !!python/object:os.system x", (1, 4)),
        ("a.yaml", "a: 1\n---\nb: 2\n", (2, 1)),
        ("a.yaml", "a: 2031-02-30", (None, None)),
        ("a.json", '{"format": 1,\n "title" 5}', (2, 10)),
        ("a.json", "", (None, None)),
        ("a.txt", "", (None, None)),
        ("a.toml", "a = " + "[" * 5000, (None, None)),
    ],
)
def test_a_file_that_cannot_be_parsed_is_told_with_its_place(
    tmp_path: Path, name: str, text: str, place: tuple[int | None, int | None]
) -> None:
    path = written(tmp_path / name, text)
    with pytest.raises(DesignFileError) as caught:
        read_design(path)
    assert (caught.value.path, caught.value.line, caught.value.column) == (path, *place)


def test_a_file_that_is_not_utf8_is_refused(tmp_path: Path) -> None:
    (tmp_path / "a.toml").write_bytes(b"title = '\xff'")
    with pytest.raises(DesignFileError, match="UTF-8"):
        read_design(tmp_path / "a.toml")


def test_a_file_that_is_not_there_is_the_systems_error(tmp_path: Path) -> None:
    with pytest.raises(FileNotFoundError):
        read_design(tmp_path / "a.toml")


def test_yaml_without_its_library_names_the_extra(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "ruamel.yaml", None)
    with pytest.raises(DesignFileError, match=r"burntally\[cli\]"):
        read_design(written(tmp_path / "a.yaml", YAML))


@pytest.mark.parametrize(
    "name, text, pointer",
    [
        ("a.json", '{"format": 1, "format": 1}', "/format"),
        ("a.toml", "format = nan\n", "/format"),
        ("a.yaml", "format: .inf\n", "/format"),
        ("a.yaml", "1: 2\n", "/1"),
        ("a.yaml", "- 1\n", ""),
        ("a.yaml", "a: &a {b: *a}\n", ""),
        ("a.toml", "title = 12:00:00\n", "/title"),
    ],
)
def test_a_file_that_is_no_design_is_told_as_a_body_is(tmp_path: Path, name: str, text: str, pointer: str) -> None:
    with pytest.raises(ContractError) as caught:
        read_design(written(tmp_path / name, text))
    assert pointer in [violation.pointer for violation in caught.value.violations]


def test_each_part_may_stand_in_a_file_of_its_own(tmp_path: Path) -> None:
    written(tmp_path / "vehicle.json", json.dumps(VEHICLE))
    written(tmp_path / "flights" / "mission.json", json.dumps(MISSION))
    written(tmp_path / "rules.toml", "finite_burn = false")
    text = 'format = 1\nvehicle = { file = "vehicle.json" }\nmission = { file = "flights/mission.json" }\n'
    text += 'rules = { file = "rules.toml" }'
    whole = written(tmp_path / "whole.json", json.dumps({**DESIGN, "rules": {"finite_burn": False}}))
    assert read_design(written(tmp_path / "a.toml", text)) == read_design(whole)


def test_a_pointer_is_traced_to_the_file_that_holds_the_field(tmp_path: Path) -> None:
    source = written(tmp_path / "vehicle.json", json.dumps(VEHICLE))
    read = read_design_file(referring(tmp_path / "a.json", "vehicle.json"))
    assert read.place_of("/vehicle/stages/0/dry_mass") == (source, "/stages/0/dry_mass")


@pytest.mark.parametrize("pointer", ["", "/mission/legs/0", "/title"])
def test_a_pointer_to_what_stands_in_the_design_file_stays_as_it_is(tmp_path: Path, pointer: str) -> None:
    written(tmp_path / "vehicle.json", json.dumps(VEHICLE))
    path = referring(tmp_path / "a.json", "vehicle.json")
    assert read_design_file(path).place_of(pointer) == (path, pointer)


def test_a_part_may_stand_beside_the_folder_within_a_project(tmp_path: Path) -> None:
    (tmp_path / ".git").mkdir()
    written(tmp_path / "vehicle.json", json.dumps(VEHICLE))
    assert read_design(referring(tmp_path / "flights" / "a.json", "../vehicle.json")).vehicle.name == "tug"


@pytest.mark.parametrize("has_project", [False, True])
def test_no_way_leads_out_of_the_project(tmp_path: Path, has_project: bool) -> None:
    written(tmp_path / "vehicle.json", json.dumps(VEHICLE))
    if has_project:
        (tmp_path / "project" / ".git").mkdir(parents=True)
    with pytest.raises(DesignFileError, match="within the project") as caught:
        read_design(referring(tmp_path / "project" / "a.json", "../vehicle.json"))
    assert caught.value.violations[0].pointer == "/vehicle"


def test_a_link_leads_out_of_the_project_no_more_than_a_path(tmp_path: Path) -> None:
    target = written(tmp_path / "vehicle.json", json.dumps(VEHICLE))
    path = referring(tmp_path / "project" / "a.json", "vehicle.json")
    (tmp_path / "project" / "vehicle.json").symlink_to(target)
    with pytest.raises(DesignFileError, match="within the project"):
        read_design(path)


def test_an_absolute_path_is_refused(tmp_path: Path) -> None:
    source = written(tmp_path / "vehicle.json", json.dumps(VEHICLE))
    with pytest.raises(DesignFileError, match="within the project"):
        read_design(referring(tmp_path / "a.json", str(source)))


def test_a_part_is_not_followed_any_further(tmp_path: Path) -> None:
    written(tmp_path / "b.json", '{"file": "c.json"}')
    with pytest.raises(DesignFileError, match="not followed"):
        read_design(referring(tmp_path / "a.json", "b.json"))


def test_a_part_that_is_not_there_is_told_where_the_design_names_it(tmp_path: Path) -> None:
    with pytest.raises(DesignFileError, match="cannot be read") as caught:
        read_design(referring(tmp_path / "a.json", "b.json"))
    assert caught.value.violations[0].pointer == "/vehicle"


def test_a_part_that_cannot_be_parsed_is_told_with_its_own_place(tmp_path: Path) -> None:
    source = written(tmp_path / "b.toml", "name =")
    with pytest.raises(DesignFileError) as caught:
        read_design(referring(tmp_path / "a.json", "b.toml"))
    assert (caught.value.path, caught.value.line) == (source, 1)


def test_a_reference_elsewhere_is_a_field_that_is_not_known(tmp_path: Path) -> None:
    design = {**DESIGN, "mission": {**MISSION, "start": {"file": "b.json"}}}
    with pytest.raises(ContractError) as caught:
        read_design(written(tmp_path / "a.json", json.dumps(design)))
    assert caught.value.violations[0].pointer == "/mission/start/kind"
