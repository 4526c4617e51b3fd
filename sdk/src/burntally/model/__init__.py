"""The contract: every noun of a request and of an answer, written once."""
