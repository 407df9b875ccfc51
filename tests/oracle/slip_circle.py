"""Least factor of safety of an edge on a slip circle, by differential evolution over the three
unknowns of the circle (loaded width, outside width, depth), arc by Gauss-Legendre quadrature between
the faces of slices. Needs numpy and scipy.

    python3 tests/oracle/slip_circle.py > tests/reference/time/slip_circles.csv
"""

import numpy as np
from scipy.optimize import differential_evolution, minimize

# name: diameter, [(thickness, strength at the top, gradient), ...]; invented
PROFILES = {
    "crust soft stiff": (30.0, [(1.5, 50.0, 0.0), (4.5, 18.0, 0.0), (6.0, 30.0, 0.0), (8.0, 70.0, 0.0)]),
    "falling crust": (24.0, [(2.0, 60.0, -15.0), (1.0, 8.0, 0.0), (9.0, 20.0, 2.0)]),
    "thin seam": (50.0, [(4.0, 30.0, 1.0), (0.5, 9.0, 0.0), (12.0, 40.0, 0.0)]),
    "two soft bands": (60.0, [(1.0, 45.0, 0.0), (2.0, 16.0, 0.0), (3.0, 32.0, 0.5), (4.0, 15.0, 0.0), (15.0, 60.0, 2.0)]),
    "softer with depth": (40.0, [(30.0, 24.0, -0.3)]),
    "crust over growing strength": (80.0, [(2.5, 35.0, -4.0), (25.0, 12.0, 1.6)]),
}
NODES, WEIGHTS = np.polynomial.legendre.leggauss(24)


def pressure(x, diameter, slices):
    w, v, share = x
    half = 0.5 * (w + v)
    bottom = sum(t for t, _, _ in slices)
    d = share * min(half, bottom)
    r = (half**2 + d**2) / (2.0 * d)
    moment, top = 0.0, 0.0
    for thickness, a, g in slices:
        if top >= d:
            break
        f1 = np.arccos(np.clip((r - d + top) / r, -1.0, 1.0))
        f2 = np.arccos(np.clip((r - d + min(top + thickness, d)) / r, -1.0, 1.0))
        f = 0.5 * (f1 + f2) + 0.5 * (f1 - f2) * NODES
        depth = d - r * (1.0 - np.cos(f))
        moment += 2.0 * r * r * 0.5 * (f1 - f2) * np.sum(WEIGHTS * (a + g * (depth - top)))
        top += thickness
    return moment / (0.5 * w * v)


def weakest(diameter, slices):
    bounds = [(diameter / 12.0, diameter), (0.02 * diameter, 2.0 * diameter), (1e-3, 1.0)]
    best = None
    for seed in range(6):
        found = differential_evolution(
            pressure, bounds, (diameter, slices), seed=seed, popsize=30, tol=1e-12, maxiter=1500, polish=False
        )
        if best is None or found.fun < best.fun:
            best = found
    polished = minimize(
        pressure, best.x, (diameter, slices), method="Nelder-Mead", bounds=bounds,
        options={"xatol": 1e-12, "fatol": 1e-13, "maxiter": 20000},
    )
    return polished if polished.fun < best.fun else best


def main():
    print("# weakest slip circle under the edge of a tank, loaded width from D/12 to D, differential evolution in scipy")
    print("# slices: thickness m, strength at the top kPa, gradient kPa/m; output of tests/oracle/slip_circle.py")
    print("profile,diameter_m,slices,ultimate_kpa,loaded_width_m,outside_width_m,depth_m")
    for name, (diameter, slices) in PROFILES.items():
        found = weakest(diameter, slices)
        w, v, share = found.x
        depth = share * min(0.5 * (w + v), sum(t for t, _, _ in slices))
        text = ";".join(" ".join(repr(x) for x in s) for s in slices)
        print(f"{name},{diameter!r},{text},{float(found.fun)!r},{float(w)!r},{float(v)!r},{float(depth)!r}", flush=True)


if __name__ == "__main__":
    main()
