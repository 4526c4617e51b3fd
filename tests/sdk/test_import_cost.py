"""What an import costs: a process of its own, since this one has loaded everything."""

import subprocess
import sys
from pathlib import Path

import pytest

HEAVY = "numpy", "astropy", "numba", "httpx2", "litestar", "asyncio"


def run(code: str) -> str:
    return subprocess.run([sys.executable, "-c", code], check=True, capture_output=True, text=True).stdout.strip()


@pytest.mark.parametrize("first", ["burntally", "burntally.client", "burntally.cli", "burntally.cli.text"])
def test_an_import_loads_nothing_heavy(first: str) -> None:
    assert run(f"import sys, {first}; print([name for name in {HEAVY} if name in sys.modules])") == "[]"


def test_the_whole_sdk_imports_within_200_ms_of_cpu() -> None:
    """The best of five: what a busy machine adds is not the SDK's."""
    code = "from time import process_time as t; start = t(); import burntally; burntally.connect; print(t() - start)"
    assert min(float(run(code)) for _ in range(5)) < 0.2


def test_telling_the_version_imports_no_contract() -> None:
    code = (
        "import sys\nfrom burntally.cli import main\nassert main(['--version']) == 0\nprint('msgspec' in sys.modules)"
    )
    assert run(code).splitlines()[-1] == "False"


def test_a_check_in_process_loads_nothing_that_it_does_not_need(tmp_path: Path) -> None:
    """A whole budget, and neither the HTTP library nor a numbers library."""
    from burntally_service.api.examples import example_bytes

    (tmp_path / "design.json").write_bytes(example_bytes("create_budget"))
    code = (
        "import sys\nfrom burntally.cli import main\n"
        f"main(['check', {str(tmp_path / 'design.json')!r}])\n"
        f"print([name for name in {HEAVY} if name in sys.modules])"
    )
    assert run(code).splitlines()[-1] == "[]"
