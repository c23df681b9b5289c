"""What is written: one Kind a file, with its inputs, its words, and how one row is computed."""

from dataclasses import dataclass, field

import laws
import nodal
from mpmath import mp, mpf

mp.dps = 50
ROWS = 10_000
BLOCK = 100


@dataclass
class Kind:
    name: str
    seed: int
    text: list  # prose lines of the header
    inputs: list  # (name, [rule, ...]): block b uses rule b mod n
    evaluate: object  # parameters -> (row of inputs, reader of printed values) -> column name -> exact number
    columns: list
    params: list = field(default_factory=list)  # (name, rule)
    points: list = field(default_factory=list)  # rows of inputs, before the random ones
    points_in_every_block: bool = False
    null: object = None  # parameters -> row of inputs where the reading is zero
    delta: str = ""  # "absolute UNIT" or "relative UNIT"
    rows: int = ROWS
    block: int = BLOCK


# ---- functions of one number -------------------------------------------------------------------------------------------

def plain(function):
    def evaluate(_p):
        def row_of(row, _read):
            return {"value": function(mpf(row[0]))}
        return row_of
    return evaluate


def law(forward, inverse):
    """Columns of an element law: value, delta of the inverse, slope."""
    def evaluate(p):
        def row_of(row, read):
            x = mpf(row[0])
            value, slope = forward(p, x)
            back = inverse(p, read(value), x)
            return {"value": value, "delta": back - x, "slope": slope}
        return row_of
    return evaluate


# ---- networks ----------------------------------------------------------------------------------------------------------

STEP = mpf(10) ** -17  # central differences at 50 digits: truncation and rounding both stay below 1e-30 of the slope


def difference(function, x, step=STEP):
    return (function(x + step) - function(x - step)) / (2 * step)


def root(function, target, start, tolerance=mpf(10) ** -40):
    x = start
    for _ in range(60):
        step = (target - function(x)) / difference(function, x)
        x += step
        if abs(step) < tolerance:
            return x
    raise ArithmeticError("no convergence")


def tidy(value):
    """A balanced bridge leaves rounding noise near 1e-50: that is zero."""
    return mpf(0) if abs(value) < mpf(10) ** -40 else value


def bridge_row(reading, row, read):
    """Columns value, delta, slope for `reading(e)`."""
    e = mpf(row[0])
    value = tidy(reading(e))
    slope = difference(reading, e)
    assert slope != 0
    # one Newton step from a start within 1e-15 of the root: what is left is its square
    target = read(value)
    delta = (target - value) / slope
    assert abs(reading(e + delta) - target) < mpf(10) ** -27, "the inverse does not come back"
    return {"value": value, "delta": delta, "slope": slope}


def bridge(p):
    x0 = p.get("x0", mpf(0))

    def row_of(row, read):
        tau = mpf(row[1]) if len(row) > 1 else mpf(0)
        return bridge_row(lambda e: nodal.bridge(p, p["f"] * e + x0, tau)[1], row, read)
    return row_of


def bridge_null(p):
    """The double nearest the strain of zero reading, kept inside +-0.1."""
    x0 = p.get("x0", mpf(0))
    e = root(lambda e: nodal.bridge(p, p["f"] * e + x0)[1], mpf(0), mpf(0))
    return [min(max(float(e), -0.1), 0.1)]


def bridge_null_tau(p):
    return bridge_null(p) + [0.0]


def quarter_in_temperature(p):
    """x0 from the zero reading, then F(T) and tau per row."""
    network = dict(p)
    network.update(r2=p["r1"], r3=p["r1"], r4=p["r1"], c1=mpf(1), t1=mpf(1))
    x0 = root(lambda x: nodal.bridge(network, x)[1], p["zero"], mpf(0))

    def reading(e, t):
        return nodal.bridge(network, laws.gauge_factor(p, t) * e + x0, laws.tau(p, t))[1]
    return reading


def strain_temperature(p):
    reading = quarter_in_temperature(p)

    def row_of(row, read):
        e, t = mpf(row[0]), mpf(row[1])
        columns = bridge_row(lambda e: reading(e, t), row, read)
        columns["slope_t"] = difference(lambda t: reading(e, t), t)
        return columns
    return row_of


