"""From a design to its budget: resolve, plan, lower, tally, explain."""
