package liquidus_test

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// An azeotrope of a regular liquid and a regular solid of A and B, where both have one
// composition x:
//
//	ΔG_A(T) = W(1 − x)²,   ΔG_B(T) = Wx²,   W = W_solid − W_liquid
//
// with ΔG the Gibbs energy of fusion. Eliminating T leaves one equation in x, solved
// here by bisection; the minimum of the edge, and that of the join, must meet it.
func TestAzeotropeCondition(t *testing.T) {
	a, b := gibbs.Fusion{T: 1200, H: 30000}, gibbs.Fusion{T: 1150, H: 26000}
	for _, W := range []float64{4000, 6500, 9000} {
		const liquidW = -2000.0
		var cs ternary.Components
		liquid := gibbs.NewLiquid(cs, gibbs.Mixing{Pairs: []gibbs.Pair{{I: 0, J: 1, L: []gibbs.TFunc{{A: liquidW}}}}})
		ss := (&gibbs.Phase{Symbol: "S", Members: []gibbs.EndMember{
			{Symbol: "a", C: ternary.Apex(0), G: gibbs.Melting(a, 0)}, {Symbol: "b", C: ternary.Apex(1), G: gibbs.Melting(b, 0)},
		}, Mixing: gibbs.Mixing{Pairs: []gibbs.Pair{{I: 0, J: 1, L: []gibbs.TFunc{{A: liquidW + W}}}}}}).Prepare()
		c := (&gibbs.Phase{Symbol: "C", Members: []gibbs.EndMember{{Symbol: "C", C: ternary.Apex(2), G: gibbs.Melting(gibbs.Fusion{T: 1000, H: 20000}, 0)}}}).Prepare()
		sys := &gibbs.System{Name: "azeotrope", Components: cs, Liquid: liquid, Solids: []*gibbs.Phase{ss, c}}

		// ΔG = H(1 − T/Tm), so T_A(x) = Tm(1 − W(1 − x)²/H)
		TA := func(x float64) float64 { return a.T * (1 - W*(1-x)*(1-x)/a.H) }
		TB := func(x float64) float64 { return b.T * (1 - W*x*x/b.H) }
		lo, hi := 0.0, 1.0 // x is the fraction of A in B's neighbour: T_A rises, T_B falls with it
		for k := 0; k < 200; k++ {
			if m := (lo + hi) / 2; TA(m) < TB(m) {
				lo = m
			} else {
				hi = m
			}
		}
		p := whole(t, sys, liquidus.Options{})
		found := false
		for _, n := range p.Extrema {
			if n.Kind != liquidus.Minimum || n.Edge != 2 {
				continue
			}
			found = true
			if math.Abs(n.Liquid[0]-lo) > 1e-6 || math.Abs(n.T-TA(lo)) > 1e-6 {
				t.Errorf("W = %g: minimum at x = %.9f, %.8f K; in closed form %.9f, %.8f K", W, n.Liquid[0], n.T, lo, TA(lo))
			}
			if y := n.Solids[0].Y[0]; math.Abs(y-n.Liquid[0]) > 1e-5 {
				t.Errorf("W = %g: the solid holds %.8f, the liquid %.8f", W, y, n.Liquid[0])
			}
		}
		if !found {
			t.Errorf("W = %g: no minimum on the edge; extrema %+v", W, p.Extrema)
		}
	}
}
