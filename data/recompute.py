#!/usr/bin/env python3
"""Recompute the tables in this directory from their definitions.

Exact fractions for everything rational, 50-digit decimals for the rest; Python 3 standard library only, nothing
of the library under test. Every printed cell must lie within half a unit of its last digit; a cell listed as a
misprint must NOT.

    recompute.py                  check every table, one line a file; exit 1 if a cell misses
    recompute.py --netlist CASE   print one circuit of strain/ngspice_elements.csv for a circuit simulator
"""
import csv
import re
import sys
from decimal import Decimal, getcontext
from fractions import Fraction as Fr
from pathlib import Path

getcontext().prec = 50
HERE = Path(__file__).resolve().parent
MICRO = Fr(1, 10**6)
failures = []
seen = {}


def rows(name):
    with open(HERE / name, encoding="utf-8", newline="") as f:
        lines = [line for line in f if not line.startswith("#")]
    return list(csv.DictReader(lines))


def half_unit(text):
    """Half a unit of the last printed digit."""
    m = re.fullmatch(r"[+-]?\d+(?:\.(\d*))?(?:[eE]([+-]?\d+))?", text)
    return Fr(10) ** (int(m[2] or 0) - len(m[1] or "")) / 2


def miss(value, text):
    """|printed - value| in half units of the last printed digit."""
    return abs(Fr(value) - Fr(text)) / half_unit(text)


def near(name, where, value, text, allow=Fr(1)):
    """The printed cell is `value` rounded (allow > 1 only where the table's own header gives the reason)."""
    m = miss(value, text)
    n, worst = seen.get(name, (0, Fr(0)))
    seen[name] = (n + 1, max(worst, m / allow))
    if m > allow:
        failures.append(f"{name}: {where}: printed {text}, recomputed {float(value):.15g}")


def refused(name, where, value, text):
    """A known misprint: the printed cell must not be reproduced."""
    n, worst = seen.get(name, (0, Fr(0)))
    seen[name] = (n + 1, worst)
    if miss(value, text) <= 1:
        failures.append(f"{name}: {where}: {text} is listed as a misprint but is reproduced")


def ratio(r):
    """Output over supply of an unloaded bridge, arms in ring order."""
    r = [Fr(v) for v in r]
    return r[0] / (r[0] + r[1]) - r[3] / (r[2] + r[3])


# ---- strain -------------------------------------------------------------------------------------------------

def coefficient(arm, nu):
    if arm in ("0", "dummy"):
        return Fr(0)
    sign = -1 if arm.startswith("-") else 1
    body = arm.lstrip("-").replace("e", "").strip()
    return sign * (nu if body == "nu" else Fr(body) if body else Fr(1))


def bridge_arrangements():
    name = "strain/bridge_arrangements.csv"
    for r in rows(name):
        where = f"{r['arrangement']} {r['strain_ue']}"
        f, nu, e = Fr(r["gauge_factor"]), Fr(r["poisson"]), Fr(r["strain_ue"]) * MICRO
        c = [coefficient(r[f"arm{i}"], nu) for i in (1, 2, 3, 4)]
        y = ratio([1 + k * f * e for k in c])
        first = f * e / 4 * (c[0] - c[1] + c[2] - c[3])
        near(name, where, 1000 * y, r["exact_mV_per_V"])
        near(name, where, 1000 * first, r["first_order_mV_per_V"])
        near(name, where, 100 * (y / first - 1), r["nonlinearity_percent"])


def nonlinearity():
    name = "strain/quarter_bridge_nonlinearity.csv"
    for r in rows(name):
        f, e = Fr(r["gauge_factor"]), Fr(r["strain_ue"]) * MICRO
        y = ratio([1 + f * e, 1, 1, 1])
        shown = 4 * y / f
        for value, column in (
            (1000 * y, "exact_mV_per_V"),
            (shown / MICRO, "indicated_linear_ue"),
            ((shown - e) / MICRO, "error_ue"),
            (100 * (shown - e) / e, "error_percent_of_true"),
            (100 * (e - shown) / shown, "error_percent_of_indicated"),
        ):
            near(name, f"{r['strain_ue']} {column}", value, r[column])
    name = "strain/nonlinearity_worked.csv"
    for r in rows(name):
        f, shown = Fr(r["gauge_factor"]), Fr(r["indicated_ue"]) * MICRO
        e = 2 * shown / (2 - f * shown) / MICRO
        near(name, "exact", e, r["exact_actual_ue"])
        near(name, "published actual (to 10)", e, r["published_actual_ue"], Fr(10))
        near(name, "published correction (to 10)", e - shown / MICRO, r["published_correction_ue"], Fr(10))


def lead_wires():
    name = "strain/lead_wires.csv"
    copper = Fr("0.00393")
    for r in rows(name):
        q = r["quantity"]
        g, lead = (Fr(r[k]) if r[k] else None for k in ("gauge_ohm", "lead_ohm_each"))
        f = Fr(r["gauge_factor"]) if r["gauge_factor"] else None
        warm = lead * copper * Fr(r["dT_K"]) if r["dT_K"] else Fr("0.04")
        if q == "factor":
            value = g / (g + (lead if r["wires"] == "3" else 2 * lead))
        elif q == "percent_loss":
            value = 200 * lead / g if r["wires"] == "4" else 200 * lead / (g + 2 * lead)
        elif q == "round_trip_ohm":
            value = 20 * Fr("0.017241") / Fr(re.search(r"of ([\d.]+) mm2", r["case"])[1])
        elif q == "apparent_ue_first_order":
            value = 2 * warm / ((g + 2 * lead) * f) / MICRO
        elif q == "apparent_ue_linear":
            full = g + 2 * lead
            value = 4 * ratio([full + 2 * warm, full, 1, 1]) / f / MICRO
        elif q == "apparent_ue_exact":
            value = 2 * warm / g / f / MICRO
        else:
            value = ratio([g + lead + warm, g + lead + warm, 1, 1])
        near(name, r["id"], value, r["computed"])
        if r["published"] and q != "round_trip_ohm":
            near(name, r["id"] + " published", value, r["published"])
    name = "strain/awg_copper.csv"
    for r in rows(name):
        mils = Decimal(5) * Decimal(92) ** ((36 - Decimal(r["awg"])) / 39)
        ohm = Fr(Decimal("10.371") / mils**2 * 100)
        near(name, r["awg"], ohm, r["computed_ohm_per_100ft"])
        near(name, r["awg"], Fr(r["published_ohm_per_100ft"]) / Fr("30.48"), r["ohm_per_m"])
        near(name, r["awg"], 100 * (ohm / Fr(r["published_ohm_per_100ft"]) - 1), r["formula_minus_published_percent"])


