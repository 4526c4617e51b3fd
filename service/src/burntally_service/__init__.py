"""The service: equations, bodies, vehicles, legs, the ledger, and HTTP in front of them."""
