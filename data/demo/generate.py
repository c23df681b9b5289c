#!/usr/bin/env python3
"""Make the recording of the footbridge demo: invented loads and temperatures, run forwards through every circuit.

Python 3 standard library only; nothing of the library under test. The physics is written down a second time here
(arm law, leads, nodal analysis of bridge and amplifier, thermistor, platinum), so a conversion of footbridge.csv with
footbridge.toml must give footbridge_truth.csv back to within footbridge_bounds.csv.

    generate.py             write footbridge.csv, footbridge_truth.csv, footbridge_bounds.csv beside this file
    generate.py --bounds    print how the bounds come about, write nothing

check.py runs the circuits backwards and compares.
"""
import csv
import io
import math
import random
import sys
from datetime import datetime, timedelta
from pathlib import Path

HERE = Path(__file__).resolve().parent
SEED = 20260509
START = datetime(2026, 5, 9, 6, 30)
RATE = 50  # Hz
SECONDS = 480
ROWS = RATE * SECONDS + 1  # the last row carries a deck sample, so no row lies outside the deck samples
TRUTH_EVERY = 50
ZERO_ROWS = 500
DECK_EVERY = 10  # s
LONGEST_GAP = 25  # s

# ---- what footbridge.toml says, once more ---------------------------------------------------------------------

GIRDER = dict(r=350.0, f=2.13, slope=0.9e-4, tref=23.0, lead=1.85, fd=2.0)
GIRDER_TO = (-30.5, 2.35, -0.0512, 2.9e-4)
GIRDER_MISMATCH = 4.5e-6 - 10.8e-6
RAIL = dict(r=120.0, f=2.07, lead=0.62)
POST = dict(r=350.0, f=2.04, nu=0.3, lead=2.4, rin=220e3)
HANGER = dict(r=700.0, f=2.09, rin=(3301.0, 3298.0), rf=(912.6e3, 910.9e3), gain=5e5, full_scale=2.5, bits=24)
DECK = dict(r25=10e3, beta=3610.0, divider=12e3, supply=2.048)
ABUTMENT_LEAD = 0.43
MODULUS_MPA = 11e3
PT_A, PT_B, PT_C = 3.9083e-3, -5.775e-7, -4.183e-12  # IEC 60751

# What is wrong with the gauges at installation, as dR/R in the sense of the arm law's x0.
OFFSET = dict(girder_mid=4.3e-4, girder_top=-7.1e-4, rail_bend=2.2e-4, post=-1.6e-4, hanger=1.9e-4)

# Noise (standard deviation) and the last digit written, in the unit of the column.
NOISE = {"girder mid": 1.6e-4, "girder top": 1.6e-4, "rail": 6e-4, "V_ex": 2e-5, "post": 2e-4, "hanger": 400.0,
         "deck": 5e-5, "air": 4e-3, "abutment": 4e-3}
DIGITS = {"girder mid": 5, "girder top": 5, "rail": 4, "V_ex": 5, "post": 5, "hanger": 0, "deck": 5, "air": 3, "abutment": 3}
CREST = 3 / math.sqrt(0.5)  # the noise never exceeds this many standard deviations

COLUMNS = ["time", "load step", "girder mid", "girder top", "rail", "V_ex", "post", "hanger", "deck", "air", "abutment"]
CHANNELS = [("girder_mid", "microstrain"), ("girder_top", "microstrain"), ("girder_bend", "microstrain"),
            ("girder_stress", "MPa"), ("rail_bend", "microstrain"), ("post", "microstrain"), ("hanger", "microstrain"),
            ("deck", "degC"), ("air", "degC"), ("abutment", "degC")]
DECIMALS = dict(microstrain=1, MPa=3, degC=2)

# ---- the story ------------------------------------------------------------------------------------------------

STEPS = [  # from s, load step, girder strain in microstrain reached within 5 s
    (0, "empty", 0.0), (60, "tanks", 62.0), (120, "walking", 97.0), (200, "crowd 1", 140.0), (250, "crowd 2", 231.0),
    (300, "crowd 3, swaying", 318.0), (360, "unload", 140.0), (410, "empty", 0.0)]


def smooth(x):
    x = min(1.0, max(0.0, x))
    return x * x * (3 - 2 * x)


def load_step(t):
    return [name for start, name, _ in STEPS if t >= start][-1]