def shunt_table():
    name = "strain/shunt_table.csv"
    for r in rows(name):
        where = f"{r['gauge_ohm']} {r['simulated_compression_ue']}"
        g, f, e = Fr(r["gauge_ohm"]), Fr(r["gauge_factor"]), Fr(r["simulated_compression_ue"]) * MICRO
        rc = g / (f * e) - g
        y = ratio([g * rc / (g + rc), g, g, g])
        near(name, where, rc, r["published_Rc_ohm"])
        near(name, where, rc, r["exact_Rc_ohm"])
        near(name, where, 1000 * y, r["exact_mV_per_V"])
        near(name, where, 4 * y / f / MICRO, r["indicated_linear_ue"])
        near(name, where, g / (f * e), r["Rc_if_minus_R_term_dropped_ohm"])


def thermal_output():
    lot = rows("strain/thermal_output_example_lot.csv")

    def to(t, column="a_degC"):
        return sum(Fr(r[column]) * t ** int(r["power"]) for r in lot)

    name = "strain/polynomial_values.csv"
    for r in rows(name):
        near(name, r["T_C"], to(Fr(r["T_C"])), r["thermal_output_ue"])
        near(name, r["T_F"], to(Fr(r["T_F"]), "a_degF"), r["thermal_output_ue"])
    name = "strain/thermal_cases.csv"
    for r in rows(name):
        g = {k: Fr(v) for k, v in r.items() if k != "id"}
        t, t0, fi = g["T_C"], g["T0_C"], g["instrument_F"]
        zeroed = (to(t) - to(t0)) * 2 / fi
        gf = g["gauge_factor_24C"] * (1 + g["gf_slope_pct_per_100C"] * (t - 24) / 10000)
        mismatch = g["dalpha_1e-6_per_K"] * (t - t0) * g["gauge_factor_24C"] / fi
        e = (g["indicated_ue"] - zeroed - mismatch) * fi / gf
        for value, column in (
            (to(t), "TO_F2_T_ue"),
            (to(t0), "TO_F2_T0_ue"),
            (zeroed, "TO_at_Fi_zeroed_ue"),
            (mismatch, "uses_dalpha_term_ue"),
            (gf, "gf_at_T"),
            (e, "corrected_ue"),
            (g["indicated_ue"] * fi / gf - e, "uncorrected_error_ue"),
        ):
            near(name, f"{r['id']} {column}", value, r[column])
    name = "strain/thermal_output_rules.csv"
    for r in rows(name):
        if r["id"] == "european_reference_temperature":
            near(name, r["id"], to(Fr(r["value"])), re.search(r"\((-[\d.]+) microstrain", r["statement"])[1])
        if r["id"] == "published_worked_setting":
            near(name, r["id"], 2 / Fr(r["value"]), re.search(r"= ([\d.]+)", r["statement"])[1])


# ---- plane states -------------------------------------------------------------------------------------------

NU0 = Fr("0.285")


def arctan(x):
    """arctan of a decimal to about 45 digits: arguments halved until the series is short."""
    d = Decimal
    halvings = 0
    while abs(x) > d("0.01"):
        x, halvings = x / (1 + (1 + x * x).sqrt()), halvings + 1
    total, power, n = d(0), x, 1
    while abs(power) > d(10) ** -60:
        total, power, n = total + power / n, -power * x * x, n + 2
    return total * 2**halvings


DEGREE = arctan(Decimal(1)) / 45


def of_twice(degrees):
    """cos 2a, and sin 2a in units of 1 (a a multiple of 45 degrees) or of sqrt(3)/2 (a multiple of 30)."""
    simple = {0: (1, 0), 90: (0, 1), 180: (-1, 0), 270: (0, -1)}
    delta = {60: (Fr(1, 2), 1), 120: (Fr(-1, 2), 1), 240: (Fr(-1, 2), -1), 300: (Fr(1, 2), -1)}
    c, s = (simple | delta)[Fr(degrees) * 2 % 360]
    return Fr(c), Fr(s)


def solve_rational(m):
    """Gauss-Jordan in exact fractions on rows with their right side."""
    n = len(m)
    for c in range(n):
        p = next(i for i in range(c, n) if m[i][c] != 0)
        m[c], m[p] = m[p], m[c]
        m[c] = [v / m[c][c] for v in m[c]]
        for i in range(n):
            if i != c and m[i][c] != 0:
                m[i] = [v - m[i][c] * w for v, w in zip(m[i], m[c])]
    return [row[n] for row in m]


def plane_state(angles, indicated, ks):
    """(mean, half difference, half shear times w, w^2): w = 1 for a rectangular rosette, sqrt(3)/2 for a delta."""
    delta = any(Fr(a) % 45 != 0 for a in angles)
    m = []
    for a, e, k in zip(angles, indicated, ks):
        c, s = of_twice(a)
        m.append([1 + k, (1 - k) * c, (1 - k) * s, e * (1 - NU0 * k)])
    return (*solve_rational(m), Fr(3, 4) if delta else Fr(1))


