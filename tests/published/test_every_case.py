"""No published case lies about unused."""

from pathlib import Path

import pytest

from tests.published.cases import Case, all_cases

TESTS = "\n".join(path.read_text(encoding="utf-8") for path in Path(__file__).parent.glob("test_*.py"))


@pytest.mark.parametrize("case", list(all_cases()), ids=lambda case: case.id)
def test_a_test_holds_something_against_the_case(case: Case) -> None:
    assert f'"{case.id}"' in TESTS
