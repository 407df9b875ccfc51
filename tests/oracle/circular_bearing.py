"""Bearing capacity of a circular footing on clay whose undrained strength grows with depth,
su = su0 + k z, by the method of characteristics (Haar & von Karman's state, sigma_theta = sigma_3;
Cox, Eason & Hopkins 1961, Eason & Shield 1960 for constant strength).

Needs numpy and numba.

    python3 tests/oracle/circular_bearing.py > tests/reference/time/bearing_factors.csv
    python3 tests/oracle/circular_bearing.py nodes tests/reference/time/bearing_factors.csv

The second prints the whole nodes, with the last three filled in, as core-nostd/src/stability/bearing.rs
holds them; the half nodes in between are left for its tests.

Field: psi is the angle of sigma_1 from the vertical, sz = p + c cos 2psi, sr = p - c cos 2psi,
trz = c sin 2psi. On the lines dr/dz = tan(psi + e pi/4), e = +1 or -1,
    dp + 2 c e dpsi + e k dr + (c/r)(dr - e dz) = 0.
Boundaries: free surface psi = pi/2, p = su0; a fan at the edge; smooth base psi = 0; rough base a rigid
cone below the base, bounded by an e = -1 line from the edge, or from the end of an outer ring that is
fully sheared, psi = -pi/4. The field ends on the axis, with psi = 0.

The + lines are laid one by one from the free surface; where each starts is solved for so that its end
advances to the next of a fixed list of radii, which is graded: fine at the edge, where strength
doubles over su0/k, and no coarser than the thickness sqrt(su0 a/k) of the layer that is squeezed out
when the gradient is large. Two nets, with n and 2n intervals, give the value by extrapolation (second
order) and its error.
"""

import sys

import numpy as np
from numba import njit


@njit(cache=True)
def meet(a, b, su0, k):
    """The point where the + line through a meets the - line through b."""
    ra, za, fa, pa = a
    rb, zb, fb, pb = b
    r, z, f, p = 0.5 * (ra + rb), 0.5 * (za + zb), 0.5 * (fa + fb), 0.5 * (pa + pb)
    for _ in range(60):
        ta, tb = 0.5 * (f + fa) + 0.25 * np.pi, 0.5 * (f + fb) - 0.25 * np.pi
        sa, ca, sb, cb = np.sin(ta), np.cos(ta), np.sin(tb), np.cos(tb)
        da, db = ca * ra - sa * za, cb * rb - sb * zb
        det = -ca * sb + cb * sa
        r_new = (-da * sb + db * sa) / det
        z_new = (ca * db - cb * da) / det
        cma, cmb = su0 + 0.5 * k * (z_new + za), su0 + 0.5 * k * (z_new + zb)
        rma, rmb = 0.5 * (r_new + ra), 0.5 * (r_new + rb)
        ea = pa + 2.0 * cma * fa - k * (r_new - ra) - cma / rma * (r_new - ra - (z_new - za))
        eb = pb - 2.0 * cmb * fb + k * (r_new - rb) - cmb / rmb * (r_new - rb + (z_new - zb))
        f_new = (ea - eb) / (2.0 * (cma + cmb))
        change = abs(r_new - r) + abs(z_new - z) + abs(f_new - f)
        r, z, f, p = r_new, z_new, f_new, ea - 2.0 * cma * f_new
        if change < 1e-14:
            return r, z, f, p
    return r, z, f, p


@njit(cache=True)
def arrive(a, psi, su0, k):
    """The point where the + line through a comes to the base, where psi is known."""
    ra, za, fa, pa = a
    t = 0.5 * (fa + psi) + 0.25 * np.pi
    r = ra - za * np.tan(t)
    cm, rm = su0 + 0.5 * k * za, 0.5 * (r + ra)
    p = pa - 2.0 * cm * (psi - fa) - k * (r - ra) - cm / rm * (r - ra + za)
    return r, 0.0, psi, p


@njit(cache=True)
def lay(line, count, start, to_base, psi_end, su0, k, new):
    """Lays the + line that starts `start` beyond the edge; its length, or 0 where it fails."""
    new[0, 0], new[0, 1], new[0, 2], new[0, 3] = 1.0 + start, 0.0, 0.5 * np.pi, su0
    for m in range(count):
        a = (new[m, 0], new[m, 1], new[m, 2], new[m, 3])
        b = (line[m, 0], line[m, 1], line[m, 2], line[m, 3])
        r, z, f, p = meet(a, b, su0, k)
        if not (r > 0.0 and z > 0.0):
            return 0
        new[m + 1, 0], new[m + 1, 1], new[m + 1, 2], new[m + 1, 3] = r, z, f, p
    count += 1
    if to_base:
        a = (new[count - 1, 0], new[count - 1, 1], new[count - 1, 2], new[count - 1, 3])
        r, z, f, p = arrive(a, psi_end, su0, k)
        if not r > 0.0:
            return 0
        new[count, 0], new[count, 1], new[count, 2], new[count, 3] = r, z, f, p
        count += 1
    return count