def root(x):
    """Square root of a fraction as a decimal."""
    return (Decimal(x.numerator) / Decimal(x.denominator)).sqrt()


def decimal(x):
    return Decimal(x.numerator) / Decimal(x.denominator) if isinstance(x, Fr) else x


def principal(mean, q, s):
    """Larger, smaller, direction in (-90, 90] of mean, half difference and half shear (decimals)."""
    radius = (q * q + s * s).sqrt()
    if radius + q == 0:
        direction = Decimal(90)
    elif q >= 0:
        direction = arctan(s / (radius + q)) / DEGREE
    else:
        # tan of half an angle again, from the other side
        direction = arctan((radius - q) / s) / DEGREE if s != 0 else Decimal(90)
    return mean + radius, mean - radius, direction


def rosettes():
    name = "strain/rosettes.csv"
    for r in rows(name):
        angles = [r[f"angle_{g}_deg"] for g in "abc"]
        p, q, t, ww = plane_state(angles, [Fr(r[f"indicated_{g}_ue"]) for g in "abc"], [Fr(0)] * 3)
        s = decimal(t) / root(ww)
        larger, smaller, direction = principal(decimal(p), decimal(q), s)
        other = direction + 90 if direction <= 0 else direction - 90
        values = {"ex_ue": p + q, "ey_ue": p - q, "gxy_ue": 2 * s, "e1_ue": larger, "e2_ue": smaller,
                  "gmax_ue": larger - smaller, "theta1_deg": direction, "theta2_deg": other}
        for column, printed in r.items():
            key = column.removeprefix("published_")
            if key in values and printed:
                near(name, f"{r['id']} {column}", Fr(values[key]), printed)


def transverse():
    name = "strain/transverse_cases.csv"
    for r in rows(name):
        grids = [g for g in "abc" if r[f"indicated_{g}_ue"]]
        angles = [r[f"angle_{g}_deg"] for g in grids]
        indicated = [Fr(r[f"indicated_{g}_ue"]) for g in grids]
        ks = [Fr(r[f"K_{g}"]) for g in grids]
        if len(grids) == 2:
            (k1, k2), b = ks, [e * (1 - NU0 * k) for e, k in zip(indicated, ks)]
            corrected = solve_rational([[Fr(1), k1, b[0]], [k2, Fr(1), b[1]]])
        else:
            p, q, t, ww = plane_state(angles, indicated, ks)
            corrected = [p + q * c + t * s for c, s in map(of_twice, angles)]
            larger, smaller, direction = principal(decimal(p), decimal(q), decimal(t) / root(ww))
            for value, column in ((larger, "e1_ue"), (smaller, "e2_ue"), (direction, "theta1_deg")):
                near(name, f"{r['id']} {column}", Fr(value), r[column])
        for g, value, k in zip(grids, corrected, ks):
            near(name, f"{r['id']} corrected_{g}", value, r[f"corrected_{g}_ue"])
            printed = r[f"published_{g}_ue"]
            if printed and g in r["misprint"].split():
                refused(name, f"{r['id']} published_{g}", value, printed)
                near(name, f"{r['id']} {g} without the factor", value * (1 - k * k) / (1 - NU0 * k), printed)
            elif printed:
                near(name, f"{r['id']} published_{g}", value, printed)
    name = "strain/transverse_formulas.csv"
    cases = 0
    for r in rows(name):
        for n in range(1, 21):
            # spread, not random: fractions that have nothing in common
            i = [Fr(731 * n % 997 - 480), Fr(389 * n % 991 - 510), Fr(613 * n % 983 - 490)]
            k = [Fr(17 * n % 41 - 11, 500), Fr(23 * n % 43 - 13, 500), Fr(29 * n % 47 - 17, 500)]
            if r["K"] == "equal":
                k = [k[0]] * 3
            kind, _, angles = r["configuration"].partition(" ")
            angles = angles.split("/")
            given = {"nu0": NU0, "K": k[0], **{f"i{j + 1}": v for j, v in enumerate(i)},
                     **{f"K{j + 1}": v for j, v in enumerate(k)}}
            if kind == "single":
                ea, et = i[0], i[1]
                ei = (ea + k[0] * et) / (1 - NU0 * k[0])
                given.update(ei=ei, ea=ea, et=et)
                wanted = {"ea": ea, "100 (ei - ea)/ea": 100 * (ei - ea) / ea}
            elif kind == "tee":
                b = [e * (1 - NU0 * v) for e, v in zip(i, k)]
                wanted = dict(zip(("e1", "e2"), solve_rational([[Fr(1), k[0], b[0]], [k[1], Fr(1), b[1]]])))
            else:
                p, q, t, _ = plane_state(angles, i, k)
                wanted = {f"e{j}": p + q * c + t * s for j, (c, s) in enumerate(map(of_twice, angles), 1)}
            cases += 1
            if eval(r["equation"].replace("^", "**"), {"__builtins__": {}}, given) != wanted[r["gives"]]:
                failures.append(f"{name}: {r['id']}: not what the linear system gives")
    seen[name] = (cases, Fr(0))
    name = "strain/single_error.csv"
    for r in rows(name):
        k, ratio_ = Fr(r["K"]), Fr(r["et_over_ea"])
        error = 100 * ((1 + k * ratio_) / (1 - NU0 * k) - 1)
        near(name, f"{r['K']} {r['et_over_ea']}", error, r["error_percent"])
        if Fr(r["error_percent"]) == 0 and error != 0:
            failures.append(f"{name}: {r['K']} {r['et_over_ea']}: the case without error is exact")


