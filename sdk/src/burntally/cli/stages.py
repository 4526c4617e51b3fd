"""What each stage has, gave and keeps."""

from collections.abc import Callable

from burntally.cli.columns import Column, grouped, line_up, mass_decimals
from burntally.model.budget import Budget, LoadBook, StageBook

__all__ = ["stages_text"]


def stages_text(budget: Budget) -> str:
    """Write the table of stages; of a group of boosters, one unit.

    Parameters
    ----------
    budget : Budget
        As the service gave it.

    Returns
    -------
    str
        A line for each stage, in the order in which they ignite.
    """
    stages = budget.stages
    return line_up(
        [
            Column(head="stage", cells=[_name(stage) for stage in stages], is_words=True),
            _masses(stages, "allowable dry", lambda stage: stage.dry_mass.allowable),
            _masses(stages, "loaded", lambda stage: _over_loads(stage, lambda load: load.loaded)),
            _masses(stages, "burned", lambda stage: _over_loads(stage, lambda load: load.burned)),
            _masses(stages, "left", lambda stage: _over_loads(stage, lambda load: load.left)),
            _speeds(stages, "delta-v", lambda stage: stage.delta_v.capability),
            _speeds(stages, "spent", lambda stage: stage.delta_v.spent),
            _speeds(stages, "kept", lambda stage: stage.delta_v.left),
            Column(
                head="T/W at ignition",
                unit="local g",
                cells=[grouped(_thrust_to_weight(budget, stage.name), decimals=2) for stage in stages],
            ),
        ]
    )


def _name(stage: StageBook) -> str:
    return stage.name if stage.count == 1 else f"{stage.name}, each of {stage.count}"


def _masses(stages: list[StageBook], head: str, mass_of: Callable[[StageBook], float]) -> Column:
    masses = [mass_of(stage) for stage in stages]
    decimals = mass_decimals(max(map(abs, masses), default=0.0))
    return Column(head=head, unit="kg", cells=[grouped(mass, decimals=decimals) for mass in masses])


def _speeds(stages: list[StageBook], head: str, speed_of: Callable[[StageBook], float]) -> Column:
    return Column(head=head, unit="m/s", cells=[grouped(speed_of(stage)) for stage in stages])


def _over_loads(stage: StageBook, mass_of: Callable[[LoadBook], float]) -> float:
    return sum(mass_of(load) for load in stage.loads)


def _thrust_to_weight(budget: Budget, stage: str) -> float | None:
    """Thrust over weight at the stage's first ignition, in whichever branch that is."""
    burns = [burn for branch in budget.branches for leg in branch.legs for burn in leg.burns if burn.stage == stage]
    first = min(burns, key=lambda burn: burn.time, default=None)
    return None if first is None else first.thrust_to_weight_ignition
