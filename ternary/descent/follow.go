package descent

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// Options of Follow. The zero value is equilibrium crystallisation.
type Options struct {
	Mode Mode // Equilibrium (also ""), or Fractional
	// Steps is the number of rows, between events, per whole crystallisation of
	// the bulk, at even spacing of the melt's mass; 0 means 50.
	Steps int
	// Retain is, in Fractional mode, the fraction of newly formed solids that
	// stays in contact with the liquid and reacts with it, 0 to 1. At 0 every
	// solid leaves as it forms; 1 is equilibrium.
	Retain float64
	// Removals take solids out at chosen temperatures. They need solids in
	// contact: equilibrium, or Retain above 0.
	Removals []Removal
}

// Removal takes solids that are in contact with the liquid out of the system.
type Removal struct {
	T        float64 // K, below the liquidus of the bulk
	Phases   []int   // indices in System.Solids; nil means every solid in contact
	Fraction float64 // of what there is of each, 0 to 1; 0 means 1
}

// deepest is how far down a path is followed, as a share of the lowest temperature, K,
// for which the system file vouches: a liquid from which a solid is withheld may stay
// liquid to temperatures at which no model means anything.
const deepest = 0.5

// defaultSteps is Options.Steps where it is 0.
const defaultSteps = 50

// Follow returns the line of descent of a bulk composition from its liquidus to
// its end. An error means that the path could not be computed; a path that
// fails its own checks is returned with Checks.Passed false.
func Follow(sys *gibbs.System, bulk ternary.Composition, o Options) (*Path, error) {
	if o.Mode == "" {
		o.Mode = Equilibrium
	}
	if err := o.validate(sys); err != nil {
		return nil, err
	}
	w, primary, err := begin(sys, bulk, o.Mode, o.Steps)
	if err != nil {
		return nil, err
	}
	if o.Mode == Fractional {
		w.keep = o.Retain
	}
	w.path.Retain = w.keep
	if err := w.plan(o.Removals); err != nil {
		return nil, err
	}
	switch split := w.splits(w.path.LiquidT); {
	case w.keep > 0 && split:
		err = w.fromAbove()
	case w.keep > 0:
		err = w.equilibrium(primary)
	case split:
		err = fmt.Errorf("the liquid has separated into two already at %.2f °C, where its first solid would form; fractional crystallisation is followed from one liquid only: use equilibrium", w.path.LiquidT-ternary.ZeroCelsius)
	default:
		err = w.fractional(primary)
	}
	if err != nil {
		return nil, err
	}
	w.check()
	return w.path, nil
}

// validate looks for options that contradict each other.
func (o *Options) validate(sys *gibbs.System) error {
	switch {
	case o.Mode != Equilibrium && o.Mode != Fractional:
		return fmt.Errorf("mode %q is not one of crystallisation: give %s or %s", o.Mode, Equilibrium, Fractional)
	case !(o.Retain >= 0 && o.Retain <= 1):
		return fmt.Errorf("the fraction of solids kept in contact is %g; it must lie between 0 and 1", o.Retain)
	case o.Mode == Equilibrium && o.Retain != 0 && o.Retain != 1:
		return fmt.Errorf("at equilibrium all solids stay in contact, so a fraction of %g kept has no meaning; use the mode %s", o.Retain, Fractional)
	case o.Mode == Fractional && o.Retain == 0 && len(o.Removals) > 0:
		return errors.New("solids that leave as they form cannot be removed later; use equilibrium or keep a fraction of them")
	}
	for _, r := range o.Removals {
		if !(r.Fraction >= 0 && r.Fraction <= 1) {
			return fmt.Errorf("the fraction to remove at %.2f °C is %g; it must lie between 0 and 1", r.T-ternary.ZeroCelsius, r.Fraction)
		}
		for _, p := range r.Phases {
			if p < 0 || p >= len(sys.Solids) {
				return fmt.Errorf("the removal at %.2f °C names solid %d; there are %d", r.T-ternary.ZeroCelsius, p, len(sys.Solids))
			}
		}
	}
	return nil
}

