"""What planning a leg yields: manoeuvres, where the leg ends, and what is wrong with it."""

from typing import Literal

from msgspec import Struct

from burntally.model.budget import Caution, Finding, Manoeuvre, StrategyCost
from burntally.model.mission import Location

__all__ = ["Clock", "LegPlan", "PlanFinding", "PlannedManoeuvre", "unplanned"]


class Clock(Struct, frozen=True, kw_only=True):
    """When a leg starts.

    Attributes
    ----------
    elapsed : float
        Time since the mission's start, [s].
    epoch : str or None
        When the mission starts, UTC, as the design says.
    """

    elapsed: float = 0.0
    epoch: str | None = None


class PlannedManoeuvre(Struct, frozen=True, kw_only=True):
    """One ideal manoeuvre.

    Attributes
    ----------
    name : str
        What it does.
    body : str or None
        Body about which it is flown.
    place : str or None
        Where on the orbit.
    coast_before : float
        Time flown before it, since the manoeuvre before or the leg's start, [s].
    delta_v : float
        Ideal cost, [m/s].
    direction : tuple of float or None
        Unit vector (radial, transverse, normal) at the orbit before the burn.
    plane_change_deg : float or None
        Turn of the plane, [deg].
    purpose : str
        Whether it is a manoeuvre, or the upkeep of a coast, which lights no engine anew.
    """

    name: str
    body: str | None = None
    place: str | None = None
    coast_before: float = 0.0
    delta_v: float
    direction: tuple[float, float, float] | None = None
    plane_change_deg: float | None = None
    purpose: Literal["manoeuvre", "upkeep"] = "manoeuvre"


class PlanFinding(Struct, frozen=True, kw_only=True):
    """Something that is wrong with a leg, or worth knowing.

    Attributes
    ----------
    code, severity, message : str
        As in the contract's findings.
    suffix : str
        JSON Pointer below the leg to the field whose change would mend it; empty for the leg itself.
    value, limit : float or None
        The number found and the one that it is held against.
    unit : str or None
        Unit of both.
    """

    code: str
    severity: Literal["error", "warning", "note"] = "error"
    message: str
    suffix: str = ""
    value: float | None = None
    limit: float | None = None
    unit: str | None = None

    def told(self, pointer: str, *, branch: str | None = None, leg: int | None = None) -> Finding:
        """Tell it in the words of the contract, of the leg that a pointer leads to."""
        return Finding(
            code=self.code,
            severity=self.severity,
            message=self.message,
            pointer=pointer + self.suffix,
            value=self.value,
            limit=self.limit,
            unit=self.unit,
            branch=branch,
            leg=leg,
            remedies=[],
        )


class LegPlan(Struct, frozen=True, kw_only=True):
    """What a leg asks, and where it ends.

    Attributes
    ----------
    source : str
        Whether the cost was computed or stated, or the leg has none.
    manoeuvres : tuple of PlannedManoeuvre
        In order; a leg that could not be planned has none.
    coast_after : float
        Time flown after the last manoeuvre, [s].
    end : Location or None
        Where the leg ends; None where nobody can know.
    strategy : str or None
        Strategy taken.
    alternatives : tuple of StrategyCost
        Other ways that were weighed and would do.
    findings : tuple of PlanFinding
        Findings.
    cautions : tuple of Caution
        Bounds on what the plan is valid for.
    lowest_periapsis : float or None
        Least altitude that the leg passes; None where it was not computed, and for what is meant to come down, [m].
    """

    source: Literal["computed", "stated", "none"]
    manoeuvres: tuple[PlannedManoeuvre, ...] = ()
    coast_after: float = 0.0
    end: Location | None = None
    strategy: str | None = None
    alternatives: tuple[StrategyCost, ...] = ()
    findings: tuple[PlanFinding, ...] = ()
    cautions: tuple[Caution, ...] = ()
    lowest_periapsis: float | None = None

    @property
    def delta_v(self) -> float:
        """Sum of the ideal costs [m/s]."""
        total = 0.0
        for manoeuvre in self.manoeuvres:
            total += manoeuvre.delta_v
        return total

    @property
    def duration(self) -> float:
        """Time that the leg takes [s]."""
        total = self.coast_after
        for manoeuvre in self.manoeuvres:
            total += manoeuvre.coast_before
        return total

    def told_manoeuvres(self, began: float) -> list[Manoeuvre]:
        """Tell the manoeuvres in the words of the contract, each at its time in a leg that began at a time [s]."""
        told: list[Manoeuvre] = []
        time = began
        for manoeuvre in self.manoeuvres:
            time += manoeuvre.coast_before
            told.append(
                Manoeuvre(
                    name=manoeuvre.name,
                    body=manoeuvre.body,
                    place=manoeuvre.place,
                    time=time,
                    delta_v=manoeuvre.delta_v,
                    direction=None if manoeuvre.direction is None else list(manoeuvre.direction),
                    plane_change=manoeuvre.plane_change_deg,
                )
            )
        return told


def unplanned(finding: PlanFinding, end: Location | None = None) -> LegPlan:
    """Plan of a leg that cannot be planned; later legs go on from where it was meant to end, if that is known."""
    return LegPlan(source="computed", end=end, findings=(finding,))
