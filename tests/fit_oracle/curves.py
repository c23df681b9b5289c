#!/usr/bin/env python3
"""Points on known curves in 50-digit arithmetic, for tests/fit.rs: writes curves.csv beside itself.

Needs mpmath 1.3.0 (`pip install mpmath==1.3.0`). Rows `fit` are given to the fit, rows `check` lie between them: the fitted law must
give their temperature back. Constants are chosen for the table (those of IEC 60751 and of the printed four-term forms of
data/temperature/thermistor_material1_table.csv where there are any).
"""
import csv
import pathlib

from mpmath import exp, findroot, log, mp, mpf

mp.dps = 50
here = pathlib.Path(__file__).parent
rows = []


def steps(low, high, count):
    return [mpf(low) + (mpf(high) - mpf(low)) * i / (count - 1) for i in range(count)]


def add(kind, law, fit, check):
    # temperatures are doubles; the resistance belongs to that double
    for use, places in (("fit", fit), ("check", check)):
        for t in places:
            t = mpf(float(t))
            rows.append([kind, use, repr(float(t)), mp.nstr(law(t), 25)])


def platinum(t):
    r0, a, b, c = mpf("100.0123"), mpf("3.9083e-3"), mpf("-5.775e-7"), mpf("-4.183e-12")
    return r0 * (1 + a * t + b * t**2 + (c * (t - 100) * t**3 if t < 0 else 0))


add("platinum", platinum, steps(-196, 600, 12), steps(-195, 599, 90))
add("platinum-warm", platinum, steps(0, 420, 5), steps(1, 419, 60))
add("platinum-four", platinum, [-196, 0, 200, 400], steps(-190, 399, 60))


def steinhart_hart(t):
    a, b, c = mpf("1.1292410e-3"), mpf("2.341077e-4"), mpf("8.775468e-8")
    y = 1 / (t + mpf("273.15"))
    return exp(findroot(lambda L: a + b * L + c * L**3 - y, (y - a) / b))


add("steinhart_hart", steinhart_hart, steps(-40, 125, 7), steps(-39.5, 124.5, 80))
add("steinhart_hart-three", steinhart_hart, [0, 25, 70], steps(1, 69, 40))


def ratio(t):
    a, b, c, d = map(mpf, ("-1.4195756e1", "4.4074785e3", "-5.1658730e3", "-1.4017368e7"))
    x = 1 / (t + mpf("273.15"))
    return 10000 * exp(a + x * (b + x * (c + x * d)))


add("ratio_terms", ratio, steps(-40, 155, 8), steps(-39, 154, 80))


def reciprocal(t):
    a, b, c, d = map(mpf, ("3.3539438e-3", "2.5646095e-4", "2.5158166e-6", "1.0503069e-7"))
    y = 1 / (t + mpf("273.15"))
    return 10000 * exp(findroot(lambda L: a + L * (b + L * (c + L * d)) - y, (y - a) / b))


add("reciprocal_terms", reciprocal, steps(-40, 155, 8), steps(-39, 154, 80))

family = {}
with open(here / "../../data/temperature/its90_reference_coefficients.csv") as f:
    for row in csv.DictReader(line for line in f if not line.startswith("#")):
        family.setdefault(row["family"], []).append(mpf(row["value"]))


def reference(t):
    k = t + mpf("273.15")
    if k <= mpf("273.16"):
        z = (log(k / mpf("273.16")) + mpf("1.5")) / mpf("1.5")
        return exp(sum(c * z**i for i, c in enumerate(family["A"])))
    z = (k - mpf("754.15")) / 481
    return sum(c * z**i for i, c in enumerate(family["C"]))


def standard(deviation):
    """R of a thermometer of 25.4781 ohm with W = Wr + deviation(W)."""

    def law(t):
        if abs(t - mpf("0.01")) < mpf(10) ** -9:
            return mpf("25.4781")  # W = 1 by definition; the reference functions give it to 1e-8 only
        wr = reference(t)
        return mpf("25.4781") * findroot(lambda w: w - deviation(w) - wr, wr)

    return law


def e(text):
    return mpf(text)