// begin finds the liquidus of the bulk and sets up a path.
func begin(sys *gibbs.System, bulk ternary.Composition, mode Mode, steps int) (*walk, gibbs.State, error) {
	if !bulk.Inside(0) {
		return nil, gibbs.State{}, fmt.Errorf("the bulk composition %.6g lies outside the triangle", [3]float64(bulk))
	}
	if steps <= 0 {
		steps = defaultSteps
	}
	surf, err := liquidus.NewSurface(sys)
	if err != nil {
		return nil, gibbs.State{}, err
	}
	T, primary := surf.Liquidus(bulk)
	if math.IsInf(T, -1) {
		return nil, primary, errors.New("no solid ever saturates in this liquid, so it does not freeze")
	}
	low, high := surf.Limits()
	low = math.Max(low, deepest*sys.Range[0])
	if math.IsInf(T, 1) {
		return nil, primary, fmt.Errorf("this composition is not all liquid at any temperature up to %.0f °C: %s, whose composition lies outside the triangle, is always saturated",
			high-ternary.ZeroCelsius, sys.Solids[primary.Phase].Symbol)
	}
	w := &walk{sys: sys, bulk: bulk, mass: sys.Components.MolarMasses(), low: low, high: high, steps: steps, dir: -1, keep: 1}
	for i, m := range w.mass {
		if m <= 0 { // components without formulas count by moles
			w.mass[i] = 1
		}
	}
	w.row = steps - 1
	w.total = w.weigh(bulk)
	w.gone.total = make([][3]float64, len(sys.Solids))
	_, _, w.h0 = sys.Liquid.Gibbs(bulk, T)
	w.path = &Path{System: sys, Mode: mode, Bulk: bulk, LiquidT: T, Steps: make([]Step, 0, steps+16)}
	return w, primary, nil
}

// walk is a path under way.
type walk struct {
	sys       *gibbs.System
	bulk      ternary.Composition
	mass      [3]float64 // g/mol of the components
	total     float64    // g per mole of bulk
	low, high float64    // K: limits
	steps     int
	row       int     // the next row is due where the melt's mass is row/steps
	dir       float64 // −1 on cooling, +1 on heating
	keep      float64 // fraction of newly formed solids that stays in contact
	h0        float64 // J per mole of bulk: enthalpy at the start
	gone      stack   // solids removed
	removals  []Removal
	path      *Path
}

// stack is a sum of removed solids.
type stack struct {
	total [][3]float64 // moles of end-members by solid
	h     float64      // J: enthalpy at the time of removal
	used  bool         // something was removed
}

// plan sorts the removals by falling temperature.
func (w *walk) plan(list []Removal) error {
	for _, r := range list {
		if !(r.T < w.path.LiquidT) {
			return fmt.Errorf("nothing has crystallised yet at %.2f °C: the liquidus of this composition is at %.2f °C; choose a lower temperature for the removal", r.T-ternary.ZeroCelsius, w.path.LiquidT-ternary.ZeroCelsius)
		}
	}
	w.removals = slices.Clone(list)
	slices.SortStableFunc(w.removals, func(a, b Removal) int {
		switch {
		case a.T > b.T:
			return -1
		case a.T < b.T:
			return 1
		}
		return 0
	})
	return nil
}

// weigh is the mass in g of contents c in moles of components.
func (w *walk) weigh(c [3]float64) float64 {
	return c[0]*w.mass[0] + c[1]*w.mass[1] + c[2]*w.mass[2]
}

// size is weigh without regard to signs: a solid outside the triangle may weigh
// nothing.
func (w *walk) size(c [3]float64) float64 {
	return math.Abs(c[0])*w.mass[0] + math.Abs(c[1])*w.mass[1] + math.Abs(c[2])*w.mass[2]
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

func (w *walk) lost(T float64, err error) error {
	return fmt.Errorf("the path was lost at %.3f °C: %w", T-ternary.ZeroCelsius, err)
}
