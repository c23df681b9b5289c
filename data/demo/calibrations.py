#!/usr/bin/env python3
"""Invented calibrations for the demo of `fit`: writes the calibration_*.csv beside itself (seeded; Python 3 standard library).

Nothing here is a published check value. The curves behind the points are those of the constants below.
"""
import math
import pathlib
import random

here = pathlib.Path(__file__).parent
draw = random.Random(20260509)


def write(name, about, header, rows):
    lines = [f"# invented: {about}", header]
    lines += [",".join(row) for row in rows]
    (here / name).write_text("\n".join(lines) + "\n", encoding="utf-8")


def platinum(t):
    return 100.021 * (1 + 3.9079e-3 * t - 5.782e-7 * t**2 + (-4.19e-12 * (t - 100) * t**3 if t < 0 else 0))


rows = []
for nominal, u in ((-50, 6), (-25, 5), (0, 3), (20, 5), (40, 5), (60, 5), (80, 6), (100, 6)):
    t = nominal + round(draw.uniform(-0.2, 0.2), 3)
    rows.append([f"{t:.3f}", f"{platinum(t) + draw.gauss(0, 0.0011):.4f}", str(u)])
write("calibration_supply.csv", "thermometer in the supply pipe of the chilled-water plant, compared in a bath",
      "temperature (degC),resistance (ohm),uncertainty (mK)", rows)

rows = []
for t in (0, 5, 10, 15, 20, 30, 40, 50):
    x = 1 / (t + 273.15)
    log = (x - 3.3540e-3) / 2.565e-4
    for _ in range(20):
        log -= (3.3540e-3 + 2.565e-4 * log + 2.5e-6 * log**2 + 1.05e-7 * log**3 - x) / (2.565e-4 + 5e-6 * log)
    rows.append([f"{t}", f"{1e4 * math.exp(log) * (1 + draw.gauss(0, 1.5e-4)):.1f}"])
write("calibration_return.csv", "thermistor in the return pipe of the chilled-water plant", "temperature (degC),resistance (ohm)", rows)

rows = []
for load in (0, 10, 20, 30, 40, 50, 50, 40, 30, 20, 10, 0):
    output = 0.0123 + 0.039985 * load + 9e-7 * load**2 + draw.gauss(0, 6e-5)
    rows.append([f"{load}", f"{output:.5f}"])
write("calibration_hanger.csv", "load cell in a hanger of the footbridge, up and down", "load (kN),output (mV/V)", rows)

rows = []
for t in (-20, -10, 0, 10, 20, 24, 30, 40, 50, 60):
    strain = -31.5 + 2.17 * t - 0.0403 * t**2 + 2.2e-4 * t**3 + draw.gauss(0, 0.4)
    rows.append([f"{t}", f"{strain:.1f}"])
write("calibration_lot.csv", "thermal output of the girder's gauges on the girder's material, gauge factor set to 2.0",
      "temperature (degC),thermal output (microstrain)", rows)

rows = [["0.01", "25.47812"], ["156.5985", "41.01277"], ["231.928", "48.22197"], ["419.527", "65.44570"]]
write("calibration_standard.csv", "standard thermometer of the laboratory at fixed points of ITS-90",
      "temperature (degC),resistance (ohm)", rows)
