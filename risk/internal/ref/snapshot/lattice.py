"""What passes between the reference and the lattice that prices options without
a closed form."""

import csv
from pathlib import Path

from mpmath import mpf, nstr

HEADER = ["line_id", "step", "exercise", "sign", "spot", "strike", "time", "vol", "rate", "yield", "dividends"]
ANSWERS = ["price", "price_spread", "delta", "delta_spread", "gamma", "gamma_spread", "vega"]


class Asked:
    """Takes down the options for the lattice to price; its own answers mean nothing."""

    def __init__(self):
        self.options = [HEADER]

    def find(self, line, step, spot, T, vol, r, q, dividends):
        self.options.append([line.line_id, step, "american" if line.american else "european", 1 if line.call else -1]
                            + [nstr(x, 20) for x in (spot, line.strike, T, vol, r, q)]
                            + [";".join(f"{nstr(d.t, 20)}:{nstr(d.amount, 20)}" for d in dividends)])
        return dict.fromkeys(ANSWERS, mpf(0))


class Lattice:
    """The prices that the lattice gave for a snapshot."""

    def __init__(self, snapshot):
        self.found = {}
        path = Path(__file__).parent / "lattice" / (Path(snapshot).resolve().name + ".csv")
        if path.exists():
            with path.open(newline="") as f:
                self.found = {(r["line_id"], r["step"]): r for r in csv.DictReader(f)}

    def find(self, line, step, *_):
        found = self.found[line.line_id, step]
        return {name: mpf(found[name]) for name in ANSWERS if found[name]}
