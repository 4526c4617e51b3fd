"""Physical values for the laws of orbits and rockets."""

import math

from hypothesis import strategies as st

from burntally_service.kernels.manoeuvres import Apsis

MU = st.floats(1e9, 1.4e20)
"""From a small moon to the Sun, [m3/s2]."""

RADIUS = st.floats(math.log(1e5), math.log(1e12)).map(math.exp)
"""Evenly in the logarithm, [m]."""

SPAN = st.floats(math.log(1e6), math.log(1e9)).map(math.exp)
"""Radii that one transfer may join without dwarfing each other, [m]."""

APSIS = st.builds(Apsis, SPAN, SPAN)
ANGLE = st.floats(0.0, math.pi)
V_EXHAUST = st.floats(500.0, 5e4)
MASS_RATIO = st.floats(1.0, 100.0)
MASS = st.floats(1e-3, 1e7)