def plane_stress():
    name = "strain/plane_stress.csv"
    for r in rows(name):
        ex, ey, g, e, nu = (Fr(r[k]) for k in ("ex_ue", "ey_ue", "gxy_ue", "modulus", "poisson"))
        e1, e2, _ = principal(decimal((ex + ey) / 2), decimal((ex - ey) / 2), decimal(g / 2))

        def stress(along, across):
            return e / (1 - nu * nu) * (Fr(along) + nu * Fr(across)) * MICRO

        value = {"e1": e1, "e2": e2, "sx": stress(ex, ey), "sy": stress(ey, ex), "s1": stress(e1, e2), "s2": stress(e2, e1),
                 "tau_xy": e / (2 * (1 + nu)) * g * MICRO}[r["quantity"]]
        where = f"{r['id']} {r['quantity']}"
        near(name, where, Fr(value), r["computed"])
        if r["published"]:
            near(name, where + " published", Fr(value), r["published"])
        if r["misprint"]:
            refused(name, where + " misprint", Fr(value), r["misprint"])
            near(name, where + " as the misprint has it", stress(ey, -ex), r["misprint"])
    name = "strain/stress_transform.csv"
    for r in rows(name):
        sx, sy, t = (decimal(Fr(r[k])) for k in ("sx", "sy", "txy"))
        # cos and sin from tan theta, itself by Newton on the arctangent
        angle, x = Decimal(r["theta_deg"]) * DEGREE, Decimal(1)
        for _ in range(40):
            x -= (arctan(x) - angle) * (1 + x * x)
        c, s = (1 - x * x) / (1 + x * x), 2 * x / (1 + x * x)
        mean, half = (sx + sy) / 2, (sx - sy) / 2
        for key, value in (("sx1", mean + half * c + t * s), ("tx1y1", t * c - half * s), ("sy1", mean - half * c - t * s)):
            near(name, f"{r['id']} {key}", Fr(value), r["computed_" + key])
            printed, unit = r["published_" + key], Fr(r["published_unit"])
            near(name, f"{r['id']} {key} published", Fr(value), printed, unit / 2 / half_unit(printed))


def shunt_cases():
    name = "strain/shunt_cases.csv"
    for r in rows(name):
        g, f, rc = Fr(r["gauge_ohm"]), Fr(r["gauge_factor"]), Fr(r["Rc_ohm"])
        parallel = g * rc / (g + rc)
        for key, y in (("gauge", ratio([parallel, g, g, g])), ("dummy", ratio([g, parallel, g, g]))):
            # y = x/(4 + 2 x) of one gauge solved for x = F e
            near(name, f"{r['id']} {key}", 4 * y / (1 - 2 * y) / f / MICRO, r[f"strain_{key}_shunted_ue"])
            near(name, f"{r['id']} {key}", 1000 * y, r[f"mV_per_V_{key}_shunted"])
    name = "strain/shunt_transducer.csv"
    for r in rows(name):
        g, rc = Fr(r["bridge_ohm"]), Fr(r["Rc_ohm"])
        near(name, r["Rc_ohm"], 1000 * ratio([g, g * rc / (g + rc), g, g]), r["mV_per_V"])


# ---- circuits -----------------------------------------------------------------------------------------------

def elements(case):
    return [r for r in rows("strain/ngspice_elements.csv") if r["case"] == case]


def solve(circuit):
    """Modified nodal analysis in exact fractions: node name -> volts."""
    nodes = sorted({r[k] for r in circuit for k in ("node1", "node2", "control1", "control2") if r[k] not in ("", "0")})
    sources = [r for r in circuit if r["element"][0] in "VE"]
    at = {n: i for i, n in enumerate(nodes)}
    size = len(nodes) + len(sources)
    m = [[Fr(0)] * (size + 1) for _ in range(size)]

    def add(i, j, v):
        if i is not None and j is not None:
            m[i][j] += v

    for r in circuit:
        if r["element"][0] == "R":
            i, j, g = at.get(r["node1"]), at.get(r["node2"]), 1 / Fr(r["value"])
            add(i, i, g), add(j, j, g), add(i, j, -g), add(j, i, -g)
    for k, r in enumerate(sources, len(nodes)):
        for node, sign in ((r["node1"], 1), (r["node2"], -1)):
            add(at.get(node), k, Fr(sign))
            add(k, at.get(node), Fr(sign))
        if r["element"][0] == "V":
            m[k][size] = Fr(r["value"])
        else:
            add(k, at.get(r["control1"]), -Fr(r["value"]))
            add(k, at.get(r["control2"]), Fr(r["value"]))
    for c in range(size):
        p = next(i for i in range(c, size) if m[i][c] != 0)
        m[c], m[p] = m[p], m[c]
        m[c] = [v / m[c][c] for v in m[c]]
        for i in range(size):
            if i != c and m[i][c] != 0:
                m[i] = [v - m[i][c] * w for v, w in zip(m[i], m[c])]
    volts = {n: m[i][size] for n, i in at.items()}
    volts["0"] = Fr(0)
    return volts


PROBES = {
    ("vo", None): ("a", "b"),
    ("vbridge", None): ("p", "n"),
    ("vo_bridge", None): ("a", "b"),
    ("vamp", None): ("o", "0"),
    ("vo_amp", None): ("as", "bs"),
}


