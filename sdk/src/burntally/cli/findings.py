"""What is wrong, doubtful or worth knowing, each with what would mend it."""

from collections.abc import Sequence
from typing import Final

from burntally.cli.columns import grouped
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
    lines = [
        [f"  {head}  {finding.message}", *map(_remedy, finding.remedies)]
        for head, finding in zip(heads, ranked, strict=True)
    ]
    return "\n".join(line for block in lines for line in block)


def _aligned(rows: Sequence[Sequence[str]]) -> list[str]:
    widths = [max(map(len, column)) for column in zip(*rows, strict=True)]
    return ["  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)) for row in rows]


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
    return "\n".join(f"  {head}  {caution.message}" for head, caution in zip(heads, cautions, strict=True))


def _remedy(remedy: Remedy) -> str:
    then = "" if remedy.margin is None else f"; margin then {grouped(remedy.margin)} m/s"
    return f"      remedy: {remedy.message} ({remedy.pointer}: {_field(remedy.from_)} -> {_field(remedy.to)}{then})"


def _field(value: float | str | bool | None) -> str:  # noqa: FBT001 -- a field's own value, not a switch
    if value is None:
        return "absent"
    if isinstance(value, bool):
        return str(value).lower()
    return f"{value:.10g}" if isinstance(value, float) else str(value)
