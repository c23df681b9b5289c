"""Kinds whose network changes reading by reading, shunts and transducers: 3 000 rows each."""

import laws
import nodal
from kinds import (AMPLIFIER, AMPLIFIER_FLOOR, AMPLIFIER_TEXT, BRIDGE_TEXT, EXACT, GENERAL, LOAD, NEARLY_EQUAL, PLAIN_FLOOR, STRAIN,
                   SUPPLY_LEADS, SIGNAL_LEADS, F, X0, ZERO_TO_TEN, Kind, bridge_row, coefficients, cycle, difference, own_arms, root)
from mpmath import mpf

ROWS = 3_000
COLUMNS = ["value", "delta", "slope", "slope_t"]
MICRO = laws.MICRO
LEAD = [("lead", ["uniform -40 90"])]
WARMTH = [("alpha", "uniform 0.0035 0.0045"), ("lead_ref", "uniform 15 30"), ("lead_zero", "uniform 0 40")]
ZERO = ("zero", "uniform -0.002 0.002")
WARM_TEXT = [
    "Leads as named below at lead_ref; at the temperature `lead` of a row they are multiplied by 1 + alpha (lead - lead_ref),",
    "in degC; x0 solves reading = zero with e = tau = 0 and the leads at lead_zero.",
    "slope_t: d value / d lead in 1/K, all else held.",
]
POINTS = [0.0, -0.1, 0.1, 1e-6, -1e-6, 1e-9, -1e-9]


def offset(network, target):
    """x0 of a bridge whose reading at rest is `target`."""
    return root(lambda x: nodal.bridge(network, x)[1], target, mpf(0))


def balanced(p):
    """Arm 2 made up with the leads in place, as warm as they were at zero."""
    if not p.get("balanced"):
        return p
    return dict(p, r2=p["r2"] + (p["wire1"] + p["wire2"]) * laws.warmth(p, p["lead_zero"]))


def warm(p):
    p = balanced(p)
    x0 = offset(nodal.with_leads_times(p, laws.warmth(p, p["lead_zero"])), p["zero"])

    def reading(e, lead):
        return nodal.bridge(nodal.with_leads_times(p, laws.warmth(p, lead)), p["f"] * e + x0)[1]

    return two_inputs(reading)


def two_inputs(reading):
    """Columns of a reading that depends on a quantity and on one thing beside it."""
    def row_of(row, read):
        q, beside = mpf(row[0]), mpf(row[1])
        columns = bridge_row(lambda q: reading(q, beside), row, read)
        columns["slope_t"] = difference(lambda t: reading(q, t), beside)
        return columns
    return row_of


def own(p):
    """Every gauge at its own temperature, at zero too."""
    start = [p["zero_t" + i] for i in "1234"]
    x0 = offset(p, p["zero"])

    def output(t):
        return p["f_data"] * laws.thermal_output(p, t)

    def reading(e, temperatures):
        x = [laws.gauge_factor(p, t) * e + x0 for t in temperatures]
        tau = [output(t) - output(t0) for t, t0 in zip(temperatures, start)]
        return nodal.bridge(p, x, tau)[1]

    def row_of(row, read):
        e, first, *others = map(mpf, row)
        columns = bridge_row(lambda e: reading(e, [first] + others), row, read)
        columns["slope_t"] = difference(lambda t: reading(e, [t] + others), first)
        return columns
    return row_of


def shunted(p):
    return lambda row, read: bridge_row(lambda e: nodal.bridge(p, p["f"] * e + p["x0"])[1], row, read)


def points(p):
    """A table of thermal output, and the transverse sensitivity of the grid."""
    table = [(p[f"t{i}"], p[f"to{i}"] * MICRO) for i in range(6)]
    factor = (1 - mpf(285) / 1000 * p["k"]) / (1 + p["k"] * p["ratio"])
    network = {name: p["r1"] for name in ("r1", "r2", "r3", "r4")} | {"c1": mpf(1), "t1": mpf(1)}
    x0 = offset(network, p["zero"])
    at_zero = laws.monotone_cubic(table, p["t0_zero"])

    def reading(e, t):
        tau = p["f_data"] * (laws.monotone_cubic(table, t) - at_zero)
        return nodal.bridge(network, laws.gauge_factor(p, t) * e / factor + x0, tau)[1]
    return two_inputs(reading)