def strain_temperature_null(p):
    reading = quarter_in_temperature(p)
    e = root(lambda e: reading(e, mpf(0)), mpf(0), mpf(0))
    return [min(max(float(e), -0.1), 0.1), 0.0]


def divider(p):
    def row_of(row, read):
        ohms = mpf(row[0])
        value = nodal.divider(p, ohms)
        back = nodal.divider_inverse(p, read(value))
        slope = difference(lambda r: nodal.divider(p, r), ohms)
        return {"value": value, "delta": (back - ohms) / ohms, "slope": slope}
    return row_of


# ---- the list ----------------------------------------------------------------------------------------------------------

EXACT = "Expected values: mpmath at 50 digits from the double inputs as exact numbers, rounded once to the digits shown."
VALUE_DELTA_SLOPE = ["value", "delta", "slope"]

NEAR_ONE = [1.0, 1.0 + 2.0**-52, 1.0 - 2.0**-53, 1.0 + 2.0**-40, 1.0 - 2.0**-40, 1.0 + 2.0**-20, 1.0 - 2.0**-20]
LN_EXP = [
    Kind(
        "ln", 101,
        ["y = ln x", "Domain: 1e-300 ..= 1e300, dense near 1. " + EXACT,
         "Allowed: 1e-12 relative or better (the project's own claim stands in tests/accuracy.rs)."],
        [("x", ["octave -996 995", "uniform 0.5 2", "uniform 0.999 1.001", "uniform 0.99999999 1.00000001"])],
        plain(mp.log), ["value"],
        points=[[x] for x in NEAR_ONE + [
            0.5, 2.0, 0.7071067811865475, 0.7071067811865476, 1.4142135623730951, 1.414213562373095, 2.718281828459045, 3.0,
            10.0, 100.0, 0.1, 1e-10, 1e10, 2.0**-500, 2.0**500, 1e-300, 1e300]],
    ),
    Kind(
        "exp", 102,
        ["y = e^x", "Domain: -700 ..= 700. " + EXACT,
         "Allowed: 1e-12 relative or better (the project's own claim stands in tests/accuracy.rs)."],
        [("x", ["uniform -700 700", "uniform -1 1", "uniform -20 20", "uniform -1e-6 1e-6"])],
        plain(mp.exp), ["value"],
        points=[[x] for x in [
            0.0, 1e-300, -1e-300, 2.0**-54, -(2.0**-54), 2.0**-53, -(2.0**-53), 2.0**-30, -(2.0**-30), 0.34657359027997264,
            -0.34657359027997264, 0.34657359027997275, 0.6931471805599453, -0.6931471805599453, 1.0, -1.0, 2.0, 10.0, -10.0,
            100.0, -100.0, 699.0, 700.0, -700.0]],
    ),
]

TINY = [0.0, 1e-300, -1e-300, 1e-12, -1e-12, 1e-9, -1e-9, 1e-6, -1e-6, 1e-3, -1e-3, 0.01, -0.01]
PLATINUM_TEXT = [
    "R = R0 (1 + A t + B t^2)                    t >= 0 degC",
    "R = R0 (1 + A t + B t^2 + C (t - 100) t^3)  t < 0 degC",
    "Source: the interpolation of IEC 60751. Domain: -200 ..= 850 degC. value in ohm, slope = dR/dt in ohm/K.",
    EXACT,
    "Inverse: the element's resistance read from `value` belongs to t + delta exactly.",
    "Allowed: forward 1e-12 relative; inverse 1e-9 K over the whole range; slope 1e-9 relative.",
]
PLATINUM_INPUT = [("t", ["uniform -200 850", "uniform -200 0", "uniform 0 850", "uniform -1 1"])]
PLATINUM_POINTS = [[t] for t in TINY + [-200.0, 850.0]] + [
    # fixed points of ITS-90 and other round numbers, as ordinary inputs
    [t] for t in [-189.3442, -182.954, -100.0, -38.8344, 29.7646, 100.0, 156.5985, 231.928, 419.527, 660.323]]


def cycle(*pairs):
    return [(name, f"cycle {value!r}") for name, value in pairs]


