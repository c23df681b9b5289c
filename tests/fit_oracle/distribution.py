#!/usr/bin/env python3
"""Normal and Student's t in 40-digit arithmetic, for tests/distribution.rs: writes distribution.csv beside itself.

Needs mpmath 1.3.0 (`pip install mpmath==1.3.0`). Probabilities go in as the doubles that the test reads; a quantile is found by
Newton's method on the logarithm of the 40-digit tail, so that it is right for that double. Takes some minutes.
"""
import pathlib

from mpmath import mp, mpf, erfc, erfinv, exp, log, loggamma, pi, sqrt

mp.dps = 40


def normal_tail(z):
    return erfc(z / sqrt(2)) / 2


def incomplete_beta(x, y, a, b):
    """I_x(a, b) with y = 1 - x, by x^a y^b / (a B(a, b)) sum of (a + b)_n / (a + 1)_n x^n; every term is positive."""
    if x > (a + 1) / (a + b + 2):
        return 1 - incomplete_beta(y, x, b, a)
    front = exp(a * log(x) + b * log(y) + loggamma(a + b) - loggamma(a) - loggamma(b)) / a
    total, term, n = mpf(1), mpf(1), 0
    while term > total * mpf(10) ** (-mp.dps - 3):
        term *= (a + b + n) / (a + 1 + n) * x
        total += term
        n += 1
    return front * total


def tail(t, nu):
    """P(T > t), t >= 0."""
    if nu is None or t == 0:
        return normal_tail(t)
    if nu > 10**6:
        # the series is too long there, while the density integrates well
        return mp.quad(lambda x: density(x, nu), [t + step / (1 + t) for step in (0, 0.5, 1, 2, 3, 5, 8, 14, 20, 40, 60, 100, 200, 900)])
    return incomplete_beta(nu / (nu + t * t), t * t / (nu + t * t), nu / 2, mpf(1) / 2) / 2


def density(t, nu):
    if nu is None:
        return exp(-t * t / 2) / sqrt(2 * pi)
    c = exp(loggamma((nu + 1) / 2) - loggamma(nu / 2)) / sqrt(nu * pi)
    return c * (1 + t * t / nu) ** (-(nu + 1) / 2)


def quantile(p, nu):
    """The t with P(T <= t) = p for a double p."""
    q = p if p < mpf(1) / 2 else 1 - p
    z = sqrt(2) * erfinv(1 - 2 * q) if q > mpf(10) ** -20 else sqrt(-2 * log(q) - log(-4 * pi * log(q)))
    t = z if nu is None or nu > 1000 else sqrt(nu * mp.expm1(z * z / nu))
    target = log(q)
    s = log(t)
    for _ in range(200):
        t = exp(s)
        above = tail(t, nu)
        step = (log(above) - target) * above / (t * density(t, nu))
        s += step
        if abs(step) < mpf(10) ** -26:
            break
    else:
        raise SystemExit(f"no quantile: {p} {nu}")
    t = exp(s)
    return -t if p < mpf(1) / 2 else t


def main():
    here = pathlib.Path(__file__).parent
    lines = [
        "# source: computed, 40-digit arithmetic (mpmath 1.3.0), tests/fit_oracle/distribution.py; an oracle, nothing published",
        "# kind probability: P(T <= x); quantile: the t that T stays below with probability x; nu = inf is the normal distribution",
        "kind,nu,x,value",
    ]
    nus = ["0.3", "1", "1.7", "2", "3", "4.5", "9", "13", "30", "37", "120.5", "999", "19999", "20001", "1e9", "inf"]
    for nu_text in nus:
        nu = None if nu_text == "inf" else mpf(float(nu_text))
        for x in ["-30", "-12", "-5", "-2.5", "-1", "-0.3", "-0.001", "0.5", "1.96", "3"]:
            v = mpf(float(x))
            below = tail(-v, nu) if v < 0 else 1 - tail(v, nu)
            if below > mpf(10) ** -300:
                lines.append(f"probability,{nu_text},{x},{mp.nstr(below, 22)}")
        for x in ["1e-250", "1e-40", "1e-12", "0.00135", "0.025", "0.2", "0.26", "0.4999", "0.51", "0.75", "0.9", "0.975", "0.995", "0.99865"]:
            if x in ("1e-250", "1e-40") and nu is not None and nu > 1000:
                continue
            t = quantile(mpf(float(x)), nu)
            if abs(t) < mpf(10) ** 300:
                lines.append(f"quantile,{nu_text},{x},{mp.nstr(t, 22)}")
    (here / "distribution.csv").write_text("\n".join(lines) + "\n")


main()
