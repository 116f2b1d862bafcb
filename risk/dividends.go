package risk

import (
	"nightbook/risk/instrument"
	"nightbook/risk/market"
	"nightbook/risk/model/pde"
	"nightbook/schema"
)

// schedule returns the dividends that move a contract which ends on a day, time
// years from now: as they stand now and after each step of theta. nil stands for
// none.
func (e *Engine) schedule(dividends []market.Dividend, key termKey, time float64) *instrument.Schedule {
	if len(dividends) == 0 {
		return nil
	}
	s := new(instrument.Schedule)
	for _, d := range dividends {
		s.Now = append(s.Now, pde.Dividend{Time: min(d.Time, time), Amount: d.Amount})
		for step, after := range e.after {
			if d.ExDate <= after.Day {
				s.Drop[step] += d.Amount
				continue
			}
			left := after.Years(key.day, key.minute)
			s.After[step] = append(s.After[step], pde.Dividend{Time: min(after.Years(d.ExDate, schema.NoMinute), left), Amount: d.Amount})
		}
	}
	return s
}
