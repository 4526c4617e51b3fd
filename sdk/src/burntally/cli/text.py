"""A budget as a person reads it: verdict, ledger, stages, findings, and what all of it rests on.

Each part answers the question that the one before raises. Everything is read off the budget alone, so that text made
from a stored answer is the same as text made from a fresh one.
"""

from typing import Final

from burntally.cli.columns import grouped
from burntally.cli.findings import cautions_text, findings_text
from burntally.cli.ledger import ledger_text
from burntally.cli.stages import stages_text
from burntally.model.budget import BranchBook, Budget, Limiting, Provenance

__all__ = ["NOTICE", "render", "verdict"]

NOTICE: Final = (
    "Preliminary design estimates. Not for flight safety, range safety, licensing or operations; follow the range's\n"
    "and the authority's rules, and licensed practice."
)
_ORDER_OF_THE_BOOKS: Final = (
    "Order of the books: required + losses + contingency = charged, leg by leg; the reserve is held after the last\n"
    "charged leg of a branch; the margin is the least slack of any leg. A stage's delta-v is that of its usable load\n"
    "in the stack as first flown; what is left is usable propellant, residuals apart."
)
_PRELIMINARY: Final = "preliminary"
_DIGEST_SHOWN: Final = 12


def render(budget: Budget) -> str:
    """Write a budget for people.

    Parameters
    ----------
    budget : Budget
        As the service gave it.

    Returns
    -------
    str
        Lines of plain text, the verdict first; ends with a newline. Nothing depends on colour.
    """
    parts = [
        verdict(budget),
        *(_branch_text(budget, branch) for branch in budget.branches),
        stages_text(budget),
        findings_text(budget.findings),
        # The notice at the end says it to every reader, in the same words.
        cautions_text([caution for caution in budget.cautions if caution.code != _PRELIMINARY]),
        _provenance_text(budget.provenance),
        f"{_ORDER_OF_THE_BOOKS}\n{NOTICE}",
    ]
    return "\n\n".join(part for part in parts if part) + "\n"


def verdict(budget: Budget) -> str:
    """Say in one line whether the budget closes, by how much, and what holds it down.

    Parameters
    ----------
    budget : Budget
        As the service gave it.

    Returns
    -------
    str
        One line without a newline.
    """
    words = [_closing(closes=budget.closes, margin=budget.margin, errors=_errors(budget))]
    if budget.limiting is not None:
        owes = budget.margin is not None and budget.margin < 0.0
        words.append(f"{'first owed by' if owes else 'held down by'} {_place(budget, budget.limiting)}")
    return "; ".join(words)


def _errors(budget: Budget) -> int:
    return sum(1 for finding in budget.findings if finding.severity == "error")


def _closing(*, closes: bool, margin: float | None, errors: int = 0) -> str:
    head = "closes" if closes else "does not close"
    if errors and (margin is None or margin >= 0.0):
        # It is not for want of propellant, so say at once what it is for.
        head += f": {errors} error{'s' if errors > 1 else ''} below"
    if margin is None:
        return f"{head}, nothing to pay"
    # Below a metre per second a tenth would hide how near the line is.
    speed = grouped(abs(margin)) if abs(margin) >= 1.0 else f"{abs(margin):.3g}"
    return f"{head}, {speed} m/s {'to spare' if margin >= 0.0 else 'short'}"


def _place(budget: Budget, limiting: Limiting) -> str:
    """Name the leg that the margin hangs on, as its row in the ledger does."""
    branch = next(row for row in budget.branches if row.name == limiting.branch)
    where = f"branch {branch.name}, " if len(budget.branches) > 1 else ""
    if limiting.leg is None:
        return f"{where}the reserve"
    leg = branch.legs[limiting.leg]
    payers = ", ".join(dict.fromkeys(payer.stage for payer in leg.payers))
    return f"{where}leg {limiting.leg + 1}, {leg.name or leg.kind}" + (f", paid by {payers}" if payers else "")


def _branch_text(budget: Budget, branch: BranchBook) -> str:
    if branch.end_mass is None:
        return f"branch {branch.name}: never started"
    ledger = ledger_text(branch)
    if len(budget.branches) == 1:
        return ledger
    return f"branch {branch.name}: {_closing(closes=branch.closes, margin=branch.margin)}\n{ledger}"


def _provenance_text(provenance: Provenance) -> str:
    tables = ", ".join(f"{table.name} {table.digest[:_DIGEST_SHOWN]}" for table in provenance.tables)
    preset = f"preset {provenance.preset} {(provenance.preset_digest or '')[:_DIGEST_SHOWN]}".rstrip()
    rows = [
        ("rules", preset if provenance.preset else "the design's own"),
        ("tables", tables or "none"),
        ("design", f"format {provenance.format}, {provenance.design_digest[:_DIGEST_SHOWN]}"),
        ("service", provenance.version),
    ]
    return "\n".join(f"  {name:<7}  {what}" for name, what in rows)
