"""Rules with their preset filled in, and which rule a leg takes."""

from msgspec import UNSET, structs

from burntally.model.errors import UncomputableError
from burntally.model.names import unknown_name
from burntally.model.rules import Contingency, Limits, Rules
from burntally_service.budget.presets import preset_names, preset_rules

__all__ = ["no_rule", "resolve", "rule_for"]

_FALLING_BACK = ("mass_growth", "mass_contingency", "residual_fraction", "reserve")
"""Rules that are the preset's unless they are stated, be it as zero."""


def resolve(rules: Rules, *, pointer: str = "/rules") -> Rules:
    """Fill a preset into rules: a stated rule replaces the preset's rule of the same category whole.

    Parameters
    ----------
    rules : Rules
        Rules as a request states them.
    pointer : str
        Where they stand in the request.

    Returns
    -------
    Rules
        The same, with everything filled in that the preset states and the request does not.

    Raises
    ------
    UncomputableError
        If no preset has the name.
    """
    if rules.preset is None:
        return rules
    preset = preset_rules(rules.preset)
    if preset is None:
        violation = unknown_name("preset", rules.preset, known=preset_names(), pointer=f"{pointer}/preset")
        raise UncomputableError([violation])
    stated = {rule.category for rule in rules.contingency}
    inherited = [rule for rule in preset.contingency if rule.category not in stated]
    return structs.replace(
        rules,
        contingency=[*rules.contingency, *inherited],
        growth_table=rules.growth_table or preset.growth_table,
        limits=_merged_limits(rules.limits, preset.limits),
        **{name: getattr(preset, name) for name in _FALLING_BACK if getattr(rules, name) is None},
    )


def _merged_limits(stated: Limits | None, preset: Limits | None) -> Limits | None:
    """Limits of the preset, each replaced or lifted where the request states it."""
    if stated is None or preset is None:
        return preset if stated is None else stated
    merged = {
        name: getattr(preset, name) if getattr(stated, name) is UNSET else getattr(stated, name)
        for name in Limits.__struct_fields__
    }
    return Limits(**merged)


def rule_for(category: str, rules: Rules) -> int:
    """Index of the rule whose category is the longest front of a leg's category; -1 without one."""
    front = category
    while front:
        for index, rule in enumerate(rules.contingency):
            if rule.category == front:
                return index
        front = front.rpartition(".")[0]
    return -1


def no_rule() -> Contingency:
    """Rule that adds nothing, for a category that no rule covers."""
    return Contingency(category="none")
