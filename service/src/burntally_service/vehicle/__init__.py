"""A stack and how it burns: attached parts, propellant, engines lit, jettisons."""
