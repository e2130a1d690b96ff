package descent

import (
	"errors"
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// Options of Follow. The zero value is equilibrium crystallisation.
type Options struct {
	Mode Mode
	// Steps is the number of rows, between events, per whole crystallisation of
	// the bulk, at even spacing of the melt's mass; 0 means 50.
	Steps int
}

// Follow returns the line of descent of a bulk composition from its liquidus to
// its end. An error means that the path could not be computed; a path that
// fails its own checks is returned with Checks.Passed false.
func Follow(sys *gibbs.System, bulk ternary.Composition, o Options) (*Path, error) {
	if !bulk.Inside(0) {
		return nil, fmt.Errorf("the bulk composition %.6g lies outside the triangle", [3]float64(bulk))
	}
	if o.Steps <= 0 {
		o.Steps = 50
	}
	if o.Mode == "" {
		o.Mode = Equilibrium
	}
	surf, err := liquidus.NewSurface(sys)
	if err != nil {
		return nil, err
	}
	T, primary := surf.Liquidus(bulk)
	if math.IsInf(T, -1) {
		return nil, errors.New("no solid ever saturates in this liquid, so it does not freeze")
	}
	low, high := surf.Limits()
	if math.IsInf(T, 1) {
		return nil, fmt.Errorf("this composition is not all liquid at any temperature up to %.0f °C: %s, whose composition lies outside the triangle, is always saturated",
			high-ternary.ZeroCelsius, sys.Solids[primary.Phase].Symbol)
	}
	w := newWalk(sys, bulk, o, T, low)
	switch o.Mode {
	case Equilibrium:
		err = w.equilibrium(primary)
	case Fractional:
		err = w.fractional(primary)
	default:
		err = fmt.Errorf("mode %q is unknown", o.Mode)
	}
	if err != nil {
		return nil, err
	}
	w.check()
	return w.path, nil
}

// walk is a path under way.
type walk struct {
	sys   *gibbs.System
	bulk  ternary.Composition
	mass  [3]float64 // g/mol of the components
	total float64    // g per mole of bulk
	low   float64    // K: lower limit
	steps int
	path  *Path
}

func newWalk(sys *gibbs.System, bulk ternary.Composition, o Options, T, low float64) *walk {
	w := &walk{sys: sys, bulk: bulk, mass: sys.Components.MolarMasses(), low: low, steps: o.Steps}
	for i, m := range w.mass {
		if m <= 0 { // components without formulas count by moles
			w.mass[i] = 1
		}
	}
	w.total = w.weigh(bulk)
	w.path = &Path{System: sys, Mode: o.Mode, Bulk: bulk, LiquidT: T, Steps: make([]Step, 0, o.Steps+16)}
	return w
}

// weigh is the mass in g of contents c in moles of components.
func (w *walk) weigh(c [3]float64) float64 {
	return c[0]*w.mass[0] + c[1]*w.mass[1] + c[2]*w.mass[2]
}

func (w *walk) symbol(phase int) string {
	if phase == gibbs.Liquid {
		return "L"
	}
	return w.sys.Solids[phase].Symbol
}

func (w *walk) phase(i int) *gibbs.Phase {
	if i == gibbs.Liquid {
		return w.sys.Liquid
	}
	return w.sys.Solids[i]
}

// end closes the path.
func (w *walk) end(T float64, reason string) {
	w.path.EndT, w.path.Reason = T, reason
}
