package descent

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// Liquidus returns the temperature, K, at which the first solid of a composition
// forms on cooling at equilibrium, and that solid. Where the liquid separates into
// two before (twoLiquids), the solid joins these, at another temperature than that
// at which the undivided liquid would be saturated, and perhaps another solid. T is
// ±Inf as in liquidus.Surface.Liquidus. It reports an error for a composition outside
// the triangle and where the way to the first solid could not be followed.
func Liquidus(sys *gibbs.System, bulk ternary.Composition) (T float64, first gibbs.State, twoLiquids bool, err error) {
	surf, err := liquidus.NewSurface(sys)
	if err != nil {
		return 0, first, false, err
	}
	if T, first = surf.Liquidus(bulk); math.IsInf(T, 0) {
		return T, first, false, nil
	}
	w, _, err := begin(sys, bulk, Equilibrium, 0)
	if err != nil || !w.splits(T) {
		return T, first, false, err
	}
	if err := w.fromAbove(); err != nil {
		return 0, first, true, err
	}
	for _, s := range w.path.Steps {
		if len(s.Contact) > 0 {
			return s.T, s.Contact[0].State, true, nil
		}
	}
	return math.Inf(-1), gibbs.State{Phase: gibbs.Liquid}, true, nil
}
