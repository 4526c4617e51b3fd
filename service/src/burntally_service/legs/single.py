"""One leg by itself, without a vehicle: what the transfer operation answers."""

from burntally.model.operations import TransferAnswer, TransferRequest
from burntally_service.bodies import system_of
from burntally_service.legs.orbit import check_start
from burntally_service.legs.plan import plan_leg
from burntally_service.legs.planned import Clock

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
        manoeuvres=plan.told_manoeuvres(0.0),
        alternatives=list(plan.alternatives),
        end=plan.end if planned else None,
        findings=[finding.told("/leg") for finding in plan.findings],
        cautions=list(plan.cautions),
    )
