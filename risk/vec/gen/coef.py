"""Derives every fitted constant of package vec and prints it as Go source.

    /usr/bin/python3 coef.py consts | gofmt > ../coef.go
    /usr/bin/python3 coef.py table  | gofmt > ../coef_simd_amd64.go

The fits interpolate at Chebyshev nodes, which is within a small factor of the
best possible fit and needs no iteration, so the output is a pure function of
this file. They are done with 60 digits and rounded to doubles once, at the end.
"""
import sys

from mpmath import atanh, cos, erfc, exp, floor, linspace, log, lu_solve, matrix, mp, mpf, nstr, pi, polyval, sqrt

mp.dps = 60


def horner(c, x):
    return polyval(c[::-1], x)


def chebyshev_nodes(n):
    return [cos(pi * (2 * i + 1) / (2 * n)) for i in range(n)]


def rounded(c):
    """The coefficients as the doubles the program will use, so that the errors below include rounding them."""
    return [mpf(float(x)) for x in c]


def interpolate(f, a, b, degree):
    """Polynomial through f at the Chebyshev nodes of [a, b], lowest power first."""
    n = degree + 1
    nodes = [(a + b) / 2 + (b - a) / 2 * t for t in chebyshev_nodes(n)]
    m, rhs = matrix(n, n), matrix(n, 1)
    for i, x in enumerate(nodes):
        for k in range(n):
            m[i, k] = x**k
        rhs[i] = f(x)
    return list(lu_solve(m, rhs))


# exp: e^r = 1 + r + r^2 E(r) for |r| <= ln(2)/2.
R = log(mpf(2)) / 2 * mpf("1.0005")  # rounding of k can leave r a little outside


def exp_tail(r):
    return (exp(r) - 1 - r) / r**2 if abs(r) > mpf("1e-12") else mpf(1) / 2 + r / 6


exp_c = rounded(interpolate(exp_tail, -R, R, 9))
exp_err = max(abs((1 + r + r * r * horner(exp_c, r)) / exp(r) - 1) for r in linspace(-R, R, 301))

# log: 2 atanh(u) = 2u + u^3 L(u^2) for |u| <= 1/5: the mantissas differ by at most
# a factor of 3/2 either way once the exponents are aligned.
Z = mpf("0.0401")


def log_tail(z):
    s = sqrt(z)
    return (2 * atanh(s) - 2 * s) / s**3 if z > mpf("1e-12") else mpf(2) / 3 + mpf(2) / 5 * z


log_c = rounded(interpolate(log_tail, mpf(0), Z, 7))
log_err = max(abs((2 * s + s**3 * horner(log_c, s * s)) / (2 * atanh(s)) - 1) for s in linspace(mpf("0.001"), mpf("0.2"), 200))


# Mills ratio of the normal distribution, m(y) = Phi(-y)/phi(y) on [0, inf), as
# P(y)/Q(y) of degrees 10 and 11: both sides fall as 1/y, so one fraction serves the
# whole half line. y = C (1+t)/(1-t) maps the Chebyshev nodes t onto it; C = 4 gives
# the smallest error of the values tried, and all coefficients come out positive, so
# that evaluating them loses nothing.
C = mpf(4)


def mills(y):
    if y < 60:
        return sqrt(pi / 2) * exp(y * y / 2) * erfc(y / sqrt(mpf(2)))
    v = mpf(0)
    for k in range(200, 0, -1):
        v = k / (y + v)
    return 1 / (y + v)


def fit_mills(n):
    m, rhs = matrix(2 * n, 2 * n), matrix(2 * n, 1)
    for i, t in enumerate(chebyshev_nodes(2 * n)):
        y = C * (1 + t) / (1 - t)
        u, scale, ratio = y / C, (1 + y / C) ** (1 - n), mills(y)
        for k in range(n):
            m[i, k] = u**k / ratio * scale
        for k in range(1, n + 1):
            m[i, n + k - 1] = -(u**k) * scale
        rhs[i] = scale
    s = lu_solve(m, rhs)
    return [s[k] / C**k for k in range(n)], [mpf(1)] + [s[n + k - 1] / C**k for k in range(1, n + 1)]


mills_p, mills_q = fit_mills(11)
mills_p = rounded([c / sqrt(2 * pi) for c in mills_p])  # so that exp(-y^2/2) P/Q is Phi(-y)
mills_q = rounded(mills_q)
assert all(c > 0 for c in mills_p + mills_q)
mills_err = mpf(0)
for i in range(300):
    t = -1 + mpf(2) * i / 300
    y = C * (1 + t) / (1 - t)
    mills_err = max(mills_err, abs(horner(mills_p, y) / horner(mills_q, y) / mills(y) * sqrt(2 * pi) - 1))

# A first guess for the inversion: h >= 0 from v = h e^(h^2/2) / (1 - h mills(h)), of
# which h = v for small v and h^2 = 2 ln v for large v. As a function of w =
# sqrt(ln(1+v)) it is w^2 P(w)/Q(w), of degrees 3 and 4, on [0, inf); w = S (1+t)/(1-t).
S = mpf("1.5")


def log_v(h):
    return log(h) + h * h / 2 - log(1 - h * mills(h))


def start_h(w):
    """The h of w, by bisection."""
    lo, hi = mpf("1e-9"), mpf(10) * (1 + w)
    for _ in range(100):
        h = (lo + hi) / 2
        if log_v(h) + log(1 + exp(-log_v(h))) < w * w:
            lo = h
        else:
            hi = h
    return h


