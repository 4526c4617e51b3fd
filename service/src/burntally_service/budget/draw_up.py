"""Drawing up a budget: the books of a design, explained."""

import functools
import hashlib
from collections.abc import Iterator
from importlib.metadata import version

import msgspec

from burntally.model.budget import Budget, Caution, Limiting, Provenance, TableUsed
from burntally.model.design import Design
from burntally_service.bodies import table_digest
from burntally_service.budget.drawing import Drawn, draw
from burntally_service.budget.findings import findings_of
from burntally_service.budget.leg_books import branch_books, limiting_mark, margin_of
from burntally_service.budget.presets import preset_digest
from burntally_service.budget.remedies import with_remedies
from burntally_service.budget.stage_books import deliveries, stage_books

__all__ = ["draw_up"]

NOTICE = (
    "Preliminary design estimate: not for flight safety, range safety, licensing or operations. Follow the range's and "
    "the authority's rules, and licensed practice."
)


def draw_up(design: Design, *, in_haste: bool = False) -> Budget:
    """Draw up the budget of a design.

    Parameters
    ----------
    design : Design
        The design, decoded and checked.
    in_haste : bool
        Whether to give up where closed forms do not suffice.

    Returns
    -------
    Budget
        Whether every burn can be paid, by whom, with what margin, and what is wrong.

    Raises
    ------
    burntally.model.errors.UncomputableError
        If the design names a preset or a body that is not known, or an orbit that is none.
    InconsistentError
        If the bodies of the mission contradict each other.
    NeedsTimeError
        In haste, where a slack must be searched for or a shortfall asks for remedies.
    """
    drawn = draw(design, in_haste=in_haste)
    findings = with_remedies(drawn, findings_of(drawn), in_haste=in_haste)
    faulty = {finding.branch for finding in findings if finding.severity == "error" and finding.branch is not None}
    margin, limiting = _margin(drawn)
    initial = drawn.initial_mass
    return Budget(
        closes=(margin is None or margin >= 0.0) and not any(finding.severity == "error" for finding in findings),
        margin=margin,
        limiting=limiting,
        initial_mass=initial,
        payload_fraction=_payload(drawn) / initial if initial > 0.0 else 0.0,
        branches=branch_books(drawn, faulty),
        stages=stage_books(drawn),
        deliveries=deliveries(drawn),
        findings=findings,
        cautions=_cautions(drawn),
        provenance=_provenance(design),
    )


def _margin(drawn: Drawn) -> tuple[float | None, Limiting | None]:
    """Least margin of the branches, and what holds it down."""
    least: float | None = None
    limiting = None
    for branch, plan in enumerate(drawn.branches):
        if plan is None:
            continue
        margin = margin_of(drawn, branch)
        if margin is not None and (least is None or margin < least):
            least = margin
            limiting = Limiting(branch=plan.name, leg=limiting_mark(drawn, branch))
    return least, limiting


def _payload(drawn: Drawn) -> float:
    """Payload aboard at the start, with its growth [kg]."""
    first = len(drawn.lowered.stages)
    aboard = [index for index, row in enumerate(drawn.lowered.tables.payloads) if row.aboard]
    mass = 0.0
    for item in drawn.lowered.tables.items:
        if item.part - first in aboard:
            mass += item.mass * item.count * (1.0 + item.growth)
    return mass


def _cautions(drawn: Drawn) -> list[Caution]:
    """Bounds on what the numbers are valid for, each once."""
    found = {caution.code: caution for caution in _leg_cautions(drawn)}
    return [Caution(code="preliminary", message=NOTICE), *found.values()]


def _leg_cautions(drawn: Drawn) -> Iterator[Caution]:
    """What the plans of the legs say, and what they leave out."""
    computed = False
    for plan in drawn.branches:
        for row in plan.legs if plan else ():
            yield from row.plan.cautions
            computed = computed or (row.plan.source == "computed" and row.plan.delta_v > 0.0)
    if computed:
        yield Caution(code="two-body", message="Computed manoeuvres are impulsive, about one point-mass body.")
    if computed and drawn.rules.finite_burn:
        message = "Losses of finite burns are not estimated; rules.finite_burn = false says that none are wanted."
        yield Caution(code="finite-burn-not-estimated", message=message)


@functools.cache
def _version() -> str:
    """Version of this service, read once, since reading it costs as much as a budget."""
    return version("burntally-service")


def _provenance(design: Design) -> Provenance:
    """What the budget was made from and by."""
    preset = design.rules.preset
    return Provenance(
        format=design.format,
        version=_version(),
        design_digest=hashlib.sha256(msgspec.json.encode(design, order="deterministic")).hexdigest(),
        preset=preset,
        preset_digest=None if preset is None else preset_digest(preset),
        tables=[TableUsed(name="bodies", digest=table_digest())],
    )
