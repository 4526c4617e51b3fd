"""The image, and containers of it as the compose file has them, run without an engine's daemon.

They have a network of their own with nothing but loopback in it. Who wants to ask them goes inside: `Container.inside`.
"""

import ctypes
import http.client
import importlib.metadata
import os
import re
import shutil
import subprocess
import time
import uuid
from collections.abc import Callable, Mapping
from concurrent.futures import ThreadPoolExecutor
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Final, Self, TypeVar

from ruamel.yaml import YAML

ROOT: Final = Path(__file__).parents[2]
PORT: Final = 8000
URL: Final = f"http://127.0.0.1:{PORT}"
_NEW_NETWORK: Final = 0x40000000  # CLONE_NEWNET of sched.h
_POLL_S: Final = 0.01
_T = TypeVar("_T")


def built_image() -> str:
    """Build the image of this checkout and give its name."""
    if os.geteuid() != 0:
        raise AssertionError("the image is built and run by the superuser")
    name = "localhost/burntally:test"
    subprocess.run([ROOT / "docker/build", name], check=True, capture_output=True, text=True)
    return name


def install_runner() -> None:
    """Install what runs containers, where it is not yet."""
    if shutil.which("podman") and shutil.which("runc"):
        return
    options = ["-o", "DPkg::Lock::Timeout=300", "-q", "-y", "--no-install-recommends"]
    subprocess.run(["apt-get", "update", "-q"], check=True, capture_output=True)
    subprocess.run(["apt-get", "install", *options, "podman", "runc"], check=True, capture_output=True)


def delivered() -> dict[str, str]:
    """Give name and version of every distribution that an installation on this system holds."""
    text = (ROOT / "requirements.txt").read_text(encoding="utf-8")
    pins = re.findall(r"^([\w.-]+)==(\S+)(?: ; (.+?))? \\$", text, flags=re.MULTILINE)
    elsewhere = re.compile(r"sys_platform == '(win32|emscripten)'|python_full_version >= '3.12'")
    own = {name: importlib.metadata.version(name) for name in ("burntally", "burntally-service")}
    return own | {name: version for name, version, marker in pins if not elsewhere.search(marker)}


def plain(name: str) -> str:
    """Give a distribution's name as requirements spell it."""
    return re.sub(r"[._]", "-", name).lower()


def podman(*arguments: str | Path) -> str:
    """Run a command that must succeed and give what it prints."""
    done = subprocess.run(["podman", *arguments], check=False, capture_output=True, text=True)
    if done.returncode:
        raise AssertionError(f"podman {arguments}: {done.stdout}{done.stderr}")
    return done.stdout.strip()


def compose_service() -> dict[str, Any]:
    """Give the one service of the compose file."""
    compose = YAML(typ="safe").load(ROOT / "docker/compose.yaml")
    (service,) = compose["services"].values()
    found: dict[str, Any] = service
    return found


def _options(volume: str) -> list[str]:
    """Give the compose file's restrictions as flags, and in place of its published port no network at all."""
    service = compose_service()
    flags = ["--user", service["user"], "--network", "none", "--volume", f"{volume}:/data"]
    flags += ["--read-only", "--read-only-tmpfs=false"] if service["read_only"] else []
    for flag, key in (("tmpfs", "tmpfs"), ("cap-drop", "cap_drop"), ("security-opt", "security_opt")):
        flags += [f"--{flag}={value}" for value in service[key]]
    flags += [f"--ulimit={name}={value}" for name, value in service["ulimits"].items()]
    # The runner's own timers need a service manager; tests run the check themselves.
    return [*flags, "--runtime", "runc", "--health-interval", "disable"]


def _enter(network: int) -> None:
    if ctypes.CDLL(None, use_errno=True).setns(network, _NEW_NETWORK):
        raise OSError(ctypes.get_errno(), "setns")


@dataclass(kw_only=True)
class Container:
    """One container with its volume, from its making to its removal."""

    name: str
    image: str

    @classmethod
    def made(cls, image: str, *arguments: str, variables: Mapping[str, str] | None = None) -> Self:
        """Make a container that is not started; further arguments are flags."""
        name = f"burntally-{uuid.uuid4().hex[:12]}"
        given = [f"--env={key}={value}" for key, value in (variables or {}).items()]
        podman("create", "--name", name, *_options(name), *given, *arguments, image)
        return cls(name=name, image=image)

    def __enter__(self) -> Self:
        """Leave it as it is."""
        return self

    def __exit__(self, *_: object) -> None:
        """Remove the container and its volume."""
        podman("rm", "--force", "--time", "0", self.name)
        podman("volume", "rm", "--force", self.name)

    def start(self) -> float:
        """Start it and wait until it is ready; give the seconds that this took."""
        started_at = time.monotonic()
        podman("start", self.name)
        while self.status_of("/readyz") != http.HTTPStatus.OK:
            if not self.pid:
                raise AssertionError(self.log())
            time.sleep(_POLL_S)
        return time.monotonic() - started_at

    def state(self, field: str) -> str:
        """Give a field of the runner's word on the container's state."""
        return podman("inspect", "--format", f"{{{{.State.{field}}}}}", self.name)

    @property
    def pid(self) -> int:
        """Id of its first process as this machine counts; 0 if there is none."""
        return int(self.state("Pid"))

    def log(self) -> str:
        """Give all that it has written."""
        done = subprocess.run(["podman", "logs", self.name], check=True, capture_output=True, text=True)
        return done.stdout + done.stderr

    def execute(self, *command: str, variables: Mapping[str, str] | None = None) -> str:
        """Run a command in it, as its user, and give what it prints."""
        given = [f"--env={key}={value}" for key, value in (variables or {}).items()]
        return podman("exec", *given, self.name, *command)

    def inside(self, call: Callable[[], _T]) -> _T:
        """Run a function in a thread that has entered the container's network, with the threads that it starts."""
        with (
            Path(f"/proc/{self.pid}/ns/net").open("rb") as network,
            ThreadPoolExecutor(1, initializer=_enter, initargs=(network.fileno(),)) as thread,
        ):
            return thread.submit(call).result()

    def status_of(self, path: str) -> int | None:
        """Ask for a page; None where nobody listens."""

        def ask() -> int | None:
            connection = http.client.HTTPConnection("127.0.0.1", PORT, timeout=10)
            try:
                connection.request("GET", path)
                return connection.getresponse().status
            except ConnectionRefusedError:
                return None
            finally:
                connection.close()

        return self.inside(ask)

    def processes(self) -> list[Path]:
        """Give the folders in /proc of all its processes."""
        own = Path(f"/proc/{self.pid}/ns/pid").readlink()
        found: list[Path] = []
        for folder in Path("/proc").glob("[0-9]*"):
            # A process may end meanwhile, or be closed even to the superuser.
            with suppress(FileNotFoundError, PermissionError):
                if (folder / "ns/pid").readlink() == own:
                    found.append(folder)
        return found