LAWS = [
    Kind(
        "platinum_iec60751", 201, ["Platinum resistance thermometer, coefficients of IEC 60751, R0 = 100 ohm"] + PLATINUM_TEXT,
        PLATINUM_INPUT, law(laws.platinum, laws.platinum_inverse), VALUE_DELTA_SLOPE,
        params=cycle(("r0", 100.0), ("a", 3.9083e-3), ("b", -5.775e-7), ("c", -4.183e-12)),
        points=PLATINUM_POINTS, delta="absolute 1e-16",
    ),
    Kind(
        "platinum_custom", 202, ["Platinum resistance thermometer, coefficients of its own in every block"] + PLATINUM_TEXT,
        PLATINUM_INPUT, law(laws.platinum, laws.platinum_inverse), VALUE_DELTA_SLOPE,
        params=[("r0", "uniform 95 1050"), ("a", "uniform 0.00384 0.00399"), ("b", "uniform -6.1e-7 -5.5e-7"),
                ("c", "uniform -4.6e-12 -3.9e-12")],
        points=[[0.0], [-200.0], [850.0], [1e-9], [-1e-9]], points_in_every_block=True, delta="absolute 1e-16",
    ),
    Kind(
        "thermistor_beta", 203,
        ["Thermistor, beta law: R = R25 exp(beta (1/T - 1/298.15 K)), T = t + 273.15 K (both exact)",
         "Domain: -50 ..= 150 degC. value in ohm, slope = dR/dt in ohm/K. " + EXACT,
         "Inverse: the resistance read from `value` belongs to t + delta exactly.",
         "Allowed: forward 1e-12 relative; inverse 1e-9 K; slope 1e-9 relative."],
        [("t", ["uniform -50 150"])], law(laws.beta, laws.beta_inverse), VALUE_DELTA_SLOPE,
        params=[("r25", "uniform 1000 100000"), ("beta", "uniform 2800 4600")],
        points=[[t] for t in [0.0, -50.0, 150.0, 25.0, 1e-9, -1e-9]], points_in_every_block=True, delta="absolute 1e-17",
    ),
    Kind(
        "thermistor_steinhart_hart", 204,
        ["Thermistor, Steinhart-Hart: 1/T = a + b L + c L^3, L = ln(R / 1 ohm), T = t + 273.15 K (exact); R is the one real root",
         "Domain: -50 ..= 150 degC. value in ohm, slope = dR/dt in ohm/K. " + EXACT,
         "Inverse: the resistance read from `value` belongs to t + delta exactly.",
         "Allowed: forward 1e-12 relative; inverse 1e-9 K; slope 1e-9 relative."],
        [("t", ["uniform -50 150"])], law(laws.steinhart_hart, laws.steinhart_hart_inverse), VALUE_DELTA_SLOPE,
        params=[("a", "uniform 0.001 0.0013"), ("b", "uniform 2.2e-4 2.5e-4"), ("c", "uniform 5e-8 1.5e-7")],
        points=[[t] for t in [0.0, -50.0, 150.0, 25.0, 1e-9, -1e-9]], points_in_every_block=True, delta="absolute 1e-17",
    ),
]

STRAIN = [("e", ["uniform -0.1 0.1", "uniform -0.003 0.003"])]
STRAIN_POINTS = [[e] for e in [
    0.0, -0.1, 0.1, 0.003, -0.003, 1e-6, -1e-6, 1e-9, -1e-9, 1e-12, -1e-12, 1e-15, -1e-15]]
F = ("f", "uniform 1.8 4.5")
X0 = ("x0", "uniform -0.005 0.005")
ZERO_TO_TEN = "uniform 0.05 10"
LOAD = "octave 13 30"
BRIDGE_TEXT = [
    "Arms in ring order: 1 between a and n, 2 between p and a, 3 between p and b, 4 between b and n;",
    "reading = a' - b', the far ends of the signal leads (a - b without leads). Parameter names: README.md.",
    "R_i = r_i [1 + c_i (f e + x0) + t_i tau]; a parameter that is not named below is zero (a lead: absent).",
    "Source 1 V, nodal analysis of the whole network. " + EXACT,
    "value: the reading; slope: d value / d e; the reading that `value` reads as belongs to the strain e + delta exactly.",
]
PLAIN_FLOOR = [
    "Allowed: forward 1e-12 relative or 4e-16 (a' + b'), potentials over the divisor of the reading (about 1);",
    "inverse 1e-12 relative or 5e-16 / |slope|; slope 1e-9 relative.",
]
AMPLIFIER_TEXT = [
    "Behind a difference amplifier: a' - rin_ni - q - rfb_ni - reference; b' - rin_inv - m - rfb_inv - out;",
    "out is read against the reference, which stands at reference x source: 0 the negative supply, 0.5 the centre.",
]
AMPLIFIER_FLOOR = [
    "With G = rfb_inv / rin_inv: allowed forward 1e-12 relative or 4e-16 (G (a' + b') + ...), all terms of the output;",
    "inverse 1e-12 relative or 5e-16 G / |slope| (5e-16 V/V at the bridge); slope 1e-9 relative.",
]


