"""A vehicle without a mission: what its parts weigh, how its engines burn its loads down, and what that gives."""
