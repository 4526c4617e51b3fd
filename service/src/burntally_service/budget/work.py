"""Work: what a design asks for, known before anything of it is computed."""

from typing import Final

from burntally.model.design import Design
from burntally.model.errors import UncomputableError, Violation
from burntally.model.mission import Allowance, ChargedLeg, Leg, Transfer
from burntally_service.haste import NeedsTimeError

__all__ = ["MOST_AT_ONCE", "MOST_WORK", "check_work", "work_of"]

MOST_WORK: Final = 500_000
"""Most that a design may ask for, a second or two; the most legs and branches that there may be fit in, flown unsplit
by stages of one engine and one load."""

MOST_AT_ONCE: Final = 500
"""Most that is worth computing where a request arrived: a few milliseconds."""

_MOST_BURNS: Final = 3
"""Manoeuvres of a transfer that is computed, at most."""


def work_of(design: Design) -> int:
    """Estimate the work of drawing up a design, from above.

    One unit is what one engine and one load cost in one ignition, some microseconds. A branch is planned once the one
    before it was tallied, so that every leg is tallied once for each branch that there may be.

    Parameters
    ----------
    design : Design
        The design.

    Returns
    -------
    int
        Tallies times legs and ignitions times a stage with its engines and its loads.
    """
    mission = design.mission
    steps = sum(map(_steps_of, mission.legs))
    for branch in mission.branches:
        steps += sum(map(_steps_of, branch.legs))
    fattest = max(len(stage.engines) + len(stage.propellants) for stage in design.vehicle.stages)
    return (1 + len(mission.branches)) * steps * (2 + fattest)


def check_work(design: Design, *, in_haste: bool = False) -> None:
    """Refuse a design that asks for more work than a request may.

    Parameters
    ----------
    design : Design
        The design.
    in_haste : bool
        Whether others wait meanwhile.

    Raises
    ------
    UncomputableError
        It asks for more than `MOST_WORK`.
    NeedsTimeError
        In haste, where it asks for more than `MOST_AT_ONCE`.
    """
    work = work_of(design)
    if work > MOST_WORK:
        raise UncomputableError(
            [
                Violation(
                    pointer="/mission",
                    message="asks for more work than one request may: the legs of all branches, in so many ignitions",
                    read=f"{work} steps: (1 + branches) (legs + splits * manoeuvres) (2 + engines + loads of a stage)",
                    expected=f"at most {MOST_WORK} steps: fewer branches, legs or splits",
                )
            ]
        )
    if in_haste and work > MOST_AT_ONCE:
        raise NeedsTimeError


def _steps_of(leg: Leg) -> int:
    """Steps of a leg: itself, and each ignition of its manoeuvres."""
    if not isinstance(leg, ChargedLeg) or isinstance(leg, Allowance):
        return 2
    return 1 + leg.splits * (_MOST_BURNS if isinstance(leg, Transfer) and leg.delta_v is None else 1)