def girder_strain(t):
    """Strain of the lower face, microstrain; 0 until the first load."""
    e, before = 0.0, 0.0
    for start, _, level in STEPS:
        e += (level - before) * smooth((t - start) / 5)
        before = level
    e += 9.0 * math.sin(2 * math.pi * 1.9 * t) * smooth((t - 126) / 6) * smooth((198 - t) / 4)
    e += 14.0 * math.sin(2 * math.pi * 1.1 * t) * smooth((t - 306) / 6) * smooth((357 - t) / 4)
    e += 7.0 * smooth((t - 255) / 60) * math.exp(-max(0.0, t - 415) / 90)  # creep of the timber and its recovery
    return e


def strains(t):
    e = girder_strain(t)
    return dict(girder_mid=e, girder_top=-0.83 * e, rail_bend=0.37 * e, post=-0.46 * e, hanger=2.1 * e)


def temperatures(t):
    """The sun comes round: the deck warms by several kelvin, the air a little, the abutment hardly."""
    u = smooth((t - 30) / 430)
    return dict(deck=12.4 + 7.3 * u + 0.08 * math.sin(2 * math.pi * max(0.0, t - 30) / 190),
                air=11.2 + 1.9 * u, abutment=9.6 + 0.12 * u)


def supply(t):
    return 2.5004 + 4e-4 * math.sin(2 * math.pi * t / 300)


# Faults: column, first s, last s (both included), what the file then says, the word a conversion must give.
FAULTS = [
    ("girder mid", 2.0, 2.08, "", "missing"), ("girder mid", 143.0, 143.5, "", "missing"),
    ("girder top", 222.0, 223.0, "-9999", "missing"),
    ("rail", 175.0, 175.18, "ERR", "unreadable"),
    ("V_ex", 268.0, 268.1, "", "missing"),
    ("hanger", 231.0, 232.2, "8388607", "saturated"), ("hanger", 305.0, 305.08, "-8388608", "saturated"),
    ("deck", 150.0, 150.0, "ERR", "unreadable"),  # one sample lost: 20 s between its neighbours, still bridged
    ("deck", 340.0, 340.0, "-9999", "missing"), ("deck", 350.0, 350.0, "-9999", "missing"),  # 30 s: not bridged
    ("air", 312.0, 316.0, "1.0E+06", "open"),
    ("abutment", 400.0, 403.0, "-9999", "missing"),
]
FEEDS = {  # column -> channels that need it
    "girder mid": ["girder_mid", "girder_bend", "girder_stress"], "girder top": ["girder_top", "girder_bend"],
    "rail": ["rail_bend"], "V_ex": ["rail_bend", "hanger"], "post": ["post"], "hanger": ["hanger"],
    "deck": ["deck"], "air": ["air"], "abutment": ["abutment"]}
GIRDER_CHANNELS = ["girder_mid", "girder_top", "girder_bend", "girder_stress"]

# ---- circuits, forwards ---------------------------------------------------------------------------------------


def nodes(resistors, sources, count, amplifier=None):
    """Node voltages by modified nodal analysis. Node 0 is the reference. Works on floats and on fractions.

    resistors: (node, node, ohm); sources: (node, volt); amplifier: (out, plus, minus, open-loop gain)."""
    extra = len(sources) + (amplifier is not None)
    size = count + extra
    zero = resistors[0][2] * 0
    m = [[zero] * (size + 1) for _ in range(size)]
    for i, j, ohm in resistors:
        g = 1 / ohm
        for p, q in ((i, j), (j, i)):
            if p:
                m[p - 1][p - 1] += g
                if q:
                    m[p - 1][q - 1] -= g
    for k, (i, volt) in enumerate(sources, count):
        m[i - 1][k] = m[k][i - 1] = zero + 1
        m[k][size] = volt
    if amplifier:
        out, plus, minus, gain = amplifier
        k = size - 1
        m[out - 1][k] = zero + 1
        m[k][out - 1] += 1  # out = gain (plus - minus)
        m[k][plus - 1] -= gain
        m[k][minus - 1] += gain
    for c in range(size):
        p = max(range(c, size), key=lambda i: abs(m[i][c]))
        m[c], m[p] = m[p], m[c]
        for i in range(c + 1, size):
            if m[i][c] != 0:
                w = m[i][c] / m[c][c]
                m[i] = [x - w * y if y != 0 else x for x, y in zip(m[i], m[c])]
    v = [zero] * size
    for c in reversed(range(size)):
        v[c] = (m[c][size] - sum((m[c][k] * v[k] for k in range(c + 1, size)), zero)) / m[c][c]
    return [zero] + v[:count]