def same_arms(first, lo, hi, others):
    return [(first, f"uniform {lo} {hi}")] + [(other, f"same {first}") for other in others]


def own_arms(*bounds):
    return [(f"r{i}", f"uniform {lo} {hi}") for i, (lo, hi) in enumerate(bounds, 1)]


def coefficients(*rules):
    return [(f"c{i}", rule if rule[0].isalpha() else f"cycle {rule}") for i, rule in enumerate(rules, 1)]


def bridge_kind(name, seed, title, params, null=bridge_null, floor=PLAIN_FLOOR, text=(), **more):
    defaults = dict(inputs=STRAIN, points=STRAIN_POINTS, null=null)
    defaults.update(more)
    return Kind(
        "bridge_" + name, seed, [title] + BRIDGE_TEXT + list(text) + floor, evaluate=bridge, columns=VALUE_DELTA_SLOPE,
        params=params, points_in_every_block=True, delta="absolute 1e-19", **defaults)


ALL_EQUAL = same_arms("r1", 100, 1100, ["r2", "r3", "r4"])
TWO_PAIRS = same_arms("r1", 100, 1100, ["r2"]) + same_arms("r3", 100, 1100, ["r4"])
NEARLY_EQUAL = own_arms((340, 360), (340, 360), (340, 360), (340, 360))
GENERAL = [("c1", "uniform 0.9 1.1"), ("c2", "uniform -1.1 -0.9"), ("c3", "uniform 0.9 1.1"), ("c4", "uniform -1.1 -0.9")]
SUPPLY_LEADS = [("supply_p", ZERO_TO_TEN), ("supply_n", ZERO_TO_TEN)]
SIGNAL_LEADS = [("signal_a", ZERO_TO_TEN), ("signal_b", ZERO_TO_TEN)]
AMPLIFIER = [
    ("rin_inv", "uniform 1450 1550"), ("rin_ni", "uniform 1450 1550"), ("rfb_inv", "uniform 320000 340000"),
    ("rfb_ni", "uniform 320000 340000"), ("reference", "cycle 0 0 0.5 0.5")]

