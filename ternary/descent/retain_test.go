package descent_test

import (
	"math"
	"math/rand"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/tangent"
)

// meltAt is the mole fraction of melt at T, by a parabola through rows.
func meltAt(p *descent.Path, T float64) float64 {
	for i := 1; i+1 < len(p.Steps); i++ {
		if a, b, c := p.Steps[i-1], p.Steps[i], p.Steps[i+1]; a.T > T && b.T <= T {
			return lagrange(T, a.T, b.T, c.T, a.MeltMole, b.MeltMole, c.MeltMole)
		}
	}
	return math.NaN()
}

// A fraction of solids kept in contact joins the two limits: with all kept it is
// the equilibrium path, with less and less the fractional one, and in between the
// melt left at one temperature lies between theirs in order.
func TestRetainJoinsTheLimits(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	x, _ := sys.Components.Composition([3]float64{30, 35, 35}, ternary.Mass)
	const T = 1470.0
	follow := func(keep float64) *descent.Path {
		p, err := descent.Follow(sys, x, descent.Options{Mode: descent.Fractional, Retain: keep, Steps: 400})
		if err != nil {
			t.Fatalf("retain %g: %v", keep, err)
		}
		if !p.Checks.Passed {
			t.Errorf("retain %g: %v", keep, p.Checks.Problems)
		}
		return p
	}
	eq := pathOf(t, sys, x, descent.Equilibrium)
	all := follow(1)
	if math.Abs(all.EndT-eq.EndT) > 1e-8 {
		t.Errorf("with all kept the path ends at %.9f K, at equilibrium %.9f K", all.EndT, eq.EndT)
	}
	// the first two of a small share and its double extrapolate to nothing kept
	if none, few := meltAt(follow(0), T), 2*meltAt(follow(0.002), T)-meltAt(follow(0.004), T); math.Abs(none-few) > 1e-5 {
		t.Errorf("melt at %g K: %.8f with nothing kept, %.8f extrapolated from a few thousandths", T, none, few)
	}
	last := math.NaN()
	lastEnd := 0.0
	for _, keep := range []float64{0, 0.25, 0.5, 0.75, 1} {
		p := follow(keep)
		m := meltAt(p, T)
		if !math.IsNaN(last) && !(m < last) {
			t.Errorf("melt at %g K does not fall as more is kept: %.6f at %g after %.6f", T, m, keep, last)
		}
		if p.EndT < lastEnd-1e-3 {
			t.Errorf("retain %g ends at %.4f K, below the path with less kept, %.4f K", keep, p.EndT, lastEnd)
		}
		last, lastEnd = m, p.EndT
	}
}

// Half of what forms is kept, by another road: equilibrium of what is in contact
// over small steps of T, then removal of half of each solid's growth; two step
// lengths extrapolated.
func TestRetainByRemoval(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	x, _ := sys.Components.Composition([3]float64{30, 35, 35}, ternary.Mass)
	const keep, target = 0.5, 1470.0
	p, err := descent.Follow(sys, x, descent.Options{Mode: descent.Fractional, Retain: keep, Steps: 400})
	if err != nil {
		t.Fatal(err)
	}
	melt := func(n int) float64 {
		contact := [3]float64(x)
		had := make([]float64, len(sys.Solids))
		liquid := 1.0
		for k := 1; k <= n; k++ {
			sum := contact[0] + contact[1] + contact[2]
			b, _ := ternary.Normalize(contact)
			q, err := tangent.Solve(sys, b, p.LiquidT+(target-p.LiquidT)*float64(k)/float64(n))
			if err != nil {
				t.Fatal(err)
			}
			for _, part := range q.Parts {
				m := part.Mole * sum
				if part.State.Phase == gibbs.Liquid {
					liquid = m
					continue
				}
				grown := math.Max(0, m-had[part.State.Phase])
				for i, c := range part.State.C {
					contact[i] -= (1 - keep) * grown * c
				}
				had[part.State.Phase] = m - (1-keep)*grown
			}
		}
		return liquid
	}
	coarse, fine := melt(400), melt(800)
	want := 2*fine - coarse
	if got := meltAt(p, target); math.Abs(got-want) > 2e-4 || math.Abs(fine-want) > math.Abs(coarse-want) {
		t.Errorf("melt at %g K: %.6f, by removal %.6f (%.6f, %.6f before extrapolation)", target, got, want, coarse, fine)
	}
}