zinc = standard(lambda w: e("-1.2e-4") * (w - 1) - e("1.1e-5") * (w - 1) ** 2)
add("its90-zinc", zinc, ["0.01", "231.928", "419.527"], steps(1, 419, 60))
add("its90-zinc-over", zinc, ["0.01", "156.5985", "231.928", "419.527"], steps(1, 419, 20))
argon = standard(lambda w: e("-1.3e-4") * (w - 1) + e("2.5e-5") * (w - 1) * log(w))
add("its90-argon", argon, ["-189.3442", "-38.8344", "0.01"], steps(-189, -0.5, 60))
mercury = standard(lambda w: e("-1.5e-4") * (w - 1) - e("2e-5") * (w - 1) ** 2)
add("its90-mercury", mercury, ["-38.8344", "0.01", "29.7646"], steps(-38, 29, 40))
oxygen = standard(lambda w: e("-2.1e-4") * (w - 1) - e("1.7e-5") * (w - 1) ** 2 + e("1.2e-6") * log(w) ** 2)
add("its90-oxygen", oxygen, ["-218.7916", "-189.3442", "-38.8344", "0.01"], steps(-218, -0.5, 60))
neon = standard(
    lambda w: e("-2.1e-4") * (w - 1) - e("1.7e-5") * (w - 1) ** 2 + e("3e-6") * log(w) + e("1.2e-6") * log(w) ** 2 + e("1e-7") * log(w) ** 3
)
add("its90-neon", neon, ["-259.3467", "-248.5939", "-218.7916", "-189.3442", "-38.8344", "0.01"][1:] + ["-230"], steps(-248, -0.5, 60))
hydrogen = standard(
    lambda w: e("-2.1e-4") * (w - 1)
    - e("1.7e-5") * (w - 1) ** 2
    + sum(e(c) * log(w) ** (i + 3) for i, c in enumerate(["-1.2e-6", "3e-8", "-5e-9", "2e-10", "-3e-11"]))
)
add(
    "its90-hydrogen",
    hydrogen,
    ["-259.3467", "-256.1185", "-252.8805", "-248.5939", "-218.7916", "-189.3442", "-38.8344", "0.01"],
    steps(-259, -0.5, 90),
)
three = lambda w: e("-1.2e-4") * (w - 1) - e("1.1e-5") * (w - 1) ** 2 + e("4e-6") * (w - 1) ** 3
aluminium = standard(three)
add("its90-aluminium", aluminium, ["0.01", "231.928", "419.527", "660.323"], steps(1, 660, 60))
w_al = findroot(lambda w: w - three(w) - reference(mpf("660.323")), mpf("3.376"))
silver = standard(lambda w: three(w) + (e("7e-6") * (w - w_al) ** 2 if w > w_al else 0))
add("its90-silver", silver, ["0.01", "231.928", "419.527", "660.323", "961.78"], steps(1, 961, 60))

for name, law in (("its90-tin", zinc), ):
    add(name, law, ["0.01", "156.5985", "231.928"], steps(1, 231, 20))
one = standard(lambda w: e("-1.2e-4") * (w - 1))
add("its90-indium", one, ["0.01", "156.5985"], steps(1, 156, 20))
add("its90-gallium", one, ["0.01", "29.7646"], steps(1, 29, 20))


def thermal(t):
    return mpf("-24.0") + t * (mpf("1.90") + t * (mpf("-0.0400") + t * mpf("2.50e-4")))


add("thermal-output", thermal, steps(-20, 160, 13), steps(-19, 159, 30))


def load(f):
    return mpf("0.0012") + f * (mpf("0.0402") + f * (mpf("1.2e-6") - f * mpf("3e-9")))


add("transducer", load, steps(0, 50, 11), steps(1, 49, 30))

with open(here / "curves.csv", "w") as f:
    f.write("# source: constructed, 50-digit arithmetic (mpmath 1.3.0), tests/fit_oracle/curves.py; an oracle, nothing published\n")
    f.write("# use fit: a point of the fit; check: a place between them. x in degC (transducer: kN), y in ohm (microstrain, mV/V)\n")
    f.write("kind,use,x,y\n")
    for row in rows:
        f.write(",".join(row) + "\n")
