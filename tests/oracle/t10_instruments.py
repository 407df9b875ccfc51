"""Computes the instrument tables tests/reference/time/t10_*.csv again from their inputs.

Run: python3 tests/oracle/t10_instruments.py
Needs numpy. Reads the input columns of each table, computes the other columns by the formulas of
the table's head, and prints the largest difference of each; exits 1 when one is above 1e-9 or a
flag differs.
"""

import csv
import pathlib
import sys

import numpy as np

TABLES = pathlib.Path(__file__).parent.parent / "reference" / "time"


def read(name):
    lines = (TABLES / name).read_text().splitlines()
    rows = list(csv.DictReader(line for line in lines if not line.startswith("#")))
    columns = {}
    for key in rows[0]:
        try:
            columns[key] = np.array([float(row[key]) for row in rows])
        except ValueError:
            columns[key] = [row[key] for row in rows]
    return columns


def wire():
    t = read("t10_vibrating_wire.csv")
    digits = t["f_Hz"] ** 2 / 1000
    rest = -0.0453 * (t["T_C"] - 21.3) - (t["baro_kPa"] - 99.87)
    linear = 0.07021 * (9123.4 - digits) + rest
    a, b = -4.812e-9, -0.07012
    polynomial = np.polyval([a, b, -np.polyval([a, b, 0], 9123.4)], digits) + rest
    return [digits - t["digits"], linear - t["P_linear_kPa"], polynomial - t["P_polynomial_kPa"]]


def cell():
    t = read("t10_settlement_cell.csv")
    out = []
    for law, column in [(lambda x: 1 / (1 + x), "settlement_mm"),
                        (lambda x: 1 - x, "settlement_mm_linear_density")]:
        density = 1062 * law(0.00042 * (t["T_C"] - 20))
        level = t["reservoir_elev_m"] - 1000 * t["P_kPa"] / (density * 9.80665)
        out.append(1000 * (level[0] - level) - t[column])
    return out


def plate():
    t = read("t10_settlement_plate.csv")
    level = t["rod_top_elev_m"] - t["total_rod_m"]
    return [1000 * (level[0] - level) - t["settlement_mm"]]


def hampel():
    t = read("t10_hampel.csv")
    x, out = t["x"], []
    for i in range(len(x)):
        window = x[max(0, i - 5):i + 6]
        median = np.median(window)
        mad = np.median(abs(window - median))
        flag = float(abs(x[i] - median) > 3 * 1.4826 * mad)
        out.append([median - t["window_median"][i], mad - t["MAD"][i], flag - t["flag"][i]])
    return [np.array(out)]


def flat():
    t = read("t10_flatline.csv")
    x, flags = t["x"], np.zeros(len(t["x"]))
    for end in range(5, len(x) + 1):
        if np.ptp(x[end - 5:end]) <= 0.01 + 1e-12:
            flags[end - 5:end] = 1
    return [flags - t["flat_flag"]]


worst = 0.0
for table in [wire, cell, plate, hampel, flat]:
    difference = max(float(np.max(np.abs(column))) for column in table())
    print(f"{table.__name__:8} largest difference {difference:.1e}")
    worst = max(worst, difference)
sys.exit(worst > 1e-9)
