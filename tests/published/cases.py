"""Published cases: read from their data files, and held against what the kernels say."""

from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Annotated, Any

import msgspec
import pytest
from msgspec import Meta, Struct

DATA = Path(__file__).parent / "data"

Words = Annotated[str, Meta(min_length=1)]


class Case(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """One case of a source; `erratum` tells what was printed wrongly."""

    id: Words
    title: Words
    source: Words
    inputs: dict[str, Any]
    expected: dict[str, Any]
    tolerance: Annotated[dict[str, float], Meta(min_length=1)]
    confidence: Words
    notes: str = ""
    erratum: str = ""

    def agree(self, computed: Mapping[str, Any], *, but: frozenset[str] = frozenset()) -> None:
        """Demand every expected figure within the tolerance of its unit, except those that are no answers."""
        assert computed.keys() == self.expected.keys() - but
        for key, value in computed.items():
            assert value == self._about(key), key

    def _about(self, key: str) -> Any:
        """Expected figure with its tolerance: an absolute one if there is one for its unit, else the relative one."""
        for unit in ("deg", "m"):
            if key.endswith(f"_{unit}") and f"absolute_{unit}" in self.tolerance:
                return pytest.approx(self.expected[key], abs=self.tolerance[f"absolute_{unit}"], rel=0.0)
        bound = self.tolerance.get("relative", self.tolerance.get("relative_arithmetic", 0.0))
        return pytest.approx(self.expected[key], rel=bound, abs=0.0)


class _File(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """A data file as a whole."""

    cases: list[Case]


def cases(name: str) -> dict[str, Case]:
    """Cases of a data file, by their ids."""
    text = (DATA / f"{name}.yaml").read_bytes()
    return {case.id: case for case in msgspec.yaml.decode(text, type=_File).cases}


def case_named(name: str, case_id: str) -> tuple[dict[str, Any], dict[str, Any], float]:
    """Inputs, expected figures and relative tolerance of one case of a data file."""
    case = cases(name)[case_id]
    return case.inputs, case.expected, case.tolerance["relative"]


def all_cases() -> Iterator[Case]:
    """Every case of every data file."""
    for path in sorted(DATA.glob("*.yaml")):
        yield from cases(path.stem).values()
