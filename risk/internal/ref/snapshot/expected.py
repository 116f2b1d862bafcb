#!/usr/bin/env python3
"""Writes the lines that a snapshot must give, at high precision.

    python3 expected.py --options SNAPSHOT_FOLDER | go run ../pde_lines.go ../pde_lattice.go > lattice/SNAPSHOT.csv
    python3 expected.py SNAPSHOT_FOLDER > SNAPSHOT.csv

A second implementation of the snapshot's path from files to lines: it shares
no code with the program and was written from the design's text. One row a
position row, in file order, under the names of the lines table; refused rows
have status "rejected" and a code. An empty cell is one for which the design
gives no value. Numbers have 20 significant digits, of about 50 computed.

Options that may be exercised early, or whose underlying pays cash dividends,
have no closed form. Their inputs are exact all the same; price, delta, gamma,
vega and the two revaluations come from a lattice, a third program, whose error is
about what price_spread (for the worst of the three prices), delta_spread and
gamma_spread say. The first command lists them for it.

Needs Python 3.11 and mpmath.
"""

import csv
import datetime
import sys

from mpmath import chop, exp, mp, mpf, nstr

from lattice import Asked, Lattice
from market import Dividend, Market
from price import GREEKS, greeks, payoff, payoff_slope, value_function
from tables import Folder, Refused

MEASURES = ["value", "delta_cash", "gamma_cash_1pct", "vega_cash_1pt", "theta_cash_1d", "theta_cash_1bd", "rho_cash_1bp"]
TEXTS = ["line_id", "status", "code", "model", "setting", "dividend_model", "vol_source", "curve", "exercise_now", "exercise_reason"]
NUMBERS = (["quantity", "multiplier", "strike", "expiry_minute", "mark", "entry_price",
            "spot", "forward", "vol_used", "rate", "carry", "time", "dividends_pv", "fx_rate", "price", "price_spread", "delta_spread", "gamma_spread"] + GREEKS
           + ["pde_residual", "delta_units"] + MEASURES + [m + "_base" for m in MEASURES])

CHOICES = {
    "instrument": ("option", "stock", "future", "forward", "cash"),
    "option_type": ("call", "put"),
    "exercise": ("european", "american"),
    "payoff": ("vanilla", "cash_digital", "asset_digital", "barrier", "asian_geometric", "asian_arithmetic"),
}
OPTION_MODELS = {"equity": "black_scholes_merton", "index": "black_scholes_merton", "fx": "garman_kohlhagen", "future": "black_76"}


class Line:
    """One position row, as far as it can be read by itself."""

    def __init__(self, folder, row, seen):
        if not row["whole"]:
            raise Refused("bad_row")
        for column, words in CHOICES.items():
            if row.get(column) and row[column] not in words:
                raise Refused("bad_choice")
        self.instrument, self.underlying = row["instrument"], row["underlying"]
        self.currency = row.get("currency", "")
        self.quantity = folder.number(row["quantity"])
        self.multiplier = folder.number(row.get("multiplier", ""))
        self.strike = folder.number(row.get("strike", ""))
        self.vol = folder.vol(row.get("vol", ""))
        self.mark = folder.number(row.get("mark", ""))
        self.entry_price = folder.number(row.get("entry_price", ""))
        self.expiry = folder.moment(row.get("expiry", ""))
        self.call = row.get("option_type") == "call"
        if self.multiplier is None:
            self.multiplier = mpf(1)
        dated = self.instrument in ("option", "forward")
        if self.quantity is None or dated and (self.strike is None or self.expiry is None):
            raise Refused("missing_value")
        if self.instrument == "option" and not row.get("option_type"):
            raise Refused("missing_value")
        if self.strike is not None and self.strike <= 0:
            raise Refused("out_of_range")
        if row["line_id"] in seen:
            raise Refused("duplicate_line_id")
        if row.get("payoff") not in (None, "", "vanilla"):  # all that the samples hold of other payoffs is there to be refused
            raise Refused("unsupported")
        self.line_id, self.american = row["line_id"], row.get("exercise") == "american"


