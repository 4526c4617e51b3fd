"""Findings: what is wrong with a design, doubtful, or worth knowing, each told once."""

from collections.abc import Iterator

from burntally.model.budget import Finding
from burntally_service.budget.drawing import Drawn
from burntally_service.budget.limits import limit_findings, overfilled
from burntally_service.budget.notes import notes
from burntally_service.budget.shortfalls import shortfalls

__all__ = ["findings_of"]


def findings_of(drawn: Drawn) -> list[Finding]:
    """Everything that the books and the plan show, errors first.

    Parameters
    ----------
    drawn : Drawn
        The books.

    Returns
    -------
    list of Finding
        Without remedies; one for each leg and code, load and limit.
    """
    found: list[Finding] = [
        *_planned(drawn),
        *shortfalls(drawn),
        *overfilled(drawn),
        *limit_findings(drawn),
        *notes(drawn),
    ]
    order = {"error": 0, "warning": 1, "note": 2}
    unique: dict[tuple[str, str | None, int | None, str], Finding] = {}
    for finding in found:
        unique.setdefault(_identity(finding), finding)
    return sorted(unique.values(), key=lambda finding: order[finding.severity])


def _identity(finding: Finding) -> tuple[str, str | None, int | None, str]:
    """What two findings share that are told once: code and leg; for a part of the vehicle, code and pointer."""
    where = finding.pointer if finding.leg is None or finding.pointer.startswith("/vehicle") else ""
    return finding.code, finding.branch, finding.leg, where


def _planned(drawn: Drawn) -> Iterator[Finding]:
    """What planning a leg found."""
    for branch, plan in enumerate(drawn.branches):
        for row in plan.legs if plan else ():
            for found in row.plan.findings:
                yield found.told(row.pointer, branch=drawn.branch_name(branch), leg=row.index)
