#!/usr/bin/python3
"""Reference table for implied volatilities: forwards, strikes, total volatilities
σ√T, and undiscounted Black prices of the out-of-the-money side at 80 digits,
rounded once. Writes CSV to standard output; deterministic.
"""
import random
from mpmath import mp, mpf, log, sqrt, exp, erfc

mp.dps = 80


def price(f, k, s):
    """Undiscounted Black price of the out-of-the-money side."""
    w = 1 if k >= f else -1
    d1 = log(f / k) / s + s / 2
    d2 = d1 - s
    phi = lambda z: erfc(-z / sqrt(mpf(2))) / 2
    return w, w * (f * phi(w * d1) - k * phi(w * d2))


def main():
    rng = random.Random(20260331)
    print("forward,strike,total_vol,sign,price")
    rows = 0
    while rows < 3000:
        s = float(exp(log(mpf("1e-4")) + mpf(rng.random()) * log(mpf(6) / mpf("1e-4"))))
        f = float(exp(mpf(rng.random() * 8 - 2)))
        x = min(s * 37 * rng.random() ** 2, 30.0) * rng.choice([1, -1])
        if rng.random() < 0.1:
            x = 0.0
        k = float(mpf(f) * exp(mpf(x)))
        w, p = price(mpf(f), mpf(k), mpf(s))
        rounded = float(p)
        # below 1e-300 the price has lost digits; near its bound it no longer tells s
        if rounded < 1e-300 or float((min(mpf(f), mpf(k)) - p) / min(f, k)) < 1e-3:
            continue
        print(f"{f!r},{k!r},{s!r},{w},{rounded!r}")
        rows += 1


main()
