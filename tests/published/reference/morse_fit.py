#!/usr/bin/env python3
"""Morse fits of three sample scans by SciPy's curve_fit: makes morse-fit.json beside it.

  python3 tests/published/reference/morse_fit.py > tests/published/reference/morse-fit.json
  python3 tests/published/reference/morse_fit.py --seconds SCAN     seconds of one fit, median of 51

All points of the scan, equal weights, analytic Jacobian, ftol = xtol = gtol = 1e-15. Bond lengths in
bohr, energies in hartree above the lowest point. Needs numpy and scipy.
"""
import json
import pathlib
import statistics
import sys
import time

import numpy as np
import scipy
from scipy.optimize import curve_fit

BOHR = 0.529177210544  # angstrom, CODATA 2022
SCANS = {"co_ccsdt_bohr.dat": 1.0, "h2_fci.csv": BOHR, "lih_X_A.csv": BOHR}
FOLDER = pathlib.Path(__file__).resolve().parents[3] / "sample-scans"


def morse(r, e0, d, a, re):
    return e0 + d * (1 - np.exp(-a * (r - re))) ** 2


def jacobian(r, e0, d, a, re):
    y = np.exp(-a * (r - re))
    inner = 2 * d * (1 - y) * y
    return np.column_stack([np.ones_like(r), (1 - y) ** 2, inner * (r - re), -inner * a])


def read(path, unit):
    rows = [line.replace(",", " ").split()[:2] for line in open(path, encoding="utf-8") if line[:1].isdigit() or line[:1] == " "]
    table = np.array([[float(x) for x in row] for row in rows])
    return table[:, 0] / unit, table[:, 1] - table[:, 1].min()


def fit(r, energy):
    low = int(np.argmin(energy))
    guess = (0.0, max(energy[-1], 0.1), 1.0, r[low])
    return curve_fit(morse, r, energy, p0=guess, jac=jacobian, maxfev=20000, ftol=1e-15, xtol=1e-15, gtol=1e-15)


def main():
    if sys.argv[1:2] == ["--seconds"]:
        path = pathlib.Path(sys.argv[2])
        r, energy = read(path, SCANS.get(path.name, BOHR))
        seconds = []
        for _ in range(51):
            start = time.perf_counter()
            fit(r, energy)
            seconds.append(time.perf_counter() - start)
        print(statistics.median(seconds))
        return
    found = {"source": f"SciPy {scipy.__version__} curve_fit, NumPy {np.__version__}; made by morse_fit.py", "fits": []}
    for name, unit in SCANS.items():
        r, energy = read(FOLDER / name, unit)
        values, covariance = fit(r, energy)
        errors = np.sqrt(np.diag(covariance))
        names = ["e_min_above_lowest_hartree", "d_e_hartree", "a_per_bohr", "r_e_bohr"]
        entry = {"scan": name, "points": len(r)}
        entry |= {n: {"value": float(v), "std_error": float(e)} for n, v, e in zip(names, values, errors)}
        found["fits"].append(entry)
    print(json.dumps(found, indent=1))


if __name__ == "__main__":
    main()