def transducer(p, output):
    """A full bridge of arms +-x, x the output over supply that `output` gives for a load."""
    x0 = offset(nodal.with_leads_times(p, laws.warmth(p, p["lead_zero"])), p["zero"])

    def reading(load, lead):
        return nodal.bridge(nodal.with_leads_times(p, laws.warmth(p, lead)), output(load) + x0)[1]
    return two_inputs(reading)


def rated(p):
    return transducer(p, lambda load: p["rated"] * load / p["capacity"])


def certificate(p):
    a = [p[f"a{i}"] for i in range(4)]

    def polynomial(x):
        return a[0] + x * (a[1] + x * (a[2] + x * a[3]))

    if p["gives_output"]:  # a0 to a3 are those of an output in mV/V; the other way round they are turned into loads
        return transducer(p, lambda load: polynomial(load) / 1000)
    return transducer(p, lambda load: root(polynomial, load, load / a[1], mpf(10) ** -40) / 1000)


def platinum(p):
    def row_of(row, read):
        t, lead = mpf(row[0]), mpf(row[1])
        excess = (p["wire1"] + p["wire2"] if p["wires"] == 2 else p["wire1"] - p["wire2"]) * laws.warmth(p, lead)
        ohms, slope = laws.platinum(p, t)
        value = ohms + excess
        back = laws.platinum_inverse(p, read(value) - excess, t)
        return {"value": value, "delta": back - t, "slope": slope, "slope_t": excess / laws.warmth(p, lead) * p["alpha"]}
    return row_of


def kind(name, seed, title, text, evaluate, params, inputs, given, columns=COLUMNS, floor=PLAIN_FLOOR, delta="absolute 1e-19",
         words=BRIDGE_TEXT):
    return Kind(name, seed, [title] + words + text + floor, inputs, evaluate, columns, params=params, points=given,
                points_in_every_block=True, delta=delta, rows=ROWS)


def beside(first, seconds):
    return [[e, seconds[i % len(seconds)]] for i, e in enumerate(first)]


LEAD_POINTS = beside(POINTS, [20.0, -40.0, 90.0])
LOADS = [("load", ["uniform -60 60", "uniform -1 1"]), ("lead", ["uniform -40 90"])]
LOAD_POINTS = beside([0.0, 60.0, -60.0, 1e-3, -1e-3, 1e-6], [20.0, -40.0, 90.0])
CELL = own_arms(*[(345, 355)] * 4) + coefficients("1", "-1", "1", "-1") + SUPPLY_LEADS + SIGNAL_LEADS + [("input", LOAD)] + WARMTH
ALLOWED_LOAD = ["Allowed as for strain; 5e-16 / |slope| is in units of load."]

