"""One leg by itself, without a vehicle: what the transfer operation answers."""

from burntally.model.budget import Finding, Manoeuvre
from burntally.model.operations import TransferAnswer, TransferRequest
from burntally_service.bodies import system_of
from burntally_service.legs.orbit import check_start
from burntally_service.legs.plan import plan_leg
from burntally_service.legs.planned import Clock, LegPlan, PlanFinding

__all__ = ["transfer_of"]


def transfer_of(request: TransferRequest) -> TransferAnswer:
    """Plan one leg from a location.

    Parameters
    ----------
    request : TransferRequest
        The leg, where it starts, and the bodies.

    Returns
    -------
    TransferAnswer
        Its manoeuvres and what else was weighed; findings where it cannot be planned.

    Raises
    ------
    burntally.model.errors.UncomputableError
        If a body is unknown, or an orbit is none.
    burntally.model.errors.InconsistentError
        If the system of bodies contradicts itself.
    """
    bodies = system_of(request.system, pointer="/system")
    check_start(request.start, bodies, pointer="/start")
    plan = plan_leg(request.leg, request.start, bodies=bodies, clock=Clock(), pointer="/leg")
    planned = not any(finding.severity == "error" and not plan.manoeuvres for finding in plan.findings)
    return TransferAnswer(
        strategy=plan.strategy,
        delta_v=plan.delta_v if planned else None,
        duration=plan.duration if planned else None,
        manoeuvres=_manoeuvres(plan),
        alternatives=list(plan.alternatives),
        end=plan.end if planned else None,
        findings=[_finding(finding) for finding in plan.findings],
        cautions=list(plan.cautions),
    )


def _manoeuvres(plan: LegPlan) -> list[Manoeuvre]:
    """Tell the manoeuvres with their times since the first place of the leg."""
    told: list[Manoeuvre] = []
    time = 0.0
    for manoeuvre in plan.manoeuvres:
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


def _finding(finding: PlanFinding) -> Finding:
    """Point a finding into the request."""
    return Finding(
        code=finding.code,
        severity=finding.severity,
        message=finding.message,
        pointer=f"/leg{finding.suffix}",
        value=finding.value,
        limit=finding.limit,
        unit=finding.unit,
        remedies=[],
    )
