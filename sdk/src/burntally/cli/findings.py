"""What is wrong, doubtful or worth knowing, each with what would mend it."""

from collections.abc import Sequence
from typing import Final

from burntally.cli.columns import grouped, hang
from burntally.model.budget import Caution, Finding, Remedy

__all__ = ["cautions_text", "findings_text"]

_SEVERITIES: Final = ("error", "warning", "note")


def findings_text(findings: Sequence[Finding]) -> str:
    """Write the findings, errors first, with their remedies below them.

    Parameters
    ----------
    findings : sequence of Finding
        As the service gave them.

    Returns
    -------
    str
        Empty where there are none.
    """
    known = {severity: rank for rank, severity in enumerate(_SEVERITIES)}
    ranked = sorted(findings, key=lambda finding: known.get(finding.severity, len(known)))
    heads = _aligned([(finding.severity, finding.code, finding.pointer) for finding in ranked])
    told: set[str] = set()
    return "\n".join(
        line
        for head, finding in zip(heads, ranked, strict=True)
        for line in (*hang(head, finding.message), *_remedy_lines(finding.remedies, told))
    )


def _aligned(rows: Sequence[Sequence[str]]) -> list[str]:
    widths = [max(map(len, column)) for column in zip(*rows, strict=True)]
    return ["  " + "  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)) + "  " for row in rows]


def cautions_text(cautions: Sequence[Caution]) -> str:
    """Write the bounds on what the numbers are valid for.

    Parameters
    ----------
    cautions : sequence of Caution
        As the service gave them.

    Returns
    -------
    str
        Empty where there are none.
    """
    heads = _aligned([("caution", caution.code) for caution in cautions])
    return "\n".join(
        line for head, caution in zip(heads, cautions, strict=True) for line in hang(head, caution.message)
    )


def _remedy_lines(remedies: Sequence[Remedy], told: set[str]) -> list[str]:
    """Write remedies, each once: one change often mends several findings, and is one change all the same."""
    words = [_remedy(remedy) for remedy in remedies]
    new = [text for text in words if text not in told]
    told.update(new)
    again = ["      remedy: as above"] if words and not new else []
    return [line for text in new for line in hang("      remedy: ", text)] + again


def _remedy(remedy: Remedy) -> str:
    # The message holds the change itself; the field's old and new values would only say it again.
    then = "" if remedy.margin is None else f"; margin then {grouped(remedy.margin)} m/s"
    return f"{remedy.message} ({remedy.pointer}{then})"