def circuit_oracle():
    name = "strain/ngspice_oracle.csv"
    for r in rows(name):
        where = f"{r['case']} {r['output']}"
        circuit = elements(r["case"])
        v = solve(circuit)
        a, b = PROBES[r["output"], None]
        exact = v[a] - v[b]
        if exact == 0:
            if abs(Fr(r["exact_V"])) > Fr(1, 10**45):
                failures.append(f"{name}: {where}: {r['exact_V']} should be 0")
        else:
            near(name, where, exact, r["exact_V"])
        near(name, where, Fr(r["ngspice_V"]) - exact, r["ngspice_minus_exact"])
        by = {c["element"]: Fr(c["value"]) for c in circuit}
        for column, element in (
            ("r1_ohm", "R1"), ("r2_ohm", "R2"), ("r3_ohm", "R3"), ("r4_ohm", "R4"), ("source_V", "Vex"),
            ("supply_lead_ohm", "RLa"), ("signal_lead_ohm", "RLc"), ("lead_ohm", "RL1"), ("input_ohm", "Rin"),
            ("shunt_ohm", "RS"), ("amplifier_input_ohm", "Rd1"), ("amplifier_feedback_ohm", "Rd2"), ("open_loop_gain", "Eop"),
        ):
            if (Fr(r[column]) if r[column] else None) != by.get(element):
                failures.append(f"{name}: {where}: {column} is not {element} of the circuit")
        if r["strain_ue"] and r["f1"]:
            drift = Fr(r["common_drift"] or 0)
            for i in (1, 2, 3, 4):
                arm = Fr(r[f"r{i}_unstrained_ohm"]) * (
                    1 + Fr(r[f"f{i}"]) * Fr(r["strain_ue"]) * MICRO + (drift if i < 3 else 0))
                near(name, f"{where} r{i}", arm, r[f"r{i}_ohm"])
        elif r["r1_ohm"]:  # no strain is stated: the arms are the unstrained ones, or the rated signal of n23
            x = Fr("2.1147e-3") * Fr("0.637") if r["case"] == "n23" else Fr(0)
            for i in (1, 2, 3, 4):
                arm = Fr(r[f"r{i}_unstrained_ohm"]) * (1 + x * (1 if i % 2 else -1))
                near(name, f"{where} r{i}", arm, r[f"r{i}_ohm"])
    seen["strain/ngspice_elements.csv"] = (len(rows("strain/ngspice_elements.csv")), Fr(0))


def netlist(case):
    circuit = elements(case)
    if not circuit:
        sys.exit(f"no case {case}")
    print(f"* {case}")
    for r in circuit:
        print(" ".join(r[k] for k in ("element", "node1", "node2", "control1", "control2", "value") if r[k]))
    print(".options reltol=1e-14 abstol=1e-18 vntol=1e-18 gmin=1e-30 numdgt=16\n.control\nset numdgt=16\nop")
    for i, r in enumerate(x for x in rows("strain/ngspice_oracle.csv") if x["case"] == case):
        a, b = PROBES[r["output"], None]
        print(f"let x{i} = v({a})" + (f"-v({b})" if b != "0" else "") + f"\nprint x{i}")
    print("quit\n.endc\n.end")


# ---- temperature --------------------------------------------------------------------------------------------

def platinum():
    name = "temperature/pt100_cvd_coefficients.csv"
    sets = {}
    for r in rows(name):
        a, b, c = sets[r["id"]] = tuple(Fr(r[k]) for k in "ABC")
        nominal = r["id"] in ("pt3916_jis", "pt3902_us")  # the header: not what A and B give
        (refused if nominal else near)(name, r["id"], 1 + 100 * a + 10000 * b, r["R100_over_R0"])

    def ohms(key, t):
        a, b, c = sets[key]
        return 100 * (1 + a * t + b * t * t + (c * (t - 100) * t**3 if t < 0 else 0))

    name = "temperature/pt100_iec60751_table_10C.csv"
    for r in rows(name):
        value = ohms("iec60751_2008", Fr(r["t_C"]))
        for column in ("src1_ohm", "src2_ohm", "accepted_ohm"):
            if r[column]:
                wrong = column == "src1_ohm" and r["note"].startswith("MISPRINT")
                (refused if wrong else near)(name, f"{r['t_C']} {column}", value, r[column])
    name = "temperature/pt100_iec60751_table_1C_neg.csv"
    for r in rows(name):
        near(name, r["t_C"], ohms("iec60751_2008", Fr(r["t_C"])), r["R_ohm"])
    name = "temperature/pt100_iec751_1983_table.csv"
    for r in rows(name):
        t = Fr(r["t_C"])
        value = ohms("iec751_1983_ipts68", t)
        if r["srcC_ohm"]:
            near(name, f"{r['t_C']} srcC", value, r["srcC_ohm"])
        if r["srcA_ohm"]:
            other = t == 150 or 250 <= t <= 410  # the header: up to 0.0243 ohm above this edition
            wrong = r["note"].startswith("MISPRINT")
            if wrong:
                refused(name, f"{r['t_C']} srcA", value, r["srcA_ohm"])
            else:
                near(name, f"{r['t_C']} srcA", value, r["srcA_ohm"], Fr("4.87") if other else Fr(1))
    classes = {(r["class"], r["applies_to"]): (Fr(r["a_C"]), Fr(r["b"])) for r in rows("temperature/iec60751_tolerance_classes.csv")}
    seen["temperature/iec60751_tolerance_classes.csv"] = (len(classes), Fr(0))
    name = "temperature/iec60751_tolerance_values.csv"
    for r in rows(name):
        t = Fr(r["t_C"])
        a, b, c = sets["iec60751_2008"]
        slope = 100 * (a + 2 * b * t + (c * (4 * t**3 - 300 * t * t) if t < 0 else 0))
        for k in "AB":
            if r[k + "_ohm"]:
                p, q = classes[k, "thermometer; wire-wound"]
                tol = p + q * abs(t)
                near(name, f"{r['t_C']} {k} K", tol, r[k + "_degC"])
                off = k == "B" and t in (700, 850)  # the header: up to 0.009 ohm off
                near(name, f"{r['t_C']} {k} ohm", tol * slope, r[k + "_ohm"], Fr("1.8") if off else Fr(1))


