"""A desk's own script: a snapshot folder in, priced lines and book sums out, as CSV.

It writes the columns of the program's lines.csv, so that both sides write the same table;
with "short" as the third argument, only the 26 columns that a desk would ask for first.
"""

import sys

import numpy as np
import pandas as pd
from scipy.special import ndtr

DAYS = {"W": 7, "M": 30.4375, "Y": 365.25}
LEAST = 1 / 8760  # an hour: what is left of an option that has expired
GREEKS = "price delta gamma vega theta rho carry_rho vanna volga charm".split()

folder, out = sys.argv[1], sys.argv[2]
as_of = pd.Timestamp("2026-09-30")
lines = pd.read_csv(f"{folder}/positions.csv", parse_dates=["expiry"])
lines = lines.merge(pd.read_csv(f"{folder}/underlyings.csv").rename(columns={"price": "spot"}), on="underlying", how="left", suffixes=("", "_u"))
fx = pd.read_csv(f"{folder}/fx.csv").set_index("currency")["rate"]
lines["currency"] = lines["currency"].fillna(lines["underlying"])  # cash
lines["fx_rate"] = lines["currency"].map(fx)
lines["time"] = (lines["expiry"] - as_of).dt.days / 365

rates = pd.read_csv(f"{folder}/rates.csv")
rates["t"] = rates["tenor"].str[:-1].astype(float) * rates["tenor"].str[-1].map(DAYS) / 365
lines["rate"] = 0.0
for curve, nodes in rates.groupby("curve"):
    at = (lines["currency"] == curve).to_numpy()
    lines.loc[at, "rate"] = np.interp(lines.loc[at, "time"], nodes["t"], nodes["zero_rate"])
margined = lines["kind"] == "future"
lines["carry"] = np.where(margined, lines["rate"], lines["carry_yield"].fillna(0))
lines["forward"] = lines["spot"] * np.exp((lines["rate"] - lines["carry"]) * lines["time"])

option = (lines["instrument"] == "option").to_numpy()
vols = pd.read_csv(f"{folder}/vols.csv", parse_dates=["expiry"])
smiles = {key: smile.sort_values("strike") for key, smile in vols.groupby(["underlying", "expiry"])}
lines["vol_used"], lines["vol_source"] = lines["vol"], "underlying"
for key, rows in lines[option].groupby(["underlying", "expiry"]).indices.items():
    if key in smiles:
        rows = np.flatnonzero(option)[rows]
        smile = smiles[key]
        lines.iloc[rows, lines.columns.get_loc("vol_used")] = np.interp(lines["strike"].to_numpy()[rows], smile["strike"], smile["vol"])
        lines.iloc[rows, lines.columns.get_loc("vol_source")] = "surface"

o = lines[option]
S, K, T, r, q, sigma = (o[c].to_numpy() for c in ("spot", "strike", "time", "rate", "carry", "vol_used"))
future = margined[option].to_numpy()
w = np.where(o["option_type"] == "call", 1.0, -1.0)


def price(T):
    """The price, and what the sensitivities need of it."""
    T = np.maximum(T, LEAST)
    root = sigma * np.sqrt(T)
    d1 = (np.log(S / K) + (r - q) * T) / root + root / 2
    d2 = d1 - root
    spot, paid = S * np.exp(-q * T), K * np.exp(-r * T)
    return w * (spot * ndtr(w * d1) - paid * ndtr(w * d2)), root, d1, d2, spot, paid


with np.errstate(all="ignore"):
    T, sigma = np.maximum(T, LEAST), np.nan_to_num(sigma, nan=0.1)  # only expired ones have none
    V, root, d1, d2, spot, paid = price(T)
    density = spot * np.exp(-d1 * d1 / 2) / np.sqrt(2 * np.pi)
    delta = w * spot / S * ndtr(w * d1)
    gamma = density / (S * S * root)
    vega = density * np.sqrt(T)
    rho = np.where(future, -T * V, w * T * paid * ndtr(w * d2))
    carry_rho = np.where(future, 0, -T * S * delta)
    theta = r * V - (r - q) * S * delta - sigma**2 * S**2 * gamma / 2
    vanna = -density / S * d2 / sigma
    volga = vega * d1 * d2 / sigma
    charm = q * delta - density / S * ((r - q) / root - d2 / (2 * T))
    residual = abs(theta + sigma**2 * S**2 * gamma / 2 + (r - q) * S * delta - r * V) / np.maximum(abs(V), 1e-4 * S)
    day = price(T - 1 / 365)[0] - V
    closed = pd.read_csv(f"{folder}/holidays.csv")["date"].tolist()
    next_day = as_of + pd.offsets.CustomBusinessDay(holidays=closed)
    business_day = price(T - (next_day - as_of).days / 365)[0] - V