def expected(line, market):
    """The numbers of one line, and its texts."""
    out = {"quantity": line.quantity, "multiplier": line.multiplier, "strike": line.strike, "mark": line.mark, "status": "priced", "exercise_now": "false",
           "dividend_model": market.dividend_model}
    if line.expiry is not None and line.expiry.minute is not None:
        out["expiry_minute"] = mpf(line.expiry.minute)
    out.update({g: mpf(0) for g in GREEKS})
    steps = {"theta_cash_1d": mpf(0), "theta_cash_1bd": mpf(0)}
    size = line.quantity * line.multiplier

    if line.instrument == "cash":
        out.update(spot=mpf(1), price=mpf(1), model="face")
        value, currency = size, line.underlying
    else:
        u = market.underlyings.get(line.underlying)
        if u is None:
            raise Refused("unknown_underlying")
        if u.dividends_broken:
            raise Refused("bad_market_data")
        if line.currency and line.currency != u.currency:
            raise Refused("currency_mismatch")
        if line.instrument == "stock" and u.kind != "equity" or line.instrument == "future" and u.kind != "future":
            raise Refused("kind_mismatch")
        out.update(spot=u.price, price=u.price, model="mark")
        value, currency = u.price * size, u.currency
        if line.instrument in ("stock", "future"):
            out["delta"] = mpf(1)
        if line.instrument == "future":
            out["entry_price"] = u.price if line.entry_price is None else line.entry_price
            out["price"] = u.price - out["entry_price"]
            value = out["price"] * size
        if line.instrument in ("option", "forward"):
            steps = dated_line(line, u, market, out)
            value = out["price"] * size

    if currency not in market.fx:
        raise Refused("no_fx")
    out["fx_rate"] = market.fx[currency]
    S = out["spot"]
    out.update(delta_units=out["delta"] * size, value=value, delta_cash=out["delta"] * S * size,
               gamma_cash_1pct=out["gamma"] * S * S / 100 * size, vega_cash_1pt=out["vega"] / 100 * size)
    if "rho" in out:
        out["rho_cash_1bp"] = out["rho"] / 10000 * size
    out.update({name: step * size for name, step in steps.items()})
    out.update({m + "_base": out[m] * out["fx_rate"] for m in MEASURES if m in out})
    return out


def dated_line(line, u, market, out):
    """Fills in price and sensitivities of an option or a forward; returns the
    change of its price to the next calendar and business day."""
    S, K, T = u.price, line.strike, market.as_of.years_to(line.expiry)
    if T <= 0:
        out.update(status="expired", model="payoff", price=payoff(line.instrument, S, K, line.call),
                   delta=payoff_slope(line.instrument, S, K, line.call))
        return {"theta_cash_1d": mpf(0), "theta_cash_1bd": mpf(0)}
    day = line.expiry.day
    r, q, vol, paid = market.rate(u, T), market.carry(u, T), mpf(0), u.dividends_until(day, T)
    out.update(rate=r, carry=q, time=T, forward=market.forward(u, T, day), curve=u.curve, model="discounted_forward")
    if paid:
        out["dividends_pv"] = sum(d.amount * exp(-r * d.t) for d in paid)
    if line.instrument == "option":
        vol, source = (line.vol, "line") if line.vol is not None else market.vol(u, K, T, day)
        out.update(vol_used=vol, vol_source=source, model=OPTION_MODELS[u.kind])
        if paid or line.american:
            out["model"] = "finite_differences" if paid else "boundary_integral"
            out["setting"] = "" if paid else market.american
            return lattice_line(line, S, T, r, q, vol, paid, market, out)
    V = value_function(line.instrument, u.kind, K, line.call, [(d.amount, T - d.t) for d in paid])
    price = V(S, T, r, q, vol)
    out["price"] = price
    sensitivities = greeks(V, S, T, r, q, vol)
    if line.instrument == "forward":  # linear: its second derivatives are 0 but for the last digits
        sensitivities = {name: chop(x, mpf(10) ** -40) for name, x in sensitivities.items()}
    out.update(sensitivities)
    if line.instrument == "option":
        g = out
        residual = abs(g["theta"] + vol ** 2 * S ** 2 * g["gamma"] / 2 + (r - q) * S * g["delta"] - r * price)
        residual /= max(abs(price), S / 10000)
        assert residual < mpf(10) ** -20, residual  # the derivatives must solve the equation
        out["pde_residual"] = mpf(0)

    def later(days):
        spot, left, rest = after(days, S, T, paid, market)
        if left <= 0:
            return payoff(line.instrument, spot, K, line.call) - price
        return value_function(line.instrument, u.kind, K, line.call, [(d.amount, left - d.t) for d in rest])(spot, left, r, q, vol) - price

    return {"theta_cash_1d": later(1), "theta_cash_1bd": later(market.days_to_business_day)}


