package gibbs

import "thalweg/ternary"

// System is what a calculation works on: the liquid and the solids at one
// pressure. It is immutable once built and may be shared by goroutines.
type System struct {
	Name       string
	Title      string
	Components ternary.Components
	Liquid     *Phase // three end-members, the components, with zero standard Gibbs energy
	Solids     []*Phase
	Pressure   float64    // Pa
	Range      [2]float64 // K, the range of temperature for which the system file vouches
	Withheld   []string   // symbols of phases left out: the diagram is then metastable
}

// SolidIndex returns the index of the solid with this symbol.
func (s *System) SolidIndex(symbol string) (int, bool) {
	for i, p := range s.Solids {
		if p.Symbol == symbol {
			return i, true
		}
	}
	return 0, false
}

// State is one phase at a definite composition: the end-member fractions Y
// (Σ = 1 over the phase's end-members, the rest zero) and the moles C of the
// three components in one formula unit.
type State struct {
	Phase int // index in System.Solids; Liquid for the liquid
	Y     [3]float64
	C     [3]float64
}

// Liquid is the State.Phase of the liquid.
const Liquid = -1

// Composition is C scaled to Σ = 1. Entries may be negative.
func (s State) Composition() ternary.Composition {
	sum := s.C[0] + s.C[1] + s.C[2]
	return ternary.Composition{s.C[0] / sum, s.C[1] / sum, s.C[2] / sum}
}
