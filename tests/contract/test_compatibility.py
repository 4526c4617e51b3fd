"""No breaking change slips in; and the gate itself notices breaks that were planted, and lets the rest pass."""

import copy
import json
import subprocess
from collections.abc import Callable
from pathlib import Path
from typing import Any, Final

import pytest

from tests.contract.compatibility import CONTRACT, RELEASED, ROOT, Break, Verdict, breaks, main

Document = dict[str, Any]
Edit = Callable[[Document], None]

SCHEMAS: Final = "/components/schemas"
BUDGETS: Final = "/paths/~1v1~1budgets/post"
BODY: Final = "/paths/~1v1~1bodies~1{name}/get"
ANSWER: Final = f"{BUDGETS}/responses/200"
MSGPACK: Final = "application~1msgpack"
REF: Final = "#/components/schemas/"


def place(document: Document, pointer: str) -> tuple[Any, Any]:
    """What holds the place that a pointer names, and the key in it."""
    node: Any = document
    *way, last = [step.replace("~1", "/").replace("~0", "~") for step in pointer.split("/")[1:]]
    for step in way:
        node = node[int(step)] if isinstance(node, list) else node[step]
    return node, int(last) if isinstance(node, list) else last


def put(pointer: str, value: Any) -> Edit:
    def edit(document: Document) -> None:
        node, key = place(document, pointer)
        node[key] = value

    return edit


def drop(pointer: str) -> Edit:
    def edit(document: Document) -> None:
        node, key = place(document, pointer)
        del node[key]

    return edit


def move(pointer: str, new_key: str) -> Edit:
    def edit(document: Document) -> None:
        node, key = place(document, pointer)
        node[new_key] = node.pop(key)

    return edit


def put_in(pointer: str, member: Any) -> Edit:
    def edit(document: Document) -> None:
        node, key = place(document, pointer)
        node.setdefault(key, []).append(member)

    return edit


def take_out(pointer: str, member: Any) -> Edit:
    def edit(document: Document) -> None:
        node, key = place(document, pointer)
        node[key].remove(member)

    return edit


def allow_null(pointer: str) -> Edit:
    def edit(document: Document) -> None:
        node, key = place(document, pointer)
        node[key] = {"anyOf": [node[key], {"type": "null"}]}

    return edit


def rename_component(document: Document) -> None:
    text = json.dumps(document["paths"]) + "\n" + json.dumps(document["components"])
    paths, components = text.replace(f"{REF}Flyby", f"{REF}Pass").split("\n")
    document |= {"paths": json.loads(paths), "components": json.loads(components)}
    document["components"]["schemas"]["Pass"] = document["components"]["schemas"].pop("Flyby") | {"title": "Pass"}


def write_component_out(document: Document) -> None:
    schemas = document["components"]["schemas"]
    schemas["Finding"]["properties"]["remedies"]["items"] = schemas.pop("Remedy")


def reorder_keys(document: Document) -> None:
    def reordered(node: Any) -> Any:
        if isinstance(node, dict):
            return {key: reordered(node[key]) for key in reversed(node)}
        return [reordered(item) for item in node] if isinstance(node, list) else node

    mixed = reordered(document)
    document.clear()
    document |= mixed


def both(*edits: Edit) -> Edit:
    def edit(document: Document) -> None:
        for each in edits:
            each(document)

    return edit


