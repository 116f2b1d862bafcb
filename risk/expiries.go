package risk

import (
	"nightbook/risk/instrument"
	"nightbook/risk/market"
	"nightbook/schema"
)

// termKey names an expiry of an underlying; lines share what hangs on it.
type termKey struct {
	underlying schema.Code
	day        schema.Date
	minute     int16
}

// term is what every line of one underlying and expiry shares.
type term struct {
	key        termKey
	underlying *market.Underlying // nil: there is none of that name
	fx         *market.Currency   // of its currency

	time, rate, forward float64
	after               [instrument.Steps]float64 // time, seen after each step of theta
	curveInside         bool
	dividends           *instrument.Schedule // up to expiry; nil where there are none
	dividendsPV         float64
	smile               market.Smile // where there is a surface that may be used
}

// newTerm finds out what an expiry stands for.
func (e *Engine) newTerm(key termKey) term {
	t := term{key: key, underlying: e.market.Underlying(key.underlying), rate: nan, forward: nan}
	t.time = e.market.AsOf.Years(key.day, key.minute)
	if key.day != schema.NoDate {
		for step := range t.after {
			t.after[step] = max(e.after[step].Years(key.day, key.minute), 0)
		}
	}
	u := t.underlying
	if u == nil {
		return t
	}
	t.fx = e.market.FX(u.Currency)
	if u.Curve != nil && t.time > 0 {
		t.rate, t.curveInside = u.Curve.Rate(t.time)
		t.forward = u.Forward(t.rate, t.time, key.day)
		paid := u.DividendsUntil(key.day)
		t.dividends, t.dividendsPV = e.schedule(paid, key, t.time), market.PresentValue(paid, t.rate, t.time)
	}
	if u.Surface != nil && t.time > 0 {
		t.smile = u.Surface.Smile(t.time)
	}
	return t
}

// maxTerms bounds a worker's memory of terms from batch to batch, for files in
// which every line has an expiry of its own.
const maxTerms = 1 << 15

// terms is a worker's memory of terms: a hash table with open addressing.
type terms struct {
	places []int32 // where in list, plus 1; 0 is free. The length is a power of two.
	list   []term
}

// find returns where the term of a key stands in list, which it makes if it has not met it.
func (s *terms) find(e *Engine, key termKey) int32 {
	if 2*len(s.list) >= len(s.places) {
		s.grow()
	}
	mask := uint64(len(s.places) - 1)
	at := key.hash() & mask
	for {
		switch k := s.places[at]; {
		case k == 0:
			s.list = append(s.list, e.newTerm(key))
			s.places[at] = int32(len(s.list))
			return int32(len(s.list) - 1)
		case s.list[k-1].key == key:
			return k - 1
		}
		at = (at + 1) & mask
	}
}

func (s *terms) grow() {
	s.places = make([]int32, max(1024, 2*len(s.places)))
	mask := uint64(len(s.places) - 1)
	for k := range s.list {
		at := s.list[k].key.hash() & mask
		for s.places[at] != 0 {
			at = (at + 1) & mask
		}
		s.places[at] = int32(k + 1)
	}
}

// trim forgets all terms when they are many.
func (s *terms) trim() {
	if len(s.list) >= maxTerms {
		clear(s.places)
		clear(s.list) // their dividends may be collected
		s.list = s.list[:0]
	}
}

// hash spreads keys. The multiplier is 2⁶⁴ over the golden ratio, made odd.
func (k termKey) hash() uint64 {
	const golden = 0x9e3779b97f4a7c15
	h := (uint64(k.underlying)<<32 | uint64(uint32(k.day))) * golden
	h = (h ^ h>>32 ^ uint64(uint16(k.minute))) * golden
	return h >> 32
}
