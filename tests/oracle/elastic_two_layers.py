"""Burmister's deflection factor F2 (w = 1.5 q R F2 / E2, nu = 1/2 in both layers), from his closed
kernel of the surface deflection and mpmath's quadrature.

    python3 tests/oracle/elastic_two_layers.py

Stored output: the rows "F2" of tests/reference/elastic/published_layered.csv.
Source of the kernel: Burmister 1943, Proc. Highway Research Board 23, 126-148 (from memory).
"""

import mpmath


def factor(ratio, thickness):
    """F2 at the centre for E1/E2 and h1/R."""
    n = (mpmath.mpf(ratio) - 1) / (ratio + 1)

    def change(m):
        x = m * thickness
        e = mpmath.exp(-2 * x)
        kernel = (1 + 4 * n * x * e - n**2 * e**2) / (1 - 2 * n * (1 + 2 * x**2) * e + n**2 * e**2)
        return (kernel - 1) * mpmath.besselj(1, m) / m

    # The kernel less its limit 1, whose integral is 1.
    edges = [0, 0.05, 0.2, 0.5] + [1 + 2 * i for i in range(16)]
    return (1 + mpmath.quad(change, edges)) / ratio


for ratio, thickness in [(2, 1), (2, 2), (5, 1), (5, 2), (10, 2), (100, 1)]:
    print(f"E1/E2 = {ratio}, h1/R = {thickness}: F2 = {mpmath.nstr(factor(ratio, thickness), 9)}")