def fit_start(n):
    m, rhs = matrix(2 * n, 2 * n), matrix(2 * n, 1)
    for i, t in enumerate(chebyshev_nodes(2 * n)):
        w = S * (1 + t) / (1 - t)
        u, scale, ratio = w / S, (1 + w / S) ** (1 - n), start_h(w) / w**2
        for k in range(n):
            m[i, k] = u**k / ratio * scale
        for k in range(1, n + 1):
            m[i, n + k - 1] = -(u**k) * scale
        rhs[i] = scale
    s = lu_solve(m, rhs)
    return [s[k] / S**k for k in range(n)], [mpf(1)] + [s[n + k - 1] / S**k for k in range(1, n + 1)]


start_p, start_q = (rounded(c) for c in fit_start(4))
start_err = max(abs(w**2 * horner(start_p, w) / horner(start_q, w) / start_h(w) - 1) for w in linspace(mpf("0.1"), mpf(27), 120))

# ln 2 in two parts: the first has 40 bits, so its product with any exponent is exact.
ln2 = log(mpf(2))
ln2_hi = floor(ln2 * mpf(2) ** 40) / mpf(2) ** 40

GROUPS = [
    ("exp(r) = 1 + r + r²(expC2 + expC3·r + … + expC11·r⁹), |r| ≤ ½ln 2: fit error " + nstr(exp_err, 2),
     [(f"expC{i + 2}", c) for i, c in enumerate(exp_c)]),
    ("ln((1+u)/(1−u)) = 2u + u³(logC0 + logC1·u² + … + logC7·u¹⁴), |u| ≤ ⅕: fit error " + nstr(log_err, 2),
     [(f"logC{i}", c) for i, c in enumerate(log_c)]),
    ("Φ(−y)·exp(y²/2) = (millsP0 + … + millsP10·y¹⁰)/(millsQ0 + … + millsQ11·y¹¹), y ≥ 0: fit error " + nstr(mills_err, 2),
     [(f"millsP{i}", c) for i, c in enumerate(mills_p)] + [(f"millsQ{i}", c) for i, c in enumerate(mills_q)]),
    ("h = w²(startP0 + … + startP3·w³)/(1 + startQ1·w + … + startQ4·w⁴) with w² = ln(1+v), v = h·exp(h²/2)/(1 − h·Φ(−h)/φ(h)), h ≥ 0: fit error " + nstr(start_err, 2),
     [(f"startP{i}", c) for i, c in enumerate(start_p)] + [(f"startQ{i}", c) for i, c in enumerate(start_q) if i > 0]),
    ("log₂e; ln 2 = ln2Hi + ln2Lo with a short first part; 1/√(2π); 3·2⁵¹, which rounds what is added to it to an integer",
     [("log2E", 1 / ln2), ("ln2Hi", ln2_hi), ("ln2Lo", ln2 - ln2_hi), ("invSqrt2Pi", 1 / sqrt(2 * pi)), ("roundShift", mpf(3) * 2**51)]),
]

# The table of the vector forms holds these and the constants below once per lane, by the name they have in the scalar code.
EXTRA = ["zero", "half", "negHalf", "one", "two", "negTwo", "negLn2Hi", "negLn2Lo", "gaussEnd", "negGaussEnd", "residualFloor",
         "millsEnd", "expLowest", "expHighest", "third", "sixth", "negThree", "negQuarter", "sqrt2Pi", "ln2", "startFloor", "startLeast",
         "quantileP0", "quantileP1", "quantileP2", "quantileQ1", "quantileQ2", "quantileQ3", "quantileMost",
         "taylorFrom", "taylorWidth", "tailLeast", "tailMost", "closeEnough", "nearLimit"]
BITS = ["absBits", "oneBits", "exponentBits", "halfBinade", "biasBits", "roundBits", "priceFrom", "priceMask", "timeFrom",
        "timeMask", "rateMask", "logFrom", "logMask", "hugeFrom", "tailFrom", "signBit"]

HEAD = "// Code generated by gen/coef.py; DO NOT EDIT.\n\n"


def consts():
    print(HEAD + "package vec\n")
    for doc, group in GROUPS:
        print("// " + doc + ".\nconst (")
        for name, c in group:
            print(f"{name} = {float(c).hex()} // {float(c)!r}")
        print(")\n")


def table():
    floats = [name for _, group in GROUPS for name, _ in group if name not in ("ln2Hi", "ln2Lo")]
    floats = [name for name in floats if name not in EXTRA] + ["ln2Hi", "ln2Lo"] + EXTRA
    print(HEAD + "//go:build goexperiment.simd && amd64\n\npackage vec\n")
    print("// table8 holds every constant once per lane: a vector operation reads it as a whole.\ntype table8 struct {")
    for name in floats:
        print(f"{name} lanes8")
    for name in BITS:
        print(f"{name} bitLanes8")
    print("reciprocals [len(reciprocals)]lanes8")
    print("}\n\nfunc (t *table8) fill() {")
    for name in floats:
        print(f"spread(t.{name}[:], {name})")
    for name in BITS:
        print(f"spread(t.{name}[:], {name})")
    print("for i, r := range reciprocals {\nspread(t.reciprocals[i][:], r)\n}")
    print("}")


if __name__ == "__main__":
    {"consts": consts, "table": table}[sys.argv[1]]()