BREAKS: Final[dict[str, tuple[Edit, str]]] = {
    "operation removed": (drop("/paths/~1v1~1transfers/post"), "POST /v1/transfers"),
    "path removed": (drop("/paths/~1v1~1transfers"), "POST /v1/transfers"),
    "operation renamed": (put(f"{BUDGETS}/operationId", "budget"), "POST /v1/budgets"),
    "server moved": (put("/servers/0/url", "/v2"), "servers"),
    "token asked for": (
        both(
            put("/components/securitySchemes", {"token": {"type": "http", "scheme": "bearer"}}),
            put("/security", [{"token": []}]),
        ),
        "GET /v1/bodies",
    ),
    "parameter narrowed": (put(f"{BODY}/parameters/0/schema/maxLength", 8), "path name"),
    "parameter required": (
        put_in(f"{BODY}/parameters", {"name": "at", "in": "query", "required": True, "schema": {"type": "string"}}),
        "GET /v1/bodies/{name}",
    ),
    "parameter removed": (drop(f"{BODY}/parameters/0"), "GET /v1/bodies/{name}"),
    # Requests: what was accepted stays accepted.
    "request in fewer media types": (drop(f"{BUDGETS}/requestBody/content/{MSGPACK}"), "POST /v1/budgets request"),
    "request field removed": (drop(f"{SCHEMAS}/Engine/properties/exit_area"), "/engines/items/exit_area"),
    "request field required": (
        both(
            put(f"{SCHEMAS}/Vehicle/properties/owner", {"type": "string"}),
            put_in(f"{SCHEMAS}/Vehicle/required", "owner"),
        ),
        "/vehicle/owner",
    ),
    "known request field required": (put_in(f"{SCHEMAS}/Payload/required", "on"), "/payloads/items/on"),
    "bound lowered": (put(f"{SCHEMAS}/Load/properties/mass/anyOf/0/maximum", 10), "/propellants/items/mass"),
    "bound opened": (move(f"{SCHEMAS}/Load/properties/mass/anyOf/0/minimum", "exclusiveMinimum"), "/items/mass"),
    "fewer items": (put(f"{SCHEMAS}/Mission/properties/legs/maxItems", 3), "/mission/legs"),
    "items all different": (put(f"{SCHEMAS}/Mission/properties/legs/uniqueItems", value=True), "/mission/legs"),
    "integers only": (put(f"{SCHEMAS}/Load/properties/mass/anyOf/0/type", "integer"), "/propellants/items/mass"),
    "no texts": (drop(f"{SCHEMAS}/Load/properties/mass/anyOf/1"), "/propellants/items/mass"),
    "no null": (take_out(f"{SCHEMAS}/Flyby/properties/name/anyOf", {"type": "null"}), "/legs/items/name"),
    "choice removed": (take_out(f"{SCHEMAS}/Transfer/properties/strategy/enum", "hohmann"), "/legs/items/strategy"),
    "unit removed": (
        put(f"{SCHEMAS}/PressureText/pattern", r"^[0-9]+ ?(Pa|bar)$"),
        "POST /v1/performance request application/json /ambient_pressure",
    ),
    "unit changed": (put(f"{SCHEMAS}/Load/properties/mass/anyOf/0/x-unit", "g"), "/propellants/items/mass"),
    "meaning of absence changed": (put(f"{SCHEMAS}/Load/properties/residual_fraction/default", 0.1), "/residual_fract"),
    "values of a map narrowed": (
        put(f"{SCHEMAS}/Engine/properties/feeds/anyOf/0/additionalProperties/maximum", 1),
        "/engines/items/feeds/*",
    ),
    "keys of a map narrowed": (
        put(f"{SCHEMAS}/Engine/properties/feeds/anyOf/0/propertyNames/maxLength", 1),
        "/engines/items/feeds/propertyNames",
    ),
    "branch of a union removed": (take_out(f"{SCHEMAS}/Leg/oneOf", {"$ref": f"{REF}Flyby"}), "/mission/legs/items"),
    "inside a branch: bound lowered": (put(f"{SCHEMAS}/Flyby/properties/splits/maximum", 5), "/legs/items/splits"),
    "inside a branch: field required": (put_in(f"{SCHEMAS}/Flyby/required", "name"), "/legs/items/name"),
    "inside a branch: tag changed": (put(f"{SCHEMAS}/Flyby/properties/kind/const", "pass"), "/mission/legs/items"),
    # Answers: what is told can be read as before.
    "answer in fewer media types": (drop(f"{ANSWER}/content/{MSGPACK}"), "POST /v1/budgets 200"),
    "status changed": (move(f"{BUDGETS}/responses/200", "201"), "POST /v1/budgets"),
    "another success": (put(f"{BUDGETS}/responses/202", {"description": "Later."}), "POST /v1/budgets"),
    "problem's status changed": (move(f"{BUDGETS}/responses/422", "409"), "POST /v1/budgets answers"),
    "header removed": (drop(f"{ANSWER}/headers/ETag"), "POST /v1/budgets 200 ETag"),
    "header optional": (put("/components/headers/ETag/required", value=False), "200 ETag"),
    "answer's field removed": (
        both(drop(f"{SCHEMAS}/Budget/properties/closes"), take_out(f"{SCHEMAS}/Budget/required", "closes")),
        "200 application/json /closes",
    ),
    "answer's optional field removed": (drop(f"{SCHEMAS}/Finding/properties/limit"), "/findings/items/limit"),
    "answer's field optional": (take_out(f"{SCHEMAS}/Budget/required", "closes"), "200 application/json /closes"),
    "answer's field may be null": (allow_null(f"{SCHEMAS}/Budget/properties/margin"), "200 application/json /margin"),
    "answer's field of another kind": (put(f"{SCHEMAS}/Budget/properties/margin/type", "string"), "/margin"),
    "answer's number in another unit": (put(f"{SCHEMAS}/SiteAnswer/properties/altitude/x-unit", "km"), "/altitude"),
    "answer's bound raised": (put(f"{SCHEMAS}/Budget/properties/margin/maximum", 1e305), "/margin"),
    "answer's choice added": (put_in(f"{SCHEMAS}/Finding/properties/severity/enum", "fatal"), "/items/severity"),
    "branch of an answer's union added": (
        put_in(f"{SCHEMAS}/LocationAnswer/oneOf", {"$ref": f"{REF}Limiting"}),
        "/end",
    ),
    "inside an answer's branch: field removed": (drop(f"{SCHEMAS}/SiteAnswer/properties/longitude"), "/longitude"),
    "problem's field removed": (
        both(drop(f"{SCHEMAS}/Problem/properties/errors"), take_out(f"{SCHEMAS}/Problem/required", "errors")),
        "400 application/problem+json /errors",
    ),
}

