package systems

import (
	"fmt"
	"math"

	"thalweg/ternary"
)

// LiquidSymbol is the symbol of the liquid; no solid may have it.
const LiquidSymbol = "L"

// solids checks the solids, all but their standard states. Without whole
// components there is nothing to balance formulas against.
func (c *checker) solids(whole bool) {
	n := len(c.w.Solid)
	if n == 0 {
		c.add("solid", "there are no solids", "add a [[solid]] table for each")
	}
	if n > maxSolids {
		c.add(fmt.Sprintf("solid[%d]", maxSolids), fmt.Sprintf("%d solids are more than the %d allowed", n, maxSolids), "leave out those that matter least")
		c.w.Solid = c.w.Solid[:maxSolids]
	}
	seen := map[string]bool{}
	for i, w := range c.w.Solid {
		path := fmt.Sprintf("solid[%d]", i)
		c.symbol(path, w.Symbol, "this solid", seen)
		if w.Symbol == LiquidSymbol {
			c.add(join(path, "symbol"), "L stands for the liquid", "give the solid another symbol")
		}
		s := Solid{Symbol: w.Symbol, Name: orElse(w.Name, w.Symbol), Remark: w.Remark}
		if len(w.Member) == 0 {
			m := wireMember{w.Symbol, w.Formula, w.Composition, w.wireState}
			s.Members = []Member{c.member(path, m, whole)}
		} else {
			s.Members = c.members(path, w, whole)
		}
		var symbols []string
		for _, m := range s.Members {
			symbols = append(symbols, m.Symbol)
		}
		c.mixing(path, w.wireMixing, symbols, &s.Mixing)
		c.f.Solids = append(c.f.Solids, s)
	}
}

// members checks the members of a solid solution.
func (c *checker) members(path string, w wireSolid, whole bool) []Member {
	for _, key := range []string{"formula", "composition", "melting", "transition", "reaction"} {
		if at := join(path, key); c.index.has(at) {
			c.add(at, "a solid with members has no "+key+" of its own", "give it to the members")
		}
	}
	if n := len(w.Member); n > 3 {
		c.add(path+".member[3]", fmt.Sprintf("the solid has %d members", n), "give three at most")
		w.Member = w.Member[:3]
	}
	seen := map[string]bool{}
	var out []Member
	for k, m := range w.Member {
		at := fmt.Sprintf("%s.member[%d]", path, k)
		c.symbol(at, m.Symbol, "this member", seen)
		out = append(out, c.member(at, m, whole))
	}
	return out
}

// member checks formula and composition of one member.
func (c *checker) member(path string, w wireMember, whole bool) Member {
	m := Member{Symbol: w.Symbol}
	var ok bool
	if m.Formula, ok = c.formula(path, w.Formula); !ok || !whole {
		return m
	}
	if c.index.has(join(path, "composition")) {
		m.Composition = c.explicit(path, w, m.Formula)
		return m
	}
	composition, err := balance(m.Formula, c.f.Components)
	if err != nil {
		for i, k := range c.f.Components {
			if k.Symbol == m.Symbol && k.Formula.Equal(m.Formula) {
				m.Composition = ternary.Apex(i) // the same substance, whatever the others are
				return m
			}
		}
		c.add(join(path, "formula"), err.Error(), "correct the formula; if the components share all their elements, add composition = [moles of each]")
	}
	m.Composition = composition
	return m
}

// explicit checks a composition that is given in moles of the components.
func (c *checker) explicit(path string, w wireMember, f ternary.Formula) (out [3]float64) {
	at := join(path, "composition")
	if len(w.Composition) != 3 {
		c.add(at, fmt.Sprintf("the composition has %d numbers", len(w.Composition)), "give the moles of the three components in one formula unit")
		return out
	}
	copy(out[:], w.Composition)
	if sum := out[0] + out[1] + out[2]; !finite(sum) || sum <= 0 {
		c.add(at, "the moles of the components must be finite with a positive sum", "give the moles in one formula unit")
		return out
	}
	if err := checkComposition(f, out, c.f.Components); err != nil {
		c.add(at, err.Error(), "correct the moles, or leave the key out to have the formula balanced")
	}
	return out
}

// atoms is the number of atoms in a formula unit.
func atoms(f ternary.Formula) float64 {
	n := 0.0
	for _, e := range f.Elements() {
		n += e.Count
	}
	return n
}

// sameComposition tells whether two lists of moles agree to rounding.
func sameComposition(a, b [3]float64) bool {
	for i := range a {
		if math.Abs(a[i]-b[i]) > compositionTol {
			return false
		}
	}
	return true
}
