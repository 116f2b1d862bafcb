"""A desk's own script: a snapshot folder in, priced lines and book sums out, as CSV."""

import sys

import numpy as np
import pandas as pd
from scipy.special import ndtr

DAYS = {"W": 7, "M": 30.4375, "Y": 365.25}

folder, out = sys.argv[1], sys.argv[2]
as_of = pd.Timestamp("2026-09-30")
lines = pd.read_csv(f"{folder}/positions.csv", parse_dates=["expiry"])
lines = lines.merge(pd.read_csv(f"{folder}/underlyings.csv"), on="underlying", how="left", suffixes=("", "_u"))
fx = pd.read_csv(f"{folder}/fx.csv").set_index("currency")["rate"]
lines["currency"] = lines["currency"].fillna(lines["underlying"])  # cash
lines["fx"] = lines["currency"].map(fx)
lines["T"] = (lines["expiry"] - as_of).dt.days / 365

rates = pd.read_csv(f"{folder}/rates.csv")
rates["t"] = rates["tenor"].str[:-1].astype(float) * rates["tenor"].str[-1].map(DAYS) / 365
lines["r"] = 0.0
for curve, nodes in rates.groupby("curve"):
    at = (lines["currency"] == curve).to_numpy()
    lines.loc[at, "r"] = np.interp(lines.loc[at, "T"], nodes["t"], nodes["zero_rate"])

option = (lines["instrument"] == "option").to_numpy()
vols = pd.read_csv(f"{folder}/vols.csv", parse_dates=["expiry"])
smiles = {key: smile.sort_values("strike") for key, smile in vols.groupby(["underlying", "expiry"])}
lines["sigma"] = lines["vol"]
for key, rows in lines[option].groupby(["underlying", "expiry"]).indices.items():
    if key in smiles:
        rows = np.flatnonzero(option)[rows]
        smile = smiles[key]
        lines.iloc[rows, lines.columns.get_loc("sigma")] = np.interp(lines["strike"].to_numpy()[rows], smile["strike"], smile["vol"])

o = lines[option]
S, K, T, r, sigma = (o[c].to_numpy() for c in ("price", "strike", "T", "r", "sigma"))
future = (o["kind"] == "future").to_numpy()
q = np.where(future, r, o["carry_yield"].fillna(0).to_numpy())
w = np.where(o["option_type"] == "call", 1.0, -1.0)
with np.errstate(all="ignore"):
    root = sigma * np.sqrt(T)
    d1 = (np.log(S / K) + (r - q) * T) / root + root / 2
    d2 = d1 - root
    dq, dr, pdf = np.exp(-q * T), np.exp(-r * T), np.exp(-d1 * d1 / 2) / np.sqrt(2 * np.pi)
    value = w * (S * dq * ndtr(w * d1) - K * dr * ndtr(w * d2))
    delta = w * dq * ndtr(w * d1)
    gamma = dq * pdf / (S * root)
    vega = S * dq * pdf * np.sqrt(T)
    rho = np.where(future, -T * value, w * K * T * dr * ndtr(w * d2))
    theta = r * value - (r - q) * S * delta - sigma**2 * S**2 * gamma / 2
for name in ("V", "delta", "gamma", "vega", "theta", "rho"):
    lines[name] = 0.0
lines["V"], lines["delta"] = lines["price"].fillna(1), 1.0
for name, column in zip(("V", "delta", "gamma", "vega", "theta", "rho"), (value, delta, gamma, vega, theta, rho)):
    lines.loc[option, name] = column
lines.loc[lines["instrument"] == "future", "V"] = 0.0  # margined
forward = lines["instrument"] == "forward"
f = lines[forward]
carry = np.where(f["kind"] == "future", f["r"], f["carry_yield"].fillna(0))
lines.loc[forward, "delta"] = np.exp(-carry * f["T"])
lines.loc[forward, "V"] = f["price"] * np.exp(-carry * f["T"]) - f["strike"] * np.exp(-f["r"] * f["T"])

size = lines["quantity"] * lines["multiplier"].fillna(1) * lines["fx"]
lines["value_base"] = lines["V"] * size
lines["delta_cash_base"] = lines["delta"] * lines["price"].fillna(0) * size
lines["gamma_cash_1pct_base"] = lines["gamma"] * lines["price"].fillna(0) ** 2 / 100 * size
lines["vega_cash_1pt_base"] = lines["vega"] / 100 * size
lines["theta_cash_1d_base"] = lines["theta"] / 365 * size
lines["rho_cash_1bp_base"] = lines["rho"] / 1e4 * size
measures = [c for c in lines.columns if c.endswith("_base")]
lines.groupby("book")[measures].sum().to_csv(f"{out}/books.csv")
keep = ["line_id", "book", "underlying", "instrument", "quantity", "multiplier", "option_type", "strike", "expiry", "strategy"]
keep += ["T", "r", "sigma", "fx", "V", "delta", "gamma", "vega", "theta", "rho"]
lines[keep + measures].to_csv(f"{out}/lines.csv", index=False)
print(f"{lines['value_base'].sum():.2f}")
