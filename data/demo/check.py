#!/usr/bin/env python3
"""Run the circuits of generate.py backwards over footbridge.csv, numerically.

Python 3.11 standard library only. It shares the forward circuits with generate.py, so it proves the bounds and the
files, not the physics; a converter under test has its own circuits and proves those.

    check.py             the files are what generate.py makes, the sheet says the same numbers, float nodes agree with
                         exact fractions, all truth rows lie within their bounds, words are as expected
    check.py --mistakes  convert with one mistake at a time and print which bound notices it
"""
import csv
import io
import math
import re
import sys
import tomllib
from fractions import Fraction

import generate
from generate import (
    ABUTMENT_LEAD, CHANNELS, COUNTS_PER_VOLT, DECIMALS, DECK, DECK_EVERY, GIRDER, GIRDER_MISMATCH, GIRDER_TO, HANGER, HERE,
    LONGEST_GAP, MODULUS_MPA, OFFSET, POST, RAIL, RATE, ROWS, TRUTH_EVERY, ZERO_ROWS, bounds, girder, hanger, make,
    platinum_ohms, post, rail, thermal, thermistor_volts)

def root(f, a, b):
    """Where f crosses zero, by secant steps from a and b; f is nearly linear."""
    fa, fb = f(a), f(b)
    for _ in range(60):
        if fa == fb:
            return b
        a, b, fa = b, b - fb * (b - a) / (fb - fa), fb
        fb = f(b)
        if fb == 0 or abs(b - a) < 1e-12 * max(1.0, abs(b)):
            return b
    sys.exit("no root")


def number(text):
    try:
        x = float(text)
    except ValueError:
        return None
    return None if text == "-9999" else x


def compare_sheet():
    """The numbers in footbridge.toml are the numbers above."""
    sheet = tomllib.loads((HERE / "footbridge.toml").read_text(encoding="utf-8"))
    g, c = sheet["common"]["girder"], sheet["channel"]

    def value(text):
        x = float(re.match(r"[-+±]*([-+.\deE]+)", text)[1])
        return x * 1e3 if "kohm" in text else x

    amp, divider = c["hanger"]["amplifier"]["difference"], c["deck"]["circuit"]
    pairs = [
        (value(g["gauge"]["resistance"]), GIRDER["r"]), (value(g["gauge"]["gauge_factor"]), GIRDER["f"]),
        (value(g["gauge"]["slope"]) / 1e4, GIRDER["slope"]), (value(g["gauge"]["reference"]), GIRDER["tref"]),
        (value(g["leads"]["each"]), GIRDER["lead"]), (g["thermal_output"]["gauge_factor"], GIRDER["fd"]),
        (tuple(g["thermal_output"]["coefficients"]), GIRDER_TO), (g["zero"]["rows"], ZERO_ROWS),
        (value(g["expansion"]["specimen"]) - value(g["expansion"]["data"]), GIRDER_MISMATCH),
        (value(g["temperature"]["longest_gap"]), LONGEST_GAP), (value(c["girder_stress"]["material"]["modulus"]) * 1e3, MODULUS_MPA),
        (value(c["hanger"]["converter"]["full_scale"]), HANGER["full_scale"]), (c["hanger"]["converter"]["bits"], HANGER["bits"]),
        (tuple(map(value, amp["input"])), HANGER["rin"]), (tuple(map(value, amp["feedback"])), HANGER["rf"]),
        (amp["open_loop_gain"], HANGER["gain"]), (c["post"]["bridge"]["poisson"], POST["nu"]),
        (value(c["post"]["bridge"]["supply_leads"]), POST["lead"]), (value(c["post"]["bridge"]["signal_leads"]), POST["lead"]),
        (value(c["post"]["bridge"]["input_resistance"]), POST["rin"]), (value(c["rail_bend"]["leads"]["each"]), RAIL["lead"]),
        (value(c["deck"]["thermistor"]["r25"]), DECK["r25"]), (value(c["deck"]["thermistor"]["beta"]), DECK["beta"]),
        (value(divider["divider"]), DECK["divider"]), (value(divider["supply"]), DECK["supply"]),
        (value(c["abutment"]["leads"]["each"]), ABUTMENT_LEAD),
    ]
    for channel, own in (("rail_bend", RAIL), ("post", POST), ("hanger", HANGER)):
        pairs += [(value(c[channel]["gauge"]["resistance"]), own["r"]), (value(c[channel]["gauge"]["gauge_factor"]), own["f"])]
    shown = [(n, u) for n, u in ((n, k.get("output", g["output"])) for n, k in c.items())]
    for a, b in pairs + [(shown, CHANNELS)]:
        same = a == b if not isinstance(b, float) else math.isclose(a, b, rel_tol=1e-12)
        if not same:
            sys.exit(f"footbridge.toml says {a}, this program {b}")


