"""TypeScript: a client is generated from the contract, compiles in the strictest mode, and is answered as recorded."""

import shutil
from pathlib import Path
from typing import Any

import msgspec
import pytest

from burntally_service.api.examples import answer_of
from tests.clients.conftest import CONTRACT, HERE, AsRecorded, Tools

JSON = "application/json"
FLAGS = ["--default-non-nullable=false", "--root-types", "--root-types-no-schema-prefix"]


def typed_examples(contract: dict[str, Any]) -> str:
    """The contract's examples as values of the generated types, so that the compiler holds one to the other."""
    lines = []
    for node in (node for methods in contract["paths"].values() for node in methods.values()):
        for content in (node.get("requestBody"), node["responses"]["200"]):
            for name, example in content["content"][JSON]["examples"].items() if content else ():
                type_ = content["content"][JSON]["schema"]["$ref"].rpartition("/")[2]
                value = msgspec.json.encode(example["value"]).decode()
                lines.append(f"export const {node['operationId']}_{name}: client.{type_} = {value};")
    return "\n".join(['import type * as client from "./burntally.ts";', *lines, ""])


@pytest.fixture(scope="module")
def project(tools: Tools, contract: dict[str, Any], tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("typescript")
    for name in ("golden.ts", "tsconfig.json", "package.json"):
        shutil.copy2(HERE / name, folder / name)
    (folder / "node_modules").symlink_to(tools.packages)
    (folder / "examples.ts").write_text(typed_examples(contract), encoding="utf-8")
    tools.node_tool("openapi-typescript", CONTRACT, "--output", folder / "burntally.ts", *FLAGS, folder=folder)
    return folder


@pytest.fixture(scope="module")
def told(tools: Tools, project: Path, address: str) -> dict[str, Any]:
    answered: dict[str, Any] = msgspec.json.decode(tools.node("golden.ts", address, folder=project))
    return answered


def test_a_program_and_all_examples_compile(tools: Tools, project: Path) -> None:
    assert tools.node_tool("tsc", "--project", project) == ""


class TestTypeScript(AsRecorded):
    """Its client reads what the service tells."""


def test_a_kind_of_location_is_told_by_its_tag(told: dict[str, Any]) -> None:
    end = answer_of("create_budget")["answer"]["value"]["branches"][0]["end"]
    assert told["height"] == pytest.approx(end.get("altitude", end.get("periapsis")), rel=1e-9)
