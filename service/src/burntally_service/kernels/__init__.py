"""Equations: pure functions of floats, named as textbooks name the quantity."""