def scales_and_circuits():
    name = "temperature/scale_t90_t68.csv"
    b = [Fr(k) for k in ("-0.148759", "-0.267408", "1.080760", "1.269056", "-4.089591", "-1.871251", "7.438081", "-3.536296")]
    for r in rows(name):
        t = Fr(r["t_C"])
        value = sum(k * (t / 630) ** (i + 1) for i, k in enumerate(b))
        # half a digit beside the 1.5 mK (below 0 degC) or 1 mK of the function
        near(name, r["t_C"], value, r["t90_minus_t68"], Fr(4) if t < 0 else Fr(3))
    name = "temperature/lead_and_selfheating_examples.csv"
    given = {(r["id"], r["quantity"]): Fr(r["value"]) for r in rows(name)}
    volts = 2 * given["L1", "V_ED"] - given["L1", "V_CD"]
    ohms = volts / Fr("0.41")
    a, c = Fr("3.9083e-3"), Fr("-5.775e-7")
    ratio = ohms / 100 - 1
    # the root of c t^2 + a t = ratio by bisection in exact fractions
    low, high = Fr(0), Fr(850)
    for _ in range(60):
        t = (low + high) / 2
        low, high = (t, high) if a * t + c * t * t < ratio else (low, t)
    answers = {"R_rtd": ohms, "t_table": low, "t_linear": ratio / Fr("0.00385"), "P": Fr("1e-6") * 100, "dT": Fr("1e-4") * 20}
    for r in rows(name):
        if r["quantity"] in answers:
            near(name, f"{r['id']} {r['quantity']}", answers[r["quantity"]], r["value"])


def guide():
    name = "strain/gum_h3_results.csv"
    points = [(Fr(r["t_C"]) - 20, Fr(r["b_C"])) for r in rows("strain/gum_h3_data.csv")]
    seen["strain/gum_h3_data.csv"] = (len(points), Fr(0))
    n = len(points)
    sx, sy = sum(x for x, _ in points), sum(y for _, y in points)
    sxx, sxy = sum(x * x for x, _ in points), sum(x * y for x, y in points)
    det = n * sxx - sx * sx
    y1, y2 = (sxx * sy - sx * sxy) / det, (n * sxy - sx * sy) / det
    s2 = sum((y - y1 - y2 * x) ** 2 for x, y in points) / (n - 2)
    root = lambda v: Fr((Decimal(v.numerator) / Decimal(v.denominator)).sqrt())
    u1, u2 = root(s2 * sxx / det), root(s2 * n / det)
    r = -root(sx * sx / (sxx * n)) if sx > 0 else root(sx * sx / (sxx * n))
    at = y1 + 10 * y2
    u_at = root(s2 * (sxx - 20 * sx + 100 * n) / det)
    answers = {"y1": y1, "u_y1": u1, "y2": y2, "u_y2": u2, "r": r, "s": root(s2), "b30": at, "u_b30": u_at, "nu": Fr(n - 2)}
    for row in rows(name):
        near(name, row["name"], answers[row["name"]], row["published"])


def metals():
    name = "temperature/rtd_other_metal_coefficients.csv"
    k = {r["id"]: {c: Fr(r[c] or 0) for c in ("R0_ohm", "A", "B", "C_or_D", "F")} for r in rows(name)}
    seen[name] = (len(k), Fr(0))
    n, c = k["ni100_din43760"], k["cu4280_gost6651_2009"]
    name = "temperature/ni100_din43760_table.csv"
    for r in rows(name):
        t = Fr(r["t_C"])
        value = n["R0_ohm"] * (1 + n["A"] * t + n["B"] * t**2 + n["C_or_D"] * t**4 + n["F"] * t**6)
        (refused if t == 80 else near)(name, r["t_C"], value, r["R_ohm"])
    name = "temperature/cu100_gost_1428_table.csv"
    for r in rows(name):
        t = Fr(r["t_C"])
        if t < -180:
            continue
        below = c["B"] * t * (t + Fr("6.7")) + c["C_or_D"] * t**3 if t < 0 else 0
        off = abs(c["R0_ohm"] * (1 + c["A"] * t + below) - Fr(r["R_ohm"]))
        allow = Fr("0.082") if t < 0 else Fr("0.0171")  # another edition
        seen[name] = (seen.get(name, (0, 0))[0] + 1, max(seen.get(name, (0, Fr(0)))[1], off / allow))
        if off > allow:
            failures.append(f"{name}: {r['t_C']}: {float(off):.4f} ohm from the edition of 2009")


def its90():
    d = Decimal
    name = "temperature/its90_reference_coefficients.csv"
    k = {}
    for r in rows(name):
        k.setdefault(r["family"], []).append(d(r["value"]))

    def reference(t):
        if t <= d("273.16"):
            x = ((t / d("273.16")).ln() + d("1.5")) / d("1.5")
            return sum(c * x**i if i else c for i, c in enumerate(k["A"])).exp()
        x = (t - d("754.15")) / 481
        return sum(c * x**i if i else c for i, c in enumerate(k["C"]))

    name = "temperature/its90_fixed_points.csv"
    for r in rows(name):
        t = d(r["T90_K"])
        w = reference(t)
        near(name, r["point"], Fr(w), r["Wr"], Fr(2))  # the header: the coefficients are printed to 1e-8 too
        # the approximate inverses, by what the scale says of them
        if t < d("273.16"):
            x = ((w.ln() / 6).exp() - d("0.65")) / d("0.35")
            off, allow = d("273.16") * sum(c * x**i if i else c for i, c in enumerate(k["B"])) - t, d("1e-4")
        else:
            x = (w - d("2.64")) / d("1.64")
            off, allow = d("273.15") + sum(c * x**i if i else c for i, c in enumerate(k["D"])) - t, d("1.3e-4")
        seen["temperature/its90_reference_coefficients.csv"] = (sum(map(len, k.values())), Fr(0))
        if abs(off) > allow:
            failures.append(f"{name}: {r['point']}: the approximate inverse is {off:.2e} K off")
    name = "temperature/its90_deviation_functions.csv"
    coefficients = {"3.3.1": 7, "3.3.1.1": 5, "3.3.1.2": 3, "3.3.1.3": 2, "3.3.2": 4, "3.3.2.1": 3, "3.3.2.2": 2,
                    "3.3.2.3": 2, "3.3.2.4": 1, "3.3.2.5": 1, "3.3.3": 2}
    for r in rows(name):
        points = 0
        for part in r["points"].split(";"):
            first, _, last = part.partition("-")
            points += int(last or first) - int(first) + 1
        seen[name] = (seen.get(name, (0, 0))[0] + 1, Fr(0))
        # the triple point of water fixes W = 1; every other point one coefficient
        if points - 1 != coefficients[r["section"]]:
            failures.append(f"{name}: {r['section']}: {points} points")


