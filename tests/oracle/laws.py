"""The element laws in mpmath arithmetic, forward and inverse."""

from mpmath import mp, mpf

mp.dps = 50
ZERO_CELSIUS = mpf(27315) / 100  # K, exact
MICRO = mpf(10) ** -6


def platinum(p, t):
    """(ohms, ohms per kelvin); the quartic below 0 degC, the quadratic from 0 degC."""
    c = p["c"] if t < 0 else mpf(0)
    ohms = p["r0"] * (1 + p["a"] * t + p["b"] * t**2 + c * (t - 100) * t**3)
    slope = p["r0"] * (p["a"] + 2 * p["b"] * t + c * (4 * t**3 - 300 * t**2))
    return ohms, slope


def platinum_inverse(p, ohms, start):
    """Root by Newton's method to full precision."""
    t = start
    for _ in range(30):
        value, slope = platinum(p, t)
        step = (ohms - value) / slope
        t += step
        if abs(step) < mpf(10) ** -44:
            return t
    raise ArithmeticError("no convergence")


def beta(p, t):
    """R = R25 exp(beta (1/T - 1/298.15 K))."""
    kelvin = t + ZERO_CELSIUS
    ohms = p["r25"] * mp.exp(p["beta"] * (1 / kelvin - 1 / (25 + ZERO_CELSIUS)))
    return ohms, -ohms * p["beta"] / kelvin**2


def beta_inverse(p, ohms, _start):
    return 1 / (mp.log(ohms / p["r25"]) / p["beta"] + 1 / (25 + ZERO_CELSIUS)) - ZERO_CELSIUS


def steinhart_hart(p, t):
    """R with 1/T = a + b L + c L^3, L = ln(R / 1 ohm): the one real root, by Newton's method."""
    target = 1 / (t + ZERO_CELSIUS) - p["a"]
    log = target / p["b"]
    for _ in range(100):
        step = (target - (p["b"] + p["c"] * log**2) * log) / (p["b"] + 3 * p["c"] * log**2)
        log += step
        if abs(step) < mpf(10) ** -46:
            break
    else:
        raise ArithmeticError("no convergence")
    ohms = mp.exp(log)
    # -1/T^2 dT = (b + 3 c L^2) dR / R
    return ohms, -ohms / ((t + ZERO_CELSIUS) ** 2 * (p["b"] + 3 * p["c"] * log**2))


def steinhart_hart_inverse(p, ohms, _start):
    log = mp.log(ohms)
    return 1 / (p["a"] + (p["b"] + p["c"] * log**2) * log) - ZERO_CELSIUS


def thermal_output(p, t):
    """Strain of the package polynomial at the data gauge factor; its coefficients are in microstrain."""
    total = mpf(0)
    for i in "43210":
        total = total * t + p["to" + i]
    return total * MICRO


def gauge_factor(p, t):
    return p["f"] * (1 + p["s"] * (t - p["t_ref"]))


def tau(p, t):
    """Relative resistance change with temperature alone, counted from T0."""
    return p["f_data"] * (thermal_output(p, t) - thermal_output(p, p["t0"])) + p["f"] * (
        p["alpha_specimen"] - p["alpha_data"]
    ) * (t - p["t0"])


def warmth(p, t):
    """What leads are multiplied by at this temperature."""
    return 1 + p["alpha"] * (t - p["lead_ref"])


def monotone_cubic(points, t):
    """F. N. Fritsch, J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300-304, with the usual limited three-point slopes at
    the ends; in Hermite's basis."""
    x, y = [p[0] for p in points], [p[1] for p in points]
    h = [b - a for a, b in zip(x, x[1:])]
    d = [(b - a) / step for a, b, step in zip(y, y[1:], h)]

    def end(h0, h1, d0, d1):
        m = ((2 * h0 + h1) * d0 - h0 * d1) / (h0 + h1)
        if m * d0 <= 0:
            return mpf(0)
        return 3 * d0 if d0 * d1 <= 0 and abs(m) > 3 * abs(d0) else m

    inner = []
    for h0, h1, d0, d1 in zip(h, h[1:], d, d[1:]):
        share = (h0 + 2 * h1) / (3 * (h0 + h1))  # 1/m = share/d0 + (1 - share)/d1
        inner.append(d0 * d1 / (share * d1 + (1 - share) * d0) if d0 * d1 > 0 else mpf(0))
    m = [end(h[0], h[1], d[0], d[1])] + inner + [end(h[-1], h[-2], d[-1], d[-2])]
    k = max(i for i in range(len(h)) if i == 0 or t >= x[i])
    u = (t - x[k]) / h[k]
    return (
        y[k] * (1 + 2 * u) * (1 - u) ** 2 + y[k + 1] * u**2 * (3 - 2 * u)
        + h[k] * (m[k] * u * (1 - u) ** 2 - m[k + 1] * u**2 * (1 - u))
    )
