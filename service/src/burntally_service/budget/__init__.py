"""The budget: resolve, plan, lower, tally, explain."""

from burntally_service.budget.draw_up import draw_up

__all__ = ["draw_up"]
