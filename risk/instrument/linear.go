package instrument

import "nightbook/risk/model"

// Stock values holdings of the underlying itself.
func Stock(r *Run) {
	model.Spot(&r.Greeks, r.Spot)
	r.held()
}

// Future values futures since they were last margined.
func Future(r *Run) {
	model.FutureChange(&r.Greeks, r.Spot, r.Entry)
	r.held()
}

// Cash values cash balances.
func Cash(r *Run) {
	model.Face(&r.Greeks)
	r.held()
}