@njit(cache=True)
def end_at(line, count, length, step, target, to_base, psi_end, su0, k, new):
    """Starts the next + line so that it ends at the radius `target`. Length of the line (0 where it
    cannot be) and its start."""
    low, low_r = length, line[count - 1, 0]
    high, high_r = -1.0, 0.0
    x = length + step
    for _ in range(100):
        got = lay(line, count, x, to_base, psi_end, su0, k, new)
        r = new[got - 1, 0] if got > 0 else -1.0
        if got > 0 and abs(r - target) <= 1e-8 * (1.0 - target):
            return got, x
        if r > target:
            low, low_r = x, r
        else:
            high, high_r = x, r
        if high < 0.0:
            x = length + 2.0 * (x - length)
        elif high_r < 0.0 or _ % 3 == 2:
            x = 0.5 * (low + high)
        else:
            x = low + (high - low) * (low_r - target) / (low_r - high_r)
        if high > 0.0 and high - low <= 1e-15 * high:
            break
    return 0, x


@njit(cache=True)
def tractions(end, last, su0, k):
    """Vertical force of a stretch of the boundary, over pi."""
    dr, dz, rm = end[0] - last[0], end[1] - last[1], 0.5 * (end[0] + last[0])
    c1, c2 = su0 + k * end[1], su0 + k * last[1]
    normal = end[3] + c1 * np.cos(2.0 * end[2]) + last[3] + c2 * np.cos(2.0 * last[2])
    shear = c1 * np.sin(2.0 * end[2]) + c2 * np.sin(2.0 * last[2])
    return rm * normal * dr - rm * shear * dz


@njit(cache=True)
def march(su0, k, radii, base_nodes, psi_end, fan):
    """Lays the net out to the last of the radii but the axis, which ends the list. Returns the load over
    pi a^2 and how much larger psi is there than on a straight line to 0 on the axis; the load is nan when
    the net breaks off."""
    n = len(radii) - 1
    size = 2 * n + fan + 4
    line, new = np.zeros((size, 4)), np.zeros((size, 4))
    for i in range(fan + 1):
        f = 0.5 * np.pi + (psi_end - 0.5 * np.pi) * i / fan
        line[i, 0], line[i, 1], line[i, 2] = 1.0, 0.0, f
        line[i, 3] = su0 * (1.0 + 2.0 * (0.5 * np.pi - f))
    count = fan + 1
    load, length, step, turn = 0.0, 0.0, 0.3 * (1.0 - radii[0]), 0.0
    end = line[count - 1].copy()
    for j in range(n):
        before = length
        got, length = end_at(line, count, before, step, radii[j], j < base_nodes, psi_end, su0, k, new)
        if got == 0:
            return np.nan, turn
        last = new[got - 1].copy()
        load += tractions(end, last, su0, k)
        turn = last[2] * end[0] - end[2] * last[0]
        if last[2] > 0.02:
            return np.nan, last[2]
        step = (length - before) * (radii[j] - radii[j + 1]) / (end[0] - last[0])
        end = last
        line, new, count = new, line, got
    # The tip, by the - line alone: on the base z stays 0, under a cone it does not.
    tip = end.copy()
    tip[0], tip[2] = 0.0, 0.0
    if base_nodes >= n:
        tip[3] = end[3] + k * end[0]
        return load + tractions(end, tip, su0, k), turn
    for _ in range(20):
        t = 0.5 * end[2] - 0.25 * np.pi
        tip[1] = end[1] - end[0] / np.tan(t)
        c = su0 + 0.5 * k * (end[1] + tip[1])
        dr, dz = -end[0], tip[1] - end[1]
        tip[3] = end[3] - 2.0 * c * end[2] + k * dr - c / (0.5 * end[0]) * (dr + dz)
    return load + tractions(end, tip, su0, k), turn


AXIS = 0.0


def graded(first, last, n, edge, thickness):
    """n radii from below `first` down to `last`, of spacing proportional to
    1 / (1/(distance from the edge + edge) + 1/thickness)."""
    s = np.linspace(1.0 - first, 1.0 - last, 200_001)
    density = 1.0 / (s + edge) + 1.0 / thickness
    measure = np.concatenate([[0.0], np.cumsum(0.5 * (density[1:] + density[:-1]) * np.diff(s))])
    return 1.0 - np.interp(measure[-1] * np.arange(1, n + 1) / n, measure, s), measure[-1]