def compare_nodes():
    for e in (0.0, 1e-4, -2e-4, 7e-4):  # the float nodes against exact fractions
        for f, x0 in ((post, OFFSET["post"]), (hanger, OFFSET["hanger"])):
            exact = f(Fraction(e), Fraction(x0), Fraction)
            if abs(Fraction(f(e, x0)) - exact) > abs(exact) * Fraction(1, 10**9) + Fraction(1, 10**14):
                sys.exit(f"{f.__name__} at {e}: float nodes are off by {float(Fraction(f(e, x0)) - exact):.3g}")
    # A closed form for the difference amplifier, the bridge given by its two Thevenin sources.
    e, x0 = 5e-4, OFFSET["hanger"]
    r1 = 700 * (1 + 2.09 * e + x0)
    va, vb, rs = r1 / (r1 + 700), 700 / (r1 + 700), r1 * 700 / (r1 + 700)
    (ra, rb), (fa, fb), gain = HANGER["rin"], HANGER["rf"], HANGER["gain"]
    plus = va * fb / (rs + rb + fb)
    beta = (rs + ra) / (rs + ra + fa)
    out = gain * (plus - vb * (1 - beta)) / (1 + gain * beta)
    if abs(out - hanger(e, x0)) > 1e-9 * abs(out):
        sys.exit("hanger: nodal analysis and Thevenin form differ")


def backwards(made):
    """Convert the recording; channel -> deviations and true values at the truth rows; words that do not fit."""
    table = list(csv.DictReader(io.StringIO(made["footbridge.csv"])))
    truth = list(csv.DictReader(io.StringIO(made["footbridge_truth.csv"])))
    invalid = {("hanger", "8388607"), ("hanger", "-8388608"), ("air", "1.0E+06")}

    def reading(i, column):
        text = table[i][column]
        return None if (column, text) in invalid else number(text)

    deck = {}
    for i in range(0, ROWS, DECK_EVERY * RATE):
        v = reading(i, "deck")
        if v is not None:
            deck[i] = root(lambda t: thermistor_volts(t) - v, 10.0, 20.0)
    keys = sorted(deck)

    def deck_at(i):
        a, b = max(k for k in keys if k <= i), min(k for k in keys if k >= i)
        if b - a > LONGEST_GAP * RATE:
            return None
        return deck[a] if a == b else deck[a] + (deck[b] - deck[a]) * (i - a) / (b - a)

    def y(i, column):
        """Output per supply of one row."""
        v = reading(i, column)
        if column in ("rail", "hanger"):
            s = reading(i, "V_ex")
            return None if v is None or s is None else v / s / (1e3 if column == "rail" else COUNTS_PER_VOLT)
        return None if v is None else v / 1e3

    def mean(values):
        values = [v for v in values if v is not None]
        return sum(values) / len(values)

    def zero(column, first, last, f):
        y0 = mean(y(i, column) for i in range(first, last))
        return root(lambda x: f(0.0, x) - y0, 0.0, 1e-4)

    t0 = mean(deck_at(i) for i in range(ZERO_ROWS) if reading(i, "girder mid") is not None)
    t0_top = mean(deck_at(i) for i in range(ZERO_ROWS))
    start = {
        "girder_mid": zero("girder mid", 0, ZERO_ROWS, lambda e, x: girder(e, x, t0, 0.0)),
        "girder_top": zero("girder top", 0, ZERO_ROWS, lambda e, x: girder(e, x, t0_top, 0.0)),
        "rail_bend": zero("rail", 0, ZERO_ROWS, rail),
        "post": zero("post", 5 * RATE, 25 * RATE + 1, post),
        "hanger": zero("hanger", 0, ZERO_ROWS, hanger),
    }

    def convert(i):
        out = {}
        t = deck_at(i)
        for channel, column, origin in (("girder_mid", "girder mid", t0), ("girder_top", "girder top", t0_top)):
            v = y(i, column)
            if v is not None and t is not None:
                tau = thermal(t) - thermal(origin)
                out[channel] = 1e6 * root(lambda e: girder(e, start[channel], t, tau) - v, 0.0, 1e-4)
        for channel, column, f in (("rail_bend", "rail", rail), ("post", "post", post), ("hanger", "hanger", hanger)):
            v = y(i, column)
            if v is not None:
                out[channel] = 1e6 * root(lambda e: f(e, start[channel]) - v, 0.0, 1e-4)
        if i in deck:
            out["deck"] = deck[i]
        for channel, lead in (("air", 0.0), ("abutment", 2 * generate.ABUTMENT_LEAD)):
            r = reading(i, channel)
            if r is not None:
                out[channel] = root(lambda x: platinum_ohms(x) - (r - lead), 0.0, 20.0)
        if "girder_mid" in out:
            out["girder_stress"] = MODULUS_MPA * 1e-6 * out["girder_mid"]
            if "girder_top" in out:
                out["girder_bend"] = 0.5 * out["girder_mid"] - 0.5 * out["girder_top"]
        return out

    pairs, misfit = {c: [] for c, _ in CHANNELS}, []
    for k, row in enumerate(truth):
        got = convert(k * TRUTH_EVERY)
        flagged = {w.split(":")[0] for w in row["flags"].split()}
        for channel, unit in CHANNELS:
            if channel == "deck" and k * TRUTH_EVERY not in deck and generate.bridged(k * TRUTH_EVERY, keys):
                # a row that rests between two samples has neither a value nor a word; a failed sample has its word
                if (channel in flagged) != ("deck" in generate.faults(k * TRUTH_EVERY)):
                    misfit.append(f"{row['time']} {channel}: word and value do not fit between two samples")
            elif (channel in got) == (channel in flagged):
                misfit.append(f"{row['time']} {channel}: word and value do not fit")
            elif channel in got:
                true = float(row[f"{channel} ({unit})"])
                pairs[channel].append((true, round(got[channel], DECIMALS[unit]) - true))
    step = mean(y(ROWS - 1 - i, "girder mid") for i in range(50)) - mean(y(i, "girder mid") for i in range(ZERO_ROWS))
    return pairs, misfit, (4e6 / GIRDER["f"] * step, pairs["girder_mid"][-1][0])


