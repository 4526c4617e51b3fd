"""Python without the SDK: a client is generated from the contract, its types hold, and it is answered as recorded."""

import shutil
import sys
from pathlib import Path
from typing import Any

import msgspec
import pytest

from burntally_service.api.examples import requests_of
from burntally_service.operations import OPERATIONS
from tests.clients.conftest import CONTRACT, HERE, ROOT, AsRecorded, Tools, run

SETTINGS = """\
project_name_override: burntally
package_name_override: burntally_client
post_hooks: []
"""


@pytest.fixture(scope="module")
def project(tools: Tools, tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("python")
    shutil.copy2(HERE / "golden.py", folder / "golden.py")
    (folder / "settings.yaml").write_text(SETTINGS, encoding="utf-8")
    options: dict[str, str | Path] = {
        "--path": CONTRACT,
        "--config": folder / "settings.yaml",
        "--meta": "none",
        "--output-path": folder / "burntally_client",
    }
    arguments = [part for option in options.items() for part in option]
    said = run(tools.python, "-m", "openapi_python_client", "generate", *arguments)
    (folder / "said").write_text(said, encoding="utf-8")
    return folder


@pytest.fixture(scope="module")
def told(tools: Tools, project: Path, address: str) -> dict[str, Any]:
    said = run(tools.python, "-W", "error", "golden.py", address, CONTRACT, folder=project)
    answered: dict[str, Any] = msgspec.json.decode(said)
    return answered


def test_the_generator_leaves_out_nothing_but_messagepack(project: Path) -> None:
    said = (project / "said").read_text(encoding="utf-8").splitlines()
    complaints = [line for line in said if line.startswith(("WARNING", "ERROR", "Unsupported", "Cannot", "Could"))]
    bodies = [row.path for row in OPERATIONS.values() if row.takes_body]
    parsing = [f"WARNING parsing POST {path} within {path.rpartition('/')[2]}." for path in bodies]
    unsupported = ["Unsupported content type application/msgpack"] * len(bodies)
    assert sorted(complaints) == sorted([*parsing, *unsupported])


def test_a_program_and_the_whole_client_type_check(tools: Tools, project: Path) -> None:
    mypy = [sys.executable, "-m", "mypy", "--strict", "--config-file=", f"--python-executable={tools.python}"]
    cache = f"--cache-dir={ROOT / '.mypy_cache' / 'clients'}"
    run(*mypy, cache, "golden.py", "burntally_client", folder=project)


class TestPython(AsRecorded):
    """Its client reads what the service tells."""


def test_a_design_is_written_as_it_was_read(told: dict[str, Any]) -> None:
    assert told["read_again"] == requests_of("create_budget")["tug"]["value"]


def test_a_leg_is_built_from_the_clients_own_types(told: dict[str, Any]) -> None:
    leg = {"kind": "transfer", "to": {"altitude": "1200 km"}, "strategy": "hohmann", "time_limit": 5400}
    assert told["built"] == leg | {"splits": 1}
