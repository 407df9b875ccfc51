"""Settlement on sand by strain influence factors (Schmertmann, Hartman & Brown 1978, circular load),
summed over many thin slices with mid-point values.

    python3 tests/oracle/settlement_sand.py > tests/reference/time/settlement_sand.csv
"""

import math

import numpy as np

CASES = {
    # diameter, net pressure, overburden, overburden at the peak, years, layers (base, modulus)
    "pad on loose over dense sand": (12.0, 110.0, 18.0, 74.0, 20.0, [(4.0, 9000.0), (11.5, 16000.0), (30.0, 35000.0)]),
    "tank with a peak inside a layer": (40.0, 180.0, 0.0, 190.0, 1.0, [(13.0, 22000.0), (27.0, 12500.0), (80.0, 60000.0)]),
    "deep level, long before a month": (5.0, 60.0, 90.0, 115.0, 0.05, [(2.0, 8000.0), (10.0, 14000.0)]),
}
SLICES = 400_000


def settlement(diameter, q, s0, svp, years, layers):
    peak = 0.5 + 0.1 * math.sqrt(q / svp)
    depth = 2.0 * diameter * (np.arange(SLICES) + 0.5) / SLICES
    influence = np.interp(depth, [0.0, 0.5 * diameter, 2.0 * diameter], [0.1, peak, 0.0])
    which = np.searchsorted([base for base, _ in layers], depth)
    modulus = np.array([value for _, value in layers])[which]
    c1 = max(0.5, 1.0 - 0.5 * s0 / q)
    c2 = 1.0 + 0.2 * math.log10(years / 0.1) if years > 0.1 else 1.0
    return c1 * c2 * q * float(np.sum(influence / modulus)) * 2.0 * diameter / SLICES, c1, c2, peak


def main():
    print("# Strain influence factors by 400,000 slices: output of tests/oracle/settlement_sand.py (numpy).")
    print("case,settlement_m,c1,c2,peak_influence")
    for name, case in CASES.items():
        print(f'"{name}",' + ",".join(repr(value) for value in settlement(*case)))


if __name__ == "__main__":
    main()
