"""Reference values of exp, ln, ln(s/k), the normal density and distribution.

    /usr/bin/python3 functions.py > functions.csv

One line a value: function, first argument, second argument or nothing, value.
Arguments are hexadecimal floats and so exact; values have 34 digits, enough to
measure an error in units of the last place of a double. Arguments come from
Python's own generator through exact operations only, so that the table is the
same wherever it is made.
"""
import math
import random

from mpmath import erfc, exp, log, mp, mpf, nstr, pi, sqrt

mp.dps = 60
rng = random.Random(20240229)


def between(lo, hi):
    return lo + (hi - lo) * rng.random()


def float_in(lo_exponent, hi_exponent):
    """A float of random exponent and random mantissa; gradual underflow included."""
    return math.ldexp(1 + rng.random(), rng.randrange(lo_exponent, hi_exponent))


def row(name, x, y, value):
    print(f"{name},{x.hex()},{'' if y is None else y.hex()},{nstr(value, 34, min_fixed=0, max_fixed=0)}")


def many(name, f, points):
    for p in points:
        row(name, p, None, f(mpf(p)))


def cdf(x):
    return erfc(-x / sqrt(mpf(2))) / 2


def pdf(x):
    return exp(-x * x / 2) / sqrt(2 * pi)


many("exp", exp, [between(-1, 1) for _ in range(400)] + [between(-745, 709.7) for _ in range(300)]
     + [between(-745, -708) for _ in range(100)] + [k * 0.5 for k in range(-20, 21)] + [float_in(-60, -2) for _ in range(50)])
many("log", log, [between(0.3, 3) for _ in range(400)] + [float_in(-1074, 1024) for _ in range(300)]
     + [float_in(-1074, -1022) for _ in range(50)] + [1 + between(-1, 1) * 2.0**-k for k in range(2, 52)])
for _ in range(300):
    k = float_in(-3, 12)
    row("logratio", (s := k * between(0.25, 4)), k, log(mpf(s) / mpf(k)))
for e in range(2, 52):
    k = float_in(-3, 12)
    row("logratio", (s := k * (1 + between(-1, 1) * 2.0**-e)), k, log(mpf(s) / mpf(k)))
for _ in range(250):
    s, k = float_in(-1074, 1024), float_in(-1074, 1024)
    row("logratio", s, k, log(mpf(s) / mpf(k)))
many("normpdf", pdf, [between(-8, 8) for _ in range(300)] + [between(-38.5, 38.5) for _ in range(300)] + [0.0])
many("normcdf", cdf, [between(-8, 8) for _ in range(500)] + [between(-37, -8) for _ in range(300)]
     + [between(-38.4, -37) for _ in range(50)] + [float_in(-60, -2) for _ in range(50)] + [0.0, -37.0])
