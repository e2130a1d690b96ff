package render

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// invented describes a system for the tests: melting points in °C and heats of
// fusion in kJ/mol that stand for no substance.
type invented struct {
	symbols, names, formulas [3]string
	melt, heat               [3]float64
	pairs                    []gibbs.Pair
	compounds                []compound
}

type compound struct {
	symbol, name, remark string
	c                    [3]float64
	melt, heat           float64
}

func (v invented) system(t testing.TB) *gibbs.System {
	t.Helper()
	var cs ternary.Components
	for i := range cs {
		cs[i] = ternary.Component{Symbol: v.symbols[i], Name: v.names[i], Formula: formula(t, v.formulas[i])}
	}
	s := &gibbs.System{Name: "invented", Title: "An invented system", Components: cs, Liquid: gibbs.NewLiquid(cs, gibbs.Mixing{Pairs: v.pairs})}
	for i := range cs {
		p := &gibbs.Phase{Symbol: v.symbols[i], Name: v.names[i], Members: []gibbs.EndMember{{Symbol: v.symbols[i], Formula: cs[i].Formula,
			C: ternary.Apex(i), G: gibbs.Melting(gibbs.Fusion{T: v.melt[i] + ternary.ZeroCelsius, H: 1000 * v.heat[i]}, 0)}}}
		s.Solids = append(s.Solids, p.Prepare())
	}
	for _, c := range v.compounds {
		g, err := gibbs.CompoundMelting(s.Liquid, c.c, gibbs.Fusion{T: c.melt + ternary.ZeroCelsius, H: 1000 * c.heat}, 0)
		if err != nil {
			t.Fatal(err)
		}
		p := &gibbs.Phase{Symbol: c.symbol, Name: c.name, Remark: c.remark, Members: []gibbs.EndMember{{Symbol: c.symbol, C: c.c, G: g}}}
		s.Solids = append(s.Solids, p.Prepare())
	}
	return s
}

// compute returns the projection with isotherms every step °C over the whole
// surface.
func compute(t testing.TB, s *gibbs.System, step float64) *liquidus.Projection {
	t.Helper()
	p, err := liquidus.Compute(s, liquidus.Options{})
	if err != nil {
		t.Fatal(err)
	}
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, n := range p.Nodes {
		lo = math.Min(lo, n.T)
	}
	for _, f := range p.Fields {
		hi = math.Max(hi, f.PeakT)
	}
	var iso []float64
	for c := math.Ceil((lo-ternary.ZeroCelsius)/step) * step; c < hi-ternary.ZeroCelsius; c += step {
		iso = append(iso, c+ternary.ZeroCelsius)
	}
	p, err = liquidus.Compute(s, liquidus.Options{Isotherms: iso})
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func pair(i, j int, a, b float64) gibbs.Pair {
	return gibbs.Pair{I: i, J: j, L: []gibbs.TFunc{{A: a}, {A: b}}}
}

// crowded has compounds of every kind: melting congruently and incongruently,
// on edges and inside, with large fields and tiny ones.
func crowded(t testing.TB) *gibbs.System {
	return invented{
		symbols: [3]string{"Sar", "Vel", "Orm"}, names: [3]string{"saronite", "velinite", "ormite"},
		formulas: [3]string{"SiO2", "CaO", "Al2O3"},
		melt:     [3]float64{1720, 2100, 2000}, heat: [3]float64{30, 55, 60},
		pairs: []gibbs.Pair{pair(0, 1, -60e3, 0), pair(1, 2, -50e3, 0), pair(0, 2, -10e3, 0)},
		compounds: []compound{
			{"Bel", "belonite", "", [3]float64{0.5, 0.5, 0}, 1540, 36},
			{"Car", "carmonite", "", [3]float64{1. / 3, 2. / 3, 0}, 1900, 35},
			{"Mur", "murranite", "", [3]float64{0.4, 0, 0.6}, 1850, 30},
			{"Dal", "dalarite", "stands for a solid solution not in the plane", [3]float64{0.5, 0.25, 0.25}, 1553, 40},
			{"Gef", "gefonite", "", [3]float64{0.25, 0.5, 0.25}, 1560, 38},
			{"Hex", "hexalunite", "", [3]float64{0, 0.5, 0.5}, 1600, 35},
			{"Tri", "trivarite", "", [3]float64{0, 0.15, 0.85}, 1900, 45},
		},
	}.system(t)
}
