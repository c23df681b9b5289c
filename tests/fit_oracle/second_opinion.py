#!/usr/bin/env python3
"""A second opinion on the command `fit`: the calibrations of the demo fitted again with numpy.

    cargo build --features cli && python3 tests/fit_oracle/second_opinion.py [PROGRAM]

Needs numpy (`pip install numpy`). Compares coefficients, their standard uncertainties and correlation, the residual standard
deviation and one inverse reading; fails when one is off by more than the arithmetic of doubles explains.
"""
import csv
import json
import pathlib
import subprocess
import sys

import numpy as np

root = pathlib.Path(__file__).resolve().parents[2]
program = sys.argv[1] if len(sys.argv) > 1 else str(root / "target/debug/ohmwright")
worst = 0.0


def points(name):
    path = root / f"data/demo/calibration_{name}.csv"
    rows = [r for r in csv.reader(line for line in open(path) if not line.startswith("#"))][1:]
    return str(path), np.array(rows, float).T


def fit(model, path, *options):
    return json.loads(subprocess.run([program, "fit", model, path, "--json", *options], check=True, capture_output=True).stdout)


def near(what, got, want, allowed):
    global worst
    off = float(np.max(np.abs(np.asarray(got, float) / np.asarray(want, float) - 1)))
    worst = max(worst, off / allowed)
    print(f"  {what}: {off:.1e} of {allowed:.0e}")
    if not off <= allowed:
        sys.exit(f"{what}: {got} and {want}")


def least_squares(columns, y, sigma):
    """Coefficients, (A^T A)^-1 and the residual standard deviation of unit weight, columns scaled to length 1."""
    a = np.column_stack(columns) / sigma[:, None]
    size = np.linalg.norm(a, axis=0)
    q, r = np.linalg.qr(a / size)
    c = np.linalg.solve(r, q.T @ (y / sigma)) / size
    inverse = np.linalg.inv(r)
    covariance = inverse @ inverse.T / np.outer(size, size)
    residual = y / sigma - np.column_stack(columns) @ c / sigma
    return c, covariance, np.sqrt(residual @ residual / (len(y) - len(c)))


def compare(all_of, c, covariance, allowed):
    near("coefficients", [k["value"] for k in all_of["coefficients"]], c, allowed)
    u = np.sqrt(np.diag(covariance))
    near("standard uncertainties", [k["standard_uncertainty"] for k in all_of["coefficients"]], u, 1e-9)
    near("correlation", all_of["correlation"], covariance / np.outer(u, u), 1e-9)


print("platinum, C held at 0, uncertainties of temperature")
path, (t, r, mk) = points("supply")
got = fit("platinum", path, "--c", "zero")
columns = [np.ones_like(t), t, t**2]
sigma = np.ones_like(t)
for _ in range(6):
    beta, covariance, s = least_squares(columns, r, sigma)
    sigma = np.abs(beta[1] + 2 * beta[2] * t) * mk / 1e3
beta, covariance, s = least_squares(columns, r, sigma)
jacobian = np.array([[1, 0, 0], [-beta[1] / beta[0] ** 2, 1 / beta[0], 0], [-beta[2] / beta[0] ** 2, 0, 1 / beta[0]]])
compare(got, [beta[0], beta[1] / beta[0], beta[2] / beta[0]], jacobian @ covariance @ jacobian.T * max(1, s) ** 2, 1e-9)

print("thermistor, Steinhart-Hart, weights T^2")
path, (t, r) = points("return")
kelvin, log = t + 273.15, np.log(r)
c, covariance, s = least_squares([np.ones_like(t), log, log**3], 1 / kelvin, kelvin**-2)
got = fit("thermistor", path)
compare(got, c, covariance * s**2, 1e-9)

print("transducer, second degree, and a reading")
path, (x, y) = points("hanger")
c, covariance, s = least_squares([np.ones_like(x), x, x**2], y, np.ones_like(x))
got = fit("transducer", path, "--degree", "2", "--reading", "1.2")
compare(got, c, covariance * s**2, 1e-9)
near("residual standard deviation", got["statistics"]["residual_standard_deviation"], s, 1e-9)
load = min((value.real for value in np.roots([c[2], c[1], c[0] - 1.2])), key=lambda v: abs(v - 25))
row = np.array([1, load, load**2])
slope = c[1] + 2 * c[2] * load
u = s * np.sqrt(1 + row @ covariance @ row) / slope
k = 2.2621571628540993  # t(0.975, 9)
near("load of 1.2 mV/V", got["answers"][0]["value"], load, 1e-11)
near("first-order interval", got["answers"][0]["intervals"][0]["ends"], [load - k * u, load + k * u], 1e-9)


def outside(x):
    f = np.array([1, x, x**2])
    return abs(1.2 - c @ f) - k * s * np.sqrt(1 + f @ covariance @ f)


def end(inner, outer):
    for _ in range(200):
        middle = 0.5 * (inner + outer)
        inner, outer = (inner, middle) if outside(middle) > 0 else (middle, outer)
    return outer


near("exact interval", got["answers"][0]["intervals"][1]["ends"], [end(load, load - 1), end(load, load + 1)], 1e-9)

print("thermal output, third degree")
path, (t, y) = points("lot")
c, covariance, s = least_squares([t**k for k in range(4)], y, np.ones_like(t))
compare(fit("thermal-output", path, "--degree", "3"), c, covariance * s**2, 1e-9)

print("ITS-90, zinc, over-determined")
path, (t, r) = points("standard")
family = [float(row["value"]) for row in csv.DictReader(
    line for line in open(root / "data/temperature/its90_reference_coefficients.csv") if not line.startswith("#")) if row["family"] == "C"]
reference = np.polynomial.polynomial.polyval((t + 273.15 - 754.15) / 481, family)
w = r / r[0]
w, reference = w[1:], reference[1:]
c, covariance, s = least_squares([w - 1, (w - 1) ** 2], w - reference, np.ones_like(w))
compare(fit("its90", path, "--subrange", "zinc"), c, covariance * s**2, 1e-9)

print(f"all agree; the worst is {worst:.2g} of what is allowed")