def thermistors():
    d = Decimal
    kelvin = d("273.15")
    name = "temperature/thermistor_material1_table.csv"
    text = (HERE / name).read_text(encoding="utf-8")
    p = [d(re.search(rf"\b{k}=(-?[\d.]+E[+-]\d+)", text)[1]) for k in "ABCDabcd"]
    for r in rows(name):
        t = d(r["t_C"]) + kelvin
        near(name, r["t_C"], Fr((p[0] + p[1] / t + p[2] / t**2 + p[3] / t**3).exp()), r["ratio"])
        printed = r["alpha_pct_per_K"]
        whole, _, part = printed.partition(".")
        slope = 100 * (-p[1] / t**2 - 2 * p[2] / t**3 - 3 * p[3] / t**4)
        near(name, r["t_C"] + " coefficient", Fr(slope), whole + "." + part.ljust(2, "0"))
        x = d(r["ratio"]).ln()
        back = 1 / (p[4] + p[5] * x + p[6] * x**2 + p[7] * x**3) - kelvin
        if abs(back - d(r["t_C"])) > d("0.023"):
            failures.append(f"{name}: {r['t_C']}: the second form is {back - d(r['t_C']):.4f} K off")
    name = "temperature/thermistor_material1_beta.csv"
    for r in rows(name):
        step = 1 / (d(r["t1_C"]) + kelvin) - 1 / (d(r["t2_C"]) + kelvin)
        beta = Fr(d(r["ratio"]).ln() / step)
        own = half_unit(r["ratio"]) / Fr(r["ratio"]) / Fr(step)  # what half a digit of the ratio does to beta
        near(name, f"{r['t1_C']}..{r['t2_C']}", beta, r["beta_K"], (own + Fr(1, 2)) / Fr(1, 2))
    name = "temperature/thermistor_mgh10_certified.csv"
    cert = {r["name"]: r for r in rows(name)}
    b = [d(cert[k]["certified"]) for k in ("b1", "b2", "b3")]
    points = [(d(r["x"]), d(r["y"])) for r in rows("temperature/thermistor_mgh10_data.csv")]
    seen["temperature/thermistor_mgh10_data.csv"] = (len(points), Fr(0))
    # Newton from the certified values to the least-squares minimum in 50 digits: each must be that minimum, rounded.
    for _ in range(8):
        jac, res = [], []
        for x, y in points:
            z = x + b[2]
            model = b[0] * (b[1] / z).exp()
            jac.append([model / b[0], model / z, -model * b[1] / z**2])
            res.append(y - model)
        m = [[sum(j[i] * j[k] for j in jac) for k in range(3)] + [sum(j[i] * r for j, r in zip(jac, res))]
             + [d(int(i == k)) for k in range(3)] for i in range(3)]
        for c in range(3):
            m[c] = [v / m[c][c] for v in m[c]]
            for i in range(3):
                if i != c:
                    m[i] = [v - m[i][c] * w for v, w in zip(m[i], m[c])]
        b = [v + m[i][3] for i, v in enumerate(b)]
    freedom = len(points) - 3
    variance = sum(r * r for r in res) / freedom
    for i, k in enumerate(("b1", "b2", "b3")):
        near(name, k, Fr(b[i]), cert[k]["certified"])
        near(name, k + " std_dev", Fr((variance * m[i][4 + i]).sqrt()), cert[k]["std_dev"])
    near(name, "degrees of freedom", Fr(freedom), cert["degrees_of_freedom"]["certified"])


def d(value):
    """The nearest 50-digit decimal of a fraction or a text."""
    value = Fr(value)
    return Decimal(value.numerator) / Decimal(value.denominator)


def pontius():
    name = "strain/pontius_certified.csv"
    cert = {r["name"]: r for r in rows(name)}
    points = [(Fr(r["x"]), Fr(r["y"])) for r in rows("strain/pontius_data.csv")]
    seen["strain/pontius_data.csv"] = (len(points), Fr(0))
    # least squares by the normal equations, exactly; beside the solution stands the inverse of the matrix
    powers = [[x**k for k in range(3)] for x, _ in points]
    m = [[sum(p[i] * p[k] for p in powers) for k in range(3)] + [sum(p[i] * y for p, (_, y) in zip(powers, points))]
         + [Fr(int(i == k)) for k in range(3)] for i in range(3)]
    for c in range(3):
        m[c] = [v / m[c][c] for v in m[c]]
        for i in range(3):
            if i != c:
                m[i] = [v - m[i][c] * w for v, w in zip(m[i], m[c])]
    b = [row[3] for row in m]
    variance = sum((y - sum(v * q for v, q in zip(b, p))) ** 2 for p, (_, y) in zip(powers, points)) / (len(points) - 3)
    for i, k in enumerate(("B0", "B1", "B2")):
        near(name, k, b[i], cert[k]["certified"])
        near(name, k + " std_dev", Fr(d(variance * m[i][4 + i]).sqrt()), cert[k]["std_dev"])
    near(name, "residual", Fr(d(variance).sqrt()), cert["residual_sd"]["certified"])
    name = "strain/calibration_inverse.csv"
    t = d("2.026192463029109")  # Student's t, 0.975, 37 degrees of freedom; from memory, a misprint would miss the table
    b0, b1, b2 = (d(cert[k]["certified"]) for k in ("B0", "B1", "B2"))
    for r in rows(name):
        root = (b1 * b1 - 4 * b2 * (b0 - d(r["deflection"]))).sqrt()  # the slope at the load
        load = (root - b1) / (2 * b2)
        x = [Fr(load) ** k for k in range(3)]
        leverage = d(sum(x[i] * m[i][4 + k] * x[k] for i in range(3) for k in range(3)))
        half = t * d(cert["residual_sd"]["certified"]) * (1 + leverage).sqrt() / root
        for value, column in ((load, "load"), (load - half, "low"), (load + half, "high")):
            near(name, column, Fr(value), r[column])
            near(name, "published " + column, Fr(value), r["published_" + column])


