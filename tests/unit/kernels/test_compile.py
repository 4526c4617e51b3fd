"""The compiled gear: what it takes, what it keeps, and where it keeps it."""

import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path
from types import FunctionType
from typing import Any, NamedTuple

import numpy as np
import pytest

from burntally_service.kernels import rocket
from burntally_service.kernels._compile import cache_directory, compiled, kernel_digest
from burntally_service.kernels._records import records
from burntally_service.kernels.rocket import exhaust_speed, mixed_exhaust_speed


class Row(NamedTuple):
    mass: float
    speed: float


def momentum(rows: Any) -> float:
    total = 0.0
    for i in range(len(rows)):
        total += rows[i].mass * rows[i].speed
    return total


def twice_the_flow(thrust: float) -> float:
    return 2.0 * exhaust_speed(thrust)


def as_kernel(function: Any) -> FunctionType:
    """Pretend that a function was defined in the kernels package."""
    copy = FunctionType(function.__code__, function.__globals__, function.__name__)
    # A module that is there: what numba finds in its cache again, it loads by the name of its module.
    copy.__module__ = rocket.__name__
    return copy


@pytest.fixture
def fresh_cache() -> Iterator[None]:
    """Forget where machine code is kept, before and after."""
    cache_directory.cache_clear()
    yield
    cache_directory.cache_clear()


def test_a_kernel_has_one_twin() -> None:
    assert compiled(exhaust_speed) is compiled(exhaust_speed)


def test_a_twin_reads_rows_by_field() -> None:
    rows = [Row(2.0, 3.0), Row(5.0, 7.0)]
    assert compiled(as_kernel(momentum))(records(Row, rows)) == momentum(rows) == 41.0


def test_a_twin_takes_arrays_in_place_of_sequences() -> None:
    thrusts, speeds = [2e6, 1e6], [2800.0, 4300.0]
    twin: Callable[..., float] = compiled(mixed_exhaust_speed)
    assert twin(np.array(thrusts), np.array(speeds)) == mixed_exhaust_speed(thrusts, speeds)


def test_a_twin_calls_twins() -> None:
    assert compiled(as_kernel(twice_the_flow))(300.0) == 2.0 * exhaust_speed(300.0)


def test_the_kernel_itself_stays_plain() -> None:
    compiled(as_kernel(twice_the_flow))
    assert isinstance(rocket.exhaust_speed, FunctionType)


def test_what_is_no_kernel_is_refused() -> None:
    with pytest.raises(TypeError):
        compiled(momentum)


def test_records_have_a_float_for_each_field() -> None:
    assert records(Row, []).dtype == np.dtype([("mass", "f8"), ("speed", "f8")])


def test_records_keep_rows_in_order() -> None:
    assert records(Row, [Row(1.0, 2.0), Row(3.0, 4.0)])["speed"].tolist() == [2.0, 4.0]


@pytest.mark.usefixtures("fresh_cache")
def test_the_digest_names_the_cache(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    monkeypatch.setenv("NUMBA_CACHE_DIR", str(tmp_path))
    assert cache_directory() == tmp_path / kernel_digest()


@pytest.mark.parametrize("variable, below", [("XDG_CACHE_HOME", "burntally"), ("HOME", ".cache/burntally")])
@pytest.mark.usefixtures("fresh_cache")
def test_without_a_wish_the_users_cache_serves(
    monkeypatch: pytest.MonkeyPatch, tmp_path: Path, variable: str, below: str
) -> None:
    for name in ("NUMBA_CACHE_DIR", "XDG_CACHE_HOME", "HOME"):
        monkeypatch.delenv(name, raising=False)
    monkeypatch.setenv(variable, str(tmp_path))
    assert cache_directory() == tmp_path / below / kernel_digest()


@pytest.mark.usefixtures("fresh_cache")
def test_without_a_home_nothing_is_kept(monkeypatch: pytest.MonkeyPatch) -> None:
    for name in ("NUMBA_CACHE_DIR", "XDG_CACHE_HOME", "HOME"):
        monkeypatch.delenv(name, raising=False)
    assert cache_directory() is None


@pytest.mark.usefixtures("fresh_cache")
def test_where_nothing_can_be_written_nothing_is_kept(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    (tmp_path / "file").touch()
    monkeypatch.setenv("NUMBA_CACHE_DIR", str(tmp_path / "file"))
    assert cache_directory() is None


@pytest.mark.usefixtures("fresh_cache")
def test_without_a_cache_twins_still_work(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    (tmp_path / "file").touch()
    monkeypatch.setenv("NUMBA_CACHE_DIR", str(tmp_path / "file"))
    assert compiled(as_kernel(momentum))(records(Row, [Row(2.0, 3.0)])) == 6.0


def test_others_keep_their_numba_settings(tmp_path: Path) -> None:
    code = (
        "import numba; before = numba.config.CACHE_DIR\n"
        "from burntally_service.kernels._compile import compiled\n"
        "from burntally_service.kernels.rocket import exhaust_speed\n"
        "compiled(exhaust_speed)(1.0); print(numba.config.CACHE_DIR == before)"
    )
    done = subprocess.run(
        [sys.executable, "-c", code], env={"HOME": str(tmp_path)}, capture_output=True, text=True, check=True
    )
    assert done.stdout == "True\n"


def test_one_value_needs_no_numbers_library() -> None:
    code = (
        "import sys\n"
        "from burntally_service.kernels import transfers, _compile\n"
        "transfers.hohmann(4e14, 7e6, 4e7)\n"
        "print({'numpy', 'numba'} & {*sys.modules})"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout == "set()\n"