def statistics(pairs):
    """Worst deviation, mean deviation, slope - 1."""
    n = len(pairs)
    mean_true, mean_off = sum(t for t, _ in pairs) / n, sum(d for _, d in pairs) / n
    over = sum((t - mean_true) ** 2 for t, _ in pairs)
    return max(abs(d) for _, d in pairs), mean_off, sum((t - mean_true) * d for t, d in pairs) / over


def check():
    made = make()
    bad = [name for name, text in made.items() if (HERE / name).read_bytes() != text.encode()]
    if bad:
        sys.exit(f"not what this program makes: {', '.join(bad)}")
    compare_sheet()
    compare_nodes()
    pairs, misfit, (raw, true) = backwards(made)
    limit, failed = bounds(), len(misfit)
    print("\n".join(misfit), end="\n" if misfit else "")
    for channel, unit in CHANNELS:
        got, allowed = statistics(pairs[channel]), limit[channel]
        print(f"{channel}: {len(pairs[channel])} rows, worst {got[0]:.4f} (bound {allowed[0]:.4f}) {unit}, "
              f"mean {got[1]:+.5f} (bound {allowed[1]:.5f}) {unit}, scale {got[2]:+.6f} (bound {allowed[2]:.6f})")
        failed += any(abs(g) > a for g, a in zip(got, allowed))
    print(f"girder mid after unloading, linear and uncorrected: {raw:.1f} microstrain; true {true:.1f}")
    sys.exit(1 if failed else 0)


def mistakes():
    """Each a change of the constants that the way back uses; the recording stays."""
    made, limit = make(), bounds()
    tries = [
        ("girder leads left out", GIRDER, dict(lead=0.0)), ("gauge factor at 23 degC everywhere", GIRDER, dict(slope=0.0)),
        ("thermal output read at the gauge's own factor", GIRDER, dict(fd=2.13)), ("rail leads left out", RAIL, dict(lead=0.0)),
        ("post leads left out", POST, dict(lead=1e-6)), ("post input resistance left out", POST, dict(rin=1e15)),
        ("Poisson 0.285 for 0.3", POST, dict(nu=0.285)), ("ideal operational amplifier", HANGER, dict(gain=1e12)),
        ("amplifier does not load the bridge", HANGER, dict(rin=(3301e4, 3298e4), rf=(912.6e7, 910.9e7))),
        ("amplifier resistors nominal", HANGER, dict(rin=(3300.0, 3300.0), rf=(910e3, 910e3))),
        ("amplifier sides swapped", HANGER, dict(rin=HANGER["rin"][::-1], rf=HANGER["rf"][::-1])),
        ("beta 3650 K for 3610 K", DECK, dict(beta=3650.0)),
    ]
    names = {"GIRDER_MISMATCH": (0.0, "no expansion mismatch"), "GIRDER_TO": ((0.0,), "no package polynomial"),
             "ABUTMENT_LEAD": (0.0, "abutment leads left out")}
    unseen = 0

    def run(text):
        nonlocal unseen
        pairs, _, _ = backwards(made)
        seen = []
        for channel, _ in CHANNELS:
            hit = [name for name, g, a in zip(("row", "mean", "scale"), statistics(pairs[channel]), limit[channel]) if abs(g) > a]
            if hit:
                seen.append(f"{channel} {'+'.join(hit)}")
        print(f"{text}: {', '.join(seen) or 'NOT NOTICED'}")
        unseen += not seen

    for text, store, change in tries:
        before = dict(store)
        store.update(change)
        run(text)
        store.update(before)
    for name, (value, text) in names.items():
        before = getattr(generate, name)
        setattr(generate, name, value)
        run(text)
        setattr(generate, name, before)
    sys.exit(1 if unseen else 0)


if __name__ == "__main__":
    if sys.argv[1:] == []:
        check()
    elif sys.argv[1:] == ["--mistakes"]:
        mistakes()
    else:
        sys.exit(__doc__)