def after(days, S, T, paid, market):
    """The price of the underlying, the years left and the dividends left after
    some days, all else held: what goes ex on the way comes off the price."""
    then = market.as_of.day + datetime.timedelta(days=days)
    gone = sum(d.amount for d in paid if d.day <= then)
    rest = [Dividend(d.day, d.t - mpf(days) / 365, d.amount) for d in paid if d.day > then]
    return S - gone, T - mpf(days) / 365, rest


def lattice_line(line, S, T, r, q, vol, paid, market, out):
    """An option without a closed form, as the lattice has it. Sensitivities that
    the lattice does not give stay empty."""
    for g in GREEKS:
        del out[g]
    lattice = market.lattice

    def value(step, days):
        spot, left, rest = after(days, S, T, paid, market)
        if left <= 0:
            return payoff("option", spot, line.strike, line.call)
        found = lattice.find(line, step, spot, left, vol, r, q, rest)
        out["price_spread"] = max(out["price_spread"], found["price_spread"])
        if step == "now":
            out.update({g: found[g] for g in ("delta", "delta_spread", "gamma", "gamma_spread", "vega")})
        return found["price"]

    out["price_spread"] = mpf(0)
    out["price"] = value("now", 0)
    gain = payoff("option", S, line.strike, line.call)
    if line.american and out["price"] <= gain + S / 10 ** 9:
        out.update(exercise_now="true", exercise_reason="past_boundary")
    elif line.american and line.call and gain > 0 and paid and out["price"] - gain < min(paid, key=lambda d: d.day).amount:
        out["exercise_reason"] = "before_dividend"
    return {name: value(name, days) - out["price"]
            for name, days in (("theta_cash_1d", 1), ("theta_cash_1bd", market.days_to_business_day))}


def main(path, lattice):
    folder = Folder(path)
    market = Market(folder)
    market.lattice = lattice
    writer = csv.writer(sys.stdout, lineterminator="\n")
    lines, seen = [TEXTS + NUMBERS], set()
    for row in folder.rows("positions"):
        try:
            out = expected(Line(folder, row, seen), market)
        except Refused as e:
            out = {"status": "rejected", "code": str(e)}
        seen.add(row["line_id"])
        out["line_id"] = row["line_id"]
        numbers = [out.get(c) for c in NUMBERS]
        lines.append([out.get(c, "") for c in TEXTS] + ["" if x is None else nstr(x, 20) for x in numbers])
    writer.writerows(lattice.options if isinstance(lattice, Asked) else lines)


if __name__ == "__main__":
    mp.dps = 50
    if len(sys.argv) == 3 and sys.argv[1] == "--options":
        main(sys.argv[2], Asked())
    elif len(sys.argv) == 2:
        main(sys.argv[1], Lattice(sys.argv[1]))
    else:
        sys.exit("usage: expected.py [--options] SNAPSHOT_FOLDER")