COMPATIBLE: Final[dict[str, Edit]] = {
    "nothing": both(),
    "new operation": put("/paths/~1v1~1ascents", {"get": {"operationId": "list_ascents", "responses": {}}}),
    "new media type": put(f"{BUDGETS}/requestBody/content/application~1cbor", {"schema": {"$ref": f"{REF}Design"}}),
    "new answer in another media type": put(f"{ANSWER}/content/text~1html", {"schema": {"type": "string"}}),
    "new optional parameter": put_in(f"{BODY}/parameters", {"name": "at", "in": "query", "schema": {"type": "string"}}),
    "token taken as well": both(
        put("/components/securitySchemes", {"token": {"type": "http", "scheme": "bearer"}}),
        put("/security", [{}, {"token": []}]),
    ),
    "new problem": put(f"{BUDGETS}/responses/451", {"description": "Not here."}),
    "new header": put(f"{ANSWER}/headers/X-Work", {"description": "Work.", "schema": {"type": "integer"}}),
    "new optional request field": put(f"{SCHEMAS}/Vehicle/properties/owner", {"type": "string"}),
    "request field optional": take_out(f"{SCHEMAS}/Deorbit/required", "periapsis"),
    "bound raised": put(f"{SCHEMAS}/Load/properties/mass/anyOf/0/maximum", 1e12),
    "bound closed": move(f"{SCHEMAS}/Engine/properties/thrust/anyOf/0/exclusiveMinimum", "minimum"),
    "any number": put(f"{SCHEMAS}/Flyby/properties/splits/type", "number"),
    "null allowed": allow_null(f"{SCHEMAS}/Engine/properties/isp"),
    "choice added": put_in(f"{SCHEMAS}/Transfer/properties/strategy/enum", "three_burns"),
    "branch of a union added": put_in(f"{SCHEMAS}/Leg/oneOf", {"$ref": f"{REF}Limiting"}),
    "unit added": lambda document: document["components"]["schemas"]["MassText"].update(
        pattern=document["components"]["schemas"]["MassText"]["pattern"].replace("(kg|", "(kg|lb|")
    ),
    "answer's new field": both(
        put(f"{SCHEMAS}/Budget/properties/mood", {"type": "string"}), put_in(f"{SCHEMAS}/Budget/required", "mood")
    ),
    "answer's field always there": put_in(f"{SCHEMAS}/Finding/required", "limit"),
    "answer's bound lowered": put(f"{SCHEMAS}/Budget/properties/margin/maximum", 1e6),
    "answer's choice removed": take_out(f"{SCHEMAS}/Finding/properties/severity/enum", "note"),
    "other words": both(put(f"{SCHEMAS}/Budget/description", "Other words."), put(f"{BUDGETS}/summary", "Other words")),
    "other examples": drop(f"{BUDGETS}/requestBody/content/application~1json/examples/numbers"),
    "keys in another order": reorder_keys,
    "branches in another order": lambda document: document["components"]["schemas"]["Leg"]["oneOf"].reverse(),
    "component renamed": rename_component,
    "component written out": write_component_out,
}


@pytest.fixture(scope="module")
def old() -> Document:
    document: Document = json.loads((ROOT / CONTRACT).read_text(encoding="utf-8"))
    return document


@pytest.mark.parametrize("name", BREAKS)
def test_a_planted_break_is_caught_where_it_is(name: str, old: Document) -> None:
    edit, where = BREAKS[name]
    new = copy.deepcopy(old)
    edit(new)
    assert [found for found in breaks(old, new) if where in found.where]


