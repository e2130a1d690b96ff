package ternary

import "fmt"

// Component is one apex of the triangle: a formula unit.
type Component struct {
	Symbol  string  // short symbol, as written on the command line: Di
	Name    string  // diopside
	Formula Formula // CaMgSi2O6
}

// Components are the three apexes in order.
type Components [3]Component

// MolarMasses returns g/mol of the three formula units.
func (cs Components) MolarMasses() [3]float64 {
	return [3]float64{cs[0].Formula.MolarMass(), cs[1].Formula.MolarMass(), cs[2].Formula.MolarMass()}
}

// Index returns the index of the component with this symbol.
func (cs Components) Index(symbol string) (int, bool) {
	for i, c := range cs {
		if c.Symbol == symbol {
			return i, true
		}
	}
	return 0, false
}

// Basis is the measure in which compositions are read and shown.
type Basis int

const (
	Mass Basis = iota // mass fractions, shown as wt%
	Mole              // mole fractions, shown as mol%
)

// ParseBasis reads "wt" or "mol".
func ParseBasis(s string) (Basis, error) {
	switch s {
	case "wt":
		return Mass, nil
	case "mol":
		return Mole, nil
	}
	return 0, fmt.Errorf("basis %q is unknown: use wt or mol", s)
}

// String is the form ParseBasis reads.
func (b Basis) String() string {
	if b == Mole {
		return "mol"
	}
	return "wt"
}

// Unit is the label of a percentage in this basis: "wt%" or "mol%".
func (b Basis) Unit() string { return b.String() + "%" }

// Fractions converts mole fractions to fractions (Σ = 1) in basis b. Entries
// may be negative for a solid outside the triangle.
func (cs Components) Fractions(x Composition, b Basis) [3]float64 {
	if b == Mole {
		return x
	}
	m := cs.MolarMasses()
	w := [3]float64{x[0] * m[0], x[1] * m[1], x[2] * m[2]}
	s := w[0] + w[1] + w[2]
	return [3]float64{w[0] / s, w[1] / s, w[2] / s}
}

// Composition converts amounts in basis b (any positive sum) to mole
// fractions.
func (cs Components) Composition(amounts [3]float64, b Basis) (Composition, error) {
	if b == Mass {
		m := cs.MolarMasses()
		for i := range amounts {
			amounts[i] /= m[i]
		}
	}
	return Normalize(amounts)
}
