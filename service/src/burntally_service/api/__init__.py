"""HTTP in front of the operations: no physics."""