@pytest.mark.parametrize("name", COMPATIBLE)
def test_a_compatible_change_passes(name: str, old: Document) -> None:
    new = copy.deepcopy(old)
    COMPATIBLE[name](new)
    assert list(breaks(old, new)) == []


def test_a_break_inside_a_branch_is_told_with_both_its_ends(old: Document) -> None:
    new = copy.deepcopy(old)
    new["components"]["schemas"]["Flyby"]["properties"]["splits"]["maximum"] = 5
    place = "POST /v1/budgets request application/json /mission/legs/items/splits"
    assert f"{place}: maximum: maximum 50 before, maximum 5 now" in {str(each) for each in breaks(old, new)}


def test_a_lost_branch_is_told_by_its_name(old: Document) -> None:
    new = copy.deepcopy(old)
    new["components"]["schemas"]["Leg"]["oneOf"].remove({"$ref": f"{REF}Flyby"})
    place = "POST /v1/budgets request application/json /mission/legs/items"
    assert f"{place}: branch: Flyby before, nothing now" in {str(each) for each in breaks(old, new)}


@pytest.mark.parametrize(
    "old_version,new_version,is_owned_up_to",
    [
        ("0.1.0", "0.1.0", False),
        ("0.1.0", "0.1.9", False),
        ("0.1.0", "0.2.0", True),
        ("0.9.0", "1.0.0", True),
        ("1.0.0", "1.1.0", False),
        ("1.9.0", "2.0.0", True),
    ],
)
def test_a_break_asks_for_a_version_that_says_so(old_version: str, new_version: str, is_owned_up_to: bool) -> None:
    found = (Break(where="POST /v1/budgets", what="the operation is gone"),)
    assert Verdict(old=old_version, new=new_version, breaks=found).is_owned_up_to is is_owned_up_to


def test_what_breaks_nothing_asks_for_no_version() -> None:
    assert Verdict(old="1.0.0", new="1.0.0", breaks=()).is_owned_up_to


def test_the_contract_keeps_to_the_last_release(capsys: pytest.CaptureFixture[str]) -> None:
    assert main([]) == 0, capsys.readouterr().out


@pytest.fixture
def checkout(tmp_path: Path, old: Document) -> Path:
    """A repository whose tagged contract breaks in the commit after it."""
    folder = tmp_path / "checkout"
    git(tmp_path, "init", "-q", str(folder))
    commit(folder, old)
    git(folder, "tag", "v0.1.0")
    new = copy.deepcopy(old)
    del new["paths"]["/v1/transfers"]
    commit(folder, new)
    return folder


def commit(folder: Path, document: Document) -> None:
    (folder / CONTRACT).parent.mkdir(exist_ok=True)
    (folder / CONTRACT).write_text(json.dumps(document), encoding="utf-8")
    git(folder, "add", ".")
    git(folder, "-c", "user.name=x", "-c", "user.email=x@example.org", "commit", "-q", "-m", "a contract")


def git(folder: Path, *arguments: str) -> None:
    subprocess.run(["git", *arguments], cwd=folder, check=True)


def test_a_break_since_the_last_tag_is_told_and_fails(checkout: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main([], checkout) == 1
    assert capsys.readouterr().out.splitlines()[0] == "POST /v1/transfers: the operation is gone"


def test_the_tag_of_the_commit_itself_is_not_what_it_is_held_to(checkout: Path) -> None:
    git(checkout, "tag", "v0.2.0")
    assert main([], checkout) == 1


def test_without_a_tag_the_copy_is_what_it_is_held_to(checkout: Path, old: Document) -> None:
    git(checkout, "tag", "-d", "v0.1.0")
    (checkout / RELEASED).write_text(json.dumps(old), encoding="utf-8")
    assert main([], checkout) == 1


def test_a_copy_that_is_not_what_was_tagged_is_no_measure(checkout: Path, old: Document) -> None:
    (checkout / RELEASED).write_text(json.dumps(old | {"tags": []}), encoding="utf-8")
    with pytest.raises(ValueError, match="is not the contract that was tagged"):
        main([], checkout)


def test_before_the_first_release_there_is_nothing_to_keep_to(
    checkout: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    git(checkout, "tag", "-d", "v0.1.0")
    assert main([], checkout) == 0
    assert capsys.readouterr().out.startswith("nothing has been released")


def test_two_files_can_be_compared(checkout: Path, tmp_path: Path, old: Document) -> None:
    (tmp_path / "old.json").write_text(json.dumps(old), encoding="utf-8")
    assert main([str(tmp_path / "old.json"), str(checkout / CONTRACT)]) == 1
