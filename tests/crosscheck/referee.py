"""Answers questions in poliastro's terms: a JSON list per line in, a JSON list per line out.

It runs in the referee's environment and shares no code with the project. SI and radians throughout.
"""

import json
import math
import sys
from typing import Any

import numpy as np
from astropy import units as u  # type: ignore[import-untyped]  # ships none
from poliastro.core.elements import coe2rv, rv2coe
from poliastro.core.flybys import compute_flyby
from poliastro.core.maneuver import bielliptic, hohmann
from poliastro.core.propagation import farnocchia
from poliastro.earth.atmosphere import COESA76

INCLINATION = 0.5
"""Of every first orbit, so that its node is defined; its line of apsides is its line of nodes."""


def state(mu: float, r_peri: float, r_apo: float, nu: float) -> tuple[Any, Any]:
    """Position and velocity on an ellipse."""
    ecc = (r_apo - r_peri) / (r_apo + r_peri)
    r, v = coe2rv(mu, r_peri * (1.0 + ecc), ecc, INCLINATION, 0.0, 0.0, nu)
    return r, v


def answer_hohmann(q: dict[str, Any]) -> dict[str, float]:
    """Cost and time of a Hohmann transfer from an apsis to a circle."""
    nu = 0.0 if q["r"] <= q["r_opposite"] else math.pi
    r, v = state(q["mu"], min(q["r"], q["r_opposite"]), max(q["r"], q["r_opposite"]), nu)
    first, second, tof = hohmann(q["mu"], (r, v), q["r_f"])
    return {"first": float(np.linalg.norm(first)), "second": float(np.linalg.norm(second)), "tof": float(tof)}


def answer_bielliptic(q: dict[str, Any]) -> dict[str, float]:
    """Cost and time of a bi-elliptic transfer between circles."""
    r, v = state(q["mu"], q["r_i"], q["r_i"], 0.0)
    *burns, tof_1, tof_2 = bielliptic(q["mu"], q["r_b"], q["r_f"], (r, v))
    costs = [float(np.linalg.norm(burn)) for burn in burns]
    return {"first": costs[0], "second": costs[1], "third": costs[2], "tof_1": float(tof_1), "tof_2": float(tof_2)}


def answer_flight(q: dict[str, Any]) -> dict[str, float]:
    """Where a row of burns leads: each is (transverse, normal, coast after it)."""
    nu = 0.0 if q["r"] <= q["r_opposite"] else math.pi
    r, v = state(q["mu"], min(q["r"], q["r_opposite"]), max(q["r"], q["r_opposite"]), nu)
    plane = np.cross(r, v)
    for transverse, normal, coast in q["burns"]:
        h = np.cross(r, v)
        out, up = r / np.linalg.norm(r), h / np.linalg.norm(h)
        v = v + transverse * np.cross(up, out) + normal * up
        if coast:
            r, v = farnocchia(q["mu"], r, v, coast)
    slr, ecc, *_ = rv2coe(q["mu"], r, v)
    h = np.cross(r, v)
    turned = math.atan2(np.linalg.norm(np.cross(plane, h)), np.dot(plane, h))
    energy = 0.5 * np.dot(v, v) - q["mu"] / np.linalg.norm(r)
    return {
        "r": float(np.linalg.norm(r)),
        "r_peri": float(slr / (1.0 + ecc)),
        "r_apo": float(slr / (1.0 - ecc)),
        "ecc": float(ecc),
        "energy": float(energy),
        "turned": float(turned),
    }


def answer_flyby(q: dict[str, Any]) -> dict[str, float]:
    """Turn of a pass."""
    v_inf, still = np.array([q["v_inf"], 0.0, 0.0]), np.array([0.0, 1.0, 0.0])
    _, turn = compute_flyby(v_inf + still, still, q["mu"], q["r_peri"], 0.0)
    return {"turn": float(turn)}


def answer_air(q: dict[str, Any]) -> dict[str, float]:
    """Air at a geometric altitude."""
    temperature, pressure, density = COESA76().properties(q["altitude"] * u.m)
    return {
        "temperature": temperature.to_value(u.K),
        "pressure": pressure.to_value(u.Pa),
        "density": density.to_value(u.kg / u.m**3),
    }


ANSWERS = {
    "hohmann": answer_hohmann,
    "bielliptic": answer_bielliptic,
    "flight": answer_flight,
    "flyby": answer_flyby,
    "air": answer_air,
}

for line in sys.stdin:
    sys.stdout.write(json.dumps([ANSWERS[question["kind"]](question) for question in json.loads(line)]) + "\n")
    sys.stdout.flush()