SIDES = [
    kind("warm_2wire", 601, "Quarter bridge on two wires that warm, balanced with them in place: e, 0, 0, 0; R2 = r2 + wires at lead_zero",
         WARM_TEXT, warm,
         own_arms(*[(340, 360)] * 4) + coefficients("1") + [F, ZERO] + cycle(("wires", 2.0), ("balanced", 1.0))
         + [("wire1", ZERO_TO_TEN), ("wire2", ZERO_TO_TEN)] + WARMTH, STRAIN + LEAD, LEAD_POINTS),
    kind("warm_3wire", 602, "Quarter bridge on three unequal wires that warm, loaded: e, 0, 0, 0", WARM_TEXT, warm,
         own_arms(*[(340, 360)] * 4) + coefficients("1") + [F, ZERO] + cycle(("wires", 3.0))
         + [("wire1", ZERO_TO_TEN), ("wire2", ZERO_TO_TEN), ("wire3", ZERO_TO_TEN), ("input", LOAD)] + WARMTH,
         STRAIN + LEAD, LEAD_POINTS),
    kind("warm_full", 603, "Full bridge, unequal arms and coefficients, supply and signal leads that warm, loaded", WARM_TEXT, warm,
         NEARLY_EQUAL + GENERAL + [F, ZERO] + SUPPLY_LEADS + SIGNAL_LEADS + [("input", LOAD)] + WARMTH, STRAIN + LEAD, LEAD_POINTS),
    kind("warm_six", 604,
         "Half bridge on three wires with supply and signal leads, all warming, behind a difference amplifier, sensed: e, -e, 0, 0",
         WARM_TEXT + AMPLIFIER_TEXT + ["out = reference + open_loop_gain (q - m). Sensed: over the voltage p - n."], warm,
         own_arms(*[(340, 360)] * 4) + coefficients("1", "-1") + [F, ("zero", "uniform -0.2 0.2")] + cycle(("wires", 3.0))
         + [("wire1", ZERO_TO_TEN), ("wire2", ZERO_TO_TEN), ("wire3", ZERO_TO_TEN)] + SUPPLY_LEADS + SIGNAL_LEADS + AMPLIFIER
         + [("open_loop_gain", "octave 13 20"), ("input", LOAD)] + cycle(("sensed", 1.0)) + WARMTH,
         STRAIN + LEAD, LEAD_POINTS, floor=AMPLIFIER_FLOOR),
    kind("own_arms", 605, "Full bridge, loaded, every gauge at a temperature of its own: e, -nu e, e, -nu e",
         ["tau_i = f_data (TO(T_i) - TO(zero_ti)), TO = (to0 + ... + to4 T^4) 1e-6; R_i = r_i [1 + c_i (F(T_i) e + x0) + tau_i],",
          "F(T) = f [1 + s (T - t_ref)]; x0 solves reading = zero with e = tau = 0. slope_t: d value / d temperature1 in 1/K."],
         own,
         NEARLY_EQUAL + [("nu", "uniform 0.2 0.4")] + coefficients("1", "minus nu", "1", "minus nu")
         + cycle(*[(f"t{i}", 1.0) for i in "1234"]) + [
             F, ZERO, ("input", LOAD), ("s", "uniform -1.5e-4 1.5e-4"), ("t_ref", "uniform 18 30"), ("to0", "uniform -40 -20"),
             ("to1", "uniform 1 3"), ("to2", "uniform -0.08 -0.04"), ("to3", "uniform 1e-4 5e-4"), ("to4", "uniform -5e-7 -1e-7"),
             ("f_data", "uniform 1.9 2.1")] + [(f"zero_t{i}", "uniform 0 40") for i in "1234"],
         STRAIN + [(f"temperature{i}", ["uniform -50 150"]) for i in "1234"],
         [[e, 20.0, -50.0, 150.0, 24.0] for e in POINTS]),
    kind("shunt_full", 606, "Full bridge with leads and load, a shunt across one arm: at the gauge or at the instrument",
         ["shunt_arm 1 to 4; shunt_outside 0: across the arm itself; 1: from a' (arms 1, 2) or b' (arms 3, 4) to source - (arms 1, 4)",
          "or source + (arms 2, 3), outside all leads."], shunted,
         NEARLY_EQUAL + GENERAL + [F, X0] + SUPPLY_LEADS + SIGNAL_LEADS + [("input", LOAD), ("shunt", "octave 14 19")]
         + [("shunt_arm", "cycle 1 2 3 4"), ("shunt_outside", "cycle 0 0 0 0 1 1 1 1")], STRAIN, [[e] for e in POINTS],
         columns=["value", "delta", "slope"]),
    kind("shunt_3wire", 607, "Quarter bridge on three wires, loaded, a shunt across the gauge or the fixed resistor beside it: e, 0, 0, 0",
         ["shunt_arm 1 or 2; shunt_outside 0: across the arm itself; 1: across the gauge from a' to source -, outside all leads;",
          "across the fixed resistor of arm 2 it is across the resistor itself either way."], shunted,
         own_arms(*[(340, 360)] * 4) + coefficients("1") + [F, X0] + cycle(("wires", 3.0))
         + [("wire1", ZERO_TO_TEN), ("wire2", ZERO_TO_TEN), ("wire3", ZERO_TO_TEN), ("input", LOAD), ("shunt", "octave 14 19")]
         + [("shunt_arm", "cycle 1 2"), ("shunt_outside", "cycle 0 0 1 1")], STRAIN, [[e] for e in POINTS],
         columns=["value", "delta", "slope"]),
    kind("strain_points", 608, "Quarter bridge of four equal arms, thermal output as points, transverse sensitivity, zero reading",
         ["R1 = r1 [1 + F(T) e_grid + x0 + tau], R2 = R3 = R4 = r1; F(T) = f [1 + s (T - t_ref)]; e = e_grid (1 - 0.285 k)/(1 + k ratio);",
          "tau = f_data (P(T) - P(t0_zero)); P: the monotone cubic (laws.py) through (t0, to0) ... (t5, to5), degC and microstrain;",
          "x0 solves reading = zero with e = tau = 0. slope_t: d value / d T in 1/K."], points,
         [("r1", "uniform 100 1100"), ("f", "uniform 1.8 2.3"), ("s", "uniform -1.5e-4 1.5e-4"), ("t_ref", "uniform 18 30"), ZERO,
          ("f_data", "uniform 1.9 2.1"), ("k", "uniform -0.01 0.02"), ("ratio", "uniform -2 2"), ("t0_zero", "uniform 0 40"),
          ("t0", "uniform -60 -50"), ("t1", "uniform -20 -5"), ("t2", "uniform 15 25"), ("t3", "uniform 40 60"),
          ("t4", "uniform 90 110"), ("t5", "uniform 150 180")] + [(f"to{i}", "uniform -150 50") for i in range(6)],
         STRAIN + [("temperature", ["uniform -50 150"])], beside(POINTS, [0.0, -50.0, 150.0, 24.0]), words=[
             "Source 1 V, nodal analysis. " + EXACT,
             "value: the reading; slope: d value / d e; the reading that `value` reads as belongs to the strain e + delta exactly."]),
    kind("transducer_rated", 609, "Transducer of rated output and capacity with leads that warm, loaded; R_i = r_i (1 +- (rated load/capacity + x0))",
         WARM_TEXT + ALLOWED_LOAD, rated, CELL + [ZERO, ("rated", "uniform 0.001 0.003"), ("capacity", "uniform 20 100")],
         LOADS, LOAD_POINTS, delta="absolute 1e-17"),
    kind("transducer_certificate", 610,
         "Transducer with the polynomial of a certificate, leads that warm, loaded; R_i = r_i (1 +- (output + x0)), output in mV/V",
         ["gives_output 1: output = a0 + a1 load + a2 load^2 + a3 load^3 in mV/V."] + WARM_TEXT + ALLOWED_LOAD, certificate,
         CELL + cycle(("gives_output", 1.0)) + [ZERO, ("a0", "uniform -0.01 0.01"), ("a1", "uniform 0.02 0.06"), ("a2", "uniform -2e-5 2e-5"),
                                               ("a3", "uniform -2e-7 2e-7")], LOADS, LOAD_POINTS, delta="absolute 1e-17"),
    kind("transducer_certificate_load", 611,
         "Transducer with the polynomial of a certificate, leads that warm, loaded; R_i = r_i (1 +- (output + x0)), output in mV/V",
         ["gives_output 0: load = a0 + a1 output + a2 output^2 + a3 output^3, output in mV/V."] + WARM_TEXT + ALLOWED_LOAD, certificate,
         CELL + cycle(("gives_output", 0.0)) + [ZERO, ("a0", "uniform -0.3 0.3"), ("a1", "uniform 16 40"), ("a2", "uniform -0.3 0.3"),
                                               ("a3", "uniform 0 0.05")], LOADS, LOAD_POINTS, delta="absolute 1e-17"),
    kind("warm_platinum", 612, "Platinum resistance thermometer on two or three wires that warm",
         ["value = R(t) + excess, in ohm; R of IEC 60751's form (laws.py); excess = (wire1 + wire2) or (wire1 - wire2), times",
          "1 + alpha (lead - lead_ref). slope = dR/dt in ohm/K; slope_t: d value / d lead in ohm/K. " + EXACT,
          "Inverse: the resistance read from `value` belongs to t + delta exactly, at this temperature of the leads."], platinum,
         [("r0", "uniform 95 1050"), ("a", "uniform 0.00384 0.00399"), ("b", "uniform -6.1e-7 -5.5e-7"), ("c", "uniform -4.6e-12 -3.9e-12"),
          ("wires", "cycle 2 3"), ("wire1", ZERO_TO_TEN), ("wire2", ZERO_TO_TEN)] + WARMTH[:2],
         [("t", ["uniform -200 850", "uniform -1 1"])] + LEAD, beside([0.0, -200.0, 850.0, 1e-9, -1e-9], [20.0, -40.0, 90.0]),
         floor=["Allowed: forward 1e-12 relative; inverse 1e-9 K over the whole range; slopes 1e-9 relative."], delta="absolute 1e-16",
         words=[]),
]
