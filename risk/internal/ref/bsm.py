"""Reference values of European options and their sensitivities.

    /usr/bin/python3 bsm.py > bsm.csv

3,000 lines: 1 day to 20 years, volatility 1 % to 200 %, |d1| up to 30, calls and
puts. Inputs are short decimals, read as the doubles nearest to them; the formulas
are evaluated at 50 digits for exactly those doubles. Outputs have 20 digits.
"""
import random

from mpmath import erfc, exp, log, mp, mpf, nstr, pi, sqrt

mp.dps = 50
LINES = 3000
rng = random.Random(19730501)


def Phi(x):
    return erfc(-x / sqrt(mpf(2))) / 2


def phi(x):
    return exp(-x * x / 2) / sqrt(2 * pi)


def values(s, k, t, v, r, q, w):
    """Price and derivatives, each written from its own textbook formula."""
    s, k, t, v, r, q = (mpf(x) for x in (s, k, t, v, r, q))
    root = sqrt(t)
    d1 = (log(s / k) + (r - q + v * v / 2) * t) / (v * root)
    d2 = d1 - v * root
    qf, rf = exp(-q * t), exp(-r * t)
    n1, n2 = Phi(w * d1), Phi(w * d2)
    return d1, (
        w * (s * qf * n1 - k * rf * n2),
        w * qf * n1,
        qf * phi(d1) / (s * v * root),
        s * qf * phi(d1) * root,
        -s * qf * phi(d1) * v / (2 * root) + w * q * s * qf * n1 - w * r * k * rf * n2,
        w * t * k * rf * n2,
        -w * t * s * qf * n1,
        -qf * phi(d1) * d2 / v,
        s * qf * phi(d1) * root * d1 * d2 / v,
        w * q * qf * n1 - qf * phi(d1) * (2 * (r - q) * t - d2 * v * root) / (2 * t * v * root),
    )


def short(x, digits):
    return float(nstr(mpf(x), digits))


def log_uniform(lo, hi, digits):
    return short(mpf(lo) * exp(mpf(rng.random()) * log(mpf(hi) / mpf(lo))), digits)


print("spot,strike,time,vol,rate,yield,sign,price,delta,gamma,vega,theta,rho,carry_rho,vanna,volga,charm")
done = 0
while done < LINES:
    k = log_uniform(1, 10000, 5)
    t = int(log_uniform(1, 7301, 6)) / 365
    v = log_uniform("0.01", 2, 4)
    r, q = short(-0.02 + 0.17 * rng.random(), 3), short(-0.01 + 0.09 * rng.random(), 3)
    w = 1 if rng.random() < 0.5 else -1
    kind = done % 10
    if kind == 0:  # at the strike
        s = k
    elif kind == 1:  # at the forward, where vanna, volga and d1 or d2 vanish
        s = short(mpf(k) * exp((q - r) * t + mpf(rng.choice([-1, 0, 1])) * v * v * t / 2), 17)
    else:
        reach = 6 if kind < 7 else 30
        d = reach * (2 * mpf(rng.random()) - 1)
        move = d * v * sqrt(mpf(t)) - (r - q + mpf(v) ** 2 / 2) * t
        if abs(move) > 25:
            continue
        s = short(k * exp(move), 8)
    d1, out = values(s, k, t, v, r, q, w)
    if abs(d1) > 30:
        continue
    print(",".join([repr(x) for x in (s, k, t, v, r, q, w)] + [nstr(x, 20, min_fixed=0, max_fixed=0) for x in out]))
    done += 1
