"""The image and the compose file give the service no more than it needs."""

import tomllib
from pathlib import Path
from typing import Any

import pytest
from ruamel.yaml import YAML

from burntally_service.api.settings import Settings


@pytest.fixture
def image(root: Path) -> str:
    """The image's recipe."""
    return (root / "docker/Dockerfile").read_text(encoding="utf-8")


@pytest.fixture
def compose(root: Path) -> dict[str, Any]:
    """The compose file, parsed."""
    parsed: dict[str, Any] = YAML(typ="safe").load(root / "docker/compose.yaml")
    return parsed


@pytest.fixture
def service(compose: dict[str, Any]) -> dict[str, Any]:
    """The one service of the compose file."""
    (only,) = compose["services"].values()
    found: dict[str, Any] = only
    return found


def test_the_image_installs_pinned_wheels_only(image: str) -> None:
    assert "--require-hashes --only-binary :all: -r requirements.txt" in image


def test_the_image_runs_as_an_unprivileged_user(image: str) -> None:
    assert "USER 10001:10001" in image


def test_image_and_compose_ask_for_health_alike(image: str, service: dict[str, Any]) -> None:
    probe = service["healthcheck"]["test"][-1]
    assert f'"{probe}"' in image.partition("HEALTHCHECK")[2]


def test_the_root_is_read_only_beside_scratch_space(service: dict[str, Any]) -> None:
    assert (service["read_only"], service["tmpfs"]) == (True, ["/tmp"])  # noqa: S108 - a place in the container


def test_no_privilege_is_held_or_gained(service: dict[str, Any]) -> None:
    assert (service["cap_drop"], service["security_opt"]) == (["ALL"], ["no-new-privileges:true"])


def test_one_named_volume_holds_all_that_lasts(compose: dict[str, Any], service: dict[str, Any]) -> None:
    assert (list(compose["volumes"]), service["volumes"]) == (["data"], ["data:/data"])


def test_only_this_machine_reaches_the_port(service: dict[str, Any]) -> None:
    assert all(port.startswith("127.0.0.1:") for port in service["ports"])


def test_a_stop_waits_longer_than_the_service_drains(service: dict[str, Any]) -> None:
    assert float(service["stop_grace_period"].removesuffix("s")) > Settings().drain_timeout_s


def test_compose_runs_the_version_that_is_built(root: Path, service: dict[str, Any]) -> None:
    version = tomllib.loads((root / "service/pyproject.toml").read_text(encoding="utf-8"))["project"]["version"]
    assert service["image"] == f"burntally:{version}"


def test_the_image_cannot_install_anything(image: str) -> None:
    assert "python3 -m venv --without-pip /opt/burntally" in image
