"""Delta-v and propellant budgets of multi-stage vehicles: the contract, the client and the commands."""
