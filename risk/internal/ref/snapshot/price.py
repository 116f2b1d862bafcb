"""Prices and sensitivities.

Every sensitivity is the derivative of the price taken numerically at high
precision, not a formula: a mistake in a formula cannot repeat itself here.
"""

from mpmath import diff, erfc, exp, log, mpf, sqrt


def normal_cdf(x):
    return erfc(-x / sqrt(mpf(2))) / 2


def option_value(S, K, T, r, q, vol, call):
    """Generalised Black–Scholes–Merton; with q the foreign rate,
    Garman–Kohlhagen."""
    s = vol * sqrt(T)
    d1 = (log(S / K) + (r - q) * T) / s + s / 2
    d2 = d1 - s
    if call:
        return S * exp(-q * T) * normal_cdf(d1) - K * exp(-r * T) * normal_cdf(d2)
    return K * exp(-r * T) * normal_cdf(-d2) - S * exp(-q * T) * normal_cdf(-d1)


def future_option_value(F, K, T, r, vol, call):
    """Black-76."""
    s = vol * sqrt(T)
    d1 = log(F / K) / s + s / 2
    d2 = d1 - s
    if call:
        return exp(-r * T) * (F * normal_cdf(d1) - K * normal_cdf(d2))
    return exp(-r * T) * (K * normal_cdf(-d2) - F * normal_cdf(-d1))


def forward_value(S, K, T, r, q, dividends=()):
    """Dividends are pairs of the amount and the years from its ex-date to T,
    which the passing of time leaves as they are."""
    forward = S * exp((r - q) * T) - sum(amount * exp((r - q) * left) for amount, left in dividends)
    return (forward - K) * exp(-r * T)


def future_forward_value(F, K, T, r):
    return exp(-r * T) * (F - K)


def payoff(instrument, S, K, call):
    if instrument == "forward":
        return S - K
    return max(S - K, mpf(0)) if call else max(K - S, mpf(0))


def payoff_slope(instrument, S, K, call):
    """0 at the kink of an option."""
    if instrument == "forward":
        return mpf(1)
    if call:
        return mpf(1) if S > K else mpf(0)
    return mpf(-1) if S < K else mpf(0)


GREEKS = ["delta", "gamma", "vega", "theta", "rho", "carry_rho", "vanna", "volga", "charm"]


def value_function(instrument, kind, K, call, dividends=()):
    """V(S, T, r, q, vol). On a future, S is the futures price and V does not
    know q: with the futures price held, rho is the discounting alone."""
    if instrument == "forward" and kind == "future":
        return lambda S, T, r, q, vol: future_forward_value(S, K, T, r)
    if instrument == "forward":
        return lambda S, T, r, q, vol: forward_value(S, K, T, r, q, dividends)
    if kind == "future":
        return lambda S, T, r, q, vol: future_option_value(S, K, T, r, vol, call)
    return lambda S, T, r, q, vol: option_value(S, K, T, r, q, vol, call)


def greeks(V, S, T, r, q, vol):
    """Partial derivatives of V; time runs forward, so theta is −∂V/∂T."""
    return {
        "delta": diff(lambda x: V(x, T, r, q, vol), S),
        "gamma": diff(lambda x: V(x, T, r, q, vol), S, 2),
        "vega": diff(lambda x: V(S, T, r, q, x), vol),
        "theta": -diff(lambda x: V(S, x, r, q, vol), T),
        "rho": diff(lambda x: V(S, T, x, q, vol), r),
        "carry_rho": diff(lambda x: V(S, T, r, x, vol), q),
        "vanna": diff(lambda x, y: V(x, T, r, q, y), (S, vol), (1, 1)),
        "volga": diff(lambda x: V(S, T, r, q, x), vol, 2),
        "charm": -diff(lambda x, y: V(x, y, r, q, vol), (S, T), (1, 1)),
    }