BRIDGES = [
    bridge_kind("quarter", 301, "Quarter bridge, four equal arms: e, 0, 0, 0", ALL_EQUAL + coefficients("1") + [F], null=None),
    bridge_kind(
        "quarter_unequal", 302, "Quarter bridge, unequal arms and an initial unbalance x0; the gauge in arm 1, 2, 3, 4 by turns",
        own_arms((335, 365), (335, 365), (950, 1050), (950, 1050)) + coefficients(
            "1 1 0 0 0 0 0 0", "0 0 1 1 0 0 0 0", "0 0 0 0 1 1 0 0", "0 0 0 0 0 0 1 1") + [F, X0]),
    bridge_kind(
        "quarter_2wire", 303, "Quarter bridge on two wires, both in arm 1: e, 0, 0, 0",
        own_arms((100, 1100)) + [("r2", "same r1")] + same_arms("r3", 100, 1100, ["r4"]) + coefficients("1") + [F, X0]
        + cycle(("wires", 2.0)) + [("wire1", ZERO_TO_TEN), ("wire2", ZERO_TO_TEN)]),
    bridge_kind(
        "quarter_3wire", 304,
        "Quarter bridge on three wires (one in arm 1, one in arm 2, one in series with a) and a finite input resistance: e, 0, 0, 0",
        own_arms((335, 365), (335, 365), (335, 365), (335, 365)) + coefficients("1") + [F, X0] + cycle(("wires", 3.0))
        + [("wire1", ZERO_TO_TEN), ("wire2", ZERO_TO_TEN), ("wire3", ZERO_TO_TEN), ("input", LOAD)]),
    bridge_kind(
        "half_bending", 305, "Half bridge, bending pair: e, -e, 0, 0", TWO_PAIRS + coefficients("1", "-1") + [F], null=None),
    bridge_kind(
        "half_poisson", 306, "Half bridge, axial and transverse gauge: e, -nu e, 0, 0",
        TWO_PAIRS + [("nu", "uniform 0.2 0.4")] + coefficients("1", "minus nu") + [F], null=None),
    bridge_kind(
        "half_opposite", 307, "Half bridge, two gauges in opposite arms, unequal arms: e, 0, e, 0",
        NEARLY_EQUAL + coefficients("1", "0", "1") + [F, X0]),
    bridge_kind(
        "half_dummy", 308, "Half bridge, gauge and dummy that both feel temperature, tau a second input: e, dummy, 0, 0",
        own_arms((340, 360), (340, 360), (950, 1050), (950, 1050)) + coefficients("1") + cycle(("t1", 1.0), ("t2", 1.0)) + [F, X0],
        inputs=STRAIN + [("tau", ["uniform -0.02 0.02"])], null=bridge_null_tau,
        points=[[e, t] for e, t in [
            (0.0, 0.0), (0.0, 0.02), (0.0, -0.02), (-0.1, 0.0), (0.1, 0.0), (-0.1, -0.02), (0.1, 0.02), (1e-6, 0.0),
            (-1e-6, 0.0), (1e-9, 0.01), (-1e-9, -0.01), (1e-12, 0.0), (-1e-12, 0.0)]]),
    bridge_kind(
        "full_bending", 309, "Full bridge, bending, four equal arms: e, -e, e, -e",
        ALL_EQUAL + coefficients("1", "-1", "1", "-1") + [F], null=None),
    bridge_kind(
        "full_poisson", 310, "Full bridge, axial, unequal arms: e, -nu e, e, -nu e",
        NEARLY_EQUAL + [("nu", "uniform 0.2 0.4")] + coefficients("1", "minus nu", "1", "minus nu") + [F, X0]),
    bridge_kind(
        "full_leads", 311,
        "Full bridge, unequal arms and coefficients, supply leads, signal leads and input resistance; reading over the source",
        NEARLY_EQUAL + GENERAL + [F, X0] + SUPPLY_LEADS + SIGNAL_LEADS + [("input", LOAD)]),
    bridge_kind(
        "full_sensed", 312,
        "Full bridge, unequal arms and coefficients, supply leads and input resistance, sensed: reading over the supply at p - n",
        NEARLY_EQUAL + GENERAL + [F, X0] + SUPPLY_LEADS + [("input", LOAD)] + cycle(("sensed", 1.0))),
    bridge_kind(
        "full_amplifier_ideal", 313, "Full bridge with leads behind a difference amplifier, ideal op-amp; reading over the source",
        NEARLY_EQUAL + GENERAL + [F, X0] + SUPPLY_LEADS + SIGNAL_LEADS + AMPLIFIER, text=AMPLIFIER_TEXT, floor=AMPLIFIER_FLOOR),
    bridge_kind(
        "full_amplifier_finite", 314,
        "Full bridge with leads behind a difference amplifier, op-amp of finite open-loop gain; reading over the source",
        NEARLY_EQUAL + GENERAL + [F, X0] + SUPPLY_LEADS + SIGNAL_LEADS + AMPLIFIER + [("open_loop_gain", "octave 13 20")],
        text=AMPLIFIER_TEXT + ["out = reference + open_loop_gain (q - m)."], floor=AMPLIFIER_FLOOR),
    bridge_kind(
        "half_3wire", 315,
        "Half bridge, bending pair on three wires (one in each gauge arm, one in series with a), finite input resistance: e, -e, 0, 0",
        own_arms((340, 360), (340, 360), (340, 360), (340, 360)) + coefficients("1", "-1") + [F, X0] + cycle(("wires", 3.0))
        + [("wire1", ZERO_TO_TEN), ("wire2", ZERO_TO_TEN), ("wire3", ZERO_TO_TEN), ("input", LOAD)]),
    bridge_kind(
        "full_amplifier_sensed", 316,
        "Full bridge with leads behind a difference amplifier of finite open-loop gain, sensed: output over the supply at p - n",
        NEARLY_EQUAL + GENERAL + [F, X0] + SUPPLY_LEADS + SIGNAL_LEADS + AMPLIFIER
        + [("open_loop_gain", "octave 13 20"), ("input", LOAD)] + cycle(("sensed", 1.0)),
        text=AMPLIFIER_TEXT + [
            "out = reference + open_loop_gain (q - m). The reference is a fraction of the source, not of p - n."],
        floor=AMPLIFIER_FLOOR),
]


