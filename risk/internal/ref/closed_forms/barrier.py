"""Barrier options: integrals over the density of a price that has not touched
the barrier, which the reflection principle gives, and over the density of the
time of the first touch."""

from mpmath import erfc, exp, log, mpc, mpf, pi, sqrt, zeta

from numeric import digits, greeks, integral, normal_integral

BARRIER_INPUTS = ["on", "spot", "strike", "barrier", "rebate", "time", "vol", "rate", "yield", "interval", "sign", "side", "knock"]


def shifted_barrier(H, interval, side, vol):
    beta = -zeta(mpf(1) / 2) / sqrt(2 * pi)
    return H * exp(side * beta * vol * sqrt(interval))


def over_density(f, lo, hi, mean, s):
    """∫f(x)·g(x)dx, g normal; None is infinity."""
    z = lambda x: None if x is None else (x - mean) / s
    return normal_integral(lambda y: f(mean + s * y), z(lo), z(hi))


def alive(f, lo, hi, h, nu, vol, T):
    """E[f(x_T)] over paths that never touched h, for lo < x_T < hi on the side of 0."""
    s = vol * sqrt(T)
    mirror = exp(2 * nu * h / vol**2)
    return over_density(f, lo, hi, nu * T, s) - mirror * over_density(f, lo, hi, 2 * h + nu * T, s)


def first_touch(h, nu, r, vol, T):
    """∫e^(−rt)·p(t)dt up to T, p the first passage density, with
    y = a·e^u = |h|/(σ√t)."""
    a = abs(h) / (vol * sqrt(T))
    inner = (nu**2 / vol**2 + 2 * r) * h**2 / vol**2
    peak = sqrt(sqrt(inner)) if inner > 0 else mpf(0)
    lo = max(a, peak - 14)
    hi = max(a, peak) + 14

    def density(u):
        y = lo * exp(u)
        return y * exp(-(y**2) / 2 + h * nu / vol**2 - inner / (2 * y**2))

    return 2 / sqrt(2 * pi) * integral(density, mpf(0), log(hi / lo), 16)


def barrier(K, H, rebate, interval, sign, side, knock, S, T, r, q, vol):
    h = log(shifted_barrier(H, interval, side, vol) / S)
    k = log(K / S)
    nu = r - q - vol**2 / 2
    discount = exp(-r * T)
    payoff = lambda x: sign * (S * exp(x) - K)
    one = lambda x: mpf(1)
    # where the payoff is positive, and where the path is alive
    lo, hi = (k, None) if sign > 0 else (None, k)
    live_lo, live_hi = (None, h) if side > 0 else (h, None)
    both_lo = max((x for x in (lo, live_lo) if x is not None), default=None)
    both_hi = min((x for x in (hi, live_hi) if x is not None), default=None)
    out = mpf(0)
    if both_lo is None or both_hi is None or both_lo < both_hi:
        out = alive(payoff, both_lo, both_hi, h, nu, vol, T)
    if knock > 0:
        value = discount * (over_density(payoff, lo, hi, nu * T, vol * sqrt(T)) - out)
        return value + rebate * discount * alive(one, live_lo, live_hi, h, nu, vol, T) if rebate else value
    return discount * out + rebate * first_touch(h, nu, r, vol, T) if rebate else discount * out


def barrier_lines(rng):
    for i in range(320):
        sign, side, knock = (1, -1)[i % 2], (1, -1)[i // 2 % 2], (1, -1)[i // 4 % 2]
        vol = rng.choice([0.01, 0.05, 0.1, 0.2, 0.3, 0.6, 1.5])
        T = rng.choice([1 / 365, 0.02, 0.1, 0.5, 1, 3, 10])
        s = vol * T**0.5
        r, q = rng.choice([rng.uniform(0, 0.12), rng.uniform(-0.05, 0), 0]), rng.choice([rng.uniform(-0.02, 0.1), 0])
        H = digits(100 * 2.718281828 ** (side * s * rng.choice([0.05, 0.3, 1, 2, 4]) * rng.uniform(0.5, 1.5)))
        K = digits(100 * 2.718281828 ** (s * rng.uniform(-2.5, 2.5)))
        rebate = rng.choice([0, round(rng.uniform(0.5, 20), 2)])
        interval = rng.choice([0, 0, 1 / 365, 7 / 365]) * min(1, T)
        yield ["spot", 100, K, H, rebate, T, vol, round(r, 4), round(q, 4), interval, sign, side, knock]


def barrier_values(line):
    S, K, H, rebate, T, vol, r, q, interval = (mpf(x) for x in line[1:10])
    sign, side, knock = line[10:]
    value = lambda S, T, r, q, vol: barrier(K, H, rebate, interval, sign, side, knock, S, T, r, q, vol)
    return greeks(value, S, T, r, q, vol)


TOUCH_INPUTS = ["a", "c"]
TOUCH_RESULTS = ["f", "fa", "fc", "faa", "fac", "fcc"]


def touch(a, c):
    """e^(a²/2)·E[e^(−cτ/2); τ < 1], τ the first passage of a standard Brownian
    motion to a: two tails at complex arguments where c < 0."""
    g = sqrt(mpc(c))
    tail = lambda x: erfc(x / sqrt(mpf(2))) / 2
    return exp(a * a / 2) * (exp(a * g) * tail(a + g) + exp(-a * g) * tail(a - g)).real


def touch_lines(rng):
    for a in [1e-6, 0.01, 0.5, 2, 3.4, 3.5, 4, 6, 9, 20]:
        for c in [1, 0.999, 0.3, 1e-3, 1e-9, 0, -1e-9, -1e-3, -0.2, -1, -3, -12, -50, -199]:
            yield [a * rng.uniform(0.99, 1.01), float(c)]


def touch_values(line):
    a, c = mpf(line[0]), mpf(line[1])
    ha, hc = a * mpf(10) ** -11, max(abs(c), mpf(1) / 100) * mpf(10) ** -11
    at = lambda i=0, j=0: touch(a + i * ha, c + j * hc)
    f = at()
    return [
        f,
        (at(1) - at(-1)) / (2 * ha),
        (at(0, 1) - at(0, -1)) / (2 * hc),
        (at(1) - 2 * f + at(-1)) / ha**2,
        (at(1, 1) - at(1, -1) - at(-1, 1) + at(-1, -1)) / (4 * ha * hc),
        (at(0, 1) - 2 * f + at(0, -1)) / hc**2,
    ]
