"""Layered ground with vertical drains to part depth under a ramped load, by the method of lines.

Independent of the Rust code in method: 2800 equal cells, and time by the exact eigenvectors of the
symmetrised system (scipy.linalg.eigh_tridiagonal) instead of steps. Ground: case B of
tests/reference/time/t03_layers.csv with ch = 2 cv, drained at the top; drains as below, with well
resistance after Hansbo 1981 (with the factor 1 - 1/n^2); load 0 to 120 kPa over 20 days, its share
1 - 0.03 z at depth z.

    python3 tests/oracle/consolidation_column.py > tests/reference/time/consolidation_method_of_lines.csv
"""

import sys

import numpy as np
import scipy
from scipy.linalg import eigh_tridiagonal

GAMMA = 9.81
LAYERS = [(1.5, 0.03, 6e-5), (4.0, 0.006, 8e-6), (2.5, 0.05, 3e-4), (6.0, 0.01, 1.2e-5)]  # m, m2/d, m/d
CELL = 0.005
SPACING, DW, S, ETA, QW = 1.5, 0.0662, 2.0, 3.0, 2e-7 * 86400
TOP, BASE, WAY = 0.5, 9.3, 8.8
LOAD, RAMP = 120.0, 20.0
DAYS = [1, 3, 8, 14, 20, 30, 60, 120, 250, 500, 1000]
DEPTHS = [0.3, 1.0, 1.5, 2.5, 4.0, 5.5, 6.5, 8.0, 9.0, 10.0, 12.0, 14.0]


def mu_smear(n, s, eta):
    """Mean radial resistance from the velocity of equal strain, by quadrature of its definition."""
    # ubar = (edot gw / 2) mean over the ring of int (R^2/rho - rho)/k drho, in units R = n, rw = 1.
    from scipy.integrate import quad

    def head(r):
        inner = quad(lambda x: (n * n / x - x) * eta, 1, min(r, s))[0]
        return inner + (quad(lambda x: n * n / x - x, s, r)[0] if r > s else 0.0)

    ring = quad(lambda r: head(r) * 2 * r / (n * n - 1), 1, n, points=[s], limit=200)[0]
    # ubar = edot gw De^2 mu/(8 kh) with De = 2n.
    return ring / (n * n)


def column():
    h, cv, k = [], [], []
    for thickness, c, p in LAYERS:
        cells = round(thickness / CELL)
        h += [CELL] * cells
        cv += [c] * cells
        k += [p] * cells
    h, cv, k = map(np.array, (h, cv, k))
    z = np.cumsum(h) - h / 2
    return z, h, cv, k


def main():
    z, h, cv, k = column()
    n_cells = len(z)
    storage = k / cv * h
    link = 1 / (h[:-1] / (2 * k[:-1]) + h[1:] / (2 * k[1:]))
    diagonal = np.zeros(n_cells)
    diagonal[:-1] += link
    diagonal[1:] += link
    diagonal[0] += 2 * k[0] / h[0]
    de = 1.05 * SPACING
    n = de / DW
    mu = mu_smear(n, S, ETA)
    ch = 2 * cv
    kh = ch * k / cv
    depth = z - TOP
    well = np.pi * depth * (2 * WAY - depth) * kh / QW * (1 - 1 / n**2)
    drained = (z > TOP) & (z < BASE)
    sink = np.where(drained, 8 * ch / (de * de * (mu + well)), 0.0)
    diagonal += storage * sink
    root = np.sqrt(storage)
    rates, modes = eigh_tridiagonal(diagonal / storage, -link / (root[:-1] * root[1:]))
    source = LOAD / RAMP * (1 - 0.03 * z)
    amplitude = modes.T @ (root * source)
    print(f"# scipy {scipy.__version__}, numpy {np.__version__}; command: python3 tests/oracle/consolidation_column.py")
    print("# ground, drains and load: see that file; 2800 equal cells, exact in time")
    print("t_day,z_m,excess_kpa")
    for day in DAYS:
        end = min(day, RAMP)
        grown = (np.exp(-rates * (day - end)) - np.exp(-rates * day)) / rates
        u = modes @ (amplitude * grown) / root
        for depth_m in DEPTHS:
            # Centres beside the depth; at an interface or the base the face between by continuity.
            right = np.searchsorted(z, depth_m)
            if right == n_cells:
                value = u[-1]
            else:
                a, b = k[right - 1] / h[right - 1], k[right] / h[right]
                middle = abs(depth_m - (z[right - 1] + z[right]) / 2) < 1e-9
                value = (a * u[right - 1] + b * u[right]) / (a + b) if middle else np.interp(depth_m, z, u)
            print(f"{day},{depth_m},{value:.10g}")


if __name__ == "__main__":
    sys.exit(main())
