"""The ledger of a branch: what each leg asks, who pays, and how much more it could ask."""

from dataclasses import dataclass

from burntally.cli.columns import ABSENT, Column, grouped, line_up
from burntally.model.budget import BranchBook, LegBook, Payer, ReserveBook

__all__ = ["ledger_text"]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Row:
    """One line of the ledger, its numbers in m/s."""

    number: str = ""
    name: str
    required: float | None = None
    losses: float | None = None
    contingency: float | None = None
    charged: float | None = None
    paid_by: str = ""
    slack: float | None = None


def ledger_text(branch: BranchBook) -> str:
    """Write the ledger of one branch.

    Parameters
    ----------
    branch : BranchBook
        The branch's books.

    Returns
    -------
    str
        A line for each leg, one for their sum, and one for the reserve where there is one.
    """
    rows = [_leg_row(index, leg) for index, leg in enumerate(branch.legs)]
    rows.append(_sum_row(branch))
    if branch.reserve is not None and branch.reserve.charged > 0.0:
        rows.append(_reserve_row(branch.reserve))
    return line_up(_columns(rows))


def _columns(rows: list[_Row]) -> list[Column]:
    return [
        Column(head="", cells=[row.number for row in rows]),
        Column(head="leg", cells=[row.name for row in rows], is_words=True),
        Column(head="required", unit="m/s", cells=[grouped(row.required) for row in rows]),
        Column(head="losses", unit="m/s", cells=[grouped(row.losses) for row in rows]),
        Column(head="contingency", unit="m/s", cells=[grouped(row.contingency) for row in rows]),
        Column(head="charged", unit="m/s", cells=[grouped(row.charged) for row in rows]),
        Column(head="paid by", cells=[row.paid_by for row in rows], is_words=True),
        Column(head="slack", unit="m/s", cells=[grouped(row.slack) for row in rows]),
    ]


def _leg_row(index: int, leg: LegBook) -> _Row:
    number, name, paid_by = str(index + 1), leg.name or leg.kind, _paid_by(leg)
    if leg.charged == 0.0:
        return _Row(number=number, name=name, paid_by=paid_by)
    return _Row(
        number=number,
        name=name,
        required=leg.required,
        losses=_losses(leg),
        contingency=_contingency(leg) or None,
        charged=leg.charged,
        paid_by=paid_by,
        slack=leg.slack,
    )


def _sum_row(branch: BranchBook) -> _Row:
    losses = [loss for leg in branch.legs if (loss := _losses(leg)) is not None]
    return _Row(
        name="all legs",
        required=sum(leg.required for leg in branch.legs) or None,
        losses=sum(losses) if losses else None,
        contingency=sum(_contingency(leg) for leg in branch.legs) or None,
        charged=branch.charged or None,
        paid_by=_owed(branch.owed - (branch.reserve.owed if branch.reserve is not None else 0.0)),
    )


def _reserve_row(reserve: ReserveBook) -> _Row:
    return _Row(name="reserve", charged=reserve.charged, paid_by=_owed(reserve.owed), slack=reserve.slack)


def _losses(leg: LegBook) -> float | None:
    """Sum of the losses that were estimated; None where none was, which is not the same as no loss."""
    estimated = [loss for name in leg.losses.__struct_fields__ if (loss := getattr(leg.losses, name)) is not None]
    return sum(estimated) if estimated else None


def _contingency(leg: LegBook) -> float:
    return leg.contingency.fraction + leg.contingency.floor + leg.contingency.fixed


def _paid_by(leg: LegBook) -> str:
    """Say who paid: amounts only where one name would not tell, kilograms where no speed was charged."""
    if leg.charged == 0.0:
        cells = [f"{payer.stage} {grouped(payer.propellant)} kg" for payer in leg.payers]
    elif len(leg.payers) == 1 and leg.owed == 0.0:
        cells = [leg.payers[0].stage]
    else:
        cells = [_share(payer) for payer in leg.payers]
    return ", ".join([*cells, *filter(None, [_owed(leg.owed)])]) or ABSENT


def _share(payer: Payer) -> str:
    return f"{payer.stage} {grouped(payer.delta_v)}"


def _owed(owed: float) -> str:
    return f"owed {grouped(owed)}" if owed > 0.0 else ""
