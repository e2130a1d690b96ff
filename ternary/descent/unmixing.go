package descent

import (
	"errors"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// splitScan is the ratio of successive temperatures in the search for one where
// the bulk is a single liquid.
const splitScan = 1.02

// allLiquid is the bulk as one liquid at T.
func (w *walk) allLiquid(T float64) *tangent.Equilibrium {
	x := [3]float64(w.bulk)
	var pot gibbs.Potentials
	w.sys.Liquid.Potentials(&x, T, &pot)
	return &tangent.Equilibrium{T: T, Bulk: w.bulk, Mu: pot.Mu,
		Parts: []tangent.Part{{State: gibbs.State{Phase: gibbs.Liquid, Y: x, C: x}, Mole: 1}}}
}

// splits reports whether the bulk as one liquid is unstable at T against
// separating into two.
func (w *walk) splits(T float64) bool {
	if !w.sys.Liquid.CanUnmix(T) {
		return false
	}
	q := w.allLiquid(T)
	if !w.sys.Liquid.ConvexAt(q.Parts[0].State.Y, T) {
		return true
	}
	for _, s := range tangent.Above(w.sys, q.Mu, T, q.Parts, aboveTol) {
		if s.Phase == gibbs.Liquid {
			return true
		}
	}
	return false
}

// fromAbove follows the path of a liquid that separates into two before its
// first solid forms: it begins where the second liquid appears.
func (w *walk) fromAbove() error {
	T := w.path.LiquidT
	for w.splits(T) {
		T *= splitScan
		if T > w.high {
			return errors.New("the bulk is two liquids at every temperature up to the upper limit")
		}
	}
	q := w.allLiquid(T)
	w.h0 = w.enthalpy(&q.Parts[0].State, T)
	if err := w.stages(q, false); err != nil {
		return err
	}
	// heat counts from the first row, where the second liquid appears
	first := w.path.Steps[0].Heat
	for i := range w.path.Steps {
		w.path.Steps[i].Heat -= first
	}
	for _, s := range w.path.Steps {
		if len(s.Contact) > 0 {
			w.path.LiquidT = s.T
			break
		}
	}
	return nil
}
