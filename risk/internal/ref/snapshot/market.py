"""Zero curves, volatility surfaces, currencies and business days of a snapshot."""

import datetime

from mpmath import exp, log, mpf, sqrt

from tables import Moment, Refused, add_tenor


class Curve:
    """Rate × time linear between nodes, the zero rate flat beyond the ends."""

    def __init__(self):
        self.nodes = []  # (T, r·T)

    def add(self, T, rt):
        self.nodes = sorted(self.nodes + [(T, rt)])

    def rate(self, T):
        first, last = self.nodes[0], self.nodes[-1]
        if T <= first[0]:
            return first[1] / first[0]
        if T >= last[0]:
            return last[1] / last[0]
        for (t0, y0), (t1, y1) in zip(self.nodes, self.nodes[1:]):
            if t0 <= T <= t1:
                return (y0 + (y1 - y0) * (T - t0) / (t1 - t0)) / T


class Slice:
    """Total variance over log forward moneyness at one expiry.

    The monotone piecewise cubic of Fritsch and Butland (A method for
    constructing local monotone piecewise cubic interpolants, SIAM J. Sci.
    Stat. Comput. 5, 1984): inside, the slope is 0 where the data turn and else
    the harmonic mean of the two secants weighted by (h + 2h')/3(h + h');
    at an end the three-point formula, 0 if it has the wrong sign, cut to three
    secants if the data turn there. Flat beyond the end strikes.
    """

    def __init__(self, T, points):
        self.T = T
        self.k = [k for k, _ in sorted(points)]
        self.w = [w for _, w in sorted(points)]
        n = len(self.k)
        h = [self.k[i + 1] - self.k[i] for i in range(n - 1)]
        s = [(self.w[i + 1] - self.w[i]) / h[i] for i in range(n - 1)]
        if n == 1:
            self.slope = [mpf(0)]
            return
        if n == 2:
            self.slope = [s[0], s[0]]
            return
        self.slope = [self._end(h[0], h[1], s[0], s[1])]
        for i in range(1, n - 1):
            a, b, left, right = s[i - 1], s[i], h[i - 1], h[i]
            if a * b <= 0:
                self.slope.append(mpf(0))
                continue
            alpha = (left + 2 * right) / (3 * (left + right))  # weight on the left secant
            self.slope.append(a * b / (alpha * b + (1 - alpha) * a))
        self.slope.append(self._end(h[-1], h[-2], s[-1], s[-2]))

    @staticmethod
    def _end(h, inner_h, s, inner_s):
        g = s + (s - inner_s) * h / (h + inner_h)  # slope of the parabola through three points
        if g * s <= 0:
            return mpf(0)
        if s * inner_s <= 0 and abs(g) > 3 * abs(s):
            return 3 * s
        return g

    def variance(self, k):
        if k <= self.k[0]:
            return self.w[0]
        if k >= self.k[-1]:
            return self.w[-1]
        i = max(j for j in range(len(self.k) - 1) if self.k[j] <= k)
        h = self.k[i + 1] - self.k[i]
        t = (k - self.k[i]) / h
        # cubic Hermite
        return ((1 + 2 * t) * (1 - t) ** 2 * self.w[i] + t * (1 - t) ** 2 * h * self.slope[i]
                + t * t * (3 - 2 * t) * self.w[i + 1] + t * t * (t - 1) * h * self.slope[i + 1])


class Dividend:
    """Cash that one unit pays its holder of the day before the ex-date."""

    def __init__(self, day, t, amount):
        self.day, self.t, self.amount = day, t, amount


class Underlying:
    def __init__(self, folder, row):
        self.name, self.kind, self.currency = row["underlying"], row["kind"], row["currency"]
        self.price = folder.number(row["price"])
        self.carry = folder.number(row.get("carry_yield", "")) or mpf(0)
        self.flat_vol = folder.vol(row.get("vol", ""))
        self.curve = row.get("curve") or self.currency
        self.slices = []
        self.surface_broken = False
        self.dividends = []  # after as_of
        self.dividends_broken = False

    def dividends_until(self, day, T):
        """Those of a contract that ends on a day, T years from now: an ex-date
        on that day counts, however early the contract ends on it."""
        return [Dividend(d.day, min(d.t, T), d.amount) for d in self.dividends if d.day <= day]