class Footing:
    """kB/su0 = ratio, radius 1; su0 + k = 1 so that every number stays of order one."""

    def __init__(self, ratio):
        half = 0.5 * ratio
        self.su0, self.k = 1.0 / (1.0 + half), half / (1.0 + half)
        doubles = self.su0 / max(self.k, 1e-9)
        self.edge = min(0.3 * doubles, 0.5)
        self.thickness = min(np.sqrt(doubles), 1.0)
        self.guess = None

    def radii(self, first, last, n):
        return graded(first, last, n, self.edge, self.thickness)

    def count(self, first, last, per_unit):
        return max(2, round(per_unit * self.radii(first, last, 2)[1]))

    def smooth(self, per_unit, refine=1):
        """Load over pi a^2."""
        n = refine * self.count(1.0, AXIS, per_unit)
        fan = refine * round(per_unit * 1.5)
        return march(self.su0, self.k, self.radii(1.0, AXIS, n)[0], n, 0.0, fan)[0]

    def rough_end(self, shape, counts, fan):
        """shape < 0: the fan ends at psi = -pi/4 - shape; shape > 0: width of the sheared ring."""
        ring, cone = counts
        psi_end = -0.25 * np.pi - min(shape, 0.0)
        radii = self.radii(1.0 - max(shape, 0.0), AXIS, cone)[0]
        if shape > 0.0:
            radii = np.concatenate([self.radii(1.0, 1.0 - shape, ring)[0], radii])
        return march(self.su0, self.k, radii, ring if shape > 0.0 else 0, psi_end, fan)

    def rough(self, per_unit, refine=1, counts=None, near=None):
        """Load over pi a^2, shape, counts of intervals on ring and cone before refinement; `near` is the
        shape of a coarser net."""
        fan = refine * round(per_unit * 1.5 * 1.5)

        def nodes(shape):
            first = 1.0 - max(shape, 0.0)
            ring = self.count(1.0, min(first, 1.0 - 1e-9), per_unit)
            return counts or (ring, self.count(first, AXIS, per_unit))

        def end(shape):
            return self.rough_end(shape, [refine * c for c in nodes(shape)], fan)

        low, high = -0.75, 0.9999
        if near is not None:
            reach = 0.3 * (1.0 - near) if near > 0.0 else 0.1
            low, high = near - reach, near + reach
        assert end(low)[1] > 0.0 > end(high)[1], "not bracketed"
        for _ in range(45):
            middle = 0.5 * (low + high)
            if end(middle)[1] > 0.0:
                low = middle
            else:
                high = middle
        counts = nodes(low)
        loads = [load for load, _ in (end(low), end(high)) if np.isfinite(load)]
        return loads[0], low, counts


# qu = F (N0 su0 + kB/6): N0 for no gradient, kB/6 for no strength at the surface, where the ground
# is squeezed out in a layer of vanishing thickness (F = 1) and F - 1 falls like sqrt(su0/kB).
# F is smooth over y = sqrt(kB/su0) / (SCALE + sqrt(kB/su0)), from 0 to 1.
SCALE, INTERVALS, LAST_NET = 4.0, 40, 36


def ratio_at(node):
    y = node / INTERVALS
    return (SCALE * y / (1.0 - y)) ** 2


def extrapolated(loads):
    value = loads[1] + (loads[1] - loads[0]) / 3.0
    return value, abs(value - loads[1])


def capacities(ratio):
    """qu/(su0 + kB/6) smooth and rough, each with the last correction of the extrapolation."""
    footing = Footing(ratio)
    per_unit = 12 if ratio < 100.0 else 8
    smooth = [footing.smooth(per_unit, refine) for refine in (1, 2)]
    coarse, shape, counts = footing.rough(per_unit)
    rough = [coarse, footing.rough(per_unit, 2, counts, shape)[0]]
    scale = footing.su0 + footing.k / 3.0
    return [x / scale for loads in (smooth, rough) for x in extrapolated(loads)]


def main():
    print("# qu = F (N0 su0 + kB/6); F at kB/su0 = (4 y/(1 - y))^2; method of characteristics")
    print("# error: last correction of the extrapolation from two nets; output of tests/oracle/circular_bearing.py")
    start = capacities(0.0)
    print(f"# N0 smooth {start[0]!r} rough {start[2]!r}")
    print("y,kB_over_su0,F_smooth,error_smooth,F_rough,error_rough")
    for node in np.arange(0.0, LAST_NET + 0.25, 0.5):
        ratio = ratio_at(node)
        row = capacities(ratio)
        for i, n0 in ((0, start[0]), (2, start[2])):
            scale = (n0 + ratio / 6.0) / (1.0 + ratio / 6.0)
            row[i], row[i + 1] = row[i] / scale, row[i + 1] / scale
        print(",".join(repr(float(x)) for x in [node / INTERVALS, ratio] + row), flush=True)


def nodes(path):
    """The table of the core: computed nodes, then F - 1 = c1 s + c2 s^2 + c3 s^3 in s = sqrt(su0/kB)
    through three of them, which ends at F = 1."""
    with open(path) as file:
        rows = [line.split(",") for line in file if line[0].isdigit()]
    for name, column in (("SMOOTH", 2), ("ROUGH", 4)):
        factors = [float(row[column]) for row in rows[::2]]
        roots = [1.0 / np.sqrt(ratio_at(node)) for node in range(LAST_NET - 2, INTERVALS)]
        powers = np.array([[s, s**2, s**3] for s in roots])
        fit = np.linalg.solve(powers[:3], np.array(factors[-3:]) - 1.0)
        factors += list(1.0 + powers[3:] @ fit) + [1.0]
        assert len(factors) == INTERVALS + 1
        print(name, ", ".join(f"{factor:.7f}" for factor in factors))


if __name__ == "__main__":
    if sys.argv[1:2] == ["nodes"]:
        nodes(sys.argv[2])
    else:
        main()
