"""Digital options and the normal model: integrals over the density at expiry."""

from mpmath import exp, log, mpf, sqrt

from numeric import greeks, normal_integral

DIGITAL_INPUTS = ["kind", "on", "spot", "strike", "payout", "time", "vol", "rate", "yield", "sign"]
NORMAL_INPUTS = ["future", "strike", "time", "vol", "rate", "sign"]


def expected(payoff, kink, sign):
    """E of payoff(Z) on the side of the kink that sign is on, Z standard normal."""
    return normal_integral(payoff, kink, None) if sign > 0 else normal_integral(payoff, None, kink)


def digital(kind, K, payout, sign, S, T, r, q, vol):
    s = vol * sqrt(T)
    drift = (r - q) * T - s * s / 2
    kink = (log(K / S) - drift) / s
    paid = (lambda z: payout) if kind == "cash" else (lambda z: S * exp(drift + s * z))
    return exp(-r * T) * expected(paid, kink, sign)


def normal(K, sign, F, T, r, vol):
    s = vol * sqrt(T)
    return exp(-r * T) * expected(lambda z: sign * (F + s * z - K), (K - F) / s, sign)


def digital_lines(rng):
    for i in range(160):
        kind, on, sign = ("cash", "asset")[i % 2], ("spot", "future")[i // 2 % 2], (1, -1)[i // 4 % 2]
        S = 100
        vol = (rng.choice([0.01, 0.05, 0.1, 0.2, 0.3, 0.6, 1.5]))
        T = rng.choice([1 / 365, 0.02, 0.1, 0.5, 1, 3, 10])
        K = round(S * 2.718281828 ** (rng.uniform(-3, 3) * vol * T**0.5), 3)
        yield [kind, on, S, K, round(rng.uniform(0.5, 250), 2), T, vol, round(rng.uniform(-0.03, 0.12), 4), round(rng.uniform(-0.03, 0.1), 4), sign]


def digital_values(line):
    kind, on, S, K, payout, T, vol, r, q, sign = line
    S, K, payout, T, vol, r, q = (mpf(x) for x in (S, K, payout, T, vol, r, q))
    if on == "future":
        return greeks(lambda S, T, r, q, vol: digital(kind, K, payout, sign, S, T, r, r, vol), S, T, r, q, vol)
    return greeks(lambda S, T, r, q, vol: digital(kind, K, payout, sign, S, T, r, q, vol), S, T, r, q, vol)


def normal_lines(rng):
    for i in range(120):
        vol = rng.choice([0.05, 0.8, 4, 12, 40])
        T = rng.choice([1 / 365, 0.02, 0.1, 0.5, 1, 3, 10])
        F = round(rng.uniform(-30, 60), 2)
        K = round(F + rng.uniform(-6, 6) * vol * T**0.5, 3)
        yield [F, K, T, vol, round(rng.uniform(-0.03, 0.12), 4), (1, -1)[i % 2]]


def normal_values(line):
    F, K, T, vol, r = (mpf(x) for x in line[:5])
    value = lambda F, T, r, q, vol: normal(K, line[5], F, T, r, vol)
    return greeks(value, F, T, r, mpf(0), vol, scale_S=vol * sqrt(T))
