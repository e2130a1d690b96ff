package trial

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// components gives the three apexes real formulas, so that they have unequal
// molar masses; the thermodynamic data that go with them are invented.
func components(formulas [3]string) (cs ternary.Components) {
	for i, s := range formulas {
		f, err := ternary.ParseFormula(s)
		if err != nil {
			panic("trial: " + err.Error())
		}
		cs[i] = ternary.Component{Symbol: s, Name: s, Formula: f}
	}
	return cs
}

// stoichiometric is a solid of fixed composition.
func stoichiometric(symbol string, c [3]float64, g gibbs.TFunc) *gibbs.Phase {
	p := &gibbs.Phase{Symbol: symbol, Name: symbol, Members: []gibbs.EndMember{{Symbol: symbol, C: c, G: g}}}
	return p.Prepare()
}

// solution is a solid solution.
func solution(symbol string, m gibbs.Mixing, members ...gibbs.EndMember) *gibbs.Phase {
	p := &gibbs.Phase{Symbol: symbol, Name: symbol, Members: members, Mixing: m}
	return p.Prepare()
}

// compound is a solid counted from its own liquid; c must lie in the triangle.
func compound(symbol string, liquid *gibbs.Phase, c [3]float64, f gibbs.Fusion) *gibbs.Phase {
	g, err := gibbs.CompoundMelting(liquid, c, f, 0)
	if err != nil {
		panic("trial: " + err.Error())
	}
	return stoichiometric(symbol, c, g)
}

// newSystem puts a system together. The range is that of its melting points,
// widely taken.
func newSystem(name string, cs ternary.Components, liquid *gibbs.Phase, solids ...*gibbs.Phase) *gibbs.System {
	return &gibbs.System{Name: name, Title: "invented: " + name, Components: cs, Liquid: liquid,
		Solids: solids, Pressure: 1e5, Range: [2]float64{200, 3000}}
}

// Ideal is the system of three pure solids and an ideal liquid: melting points
// in K, heats of fusion in J/mol. Each liquidus is Schröder and van Laar's
// ln x = −(ΔH/R)(1/T − 1/Tm).
func Ideal(tm, dH [3]float64) *gibbs.System {
	cs := components([3]string{"LiF", "NaCl", "KBr"})
	var solids []*gibbs.Phase
	for i := range tm {
		solids = append(solids, stoichiometric([3]string{"A", "B", "C"}[i], ternary.Apex(i),
			gibbs.Melting(gibbs.Fusion{T: tm[i], H: dH[i]}, 0)))
	}
	return newSystem("ideal", cs, gibbs.NewLiquid(cs, gibbs.Mixing{}), solids...)
}

// Permute returns the system with component i of the result being component
// perm[i] of sys, built anew from the same data; the solids keep their order.
func Permute(sys *gibbs.System, perm [3]int) *gibbs.System {
	var to [3]int // new index of an old component
	for i, k := range perm {
		to[k] = i
	}
	turn := func(c [3]float64) (d [3]float64) {
		for k, v := range c {
			d[to[k]] = v
		}
		return d
	}
	var cs ternary.Components
	for i, k := range perm {
		cs[i] = sys.Components[k]
	}
	m := gibbs.Mixing{Sites: sys.Liquid.Mixing.Sites, Extension: sys.Liquid.Mixing.Extension}
	if m.Extension == gibbs.Toop {
		m.Odd = to[sys.Liquid.Mixing.Odd]
	}
	for _, p := range sys.Liquid.Mixing.Pairs {
		m.Pairs = append(m.Pairs, gibbs.Pair{I: to[p.I], J: to[p.J], L: p.L})
	}
	for k, l := range sys.Liquid.Mixing.Ternary {
		m.Ternary[to[k]] = l
	}
	var solids []*gibbs.Phase
	for _, p := range sys.Solids {
		q := &gibbs.Phase{Symbol: p.Symbol, Name: p.Name, Mixing: p.Mixing}
		for _, e := range p.Members {
			e.C = turn(e.C)
			q.Members = append(q.Members, e)
		}
		solids = append(solids, q.Prepare())
	}
	return newSystem(sys.Name, cs, gibbs.NewLiquid(cs, m), solids...)
}

// freezing is the temperature at which a phase of one end-member with contents c
// and standard Gibbs energy g is saturated in liquid x: the highest root of
// μ(x)·c − g by bisection from 4000 K down, or 0. It is this package's own, so
// that the systems do not depend on the code they test.
func freezing(liquid *gibbs.Phase, x ternary.Composition, c [3]float64, g gibbs.TFunc) float64 {
	f := gibbs.TFunc{}.Add(g, -1)
	for i, col := range liquid.Column(x) {
		switch {
		case c[i] == 0:
		case x[i] <= 0:
			return 0
		default:
			f = f.Add(col, c[i])
		}
	}
	const top, bottom, ratio = 4000.0, 50.0, 0.98
	for hi := top; hi > bottom; hi *= ratio {
		lo := hi * ratio
		if f.At(lo) <= 0 {
			continue
		}
		for hi-lo > 1e-9*hi {
			if mid := (lo + hi) / 2; f.At(mid) > 0 {
				lo = mid
			} else {
				hi = mid
			}
		}
		return math.Sqrt(lo * hi)
	}
	return 0
}
