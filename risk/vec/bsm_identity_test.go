package vec_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/vec"
)

const identityLines = 5000

// ordinaryBatch fills a batch with lines such as a book holds.
func ordinaryBatch(seed uint64, n int) *vec.BSM {
	rng := rand.New(rand.NewPCG(seed, 1))
	b := newBatch(n)
	for i := range n {
		ordinary(rng).put(b, i)
	}
	return b
}

// Call − put is the discounted forward less the discounted strike, and the same
// holds of the derivatives; those that do not see the sign have equal bits.
func TestPutCallParity(t *testing.T) {
	call, put := ordinaryBatch(21, identityLines), ordinaryBatch(21, identityLines)
	for i := range identityLines {
		call.Sign[i], put.Sign[i] = 1, -1
	}
	call.All()
	put.All()
	for i := range identityLines {
		l := lineAt(call, i)
		qf, rf := math.Exp(-l.q*l.t), math.Exp(-l.r*l.t)
		a, k := l.s*qf, l.k*rf
		for _, c := range []struct {
			name             string
			call, put, want  float64
			scale, tolerance float64
		}{
			{"price", call.Price[i], put.Price[i], a - k, a + k, 1e-15},
			{"delta", call.Delta[i], put.Delta[i], qf, qf, 1e-15},
			{"theta", call.Theta[i], put.Theta[i], l.q*a - l.r*k, math.Abs(l.q)*a + math.Abs(l.r)*k + math.Abs(call.Theta[i]), 1e-15},
			{"rho", call.Rho[i], put.Rho[i], l.t * k, l.t * k, 1e-15},
			{"carry_rho", call.CarryRho[i], put.CarryRho[i], -l.t * a, l.t * a, 1e-15},
			{"charm", call.Charm[i], put.Charm[i], l.q * qf, math.Abs(l.q)*qf + math.Abs(call.Charm[i]), 1e-15},
			{"gamma", call.Gamma[i], put.Gamma[i], 0, 0, 0},
			{"vega", call.Vega[i], put.Vega[i], 0, 0, 0},
			{"vanna", call.Vanna[i], put.Vanna[i], 0, 0, 0},
			{"volga", call.Volga[i], put.Volga[i], 0, 0, 0},
		} {
			if e := math.Abs(c.call - c.put - c.want); !(e <= c.tolerance*c.scale) {
				t.Fatalf("%s of %v: call %v less put %v is not %v", c.name, l, c.call, c.put, c.want)
			}
		}
	}
}

// The outputs satisfy the Black–Scholes equation, and Residual says so: it is
// what one gets from the other ten.
func TestResidual(t *testing.T) {
	b := ordinaryBatch(22, identityLines)
	b.All()
	largest := 0.0
	for i, got := range b.Residual {
		l := lineAt(b, i)
		terms := []float64{b.Theta[i], 0.5 * l.v * l.v * l.s * l.s * b.Gamma[i], (l.r - l.q) * l.s * b.Delta[i], -l.r * b.Price[i]}
		sum, size := 0.0, 0.0
		for _, x := range terms {
			sum += x
			size += math.Abs(x)
		}
		scale := max(math.Abs(b.Price[i]), 1e-4*l.s)
		if math.Abs(got-math.Abs(sum)/scale) > 1e-15*size/scale {
			t.Fatalf("residual of %v is %v, the outputs give %v", l, got, math.Abs(sum)/scale)
		}
		if got > 1e-15*size/scale {
			t.Fatalf("residual of %v is %v, more than rounding", l, got)
		}
		largest = max(largest, got)
	}
	if !(largest < 1e-10) {
		t.Errorf("largest residual %v", largest)
	}
	t.Logf("largest residual %.3g", largest)
}

// Every sensitivity is the derivative it claims to be, by differences of prices,
// deltas and vegas at four points around the line.
func TestSensitivitiesAreDerivatives(t *testing.T) {
	const step = 2e-3 // in the units below
	b := ordinaryBatch(23, identityLines)
	b.All()
	// A typical move of each variable: one standard deviation of the spot, the whole
	// of time and volatility, 10 % of interest.
	unit := func(l line, variable byte) float64 {
		return map[byte]float64{'s': l.s * l.v * math.Sqrt(l.t), 't': l.t, 'v': l.v, 'r': 0.1, 'q': 0.1}[variable]
	}
	move := func(l line, variable byte, h float64) line {
		h *= unit(l, variable)
		switch variable {
		case 's':
			l.s += h
		case 't':
			l.t -= h // calendar time passing shortens the option
		case 'v':
			l.v += h
		case 'r':
			l.r += h
		case 'q':
			l.q += h
		}
		return l
	}
	for _, c := range []struct {
		name, of string
		by       byte
		scale    func(l line) float64 // what the typical move typically does
	}{
		{"delta", "price", 's', func(l line) float64 { return l.s * l.v * math.Sqrt(l.t) }},
		{"gamma", "delta", 's', func(line) float64 { return 1 }},
		{"vega", "price", 'v', func(l line) float64 { return l.s * l.v * math.Sqrt(l.t) }},
		{"theta", "price", 't', func(l line) float64 { return l.s * (l.v*math.Sqrt(l.t) + 0.1*l.t) }},
		{"rho", "price", 'r', func(l line) float64 { return l.s * 0.1 * l.t }},
		{"carry_rho", "price", 'q', func(l line) float64 { return l.s * 0.1 * l.t }},
		{"vanna", "delta", 'v', func(line) float64 { return 1 }},
		{"volga", "vega", 'v', func(l line) float64 { return l.s * math.Sqrt(l.t) }},
		{"charm", "delta", 't', func(line) float64 { return 1 }},
	} {
		of, got := outputIndex(t, c.of), *outputs(b)[outputIndex(t, c.name)]
		var at [4]*vec.BSM
		for j, h := range []float64{-2 * step, -step, step, 2 * step} {
			at[j] = newBatch(identityLines)
			for i := range identityLines {
				move(lineAt(b, i), c.by, h).put(at[j], i)
			}
			at[j].All()
		}
		value := func(j, i int) float64 { return (*outputs(at[j])[of])[i] }
		worst := 0.0
		for i := range identityLines {
			l := lineAt(b, i)
			difference := (8*(value(2, i)-value(1, i)) - (value(3, i) - value(0, i))) / (12 * step) // fourth order
			e := math.Abs(difference-got[i]*unit(l, c.by)) / c.scale(l)
			if worst = max(worst, e); !(e < 1e-9) {
				t.Fatalf("%s of %v is %v, differences give %v", c.name, l, got[i], difference/unit(l, c.by))
			}
		}
		t.Logf("%-9s within %.2g of differences", c.name, worst)
	}
}
