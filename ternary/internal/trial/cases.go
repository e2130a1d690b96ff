package trial

import (
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Case is a hand-made system with one awkward feature. All its data are
// invented and round, so that much about it is known beforehand.
type Case struct {
	Name   string
	Holds  string // the feature
	System *gibbs.System
}

// Cases returns the hand-made systems, in a fixed order.
func Cases() []Case {
	return []Case{
		{"outside", "a solid A − B outside the triangle: no side with A is a binary system", Outside()},
		{"island", "a field smaller than any mesh, across the boundary of two others", Island()},
		{"polymorphs", "two forms of one substance: their boundary is an isotherm", Polymorphs()},
		{"ring", "a compound whose field lies wholly inside another field", Ring()},
		{"join", "a congruent compound: a maximum where the join crosses the boundary curve", Join()},
		{"hugging", "a ternary compound whose field comes within a thousandth of a side", Hugging()},
		{"two liquids", "components A and B that do not mix: a two-liquid field on their edge", TwoLiquids()},
	}
}

// CaseNamed returns the system of one case; an unknown name is a caller's bug.
func CaseNamed(name string) *gibbs.System {
	for _, c := range Cases() {
		if c.Name == name {
			return c.System
		}
	}
	panic("trial: no case named " + name)
}

// pures are the solids A, B and C of the three components.
func pures(tm, dH [3]float64) []*gibbs.Phase { return Ideal(tm, dH).Solids }

// base is an ideal liquid with the components that Ideal uses.
func base() (ternary.Components, *gibbs.Phase) {
	s := Ideal([3]float64{1, 1, 1}, [3]float64{1, 1, 1})
	return s.Components, s.Liquid
}

// Outside has a solid of the contents A − B. Its saturation in an ideal liquid
// is RT·ln(xA/xB) = G, with G = −27700 + 30·T J/mol: 1500 K at xA = 4·xB, and
// never where xA > 36.9·xB.
func Outside() *gibbs.System {
	cs, l := base()
	solids := pures([3]float64{1400, 1700, 1600}, [3]float64{42000, 17000, 80000})
	solids = append(solids, stoichiometric("K", [3]float64{1, -1, 0}, gibbs.TFunc{A: -27700, B: 30}))
	return newSystem("outside", cs, l, solids...)
}

// IslandRise is by how many kelvin the compound of Island melts above the
// liquidus of the system without it.
const IslandRise = 0.05

// Island is symmetric in A and B. The compound A2B2C lies on the boundary curve
// of A and B and melts IslandRise above it; its small entropy of fusion makes
// its liquidus a steep dome, so that its field is a lens across the curve.
func Island() *gibbs.System {
	cs, l := base()
	solids := pures([3]float64{1300, 1300, 900}, [3]float64{60000, 60000, 20000})
	c := [3]float64{2, 2, 1}
	x := ternary.Composition{0.4, 0.4, 0.2}
	T := freezing(l, x, ternary.Apex(0), solids[0].Members[0].G) + IslandRise
	solids = append(solids, compound("K", l, c, gibbs.Fusion{T: T, H: 10 * T}))
	return newSystem("island", cs, l, solids...)
}

// PolymorphT is the temperature, K, at which A goes over into its low form.
const PolymorphT = 1250

// Polymorphs has a low form of A below PolymorphT.
func Polymorphs() *gibbs.System {
	cs, l := base()
	solids := pures([3]float64{1500, 1200, 1100}, [3]float64{30000, 24000, 22000})
	low := gibbs.Transition(solids[0].Members[0].G, PolymorphT, -6000, 0, 0)
	solids = append(solids, stoichiometric("Alow", ternary.Apex(0), low))
	return newSystem("polymorphs", cs, l, solids...)
}

// Ring has the compound A3BC deep inside the field of A. Its liquidus is a steep
// dome, for its entropy of fusion is small, that rises 8 K above the flat one
// of A.
func Ring() *gibbs.System {
	cs, l := base()
	solids := pures([3]float64{2000, 1300, 1300}, [3]float64{60000, 26000, 26000})
	c := [3]float64{3, 1, 1}
	x := ternary.Composition{0.6, 0.2, 0.2}
	T := freezing(l, x, ternary.Apex(0), solids[0].Members[0].G) + 8
	solids = append(solids, compound("K", l, c, gibbs.Fusion{T: T, H: 10 * T}))
	return newSystem("ring", cs, l, solids...)
}

// Join is symmetric in A and B and has the congruent compound AB, which with C
// makes a maximum on the boundary curve of AB and C, at xA = xB.
func Join() *gibbs.System {
	cs, l := base()
	solids := pures([3]float64{1200, 1200, 1250}, [3]float64{30000, 30000, 30000})
	solids = append(solids, compound("K", l, [3]float64{1, 1, 0}, gibbs.Fusion{T: 1300, H: 65000}))
	return newSystem("join", cs, l, solids...)
}

// TwoLiquidsL is the regular-solution term of A and B in TwoLiquids, J/mol: twice
// R times the critical temperature.
const TwoLiquidsL = 30000.0

// TwoLiquids has a regular solution of A and B that separates below 1804 K, well
// above the freezing of A, and C that dissolves both.
func TwoLiquids() *gibbs.System {
	cs, _ := base()
	l := gibbs.NewLiquid(cs, gibbs.Mixing{Pairs: []gibbs.Pair{{I: 0, J: 1, L: []gibbs.TFunc{{A: TwoLiquidsL}}}}})
	solids := pures([3]float64{1500, 1100, 1000}, [3]float64{30000, 22000, 20000})
	return newSystem("two liquids", cs, l, solids...)
}

// Hugging has the compound ABC, which melts so far above its surroundings that
// liquids with a few parts in a million of a component are saturated with it.
func Hugging() *gibbs.System {
	cs, l := base()
	solids := pures([3]float64{900, 1000, 1100}, [3]float64{18000, 20000, 22000})
	solids = append(solids, compound("K", l, [3]float64{1, 1, 1}, gibbs.Fusion{T: 2000, H: 120000}))
	return newSystem("hugging", cs, l, solids...)
}