class Market:
    def __init__(self, folder):
        self.as_of = folder.as_of
        self.reporting = folder.run["reporting_currency"]
        models = folder.run.get("models", {})
        self.american, self.dividend_model = models.get("american", "standard"), models.get("dividends", "piecewise")
        assert self.dividend_model == "piecewise", "the lattice knows no other model"
        self.underlyings = {r["underlying"]: Underlying(folder, r) for r in folder.rows("underlyings")}
        self.fx = {r["currency"]: folder.number(r["rate"]) for r in folder.rows("fx")}
        self.fx.setdefault(self.reporting, mpf(1))
        self.curves = {}
        for r in folder.rows("rates"):
            self._add_rate(folder, r)
        if folder.has("dividends"):
            self._read_dividends(folder)
        self._read_surfaces(folder)
        closed = {folder.day(r["date"]) for r in folder.rows("holidays") if r["calendar"] == folder.run["calendar"]}
        self.days_to_business_day = 1
        while not self._open(closed, self.as_of.day + datetime.timedelta(days=self.days_to_business_day)):
            self.days_to_business_day += 1

    @staticmethod
    def _open(closed, day):
        return day.weekday() < 5 and day not in closed

    def _add_rate(self, folder, r):
        day = add_tenor(self.as_of.day, r["tenor"]) if r.get("tenor") else folder.day(r["date"])
        T = self.as_of.years_to(Moment(day))
        zero, discount = folder.number(r.get("zero_rate", "")), folder.number(r.get("discount_factor", ""))
        self.curves.setdefault(r["curve"], Curve()).add(T, zero * T if zero is not None else -log(discount))

    def _read_dividends(self, folder):
        for r in folder.rows("dividends"):
            u = self.underlyings.get(r["underlying"])
            if u is None or u.kind not in ("equity", "index"):
                continue
            try:
                day, amount = folder.day(r["ex_date"]), folder.number(r["amount"])
            except Refused:
                u.dividends_broken = True
                continue
            if day > self.as_of.day:
                u.dividends.append(Dividend(day, self.as_of.years_to(Moment(day)), amount))

    def _read_surfaces(self, folder):
        found = {}
        for r in folder.rows("vols"):
            u = self.underlyings[r["underlying"]]
            try:
                expiry = folder.moment(r["expiry"])
                T = self.as_of.years_to(expiry)
                strike, vol = folder.number(r["strike"]), folder.vol(r["vol"])
            except Refused:
                u.surface_broken = True
                continue
            k = log(strike / self.forward(u, T, expiry.day))
            found.setdefault((r["underlying"], T), []).append((k, vol * vol * T))
        for (name, T), points in sorted(found.items()):
            if T > 0:
                self.underlyings[name].slices.append(Slice(T, points))

    def rate(self, u, T):
        if u.curve not in self.curves:
            raise Refused("no_rate")
        return self.curves[u.curve].rate(T)

    def carry(self, u, T):
        return self.rate(u, T) if u.kind == "future" else u.carry

    def forward(self, u, T, day):
        """Carried at the one rate to T, the dividends as well."""
        if u.kind == "future":
            return u.price
        b = self.rate(u, T) - u.carry
        return u.price * exp(b * T) - sum(d.amount * exp(b * (T - d.t)) for d in u.dividends_until(day, T))

    def vol(self, u, strike, T, day):
        """The volatility of strike and T, and where it comes from."""
        if u.surface_broken:
            raise Refused("bad_market_data")
        if not u.slices:
            if u.flat_vol is None:
                raise Refused("no_vol")
            return u.flat_vol, "underlying"
        k = log(strike / self.forward(u, T, day))
        first, last = u.slices[0], u.slices[-1]
        if T <= first.T:
            return sqrt(first.variance(k) / first.T), "surface"
        if T >= last.T:
            return sqrt(last.variance(k) / last.T), "surface"
        for a, b in zip(u.slices, u.slices[1:]):
            if a.T <= T <= b.T:
                wa, wb = a.variance(k), b.variance(k)
                return sqrt((wa + (wb - wa) * (T - a.T) / (b.T - a.T)) / T), "surface"
