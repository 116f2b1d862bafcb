"""Checks of the reference itself: python3 -m unittest

The values are printed in E. G. Haug, The Complete Guide to Option Pricing
Formulas, 2nd ed., 2007 (from memory, reproduced to the printed digits).
"""

import datetime
import unittest

from mpmath import mp, mpf

from market import Slice
from price import forward_value, future_option_value, greeks, option_value, value_function
from tables import add_tenor


def bsm(S, K, T, r, b, vol, call):
    S, K, T, r, b, vol = map(mpf, (S, K, T, r, b, vol))
    V = value_function("option", "index", K, call)
    return V(S, T, r, r - b, vol), greeks(V, S, T, r, r - b, vol)


class Published(unittest.TestCase):
    def setUp(self):
        mp.dps = 50

    def test_values(self):
        self.assertAlmostEqual(bsm("60", "65", ".25", ".08", ".08", ".30", True)[0], mpf("2.1334"), delta=5e-5)
        self.assertAlmostEqual(bsm("100", "95", ".5", ".10", ".05", ".20", False)[0], mpf("2.4648"), delta=5e-5)
        self.assertAlmostEqual(bsm("1.56", "1.60", ".5", ".06", "-.02", ".12", True)[0], mpf(".0291"), delta=5e-5)
        for call in (True, False):
            v = future_option_value(mpf(19), mpf(19), mpf(".75"), mpf(".10"), mpf(".28"), call)
            self.assertAlmostEqual(v, mpf("1.7011"), delta=5e-5)

    def test_greeks(self):
        for args, name, want in [
            (("55", "60", ".75", ".10", ".10", ".30", True), "gamma", ".0278"),
            (("55", "60", ".75", ".105", ".0695", ".30", True), "vega", "18.5027"),
            (("430", "405", "0.083333333333333333333", ".07", ".02", ".20", False), "theta", "-31.1924"),
            (("90", "80", ".25", ".05", ".05", ".20", False), "vanna", "-1.0008"),
            (("105", "90", ".25", ".14", "0", ".24", False), "charm", ".3700"),
        ]:
            self.assertAlmostEqual(bsm(*args)[1][name], mpf(want), delta=5e-5, msg=name)
        # printed for r = b: the yield held at 0, rho is T·K·exp(−rT)·N(d2)
        self.assertAlmostEqual(bsm("72", "75", "1", ".09", ".09", ".19", True)[1]["rho"], mpf("38.7325"), delta=5e-5)

    def test_future_greeks(self):
        for call, want in ((True, ".5946"), (False, "-.3566")):
            V = value_function("option", "future", mpf(100), call)
            g = greeks(V, mpf(105), mpf(".5"), mpf(".10"), mpf(".10"), mpf(".36"))
            self.assertAlmostEqual(g["delta"], mpf(want), delta=5e-5)
            self.assertEqual(g["carry_rho"], 0)
            price = V(mpf(105), mpf(".5"), mpf(".10"), mpf(".10"), mpf(".36"))
            self.assertAlmostEqual(g["rho"], -price / 2, delta=1e-20)

    def test_parity(self):
        S, K, T, r, q, vol = map(mpf, ("100", "90", ".7", ".03", ".01", ".25"))
        gap = option_value(S, K, T, r, q, vol, True) - option_value(S, K, T, r, q, vol, False)
        self.assertAlmostEqual(gap, forward_value(S, K, T, r, q), delta=1e-40)


class Interpolation(unittest.TestCase):
    def setUp(self):
        mp.dps = 50

    def test_slice_keeps_quadratics_at_the_ends_and_monotone_data_monotone(self):
        points = [(mpf(k), mpf(k) ** 2) for k in (1, 2, 3)]
        self.assertEqual(Slice(mpf(1), points).slope[0], 2)  # the parabola's own slope
        self.assertEqual(Slice(mpf(1), points).slope[2], 6)
        steep = Slice(mpf(1), [(mpf(0), mpf(0)), (mpf(1), mpf(0)), (mpf(2), mpf(1)), (mpf(3), mpf(1))])
        values = [steep.variance(mpf(i) / 20) for i in range(-5, 70)]
        for a, b in zip(values, values[1:]):
            self.assertLessEqual(a, b + mpf(10) ** -40)  # but for the last digits
        self.assertEqual(steep.variance(mpf(1)), 0)
        self.assertEqual(steep.variance(mpf(9)), 1)

    def test_tenors(self):
        day = datetime.date(2026, 1, 31)
        self.assertEqual(add_tenor(day, "1M"), datetime.date(2026, 2, 28))
        self.assertEqual(add_tenor(day, "2W"), datetime.date(2026, 2, 14))
        self.assertEqual(add_tenor(day, "1Y"), datetime.date(2027, 1, 31))
        self.assertEqual(add_tenor(day, "11M"), datetime.date(2026, 12, 31))


if __name__ == "__main__":
    unittest.main()
