"""The commands: a client like any other."""
