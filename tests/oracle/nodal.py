"""Direct-current networks by nodal analysis in mpmath arithmetic: the bridge with all that hangs on it, and the divider.

No bridge formula is used: Kirchhoff's current law is written for every unknown node and the linear system is solved.
"""

from mpmath import mp, mpf

mp.dps = 50
ZERO = mpf(0)
ONE = mpf(1)


def solve(fixed, resistors, opamp=None):
    """Potentials of all nodes.

    fixed: node -> potential. resistors: (node, node, ohms). opamp: (plus, minus, out, gain or None, reference): its output
    stands at reference + gain (plus - minus), or wherever plus = minus when the gain is None (ideal).
    """
    names = []
    for one, other, _ in resistors:
        for node in (one, other):
            if node not in fixed and node not in names:
                names.append(node)
    index = {node: i for i, node in enumerate(names)}
    n = len(names)
    rows = [[ZERO] * (n + 1) for _ in range(n)]
    skip = opamp[2] if opamp else None
    for one, other, ohms in resistors:
        siemens = ONE / ohms
        for here, there in ((one, other), (other, one)):
            if here in fixed or here == skip:  # the output of an op-amp supplies any current
                continue
            row = rows[index[here]]
            row[index[here]] += siemens
            if there in fixed:
                row[n] += siemens * fixed[there]
            else:
                row[index[there]] -= siemens
    if opamp:
        plus, minus, out, gain, reference = opamp
        row = rows[index[out]]
        for node, factor in ((plus, ONE), (minus, -ONE)):
            factor = factor if gain is None else -gain * factor
            row[index[node]] += factor
        if gain is not None:
            row[index[out]] += ONE
            row[n] += reference
    # Gaussian elimination with row pivoting; zeros are skipped
    for k in range(n):
        best = max(range(k, n), key=lambda i: abs(rows[i][k]))
        rows[k], rows[best] = rows[best], rows[k]
        pivot = rows[k]
        inverse = ONE / pivot[k]
        for i in range(k + 1, n):
            row = rows[i]
            if row[k]:
                factor = row[k] * inverse
                for j in range(k + 1, n + 1):
                    if pivot[j]:
                        row[j] -= factor * pivot[j]
    volts = [ZERO] * n
    for k in range(n - 1, -1, -1):
        row = rows[k]
        total = row[n]
        for j in range(k + 1, n):
            if row[j]:
                total -= row[j] * volts[j]
        volts[k] = total / row[k]
    result = dict(fixed)
    result.update(zip(names, volts))
    return result


LEADS = ["wire1", "wire2", "wire3", "supply_p", "supply_n", "signal_a", "signal_b"]


def with_leads_times(p, factor):
    """The same bridge with all its leads multiplied, as warming does."""
    return dict(p, **{name: p[name] * factor for name in LEADS if name in p})


def arms(p, x, tau):
    """R_i = R_i0 [1 + c_i (F e + x0) + t_i tau], x = F e + x0; both may be four numbers, one an arm."""
    x, tau = (v if isinstance(v, list) else [v] * 4 for v in (x, tau))
    result = []
    for k, i in enumerate("1234"):
        ohms = p["r" + i] * (1 + p.get("c" + i, ZERO) * x[k] + p.get("t" + i, ZERO) * tau[k])
        assert ohms > 0
        result.append(ohms)
    return result


def bridge(p, x, tau=ZERO):
    """Potentials of the bridge of the header's parameters `p`, source 1 V; returns (potentials, reading).

    x = F e + x0. The reading is a' - b' over the source, over p - n when sensed, or the amplifier's output over the source.
    """
    ohms = arms(p, x, tau)
    shunted = int(p.get("shunt_arm", 0))
    # at the instrument the shunt of a gauge stands outside all leads; that of a fixed resistor is across it
    outside = shunted and p["shunt_outside"] and any(p.get(k + str(shunted), ZERO) for k in "ct")
    if shunted and not outside:
        ohms[shunted - 1] = 1 / (1 / ohms[shunted - 1] + 1 / p["shunt"])
    r1, r2, r3, r4 = ohms
    wires = p.get("wires", 0)
    if wires == 2:
        r1 = r1 + p["wire1"] + p["wire2"]
    elif wires == 3:
        r1 = r1 + p["wire1"]
        r2 = r2 + p["wire2"]
    fixed = {"source -": ZERO, "source +": ONE}
    resistors = []

    def lead(name, near, far):
        if name in p:
            resistors.append((near, far, p[name]))
            return far
        return near

    top = lead("supply_p", "source +", "p")
    bottom = lead("supply_n", "source -", "n")
    resistors += [("a", bottom, r1), (top, "a", r2), (top, "b", r3), ("b", bottom, r4)]
    far_a = lead("wire3", "a", "a3") if wires == 3 else "a"
    far_a = lead("signal_a", far_a, "a'")
    far_b = lead("signal_b", "b", "b'")
    if outside:
        resistors.append((far_a if shunted < 3 else far_b, "source -" if shunted in (1, 4) else "source +", p["shunt"]))
    if "input" in p:
        resistors.append((far_a, far_b, p["input"]))
    if "rin_ni" not in p:
        v = solve(fixed, resistors)
        reading = v[far_a] - v[far_b]
        return v, reading / (v[top] - v[bottom]) if p.get("sensed") else reading
    reference = p.get("reference", ZERO)
    fixed["reference"] = reference
    resistors += [
        (far_a, "q", p["rin_ni"]), ("q", "reference", p["rfb_ni"]),
        (far_b, "m", p["rin_inv"]), ("m", "out", p["rfb_inv"]),
    ]
    v = solve(fixed, resistors, ("q", "m", "out", p.get("open_loop_gain"), reference))
    reading = v["out"] - reference
    return v, reading / (v[top] - v[bottom]) if p.get("sensed") else reading


def divider(p, ohms):
    """Node potential over the supply: one Kirchhoff equation."""
    load = ONE / p["input"] if "input" in p else ZERO
    if p["sensor_low"]:  # the sensor goes from the node to ground
        up, down = ONE / p["fixed"], ONE / ohms
    else:
        up, down = ONE / ohms, ONE / p["fixed"]
    return up / (up + down + load)


def divider_inverse(p, ratio):
    """The sensor's resistance that gives this node potential exactly."""
    load = ONE / p["input"] if "input" in p else ZERO
    other = ONE / p["fixed"]
    if p["sensor_low"]:  # other (1 - y) = y (s + load)
        return ONE / (other * (1 - ratio) / ratio - load)
    return ONE / (ratio * (other + load) / (1 - ratio))