for name in GREEKS + ["day", "business_day"]:
    lines[name] = 0.0
lines["price"], lines["delta"] = lines["spot"].fillna(1), lines["spot"].notna().astype(float)
lines["pde_residual"], lines["model"] = np.nan, "mark"
for name, column in zip(GREEKS, (V, delta, gamma, vega, theta, rho, carry_rho, vanna, volga, charm)):
    lines.loc[option, name] = column
lines.loc[option, "day"], lines.loc[option, "business_day"], lines.loc[option, "pde_residual"] = day, business_day, residual
lines.loc[option, "model"] = np.where(future, "black_76", "black_scholes_merton")
lines.loc[lines["instrument"] == "future", "price"] = 0.0  # margined
forward = lines["instrument"] == "forward"
f = lines[forward]
spot, paid = f["spot"] * np.exp(-f["carry"] * f["time"]), f["strike"] * np.exp(-f["rate"] * f["time"])
held = margined[forward]
lines.loc[forward, "delta"], lines.loc[forward, "price"] = np.exp(-f["carry"] * f["time"]), spot - paid
lines.loc[forward, "theta"] = f["carry"] * spot - f["rate"] * paid
lines.loc[forward, "rho"] = f["time"] * np.where(held, paid - spot, paid)
lines.loc[forward, "carry_rho"] = np.where(held, 0, -f["time"] * spot)
lines.loc[forward, "charm"] = f["carry"] * np.exp(-f["carry"] * f["time"])
lines.loc[forward, "day"] = lines.loc[forward, "theta"] / 365
lines.loc[forward, "business_day"] = lines.loc[forward, "theta"] / 365 * (next_day - as_of).days
lines.loc[forward, "model"], lines.loc[lines["instrument"] == "cash", "model"] = "discounted_forward", "face"

size = lines["quantity"] * lines["multiplier"].fillna(1)
lines["delta_units"] = lines["delta"] * size
lines["value"] = lines["price"] * size
lines["delta_cash"] = lines["delta_units"] * lines["spot"].fillna(0)
lines["gamma_cash_1pct"] = lines["gamma"] * lines["spot"].fillna(0) ** 2 / 100 * size
lines["vega_cash_1pt"] = lines["vega"] / 100 * size
lines["theta_cash_1d"], lines["theta_cash_1bd"] = lines["day"] * size, lines["business_day"] * size
lines["rho_cash_1bp"] = lines["rho"] / 1e4 * size
measures = "value delta_cash gamma_cash_1pct vega_cash_1pt theta_cash_1d theta_cash_1bd rho_cash_1bp".split()
base = [m + "_base" for m in measures]
for name in measures:
    lines[name + "_base"] = lines[name] * lines["fx_rate"]
lines.groupby("book")[base].sum().to_csv(f"{out}/books.csv")

if sys.argv[3:] == ["short"]:
    keep = "line_id book underlying instrument quantity multiplier option_type strike expiry strategy time rate vol_used fx_rate".split()
    keep += GREEKS[:6] + [m for m in base if m != "theta_cash_1bd_base"]
else:
    lines["exercise"], lines["payoff"] = np.where(option, "european", ""), np.where(option, "vanilla", "")
    lines["status"] = np.where(lines["time"] <= 0, "expired", "priced")
    lines["dividend_model"], lines["exercise_now"], lines["curve"] = "piecewise", False, lines["currency"]
    keep = """line_id book underlying instrument currency quantity multiplier option_type exercise payoff strike payout barrier_type barrier
        rebate monitoring average_start average_so_far expiry expiry_minute strategy mark entry_price status model setting dividend_model
        vol_source curve spot forward vol_used rate carry time dividends_pv fx_rate""".split()
    keep += GREEKS + "pde_residual price_error exercise_boundary exercise_now delta_units".split() + measures + base
lines.reindex(columns=keep).to_csv(f"{out}/lines.csv", index=False)
print(f"{lines['value_base'].sum():.2f}")