// What is left after all solids were taken out at T is the liquid of that moment:
// from there the path is that of the liquid alone.
func TestRemovalOfAll(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	x, _ := sys.Components.Composition([3]float64{30, 35, 35}, ternary.Mass)
	const T = 1500.0
	p, err := descent.Follow(sys, x, descent.Options{Removals: []descent.Removal{{T: T}}})
	if err != nil {
		t.Fatal(err)
	}
	if !p.Checks.Passed {
		t.Errorf("%v", p.Checks.Problems)
	}
	at := -1
	for i, s := range p.Steps {
		if s.T == T && s.Event != "" {
			at = i
		}
	}
	if at < 0 {
		t.Fatalf("no row at %g K", T)
	}
	cut := p.Steps[at]
	alone := pathOf(t, sys, cut.Liquid, descent.Equilibrium)
	if math.Abs(alone.LiquidT-T) > 1e-7 || math.Abs(alone.EndT-p.EndT) > 1e-7 {
		t.Errorf("the liquid alone runs from %.8f to %.8f K, the path from %g to %.8f K", alone.LiquidT, alone.EndT, T, p.EndT)
	}
	for _, a := range cut.Contact {
		if a.Mole != 0 {
			t.Errorf("%g of %s in contact after all was removed", a.Mole, sys.Solids[a.State.Phase].Symbol)
		}
	}
	// half of the plagioclase alone, later
	pl, _ := sys.SolidIndex("Pl")
	half, err := descent.Follow(sys, x, descent.Options{Removals: []descent.Removal{{T: T, Phases: []int{pl}, Fraction: 0.5}}})
	if err != nil {
		t.Fatal(err)
	}
	if !half.Checks.Passed || !(half.EndT < pathOf(t, sys, x, descent.Equilibrium).EndT && half.EndT > p.EndT) {
		t.Errorf("half removed ends at %.4f K (checks %v): want between all and nothing removed", half.EndT, half.Checks.Problems)
	}
	if _, err := descent.Follow(sys, x, descent.Options{Removals: []descent.Removal{{T: p.LiquidT + 1}}}); err == nil {
		t.Error("no error for a removal above the liquidus")
	}
}

// Partial separation over random systems.
func TestRandomRetention(t *testing.T) {
	done, failed := 0, 0
	for seed := int64(1); seed <= 50; seed++ {
		sys := trial.System(seed, trial.Options{})
		r := rand.New(rand.NewSource(500 + seed))
		for k := 0; k < 2; k++ {
			x, _ := ternary.Normalize([3]float64{r.Float64(), r.Float64(), r.Float64()})
			p, err := descent.Follow(sys, x, descent.Options{Mode: descent.Fractional, Retain: 0.1 + 0.8*r.Float64(), Steps: 10})
			if err != nil {
				failed++
				t.Logf("seed %d, %v: %v", seed, x, err)
				continue
			}
			done++
			if !p.Checks.Passed {
				t.Errorf("seed %d, %v: %v", seed, x, p.Checks.Problems)
			}
		}
	}
	if failed*100 > 3*(done+failed) {
		t.Errorf("%d of %d paths were refused", failed, done+failed)
	}
}

// A composition on an edge of a system whose liquid can unmix has the path of its
// neighbours a trace inside the triangle.
func TestFractionalFromAnEdge(t *testing.T) {
	sys := trial.Builtin(t, "fo-an-silica")
	for _, x := range []ternary.Composition{{0.8, 0, 0.2}, {0.7, 0.3, 0}, {0, 0.5, 0.5}} {
		in := x
		for i := range in {
			in[i] = (in[i] + 1e-7) / (1 + 3e-7)
		}
		a, err := descent.Follow(sys, x, descent.Options{Mode: descent.Fractional})
		if err != nil {
			t.Errorf("%v: %v", x, err)
			continue
		}
		b, err := descent.Follow(sys, in, descent.Options{Mode: descent.Fractional})
		if err != nil {
			t.Errorf("%v: %v", in, err)
			continue
		}
		if !a.Checks.Passed || math.Abs(a.LiquidT-b.LiquidT) > 0.01 {
			t.Errorf("%v: liquidus %.4f K, beside it %.4f; %v", x, a.LiquidT, b.LiquidT, a.Checks.Problems)
		}
	}
	if _, err := descent.Follow(sys, ternary.Composition{0.3, 0, 0.7}, descent.Options{Mode: descent.Fractional}); err == nil {
		t.Error("two liquids on the edge are followed as one")
	}
}
