"""Uniform pressure on a circle on an elastic half-space, by scipy's elliptic functions.

Independent of the Rust code in method: K and E from scipy.special.ellipkm1/ellipe, the third kind
from Carlson's elliprj, and plain textbook combinations of them (Eason, Noble & Sneddon 1955).

    python3 tests/oracle/elastic_half_space.py            # writes the reference points to stdout
    python3 tests/oracle/elastic_half_space.py --speed    # full tensors per second, one core

Stored output: tests/reference/elastic/scipy_half_space.csv (first form),
tests/oracle/elastic_half_space_speed.txt (second form).
"""

import sys
import time

import numpy as np
import scipy
from scipy.special import elliprf, elliprj, ellipe, ellipkm1

SEED = 20240611


def stresses(rho, zeta, nu):
    """sigma_z, sigma_r, sigma_theta, tau_rz over q; rho > 0, rho != 1, zeta > 0."""
    a2 = (1 + rho) ** 2 + zeta**2
    a = np.sqrt(a2)
    kc2 = ((1 - rho) ** 2 + zeta**2) / a2
    k2 = 4 * rho / a2
    gamma = (1 - rho) / (1 + rho)
    n = 4 * rho / (1 + rho) ** 2
    k, e = ellipkm1(kc2), ellipe(k2)
    third = elliprf(0, kc2, 1) + n / 3 * elliprj(0, kc2, 1, gamma**2)
    inside = np.where(rho < 1, 1.0, 0.0)
    x = zeta / (np.pi * a) * (k + gamma * third)
    s0 = inside - x
    s1 = 2 / (np.pi * a**3 * kc2 * k2) * ((1 + rho) * kc2 * (k - e) + (1 - rho) * (e - kc2 * k))
    t0 = a / (np.pi * rho) * ((1 - k2 / 2) * k - e)
    t1 = 2 * zeta / (np.pi * a**3 * k2 * kc2) * ((1 + kc2) * e - 2 * kc2 * k)
    u0 = 2 * k / (np.pi * a)
    v0 = ((1 - inside) + x - zeta * u0) / rho
    qm1 = (v0 + rho * s0 - zeta * t0) / 2 / rho
    lateral = (1 - 2 * nu) * qm1 - zeta * t0 / rho
    return s0 + zeta * s1, s0 - zeta * s1 - lateral, 2 * nu * s0 + lateral, zeta * t1


def points(count, rng):
    """Where the textbook combinations keep 13 digits: not close to the axis, not far away."""
    rho = rng.uniform(0.3, 4.0, count)
    return rho, rng.uniform(0.01, 4.0, count), rng.uniform(0.0, 0.5, count)


def main():
    rng = np.random.default_rng(SEED)
    if "--speed" in sys.argv:
        rho, zeta, _ = points(200_000, rng)
        best = min(timed(rho, zeta) for _ in range(7))
        print(f"scipy {scipy.__version__}, numpy {np.__version__}, one core, best of 7")
        print(f"{len(rho) / best / 1e6:.2f} million full tensors per second")
        return
    print("r/R,z/R,nu,sigma_z/q,sigma_r/q,sigma_theta/q,tau_rz/q")
    for rho, zeta, nu in zip(*points(300, rng)):
        print(",".join(repr(float(v)) for v in (rho, zeta, nu, *stresses(rho, zeta, nu))))


def timed(rho, zeta):
    start = time.perf_counter()
    stresses(rho, zeta, 0.3)
    return time.perf_counter() - start


main()
