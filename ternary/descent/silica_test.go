package descent_test

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

// Invented compositions in the systems with silica. An equilibrium path ends at
// the invariant point whose solids can make up the bulk: at the reaction point of
// forsterite when they are forsterite, anorthite and enstatite, else at the eutectic;
// fractional crystallisation leaves the forsterite behind and always reaches the
// eutectic. With alkali feldspar fractional crystallisation ends at the minimum
// of the cotectic, and equilibrium no lower.
func TestPathsWithSilica(t *testing.T) {
	cases := []struct {
		system     string
		wt         [3]float64
		mode       descent.Mode
		end        liquidus.Kind // of the node inside the triangle at which the path ends
		notReached bool
	}{
		{"fo-an-silica", [3]float64{60, 25, 15}, descent.Equilibrium, liquidus.ReactionPoint, false},
		{"fo-an-silica", [3]float64{60, 25, 15}, descent.Fractional, liquidus.Eutectic, false},
		{"fo-an-silica", [3]float64{45, 25, 30}, descent.Equilibrium, liquidus.Eutectic, false},
		{"fo-an-silica", [3]float64{45, 25, 30}, descent.Fractional, liquidus.Eutectic, false},
		{"ab-or-silica", [3]float64{35, 30, 35}, descent.Fractional, liquidus.Minimum, false},
		{"ab-or-silica", [3]float64{35, 30, 35}, descent.Equilibrium, liquidus.Minimum, true},
		{"ab-or-silica", [3]float64{55, 35, 10}, descent.Fractional, liquidus.Minimum, false},
		{"ab-or-silica", [3]float64{55, 35, 10}, descent.Equilibrium, liquidus.Minimum, true},
	}
	for _, c := range cases {
		sys := trial.Builtin(t, c.system)
		x, err := sys.Components.Composition(c.wt, ternary.Mass)
		if err != nil {
			t.Fatal(err)
		}
		pr, err := liquidus.Compute(sys, liquidus.Options{})
		if err != nil {
			t.Fatal(err)
		}
		end := math.NaN()
		for _, n := range pr.Nodes {
			if n.Edge < 0 && n.Kind == c.end {
				end = n.T
			}
		}
		p := pathOf(t, sys, x, c.mode)
		t.Logf("%s %v %s: ends at %.2f K, the %s lies at %.2f", c.system, c.wt, c.mode, p.EndT, c.end, end)
		switch {
		case c.notReached && !(p.EndT > end+0.05):
			t.Errorf("%s %v, %s: ends at %.4f K, the %s lies at %.4f", c.system, c.wt, c.mode, p.EndT, c.end, end)
		case !c.notReached && !(math.Abs(p.EndT-end) < 0.05):
			t.Errorf("%s %v, %s: ends at %.4f K, not at the %s, %.4f", c.system, c.wt, c.mode, p.EndT, c.end, end)
		}
	}
}
