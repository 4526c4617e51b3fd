"""Equations as plain functions of floats, in coherent SI and radians, named after the textbook quantity.

A kernel neither raises nor logs: outside its domain it returns NaN. One value runs as plain Python; for many,
`burntally_service.kernels._compile` makes the compiled twin, which gives the same bits.
"""
