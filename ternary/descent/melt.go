package descent

import (
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// MeltOptions are the options of Melt. The zero value is batch melting.
type MeltOptions struct {
	Mode Mode // BatchMelting (also ""), or FractionalMelting
	// Steps is the number of rows, between events, per whole melting of the bulk,
	// at even spacing of the mass molten; 0 means 50.
	Steps int
}

// Melt heats a bulk composition from its solidus until all is molten, and
// returns the path by rising temperature.
//
//   - BatchMelting: the melt stays with the solids. It is the line of equilibrium
//     crystallisation read upward, but computed from below: the solids that are
//     stable without liquid, the temperature of the first melt, then every event
//     on the way to the liquidus.
//   - FractionalMelting: melt leaves as it forms, and what is left melts on. The
//     temperature stands still at an invariant point until one of the solids is
//     used up, then leaps to the first melting of the rest. Step.Liquid is the
//     melt as it forms, Step.Pool all of it together.
//
// Heats are taken up from the first row on. An error means that the path could
// not be computed; one that fails its own checks is returned with Checks.Passed
// false.
func Melt(sys *gibbs.System, bulk ternary.Composition, o MeltOptions) (*Path, error) {
	if o.Mode == "" {
		o.Mode = BatchMelting
	}
	if !o.Mode.Melts() {
		return nil, fmt.Errorf("mode %q is not one of melting: give %s or %s", o.Mode, BatchMelting, FractionalMelting)
	}
	w, _, err := begin(sys, bulk, o.Mode, o.Steps)
	if err != nil {
		return nil, err
	}
	w.dir, w.row = 1, 1
	w.path.Retain = 1
	q, err := w.solidus(bulk, math.NaN(), w.path.LiquidT)
	if err != nil {
		return nil, err
	}
	w.h0 = 0
	for _, p := range q.Parts {
		w.h0 += p.Mole * w.enthalpy(&p.State, q.T)
	}
	if o.Mode == BatchMelting {
		next, done := w.enter(q, len(q.Parts)-1)
		err = w.stages(next, done)
	} else {
		w.path.Retain = 0
		err = w.extract(q)
	}
	if err != nil {
		return nil, err
	}
	if w.splits(w.path.LiquidT) {
		if w.path.LiquidT, _, _, err = Liquidus(sys, bulk); err != nil {
			return nil, err
		}
	}
	w.check()
	return w.path, nil
}
