"""The image as it is delivered, run as the compose file runs it, with no way out: what it holds, needs and may do."""

import json
import os
import re
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from tests.e2e.conftest import URL_VARIABLE
from tests.e2e.container import ROOT, URL, Container, compose_service, delivered, plain, podman

pytestmark = pytest.mark.release

# Measured: 541 MB, 0.9 to 1.5 s, 46 MiB. The bounds leave room for another machine, not for another architecture.
MOST_IMAGE_BYTES = 600_000_000
MOST_START_S = 3.0
MOST_IDLE_KIB = 80 * 1024

COMPILE = """
from burntally_service.kernels._compile import compiled
from burntally_service.kernels.rocket import exhaust_speed
twin = compiled(exhaust_speed)
assert twin(300.0) == exhaust_speed(300.0)
print(sum(twin.stats.cache_hits.values()))
"""
WRITABLE = """
import pathlib, tempfile
mounts = [line.split()[1] for line in open("/proc/mounts")]
folders = [folder for folder in mounts if pathlib.Path(folder).is_dir()]
for folder in sorted({*folders, "/", "/opt/burntally", "/var/tmp", "/run", "/etc"}):
    try:
        tempfile.TemporaryFile(dir=folder).close()
        print(folder)
    except OSError:
        pass
"""
INSTALLED = """
import importlib.metadata, json
print(json.dumps([[each.name, each.version] for each in importlib.metadata.distributions()]))
"""


@pytest.fixture(scope="module")
def running(image: str) -> Iterator[Container]:
    """A container that is ready and idle."""
    with Container.made(image) as container:
        container.start()
        yield container


def inspected(image: str) -> dict[str, Any]:
    (found,) = json.loads(podman("image", "inspect", image))
    known: dict[str, Any] = found
    return known


def test_the_suite_of_the_service_passes_against_it(running: Container) -> None:
    command = ["nsenter", f"--net=/proc/{running.pid}/ns/net", sys.executable, "-m", "pytest", "-q"]
    done = subprocess.run(
        [*command, "tests/e2e/test_service.py"],
        cwd=ROOT,
        env={**os.environ, URL_VARIABLE: URL},
        check=False,
        capture_output=True,
        text=True,
    )
    assert (done.returncode, "passed" in done.stdout) == (0, True), done.stdout


def test_its_first_process_is_an_unprivileged_user_for_good(running: Container) -> None:
    status = Path(f"/proc/{running.pid}/status").read_text(encoding="utf-8")
    held = dict(re.findall(r"^(Uid|Gid|CapPrm|CapEff|CapBnd|NoNewPrivs|Seccomp):\t(\w+)", status, flags=re.MULTILINE))
    none = "0" * 16
    wanted = {"Uid": "10001", "Gid": "10001", "CapPrm": none, "CapEff": none, "CapBnd": none}
    assert held == {**wanted, "NoNewPrivs": "1", "Seccomp": "2"}


def test_nothing_can_be_written_but_volume_and_scratch_space(running: Container) -> None:
    # The two below /dev are memory that every container has for its own processes.
    assert running.execute("python", "-c", WRITABLE).split() == ["/data", "/dev/mqueue", "/dev/shm", "/tmp"]  # noqa: S108 - places in the container


def test_there_is_no_way_out(running: Container) -> None:
    devices = running.execute("cat", "/proc/net/dev").splitlines()[2:]
    routes = running.execute("cat", "/proc/net/route").splitlines()[1:]
    assert ([line.split(":")[0].strip() for line in devices], routes) == (["lo"], [])


def test_it_is_healthy_once_it_is_ready(running: Container) -> None:
    podman("healthcheck", "run", running.name)


def test_it_is_unhealthy_where_nobody_answers(running: Container) -> None:
    probe = compose_service()["healthcheck"]["test"][1:]
    with pytest.raises(AssertionError, match="ConnectionRefusedError"):
        running.execute(*probe, variables={"BURNTALLY_PORT": "9"})


def test_compiled_kernels_are_kept_on_the_volume(running: Container) -> None:
    hits = [running.execute("python", "-c", COMPILE) for _ in range(2)]
    assert hits[0] == "0"
    assert int(hits[1]) > 0


def test_its_size_is_bounded(image: str) -> None:
    assert inspected(image)["Size"] < MOST_IMAGE_BYTES


def test_it_holds_what_the_requirements_pin_and_the_two_distributions(running: Container) -> None:
    found = json.loads(running.execute("python", "-c", INSTALLED))
    assert {plain(name): version for name, version in found} == delivered()


def test_nothing_of_the_machine_that_built_it_is_left(running: Container, image: str) -> None:
    variables = {entry.partition("=")[0] for entry in inspected(image)["Config"]["Env"]}
    own = {"PATH", "PYTHONDONTWRITEBYTECODE", "PYTHONUNBUFFERED", "NUMBA_CACHE_DIR", "BURNTALLY_HOST", "BURNTALLY_PORT"}
    assert variables == own
    places = "/etc/pip.conf", "/etc/xdg/pip", "/run/secrets", "/usr/local/share/ca-certificates", "/src", "/opt/pip"
    assert running.execute("sh", "-c", 'for path; do ! test -e "$path" || echo "$path"; done', "-", *places) == ""


def test_it_starts_within_seconds(image: str) -> None:
    with Container.made(image) as container:
        assert container.start() < MOST_START_S


def test_its_idle_memory_is_bounded(image: str) -> None:
    with Container.made(image) as container:
        container.start()
        rolled_up = [(folder / "smaps_rollup").read_text(encoding="utf-8") for folder in container.processes()]
    used = [int(kib) for text in rolled_up for kib in re.findall(r"^Pss:\s+(\d+) kB", text, flags=re.MULTILINE)]
    assert 0 < sum(used) < MOST_IDLE_KIB


def test_a_bad_setting_ends_it_and_is_named(image: str) -> None:
    with Container.made(image, variables={"BURNTALLY_BODY_TIMEOUT_S": "soon"}) as container:
        podman("start", container.name)
        assert podman("wait", container.name) != "0"
        assert "BURNTALLY_BODY_TIMEOUT_S" in container.log()


def test_a_setting_is_read_from_a_file(image: str, tmp_path: Path) -> None:
    # Without a line for each start in its log, it has read the file.
    (tmp_path / "level").write_text("error\n", encoding="utf-8")
    mounted = f"--volume={tmp_path / 'level'}:/run/level:ro"
    with Container.made(image, mounted, variables={"BURNTALLY_LOG_LEVEL_FILE": "/run/level"}) as container:
        container.start()
        assert container.log() == ""