def thermal(t):
    """tau as dR/R of the girder gauges, against an arbitrary origin (the zero removes it)."""
    to = sum(a * t**i for i, a in enumerate(GIRDER_TO)) * 1e-6
    return GIRDER["fd"] * to + GIRDER["f"] * GIRDER_MISMATCH * t


def girder(e, x0, t, tau):
    """V/V: three wires, one lead in arm 1, one in arm 2; the third carries no current."""
    g = GIRDER
    f = g["f"] * (1 + g["slope"] * (t - g["tref"]))
    r1 = g["r"] * (1 + f * e + x0 + tau) + g["lead"]
    r2 = g["r"] + g["lead"]
    return r1 / (r1 + r2) - 0.5


def rail(e, x0):
    """V/V: bending pair, one lead in each gauge arm."""
    g = RAIL
    x = g["f"] * e + x0
    r1, r2 = g["r"] * (1 + x) + g["lead"], g["r"] * (1 - x) + g["lead"]
    return r1 / (r1 + r2) - 0.5


def post(e, x0, number=float):
    """V/V at the input terminals, per volt at the source: nodes p n a b, then a b behind the signal leads."""
    g = {k: number(v) for k, v in POST.items()}
    x = g["f"] * number(e) + number(x0)
    along, across = g["r"] * (1 + x), g["r"] * (1 - g["nu"] * x)
    v = nodes([(1, 2, g["lead"]), (3, 0, g["lead"]), (4, 3, along), (2, 4, across), (2, 5, along), (5, 3, across),
               (4, 6, g["lead"]), (5, 7, g["lead"]), (6, 7, g["rin"])], [(1, number(1))], 7)
    return v[6] - v[7]


def hanger(e, x0, number=float):
    """Amplifier output per volt of supply: nodes p a b minus plus out; a drives the non-inverting side."""
    g = HANGER
    r, f, gain = number(g["r"]), number(g["f"]), number(g["gain"])
    active = r * (1 + f * number(e) + number(x0))
    v = nodes([(2, 0, active), (1, 2, r), (1, 3, active), (3, 0, r),
               (3, 4, number(g["rin"][0])), (4, 6, number(g["rf"][0])),
               (2, 5, number(g["rin"][1])), (5, 0, number(g["rf"][1]))], [(1, number(1))], 6, (6, 5, 4, gain))
    return v[6]


def thermistor_volts(t):
    r = DECK["r25"] * math.exp(DECK["beta"] * (1 / (t + 273.15) - 1 / 298.15))
    return DECK["supply"] * r / (r + DECK["divider"])


def platinum_ohms(t):
    r = 1 + PT_A * t + PT_B * t * t
    return 100.0 * (r if t >= 0 else r + PT_C * (t - 100) * t**3)


COUNTS_PER_VOLT = 2 ** (HANGER["bits"] - 1) / HANGER["full_scale"]