def thermocouples():
    name = "temperature/thermocouple_direct_coefficients.csv"
    pieces = {}
    for r in rows(name):
        piece = pieces.setdefault(r["type"], {}).setdefault(
            int(r["range_index"]), (Fr(r["t_lo_C"]), Fr(r["t_hi_C"]), [], []))
        piece[3 if r["i"].startswith("exp") else 2].append(Fr(r["c_i_mV"]))

    def of_piece(piece, t):
        e = sum(c * t**i for i, c in enumerate(piece[2]))
        if piece[3]:
            a0, a1, a2 = piece[3]
            e += a0 * Fr(decimal(a1 * (t - a2) ** 2).exp())
        return e

    def emf(kind, t):
        return of_piece(next(p for _, p in sorted(pieces[kind].items()) if t <= p[1]), t)

    joins = 0
    for kind, own in pieces.items():
        for i in range(1, len(own)):
            gap = of_piece(own[i], own[i][0]) - of_piece(own[i - 1], own[i][0])
            joins += 1
            if own[i][0] != own[i - 1][1] or abs(gap) > Fr(1, 10**7):
                failures.append(f"{name}: {kind}: join at {own[i][0]} off by {float(gap):.2e} mV")
    seen[name] = (joins, Fr(0))
    for kind in "KT":
        name = f"temperature/thermocouple_{kind}_table_neg.csv"
        for r in rows(name):
            near(name, r["t_C"], emf(kind, Fr(r["t_C"])), r["E_mV"])
    name = "temperature/thermocouple_points.csv"
    for r in rows(name):
        near(name, f"{r['type']} {r['t_C']}", emf(r["type"], Fr(r["t_C"])), r["E_mV"])
    name = "temperature/thermocouple_cjc_examples.csv"
    for r in rows(name):
        warm = r["unit"] == "degF"
        celsius = lambda t: (t - 32) * Fr(5, 9) if warm else t
        cold, hot = (celsius(Fr(r[k])) for k in ("reference", "hot"))
        value = emf(r["type"], hot) - emf(r["type"], cold)
        if r["answer"] == "mV":
            near(name, r["hot"], value, r["measured_mV"], Fr(2))  # the header: two rounded table values
        else:
            # half a degree of the answer, as emf
            low, high = (emf(r["type"], celsius(Fr(r["hot"]) + d)) - emf(r["type"], cold) for d in (Fr(-1, 2), Fr(1, 2)))
            near(name, r["hot"], value, r["measured_mV"], (high - low) / 2 / half_unit(r["measured_mV"]))
    name = "temperature/thermocouple_tolerances.csv"
    for r in rows(name):
        low, high, rel, flat = (Fr(r[k]) for k in ("t_lo_C", "t_hi_C", "rel", "abs_C"))
        meet = Fr(r["knee_C"]) if r["knee_C"] else flat / rel * (-1 if r["class"] == "3" and low < 0 else 1)
        seen[name] = (seen.get(name, (0, 0))[0] + 1, Fr(0))
        if not low <= meet <= high:
            failures.append(f"{name}: {r['types']} {r['class']}: the figures do not meet in the range")


def budgets():
    name = "statistics/budget_ea_s9.csv"
    three = Decimal(3).sqrt()
    sizes = {r["name"]: Decimal(r["size"]) for r in rows(name) if r["size"]}
    u = {"V_S": sizes["V_S"] / 2, "dV_iX": sizes["dV_iX"] / 2 / three, "dV_S": sizes["dV_S"] / three}
    combined = sum(x * x for x in u.values()).sqrt()
    k = Decimal("0.95") * three
    for r in rows(name):
        value = {**u, "u": combined, "k": k, "U": k * combined}[r["name"]]
        near(name, r["name"], Fr(value), r["published"])


def main():
    if len(sys.argv) == 3 and sys.argv[1] == "--netlist":
        netlist(sys.argv[2])
        return
    for part in (
        bridge_arrangements, nonlinearity, lead_wires, shunt_table, shunt_cases, thermal_output, rosettes, transverse,
        plane_stress, circuit_oracle, pontius, platinum, scales_and_circuits, guide, metals, its90, thermistors, thermocouples,
        budgets,
    ):
        part()
    for name, (n, worst) in seen.items():
        print(f"{name}: {n} cells, worst {float(worst):.3f} of its tolerance")
    tables = {str(p.relative_to(HERE)) for k in ("strain", "temperature") for p in (HERE / k).glob("*.csv")}
    for name in sorted(tables - set(seen) - {"strain/thermal_output_example_lot.csv", "strain/budget_two_wire.csv"}):
        failures.append(f"{name}: not recomputed")
    for text in failures:
        print(text, file=sys.stderr)
    sys.exit(1 if failures else 0)


if __name__ == "__main__":
    main()
