"""Options on averages: moments by integrals over the window, then the payoff
integrated over the normal or lognormal density that has them."""

from mpmath import exp, log, mpf, sqrt, workdps

from numeric import digits, greeks, integral, normal_integral

ASIAN_INPUTS = ["kind", "on", "spot", "strike", "start", "average", "time", "vol", "rate", "yield", "sign"]


class Window:
    """The window seen after p years more at an unchanged spot: how long it takes
    to begin, what is left, and the sum so far of a quantity whose average was
    so_far and which now is steady. One that begins now has begun, for p below 0
    as well: what is meant is the change as time goes on."""

    def __init__(self, start, T, p, so_far, steady):
        begun = start <= 0
        self.length = T - start
        self.ahead = mpf(0) if begun else start - p
        self.end = T - p
        self.sum = so_far * -start + steady * p if begun else mpf(0)


def expected(payoff, kink, sign):
    return normal_integral(payoff, kink, None) if sign > 0 else normal_integral(payoff, None, kink)


def triangle(f, a, b, panels):
    """∫∫f(u, v) over a < u < v < b."""
    return integral(lambda v: integral(lambda u: f(u, v), a, v, panels), a, b, panels)


def lognormal(mean, sd, K, sign):
    """E of the payoff for ln X normal."""
    if sd == 0:
        return max(sign * (exp(mean) - K), mpf(0))
    return expected(lambda z: sign * (exp(mean + sd * z) - K), (log(K) - mean) / sd, sign)


def geometric(w, K, sign, S, r, q, vol):
    nu = r - q - vol**2 / 2
    mean = (w.sum + integral(lambda u: log(S) + nu * u, w.ahead, w.end, 1)) / w.length
    variance = vol**2 * 2 * triangle(lambda u, v: u, w.ahead, w.end, 1) / w.length**2
    return exp(-r * w.end) * lognormal(mean, sqrt(variance), K, sign)


def arithmetic(w, K, sign, S, r, q, vol, panels):
    b = r - q
    first = S * integral(lambda u: exp(b * u), w.ahead, w.end, panels) / w.length
    second = S**2 * 2 * triangle(lambda u, v: exp(b * (u + v) + vol**2 * u), w.ahead, w.end, panels) / w.length**2
    rest = K - w.sum / w.length
    if rest <= 0:
        return exp(-r * w.end) * max(sign * (first - rest), mpf(0))
    variance = log(second / first**2)
    return exp(-r * w.end) * lognormal(log(first) - variance / 2, sqrt(variance), rest, sign)


def asian_lines(rng):
    for i in range(192):
        kind, sign = ("geometric", "arithmetic")[i % 2], (1, -1)[i // 2 % 2]
        on = ("spot", "spot", "future")[i % 3]
        vol = rng.choice([0.01, 0.05, 0.1, 0.2, 0.3, 0.6, 1.5])
        T = rng.choice([1 / 365, 0.02, 0.1, 0.5, 1, 3])
        s = vol * T**0.5
        start = T * rng.choice([0, 0.3, 0.9, -0.05, -0.5, -3])
        average = digits(100 * 2.718281828 ** (s * rng.uniform(-1, 1)))
        share = T / (T - min(start, 0))
        K = digits(100 * 2.718281828 ** (share * s * rng.uniform(-1.5, 1.5)) * share + average * (1 - share))
        if i % 16 in (5, 11):
            K = digits(average * (1 - share) * 0.98 + 1e-3)  # the past alone decides, if there is one
        r, q = round(rng.uniform(-0.03, 0.12), 4), round(rng.uniform(-0.02, 0.1), 4)
        if i % 12 == 0:
            q = r
        yield [kind, on, 100, K, start, average, T, vol, r, q, sign]


def asian_values(line):
    kind, on = line[:2]
    S0, K, start, average, T0, vol0, r0, q0 = (mpf(x) for x in line[2:10])
    sign = line[10]
    panels = 2 if vol0**2 * T0 > 4 else 1

    def value(S, T, r, q, vol):
        q = r if on == "future" else q
        if kind == "geometric":
            return geometric(Window(start, T0, T0 - T, log(average), log(S0)), K, sign, S, r, q, vol)
        return arithmetic(Window(start, T0, T0 - T, average, S0), K, sign, S, r, q, vol, panels)

    return greeks(value, S0, T0, r0, q0, vol0)


MOMENT_INPUTS = ["x", "z"]
MOMENT_RESULTS = ["e", "de", "dde", "d", "dx", "dz", "dzz"]


def divided_difference(nodes):
    """exp[nodes] by Newton's scheme, at a precision that it cannot use up: nodes
    are kept apart by 1e-40, and lose 40 digits for each order."""
    with workdps(450):
        nodes = [mpf(n) + k * mpf(10) ** -40 for k, n in enumerate(nodes)]
        table = [exp(n) for n in nodes]
        for order in range(1, len(nodes)):
            table = [(b - a) / (nodes[i + order] - nodes[i]) for i, (a, b) in enumerate(zip(table, table[1:]))]
        return table[0]


def moment_lines(rng):
    for x in [-200, -30, -3, -1.01, -0.99, -0.2, -1e-3, -1e-12, 0, 1e-9, 1e-4, 0.05, 0.5, 0.999, 1, 4, 50, 200]:
        for z in [0, 1e-12, 1e-3, 0.1, 1, 10, 100, 250]:
            yield [x * rng.uniform(0.999, 1), z * rng.uniform(0.999, 1)]


def moment_values(line):
    x, z = mpf(line[0]), mpf(line[1])
    E = divided_difference
    at_x, at_2x, at_end = (E([0, x, 2 * x, 2 * x + z, n]) for n in (x, 2 * x, 2 * x + z))
    return [
        E([0, x]), E([0, x, x]), 2 * E([0, x, x, x]),
        E([0, x, 2 * x, 2 * x + z]), at_x + 2 * at_2x + 2 * at_end, at_end,
        2 * E([0, x, 2 * x, 2 * x + z, 2 * x + z, 2 * x + z]),
    ]
