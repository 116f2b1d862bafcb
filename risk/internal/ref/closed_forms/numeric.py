"""Integrals and derivatives in high precision.

Nothing here knows a pricing formula: values are integrals of a payoff over a
density, sensitivities are differences of values.
"""

from mpmath import ceil, cos, exp, mp, mpf, pi, sqrt

mp.dps = 50

NODES = 24  # a panel
REACH = mpf(14)  # standard deviations: the density beyond is below 1e-43
PANEL = mpf("3.7")  # standard deviations, at most: the error of one is below 1e-31


def legendre(n):
    """Nodes and weights of the n-point Gauss–Legendre rule on (−1, 1)."""
    rule = []
    for i in range(1, n + 1):
        x = cos(pi * (i - mpf(1) / 4) / (n + mpf(1) / 2))
        for _ in range(8):
            p, p1 = mpf(1), mpf(0)
            for k in range(1, n + 1):
                p, p1 = ((2 * k - 1) * x * p - (k - 1) * p1) / k, p
            slope = n * (x * p - p1) / (x * x - 1)
            x -= p / slope
        rule.append((x, 2 / ((1 - x * x) * slope * slope)))
    return rule


RULE = legendre(NODES)


def integral(f, a, b, panels):
    """∫f from a to b, in panels of one length."""
    half = (b - a) / (2 * panels)
    total = mpf(0)
    for p in range(panels):
        middle = a + half * (2 * p + 1)
        total += sum(w * f(middle + half * x) for x, w in RULE)
    return total * half


def normal_density(x):
    return exp(-x * x / 2) / sqrt(2 * pi)


def normal_integral(f, a, b):
    """∫f(x)·φ(x)dx over a < x < b, either of which may be None for infinity."""
    lo = -REACH if a is None or a < -REACH else a
    hi = REACH if b is None or b > REACH else b
    if a is not None and a > 0:
        hi = lo + REACH if b is None else min(b, lo + REACH)
    if b is not None and b < 0:
        lo = hi - REACH if a is None else max(a, hi - REACH)
    if hi <= lo:
        return mpf(0)
    return integral(lambda x: f(x) * normal_density(x), lo, hi, int(ceil((hi - lo) / PANEL)))


GREEKS = ["price", "delta", "gamma", "vega", "theta", "rho", "carry_rho", "vanna", "volga", "charm"]


def greeks(V, S, T, r, q, vol, scale_S=None):
    """V(S, T, r, q, vol) and its partial derivatives, by central differences
    whose steps fit the width of the distribution; time runs forward, so theta
    is −∂V/∂T."""
    tiny = mpf(10) ** -12
    width = min(vol * sqrt(T), mpf(1))
    hs = tiny * (width * S if scale_S is None else scale_S)
    ht = tiny * T * min(width, 1)
    hv = tiny * vol * min(width, 1)
    hr = tiny * min(width, 1)

    def at(s=0, t=0, v=0, a=0, b=0):
        return V(S + s * hs, T + t * ht, r + a * hr, q + b * hr, vol + v * hv)

    base, up, down = at(), at(s=1), at(s=-1)
    vol_up, vol_down = at(v=1), at(v=-1)
    corner = lambda **step: [at(s=s, **{k: x * step[k] for k in step}) for s, x in ((1, 1), (1, -1), (-1, 1), (-1, -1))]
    cross = lambda c: c[0] - c[1] - c[2] + c[3]
    return [
        base,
        (up - down) / (2 * hs),
        (up - 2 * base + down) / hs**2,
        (vol_up - vol_down) / (2 * hv),
        -(at(t=1) - at(t=-1)) / (2 * ht),
        (at(a=1) - at(a=-1)) / (2 * hr),
        (at(b=1) - at(b=-1)) / (2 * hr),
        cross(corner(v=1)) / (4 * hs * hv),
        (vol_up - 2 * base + vol_down) / hv**2,
        -cross(corner(t=1)) / (4 * hs * ht),
    ]


def digits(x):
    """x to eight digits, so that the last ones of a power do not matter."""
    return float("%.8g" % x)
