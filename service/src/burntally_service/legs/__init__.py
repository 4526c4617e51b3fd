"""One module per kind of leg: which manoeuvres it needs from a location."""
