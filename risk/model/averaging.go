package model

import "nightbook/risk/vec"

// window is the time over which a price is averaged, seen from now.
//
// Time passing moves both of its ends closer and, once it has begun, fixes more
// of the average at the spot of the moment. That is what ∂/∂T stands for here:
// all dates fixed, the spot unchanged, the average growing by it. A Theta so
// defined solves the Black–Scholes equation, and is what the next day brings.
type window[N number[N]] struct {
	ahead   N // years until it begins, 0 once it has
	left    N // years of it still to come
	share   N // left over its length
	passing N // 0, but for its derivative by T
	running bool
	elapsed float64
	length  float64
}

// shortestWindow bounds the windows that are taken to be of no length.
const shortestWindow = 1e-100

// newWindow is a window from start, below 0 if it has begun, to T.
func newWindow[N number[N]](m market[N], start float64) window[N] {
	t := m.t.value()
	w := window[N]{length: t - start, passing: m.t.shifted(-t)}
	w.running = start <= 0 && w.length > shortestWindow
	if w.running {
		w.elapsed = 0 - start
		w.ahead = w.passing.constant(0)
		w.left = m.t
		w.share = m.t.scaled(1 / w.length)
	} else {
		w.ahead = w.passing.shifted(max(start, 0))
		w.left = w.ahead.constant(w.length)
		w.share = w.ahead.constant(1)
	}
	return w
}

// begun reports whether part of the average is known.
func (w *window[N]) begun() bool { return w.running && w.elapsed > 0 }

// fixed is what the past contributes to the average of a quantity: its average
// so far, by the share of the window elapsed; now is its value at this moment.
func (w *window[N]) fixed(sofar, now float64) N {
	if !w.running {
		return w.passing.constant(0)
	}
	past := w.passing.scaled(-now / w.length)
	if w.begun() {
		past = past.shifted(float64(sofar*w.elapsed) / w.length)
	}
	return past
}

// validWindow reports whether a window from start to t makes sense, with an
// average if it has begun.
func validWindow(start, average, t float64) bool {
	return start <= t && start >= -largestTime && (start >= 0 || isPrice(average))
}

// ArithmeticAverageAfter sets dst to the arithmetic averages so far after passed
// years more at an unchanged spot, for windows that begin start years from now.
// It is what to revalue with. Where none of the window has passed, dst is average.
func ArithmeticAverageAfter(dst, average, spot, start, passed []float64) {
	for i, a := range average {
		if share, ok := laterShare(start[i], passed[i]); ok {
			a = spot[i] + float64((a-spot[i])*share)
			if share == 0 {
				a = spot[i]
			}
		}
		dst[i] = a
	}
}

// GeometricAverageAfter is ArithmeticAverageAfter for geometric averages.
func GeometricAverageAfter(dst, average, spot, start, passed []float64) {
	for i, a := range average {
		if share, ok := laterShare(start[i], passed[i]); ok {
			if share == 0 {
				a = spot[i]
			} else {
				a = float64(spot[i] * vec.Exp1(float64(share*vec.LogRatio1(a, spot[i]))))
			}
		}
		dst[i] = a
	}
}

// laterShare is the share of what has elapsed now in what will have elapsed, if
// anything will.
func laterShare(start, passed float64) (share float64, ok bool) {
	before, after := max(-start, 0), passed-start
	if !(after > 0) {
		return 0, false
	}
	return before / after, true
}
