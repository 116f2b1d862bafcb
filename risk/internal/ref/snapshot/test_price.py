"""Checks of the reference itself: python3 -m unittest

The values are printed in E. G. Haug, The Complete Guide to Option Pricing
Formulas, 2nd ed., 2007 (from memory, reproduced to the printed digits).
"""

import datetime
import unittest

from mpmath import exp, mp, mpf

from expected import after
from market import Dividend, Slice, Underlying
from price import forward_value, future_option_value, greeks, option_value, value_function
from tables import Moment, add_tenor


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


    def test_forward_with_dividends(self):
        # J. C. Hull, Options, Futures, and Other Derivatives: 50, 8 %, ten months,
        # 0.75 after three, six and nine (from memory, reproduced)
        paid = [(mpf(".75"), mpf(10 - m) / 12) for m in (3, 6, 9)]
        T, r = mpf(10) / 12, mpf(".08")
        self.assertAlmostEqual(forward_value(mpf(50), mpf(0), T, r, mpf(0), paid) * exp(r * T), mpf("51.14"), delta=5e-3)
        # at the moment of an ex-date nothing changes: what comes off the price
        # comes off the dividends that are left
        left = T - mpf(3) / 12
        before = forward_value(mpf(50), mpf(45), left, r, mpf(0), paid)
        behind = forward_value(mpf(50) - mpf(".75"), mpf(45), left, r, mpf(0), paid[1:])
        self.assertAlmostEqual(before, behind, delta=1e-40)


class Dividends(unittest.TestCase):
    def setUp(self):
        mp.dps = 50

    def test_which_count(self):
        day = datetime.date(2026, 8, 13)
        u = Underlying.__new__(Underlying)
        u.dividends = [Dividend(day + datetime.timedelta(days=n), mpf(n) / 365, mpf(n)) for n in (1, 30, 31)]
        self.assertEqual([d.amount for d in u.dividends_until(day + datetime.timedelta(days=30), mpf(30) / 365)], [1, 30])
        noon = u.dividends_until(day + datetime.timedelta(days=30), mpf("29.8") / 365)
        self.assertEqual(noon[1].t, mpf("29.8") / 365)  # on the day of expiry, never behind the expiry

    def test_what_goes_ex_within_a_step_comes_off_the_price(self):
        class Now:
            as_of = Moment(datetime.date(2026, 8, 13), 995)

        paid = [Dividend(datetime.date(2026, 8, 14), mpf(1) / 365, mpf("1.3")), Dividend(datetime.date(2026, 9, 13), mpf(31) / 365, mpf(2))]
        spot, left, rest = after(1, mpf(40), mpf(60) / 365, paid, Now)
        self.assertEqual((spot, left, len(rest)), (mpf("38.7"), mpf(60) / 365 - mpf(1) / 365, 1))
        self.assertAlmostEqual(rest[0].t, mpf(30) / 365, delta=1e-40)


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
