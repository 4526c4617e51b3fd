"""What each stage has, gave and keeps."""

from collections.abc import Callable, Sequence

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
    dry = [stage.dry_mass.allowable for stage in stages]
    loaded = _over_loads(stages, lambda load: load.loaded)
    in_kg = mass_decimals(max(loaded, default=0.0))
    thrust_to_weight = [_thrust_to_weight(budget, stage.name) for stage in stages]
    return line_up(
        [
            Column(head="stage", cells=[_name(stage) for stage in stages], is_words=True),
            _numbers("allowable dry", "kg", dry, decimals=mass_decimals(max(dry, default=0.0))),
            _numbers("loaded", "kg", loaded, decimals=in_kg),
            _numbers("burned", "kg", _over_loads(stages, lambda load: load.burned), decimals=in_kg),
            _numbers("left", "kg", _over_loads(stages, lambda load: load.left), decimals=in_kg),
            _numbers("delta-v", "m/s", [stage.delta_v.capability for stage in stages]),
            _numbers("spent", "m/s", [stage.delta_v.spent for stage in stages]),
            _numbers("kept", "m/s", [stage.delta_v.left for stage in stages]),
            _numbers("T/W at ignition", "local g", thrust_to_weight, decimals=2),
        ]
    )


def _name(stage: StageBook) -> str:
    return stage.name if stage.count == 1 else f"{stage.name}, each of {stage.count}"


def _numbers(head: str, unit: str, numbers: Sequence[float | None], *, decimals: int = 1) -> Column:
    return Column(head=head, unit=unit, cells=[grouped(number, decimals=decimals) for number in numbers])


def _over_loads(stages: list[StageBook], mass_of: Callable[[LoadBook], float]) -> list[float]:
    return [sum(mass_of(load) for load in stage.loads) for stage in stages]


def _thrust_to_weight(budget: Budget, stage: str) -> float | None:
    """Thrust over weight at the stage's first ignition, in whichever branch that is."""
    burns = [burn for branch in budget.branches for leg in branch.legs for burn in leg.burns if burn.stage == stage]
    first = min(burns, key=lambda burn: burn.time, default=None)
    return None if first is None else first.thrust_to_weight_ignition
