"""Masses of parts: as written, with the growth of each item, and with the system contingency."""

from burntally.model.budget import DryMass
from burntally.model.rules import Rules
from burntally.model.vehicle import MassItem, MassList, Payload, Stage

__all__ = ["dry_mass_of", "growth_of", "has_uncovered_item", "items_of", "payload_mass_of"]


def items_of(masses: MassList) -> list[MassItem]:
    """List the items of a mass; a plain mass is one item that states neither growth nor maturity."""
    return masses if isinstance(masses, list) else [MassItem(name="", mass=masses)]


def growth_of(item: MassItem, rules: Rules, *, fallback: float | None = None) -> float | None:
    """Mass growth allowance of one item.

    Its own growth beats the rules' table at its maturity and class, which beats the table at the maturity alone, which
    beats the growth of whatever nothing else covers.

    Parameters
    ----------
    item : MassItem
        The item.
    rules : Rules
        Rules with their preset filled in.
    fallback : float or None
        Growth that the part gives to items that nothing else covers; absent: the rules', [-].

    Returns
    -------
    float or None
        Growth, [-]; None where nothing covers the item, which then does not grow.
    """
    if item.growth is not None:
        return item.growth
    tabulated = _tabulated(item, rules)
    if tabulated is not None:
        return tabulated
    return rules.mass_growth if fallback is None else fallback


def dry_mass_of(stage: Stage, rules: Rules) -> DryMass:
    """Dry mass of a stage as written, as predicted, and as allowed by the system contingency [kg]."""
    basic, predicted = _grown(stage.dry_mass, rules, stage.mass_growth)
    return DryMass(basic=basic, predicted=predicted, allowable=predicted * (1.0 + (rules.mass_contingency or 0.0)))


def payload_mass_of(payload: Payload, rules: Rules) -> float:
    """Mass of a payload with its growth; the system contingency is on stages alone [kg]."""
    return _grown(payload.mass, rules, None)[1]


def has_uncovered_item(masses: MassList, rules: Rules, *, fallback: float | None = None) -> bool:
    """Tell whether some item of a mass is covered by no growth, be it zero."""
    return any(growth_of(item, rules, fallback=fallback) is None for item in items_of(masses))


def _grown(masses: MassList, rules: Rules, fallback: float | None) -> tuple[float, float]:
    """Sum the basic and the predicted mass of a list."""
    basic = 0.0
    predicted = 0.0
    for item in items_of(masses):
        mass = item.mass * item.count
        basic += mass
        predicted += mass * (1.0 + (growth_of(item, rules, fallback=fallback) or 0.0))
    return basic, predicted


def _tabulated(item: MassItem, rules: Rules) -> float | None:
    """Look an item up at its maturity and class, then at its maturity alone."""
    if item.maturity is None:
        return None
    rows = [row for row in rules.growth_table if row.maturity == item.maturity]
    for class_ in (item.class_, None):
        for row in rows:
            if row.class_ == class_:
                return row.growth
    return None
