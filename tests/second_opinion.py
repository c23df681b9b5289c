#!/usr/bin/env python3
"""A second opinion on budgets: the same measurement functions, written by hand, through a general-purpose package.

    cargo build --features cli && python3 tests/second_opinion.py        (pip install uncertainties==3.2.3)

Every budget of `ohmwright budget --json` is compared with the package's own propagation (its derivatives are automatic, its
correlations follow from shared variables). Prints the largest relative difference of u and exits with 1 above 1e-6.
"""
import json
import pathlib
import subprocess
import sys
import tempfile

from uncertainties import ufloat, umath

ROOT = pathlib.Path(__file__).resolve().parent.parent
TOOL = ROOT / "target/debug/ohmwright"


def budget(sheet, *words):
    """The tool's budget of one result."""
    with tempfile.TemporaryDirectory() as folder:
        path = pathlib.Path(folder) / "s.toml"
        path.write_text(sheet, encoding="utf-8")
        run = subprocess.run([TOOL, "budget", path, *words, "--json"], capture_output=True, text=True, check=True)
    return json.loads(run.stdout)


def quarter(ratio, factor, gauge, lead, other):
    """Strain of one gauge on two wires, not balanced with them: y = R1/(R1 + R2) - 1/2 with R1 = R (1 + F e) + 2 r."""
    # y + 1/2 = R1/(R1 + R2)
    share = ratio + 0.5
    arm = other * share / (1 - share)
    return (arm - 2 * lead - gauge) / gauge / factor * 1e6


def strain():
    sheet = """
[common.s]
reads = "mV/V"
uncertainty = "0.5 uV/V (standard)"
gauge = { resistance = "350 ohm", gauge_factor = "2.08 ± 1 % (k=2)" }
bridge = { arms = ["e", "0", "0", "0"], resistances = ["350 ohm ± 0.1 ohm (k=2)", "350.2 ohm ± 0.2 ohm (k=2)", "350 ohm", "350 ohm"] }
leads = { wires = 2, each = "3 ohm ± 10 %", balanced = false }
shared = ["gauge.gauge_factor", "leads"]
[channel.a]
like = "s"
column = "a"
[channel.b]
like = "s"
column = "b"
[channel.d]
combine = { a = "0.5 ± 0.01 (standard)", b = -0.5 }
"""
    factor, lead = ufloat(2.08, 0.0104), ufloat(3, 0.3 / 3**0.5)

    def one(reading):
        return quarter(ufloat(reading * 1e-3, 0.5e-6), factor, ufloat(350, 0.05), lead, ufloat(350.2, 0.1))

    a, b = one(7.2), one(6.1)
    yield "strain", a, budget(sheet, "a", "--at", "7.2")
    difference = ufloat(0.5, 0.01) * a - 0.5 * b
    yield "difference", difference, budget(sheet, "d", "--at", "a=7.2", "--at", "b=6.1")


def platinum():
    sheet = """
[channel.t]
column = "t"
reads = "ohm"
uncertainty = "20 mohm (triangular)"
platinum = { r0 = "100.012(5) ohm", a = "3.9083e-3 ± 2e-6 (k=2)", b = -5.775e-7 }
leads = { wires = 2, each = "0.40 ohm ± 0.01 ohm (arcsine)" }
"""
    r0, a, b = ufloat(100.012, 0.005), ufloat(3.9083e-3, 1e-6), -5.775e-7
    ohms = ufloat(131.2, 0.02 / 6**0.5) - 2 * ufloat(0.4, 0.01 / 2**0.5)
    # R/R0 = 1 + A t + B t^2
    t = (-a + umath.sqrt(a * a - 4 * b * (1 - ohms / r0))) / (2 * b)
    yield "platinum", t, budget(sheet, "t", "--at", "131.2")


def thermistor():
    sheet = """
[channel.t]
column = "t"
reads = "V"
uncertainty = "1 mV"
thermistor = { r25 = "10 kohm ± 1 %", beta = "3950 K ± 0.5 %" }
circuit = { divider = "10 kohm ± 0.1 %", sensor = "low", supply = "3.3 V ± 10 mV" }
"""
    third = 1 / 3**0.5
    volts, supply = ufloat(1.2, 1e-3 * third), ufloat(3.3, 0.01 * third)
    ohms = ufloat(1e4, 10 * third) * volts / (supply - volts)
    inverse = 1 / 298.15 + umath.log(ohms / ufloat(1e4, 100 * third)) / ufloat(3950, 19.75 * third)
    yield "thermistor", 1 / inverse - 273.15, budget(sheet, "t", "--at", "1.2")


def load():
    sheet = """
[channel.e]
column = "e"
reads = "microstrain"
uncertainty = "2 microstrain (standard)"
[channel.m]
of = "e"
load = "bending"
section = { diameter = "50 mm ± 0.05 mm", bore = "20 mm ± 0.1 mm" }
material = { modulus = "205 GPa ± 2 %", poisson = 0.29 }
"""
    third = 1 / 3**0.5
    e, modulus = ufloat(800e-6, 2e-6), ufloat(205e9, 4.1e9 * third)
    d, bore = ufloat(0.050, 5e-5 * third), ufloat(0.020, 1e-4 * third)
    moment = modulus * e * 3.141592653589793 * (d**4 - bore**4) / (32 * d)
    yield "bending moment", moment, budget(sheet, "m", "--at", "800")


def main():
    worst = 0.0
    for make in (strain, platinum, thermistor, load):
        for name, other, ours in make():
            value = abs(ours["value"] / other.nominal_value - 1)
            u = abs(ours["combined_standard_uncertainty"] / other.std_dev - 1)
            print(f"{name}: {other.nominal_value:.9g} u {other.std_dev:.6g}; off by {value:.1e} and {u:.1e}")
            worst = max(worst, value, u)
    print(f"largest relative difference {worst:.1e}")
    return worst > 1e-6


if __name__ == "__main__":
    sys.exit(main())
