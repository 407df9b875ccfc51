"""In-situ stress and primary settlement of a flooded ground with measured pore pressures, by a way
that shares nothing with the core: the state is looked up layer by layer with numpy's interpolation,
the strain follows the stress path in many small steps instead of a closed formula, and scipy
integrates it over depth.

Writes tests/reference/time/settlement_flooded.csv:

    python3 tests/oracle/settlement.py > tests/reference/time/settlement_flooded.csv
"""

import math

import numpy as np
from scipy import integrate, optimize

WATER = 9.81
WATER_TABLE = -1.5  # free water on the ground
POINTS = [(1.0, 24.525), (4.0, 58.0), (10.0, 122.0), (16.0, 165.0)]
# top, base, unit weight, law, preconsolidation
LAYERS = [
    (0.0, 2.5, 15.5, ("ratio", 0.30, 0.035), ("pop", 12.0)),
    (2.5, 8.0, 16.2, ("index", 1.5, 0.8, 0.09), ("value", 35.0)),
    (8.0, 11.0, 20.0, ("modulus", 30000.0), ("ocr", 1.0)),
    (11.0, 17.0, 17.5, ("ratio", 0.18, 0.02), ("ocr", 1.4)),
]
LOADED_DEPTH = 1.0
RADIUS = 12.0


def total(z):
    """Total stress: water on the ground and soil, by the trapezoidal rule over corner points."""
    depths, weights = [0.0], [WATER * -WATER_TABLE]
    for top, base, gamma, _, _ in LAYERS:
        depths.append(base)
        weights.append(weights[-1] + gamma * (base - top))
    return float(np.interp(z, depths, weights))


def pore(z):
    first, last = POINTS[0], POINTS[-1]
    if z < first[0]:
        return max(0.0, first[1] - WATER * (first[0] - z))
    if z > last[0]:
        return last[1] + WATER * (z - last[0])
    return float(np.interp(z, *zip(*POINTS)))


def effective(z):
    return total(z) - pore(z)


def layer_at(z):
    return next(layer for layer in LAYERS if z < layer[1] or layer is LAYERS[-1])


def preconsolidation(z):
    kind, value = layer_at(z)[4]
    s0 = effective(z)
    return {"pop": s0 + value, "ocr": s0 * value, "value": max(value, s0)}[kind]


def strain(z, increment):
    """Integrates the tangent compressibility along the stress path."""
    law, s0 = layer_at(z)[3], effective(z)
    s1 = s0 + increment
    if law[0] == "modulus":
        return increment / law[1]
    cr, rr = (law[1], law[2]) if law[0] == "ratio" else (law[2] / (1 + law[1]), law[3] / (1 + law[1]))
    sp = preconsolidation(z)

    def tangent(log_stress):
        return (rr if math.exp(log_stress) <= sp else cr) / math.log(10.0)

    ends = [math.log(s0), math.log(s1)]
    knee = math.log(sp)
    if min(ends) < knee < max(ends):
        ends.insert(1, knee)
    return sum(integrate.fixed_quad(np.vectorize(tangent), a, b, n=6)[0] for a, b in zip(ends, ends[1:]))


def increment(pressure):
    def at(z):
        return pressure * (1.0 - (1.0 + (RADIUS / (z - LOADED_DEPTH)) ** 2) ** -1.5)

    return at


def knees(at, top, base):
    """Depths where the stress path meets the preconsolidation pressure."""
    grid = np.linspace(top + 1e-9, base - 1e-9, 400)
    beyond = [effective(z) + at(z) - preconsolidation(z) for z in grid]
    return [
        optimize.brentq(lambda z: effective(z) + at(z) - preconsolidation(z), a, b, xtol=1e-13)
        for a, b, low, high in zip(grid, grid[1:], beyond, beyond[1:])
        if (low < 0) != (high < 0)
    ]


def settlement(pressure, top, base):
    at = increment(pressure)
    top = max(top, LOADED_DEPTH)
    cuts = {top, base, *(z for z, _ in POINTS), *knees(at, top, base)}
    # Where a constant preconsolidation pressure meets the in-situ stress.
    for layer_top, layer_base, _, _, (kind, value) in LAYERS:
        if kind == "value" and effective(layer_top) < value < effective(layer_base):
            cuts.add(optimize.brentq(lambda z: effective(z) - value, layer_top, layer_base, xtol=1e-13))
    cuts = sorted(z for z in cuts if top <= z <= base)
    # From a hair below the loaded level, where the increment divides by zero; its share is 1e-12 m.
    cuts[0] = max(cuts[0], LOADED_DEPTH + 1e-11)
    return sum(
        integrate.quad(lambda z: strain(z, at(z)), a, b, epsabs=1e-13, epsrel=1e-12, limit=200)[0]
        for a, b in zip(cuts, cuts[1:])
    )


def main():
    print("# Flooded ground with measured pore pressures: output of tests/oracle/settlement.py (numpy, scipy).")
    print("what,where,value")
    for z in (0.0, 0.5, 1.0, 2.0, 3.7, 6.0, 9.5, 12.0, 16.5):
        print(f"total_kpa,{z},{total(z)!r}")
        print(f"pore_kpa,{z},{pore(z)!r}")
        print(f"preconsolidation_kpa,{z},{preconsolidation(z)!r}")
    for pressure in (4.0, 35.0, 120.0, -3.0):
        for index, (top, base, *_) in enumerate(LAYERS):
            print(f"settlement_m_under_{pressure:g}_kpa,{index},{settlement(pressure, top, base)!r}")


if __name__ == "__main__":
    main()
