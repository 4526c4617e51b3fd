"""The texts that are compared whole; ``python -m tests.cli.golden_texts`` writes them anew, to be read before a commit.

They pin what is printed. That its figures are right is held elsewhere, against figures that others printed.
"""

import re
from collections.abc import Iterator
from contextlib import redirect_stdout
from io import StringIO
from pathlib import Path

from burntally.cli import main
from burntally.cli.text import render
from tests.cli import made_budgets

__all__ = ["EXAMPLES", "GOLDEN", "example_text", "made_text"]

GOLDEN = Path(__file__).parent / "golden"
EXAMPLES = sorted((Path(__file__).parents[2] / "sdk/examples").glob("*.*"))

_DIGEST = re.compile(r"\b[0-9a-f]{12}\b")


def made_text(name: str) -> str:
    """Render a budget made by hand."""
    return render(getattr(made_budgets, name)())


def example_text(path: Path) -> str:
    """Print what `burntally check` says of an example, digests apart: they change with every edit of a table."""
    with redirect_stdout(StringIO()) as stream:
        main(["check", str(path)])
    return _DIGEST.sub("(digest)", stream.getvalue())


def _texts() -> Iterator[tuple[Path, str]]:
    for name in made_budgets.__all__:
        yield GOLDEN / f"{name}.txt", made_text(name)
    for path in EXAMPLES:
        yield GOLDEN / "examples" / f"{path.name}.txt", example_text(path)


if __name__ == "__main__":
    for target, text in _texts():
        target.write_text(text, encoding="utf-8")