def divider_kind(name, seed, title, low, loaded):
    params = [("fixed", "uniform 1000 20000")] + cycle(("sensor_low", float(low)))
    if loaded:
        params.append(("input", "octave 16 27"))
    return Kind(
        "divider_" + name, seed,
        [title,
         "value = node potential over the supply; slope: d value / d ohms in 1/ohm. " + EXACT,
         "Inverse: the ratio that `value` reads as belongs to the sensor resistance ohms (1 + delta) exactly.",
         "Allowed: forward 1e-12 relative or 4e-16; inverse 1e-12 relative or 5e-16 / |slope|; slope 1e-9 relative."],
        [("ohms", ["octave 5 17", "uniform 1000 20000"])], divider, VALUE_DELTA_SLOPE, params=params,
        points=[[r] for r in [32.0, 262144.0, 1000.0, 10000.0]], points_in_every_block=True, delta="relative 1e-17")


DIVIDERS = [
    divider_kind("low", 401, "Divider, the sensor from the node to ground, the fixed resistor to the supply", True, False),
    divider_kind("high", 402, "Divider, the sensor from the supply to the node, the fixed resistor to ground", False, False),
    divider_kind("low_loaded", 403, "Divider, sensor to ground, an input resistance from the node to ground", True, True),
    divider_kind("high_loaded", 404, "Divider, sensor to the supply, an input resistance from the node to ground", False, True),
]

TEMPERATURE = [
    Kind(
        "strain_temperature", 501,
        ["Quarter bridge of four equal arms with zero reading, gauge-factor slope, thermal output and expansion mismatch",
         "R1 = r1 [1 + F(T) e + x0 + tau], R2 = R3 = R4 = r1; F(T) = f [1 + s (T - t_ref)];",
         "tau = f_data (TO(T) - TO(t0)) + f (alpha_specimen - alpha_data)(T - t0);",
         "TO(T) = (to0 + to1 T + to2 T^2 + to3 T^3 + to4 T^4) 1e-6, T in degC; x0 solves reading = zero with e = tau = 0.",
         "Source 1 V, nodal analysis. " + EXACT,
         "value: the reading a - b; slope: d value / d e; slope_t: d value / d T in 1/K, all else held (t0 and zero too);",
         "the reading that `value` reads as belongs, at this T, to the strain e + delta exactly.",
         "Allowed: forward 1e-12 relative or 4e-16 (a + b); inverse 1e-12 relative or 5e-16 / |slope|; slopes 1e-9 relative",
         "(slope_t or 1e-9 of its larger terms, where they cancel)."],
        STRAIN + [("temperature", ["uniform -50 150"])], strain_temperature, VALUE_DELTA_SLOPE + ["slope_t"],
        params=[
            ("r1", "uniform 100 1100"), ("f", "uniform 1.8 2.3"), ("s", "uniform -1.5e-4 1.5e-4"), ("t_ref", "uniform 18 30"),
            ("to0", "uniform -40 -20"), ("to1", "uniform 1 3"), ("to2", "uniform -0.08 -0.04"), ("to3", "uniform 1e-4 5e-4"),
            ("to4", "uniform -5e-7 -1e-7"), ("f_data", "uniform 1.9 2.1"), ("alpha_specimen", "uniform 0 25e-6"),
            ("alpha_data", "uniform 0 25e-6"), ("t0", "uniform 0 40"), ("zero", "uniform -0.002 0.002")],
        points=[[e, t] for e, t in [
            (0.0, 0.0), (0.0, 24.0), (0.0, -50.0), (0.0, 150.0), (-0.1, -50.0), (0.1, 150.0), (-0.1, 0.0), (0.1, 0.0),
            (1e-6, 0.0), (-1e-6, 24.0), (1e-9, 0.0), (-1e-9, 24.0)]],
        points_in_every_block=True, null=strain_temperature_null, delta="absolute 1e-19",
    ),
]

KINDS = LN_EXP + LAWS + BRIDGES + DIVIDERS + TEMPERATURE