def row_time(i):
    return (START + timedelta(milliseconds=i * 1000 // RATE)).isoformat(timespec="milliseconds") + "Z"


def simulate(i):
    """Noise-free content of row i: readings in column units, and what they mean."""
    t = i / RATE
    e, temp, v = strains(t), temperatures(t), supply(t)
    u = {k: x * 1e-6 for k, x in e.items()}
    tau = thermal(temp["deck"])
    clean = {
        "girder mid": 1e3 * girder(u["girder_mid"], OFFSET["girder_mid"], temp["deck"], tau),
        "girder top": 1e3 * girder(u["girder_top"], OFFSET["girder_top"], temp["deck"], tau),
        "rail": 1e3 * v * rail(u["rail_bend"], OFFSET["rail_bend"]),
        "V_ex": v,
        "post": 1e3 * post(u["post"], OFFSET["post"]),
        "hanger": COUNTS_PER_VOLT * v * hanger(u["hanger"], OFFSET["hanger"]),
        "deck": thermistor_volts(temp["deck"]),
        "air": platinum_ohms(temp["air"]),
        "abutment": platinum_ohms(temp["abutment"]) + 2 * ABUTMENT_LEAD,
    }
    true = dict(e, **temp, girder_bend=0.5 * e["girder_mid"] - 0.5 * e["girder_top"],
                girder_stress=MODULUS_MPA * u["girder_mid"])
    return clean, true


def faults(i):
    """Faults that cover row i: column -> (text in the file, word)."""
    return {c: (text, word) for c, a, b, text, word in FAULTS if round(a * RATE) <= i <= round(b * RATE)}


def deck_samples():
    """Rows that carry a usable deck sample."""
    return [i for i in range(0, ROWS, DECK_EVERY * RATE) if "deck" not in faults(i)]


def words(i, samples):
    """Channel -> word expected in row i."""
    w = {}
    for column, (_, word) in faults(i).items():
        for channel in FEEDS[column]:
            w[channel] = word
    if not bridged(i, samples):
        for channel in ["deck"] + GIRDER_CHANNELS:
            w.setdefault(channel, "missing")
    return w


def bridged(i, samples):
    """Whether row i carries a deck sample or merely rests between two that are close enough."""
    before = max(k for k in samples if k <= i)
    after = min(k for k in samples if k >= i)
    return after - before <= LONGEST_GAP * RATE


def write_csv(header, rows):
    out = io.StringIO()
    w = csv.writer(out, lineterminator="\n")
    w.writerow(header)
    w.writerows(rows)
    return out.getvalue()


def make():
    """The three files as text."""
    draw = random.Random(SEED).random
    samples = deck_samples()
    recording, truth = [], []
    for i in range(ROWS):
        clean, true = simulate(i)
        bad = faults(i)
        row = [row_time(i), load_step(i / RATE)]
        for column in COLUMNS[2:]:
            # Sum of six uniform numbers: nearly normal, bounded, and the same on every machine.
            noise = (draw() + draw() + draw() + draw() + draw() + draw() - 3) / math.sqrt(0.5)
            if column in bad:
                row.append(bad[column][0])
            elif column == "deck" and i % (DECK_EVERY * RATE):
                row.append("")
            else:
                row.append(f"{clean[column] + NOISE[column] * noise:.{DIGITS[column]}f}")
        recording.append(row)
        if i % TRUTH_EVERY == 0:
            w = words(i, samples)
            truth.append([row_time(i)] + [f"{true[c] + 0.0:.6f}" for c, _ in CHANNELS]
                         + [" ".join(f"{c}:{w[c]}" for c, _ in CHANNELS if c in w)])
    names = [f"{c} ({unit})" for c, unit in CHANNELS]
    bounds_rows = [[f"{c} ({unit})"] + [f"{x:.5f}" for x in b[:3]] for (c, unit), b in zip(CHANNELS, bounds().values())]
    return {
        "footbridge.csv": write_csv(COLUMNS, recording),
        "footbridge_truth.csv": write_csv(["time"] + names + ["flags"], truth),
        "footbridge_bounds.csv": write_csv(["channel", "row_bound", "mean_bound", "scale_bound"], bounds_rows),
    }


# ---- bounds ---------------------------------------------------------------------------------------------------


def slope(f, x, h):
    return (f(x + h) - f(x - h)) / (2 * h)


def bounds():
    """channel -> (bound of one row, of the mean deviation, of the scale, terms as text).

    Deviation = converted - true over the truth rows without a flag. A row: every random term at its crest, plus half a
    digit of the column and of the printed result, plus the zero. Mean: four standard deviations of the mean with the
    zero, plus what does not average out. Scale: |slope - 1| of the least-squares line of converted against true, four
    standard deviations of it."""
    n = ROWS // TRUTH_EVERY - 60  # truth rows without a flag, at least
    everything = [dict(strains(k), **temperatures(k)) for k in range(SECONDS + 1)]
    low, high = temperatures(0)["deck"], max(temperatures(k)["deck"] for k in range(SECONDS + 1))
    sens = {  # |d column / d microstrain| at the largest load, where every bridge here is least sensitive or nearly so
        "girder mid": min(abs(slope(lambda e: girder(e, 4.3e-4, t, 0.0), x, 1e-5)) for t in (low, high) for x in (0.0, 34e-5)) * 1e-3,
        "girder top": min(abs(slope(lambda e: girder(e, -7.1e-4, t, 0.0), x, 1e-5)) for t in (low, high) for x in (0.0, -29e-5)) * 1e-3,
        "rail": abs(slope(lambda e: rail(e, 2.2e-4), 0.0, 1e-5)) * 2.4999 * 1e-3,
        "post": min(abs(slope(lambda e: post(e, -1.6e-4), x, 1e-5)) for x in (0.0, -16e-5)) * 1e-3,
        "hanger": min(abs(slope(lambda e: hanger(e, 1.9e-4), x, 1e-5)) for x in (0.0, 72e-5)) * 2.4999 * 1e-6 * COUNTS_PER_VOLT,
    }
    # Output per supply times the relative error of V_ex; the largest signal of rail and hanger, in the column unit.
    vex = {"rail": 1e3 * rail(13e-5, 2.2e-4), "hanger": COUNTS_PER_VOLT * hanger(72e-5, 1.9e-4)}
    # Deck temperature: noise of a sample, and the chord of the curve over the longest bridged gap (20 s).
    t_slope = min(abs(slope(thermistor_volts, t, 0.01)) for t in (low, high))
    bend = max(abs(temperatures(k - 10)["deck"] - 2 * temperatures(k)["deck"] + temperatures(k + 10)["deck"]) for k in range(10, SECONDS - 9)) / 2
    deck_noise = NOISE["deck"] / t_slope
    deck_half = 0.5 * 10.0 ** -DIGITS["deck"] / t_slope
    out = {}

    def strain(column, channel):
        s, sd = sens[column], math.hypot(NOISE[column], 10.0 ** -DIGITS[column] / math.sqrt(12))
        if column in vex:
            sd = math.hypot(sd, vex[column] * NOISE["V_ex"])
        zero_n = 20 * RATE if channel == "post" else ZERO_ROWS - 5
        noise = (CREST * NOISE[column] + 0.5 * 10.0 ** -DIGITS[column]) / s
        if column in vex:
            noise += vex[column] * (CREST * NOISE["V_ex"] + 0.5e-5) / s
        zero = 6 * sd / s / math.sqrt(zero_n)
        heat = warm = 0.0
        if column.startswith("girder"):
            per_kelvin = max(abs(slope(thermal, t, 0.01)) for t in (low, high)) / GIRDER["f"] * 1e6
            heat = per_kelvin * (2 * (CREST * deck_noise + deck_half) + bend)  # T now and T at the zero
            warm = per_kelvin * (4 * deck_noise + 0.1 * bend + deck_half)
        row = noise + zero + heat
        mean = 4 * sd / s * math.sqrt(1 / zero_n + 1 / n) + warm
        # Deck noise lasts from sample to sample, so it counts once a sample.
        scale = 4 * math.sqrt((sd / s) ** 2 / n + (warm / 4) ** 2 / 46) / spread(channel)
        return row, mean, scale, f"noise {noise:.3f}, zero {zero:.3f}, temperature {heat:.3f}"

    def spread(channel):
        """Standard deviation of the true values, in their unit."""
        x = [v[channel] for v in everything]
        m = sum(x) / len(x)
        return math.sqrt(sum((v - m) ** 2 for v in x) / len(x))

    mid, top = strain("girder mid", "girder_mid"), strain("girder top", "girder_top")
    half = {u: 0.5 * 10.0 ** -d for u, d in DECIMALS.items()}
    raw = {
        "girder_mid": mid, "girder_top": top,
        "girder_bend": tuple(0.5 * (p + q) for p, q in zip(mid[:2], top[:2])) + (max(mid[2], top[2]), "half of both"),
        "girder_stress": tuple(x * MODULUS_MPA * 1e-6 for x in mid[:2]) + (mid[2], "girder_mid times the modulus"),
        "rail_bend": strain("rail", "rail_bend"), "post": strain("post", "post"), "hanger": strain("hanger", "hanger"),
    }
    for channel, noise, half_digit, rows in [("deck", deck_noise, deck_half, 46)] + [
            (c, NOISE[c] / slope(platinum_ohms, 12.0, 0.1), 0.5e-3 / slope(platinum_ohms, 12.0, 0.1), n) for c in ("air", "abutment")]:
        sd = math.hypot(noise, 2 * half[dict(CHANNELS)[channel]] / math.sqrt(12))
        raw[channel] = (CREST * noise + half_digit, 4 * noise / math.sqrt(rows), 4 * sd / math.sqrt(rows) / spread(channel), "noise and half a digit")
    for channel, unit in CHANNELS:
        row, mean, scale, text = raw[channel]
        out[channel] = (row + half[unit], mean + 4 * half[unit] / math.sqrt(3 * (46 if channel == "deck" else n)), scale,
                        f"{text}, printed digit {half[unit]:g}")
    return out


def main():
    if sys.argv[1:] == ["--bounds"]:
        for channel, (row, mean, scale, text) in bounds().items():
            print(f"{channel}: one row {row:.4f}, mean {mean:.4f} {dict(CHANNELS)[channel]}, scale {scale:.6f} ({text})")
    elif not sys.argv[1:]:
        for name, text in make().items():
            (HERE / name).write_bytes(text.encode())
    else:
        sys.exit(__doc__)


if __name__ == "__main__":
    main()
