"""Writes the answers of the examples anew: ``python -m burntally_service.api.examples``."""

from burntally_service.api.examples import rewrite_answers

if __name__ == "__main__":
    rewrite_answers()
