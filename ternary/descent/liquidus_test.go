package descent_test

import (
	"math"
	"math/rand"
	"testing"

	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/tangent"

	"thalweg/ternary"
)

// The liquidus is where the equilibrium gains its first solid, found here by halving
// from equilibria alone; melting ends where crystallisation begins.
func TestLiquidusAgainstEquilibria(t *testing.T) {
	list := []*gibbs.System{trial.Builtin(t, "fo-an-silica"), trial.Builtin(t, "di-ab-an")}
	for seed := int64(1); seed <= 6; seed++ {
		list = append(list, trial.System(seed, trial.Options{Unmixing: true}))
	}
	rng := rand.New(rand.NewSource(5))
	tested, split := 0, 0
	for _, sys := range list {
		for range 40 {
			x, err := ternary.Normalize([3]float64{rng.ExpFloat64(), rng.ExpFloat64(), rng.ExpFloat64()})
			if err != nil {
				t.Fatal(err)
			}
			T, first, two, err := descent.Liquidus(sys, x)
			if err != nil || math.IsInf(T, 0) {
				continue
			}
			solid := func(T float64) bool {
				q, err := tangent.Solve(sys, x, T)
				if err != nil {
					t.Fatalf("%s at %.4f K: %v", sys.Name, T, err)
				}
				for _, p := range q.Parts {
					if p.State.Phase != gibbs.Liquid {
						return true
					}
				}
				return false
			}
			tested++
			if two {
				split++
			}
			const step = 1e-6 // of T
			if solid(T*(1+step)) || !solid(T*(1-step)) {
				t.Errorf("%s, %.4f: the liquidus is not at %.4f K (solid %d, two liquids %v)", sys.Name, [3]float64(x), T, first.Phase, two)
			}
			if m, err := descent.Melt(sys, x, descent.MeltOptions{}); err == nil && m.Checks.Passed && (math.Abs(m.LiquidT-T) > 1e-6*T || math.Abs(m.EndT-T) > 1e-6*T) {
				t.Errorf("%s, %.4f: melting ends at %.4f K and names %.4f K, the liquidus is at %.4f", sys.Name, [3]float64(x), m.EndT, m.LiquidT, T)
			}
		}
	}
	if tested < 200 || split < 20 {
		t.Errorf("%d compositions tested, %d of two liquids", tested, split)
	}
	t.Logf("%d compositions, %d of two liquids", tested, split)
}
