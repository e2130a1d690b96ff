package descent_test

import (
	"math"
	"math/rand"
	"strings"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
	"thalweg/ternary/tangent"
)

func melted(t testing.TB, sys *gibbs.System, x ternary.Composition, o descent.MeltOptions) *descent.Path {
	t.Helper()
	p, err := descent.Melt(sys, x, o)
	if err != nil {
		t.Fatalf("%s, %v: %v", o.Mode, x, err)
	}
	if !p.Checks.Passed {
		t.Errorf("%s, %v: %v", o.Mode, x, p.Checks.Problems)
	}
	return p
}

// Batch melting is equilibrium crystallisation read upward, though it is computed
// from below: the same solidus and liquidus, the same events, the same amounts by
// cutting planes at every row.
func TestBatchMeltingIsCrystallisationReversed(t *testing.T) {
	rows := 0
	for seed := int64(1); seed <= 40; seed++ {
		sys := trial.System(seed, trial.Options{})
		r := rand.New(rand.NewSource(70 + seed))
		x, _ := ternary.Normalize([3]float64{0.05 + r.Float64(), 0.05 + r.Float64(), 0.05 + r.Float64()})
		down, err := descent.Follow(sys, x, descent.Options{Steps: 8})
		if err != nil {
			t.Errorf("seed %d: %v", seed, err)
			continue
		}
		up := melted(t, sys, x, descent.MeltOptions{Steps: 8})
		if !strings.Contains(down.Reason, "limit") && math.Abs(up.Steps[0].T-down.EndT) > 1e-7 {
			t.Errorf("seed %d: first melt at %.9f K, last melt at %.9f K", seed, up.Steps[0].T, down.EndT)
		}
		if math.Abs(up.EndT-down.LiquidT) > 1e-7 {
			t.Errorf("seed %d: all molten at %.9f K, liquidus at %.9f K", seed, up.EndT, down.LiquidT)
		}
		released, taken := down.Steps[len(down.Steps)-1].Heat, up.Steps[len(up.Steps)-1].Heat
		if !strings.Contains(down.Reason, "limit") && math.Abs(released-taken) > 1e-6*math.Abs(released) {
			t.Errorf("seed %d: %.9g J/g released on cooling, %.9g taken up on heating", seed, released, taken)
		}
		for i := range up.Steps {
			if s := &up.Steps[i]; s.Event == "" {
				rows++
				sameAssemblage(t, seed, sys, x, s)
			}
		}
	}
	if rows < 150 {
		t.Errorf("only %d rows compared", rows)
	}
}

// Fractional melting of pure solids by hand: all liquid of the ternary eutectic
// comes first, in the amount that exhausts one solid; then that of the binary
// eutectic of the other two, at its temperature; then the last solid at its
// melting point.
func TestFractionalMeltingLeaps(t *testing.T) {
	sys := trial.Builtin(t, "lif-naf-kf")
	pr, err := liquidus.Compute(sys, liquidus.Options{})
	if err != nil {
		t.Fatal(err)
	}
	var ternaryE *liquidus.Node
	for i := range pr.Nodes {
		if n := &pr.Nodes[i]; n.Edge < 0 && n.Kind == liquidus.Eutectic {
			ternaryE = n
		}
	}
	x := ternary.Composition{0.25, 0.6, 0.15}
	// what is exhausted first, and what is left of the others, by the lever rule
	first, f1 := -1, math.Inf(1)
	for i := range x {
		if f := x[i] / ternaryE.Liquid[i]; f < f1 {
			first, f1 = i, f
		}
	}
	var rest [3]float64
	for i := range x {
		rest[i] = x[i] - f1*ternaryE.Liquid[i]
	}
	rest[first] = 0
	var binaryE *liquidus.Node
	for i := range pr.Nodes {
		if n := &pr.Nodes[i]; n.Edge == first {
			binaryE = n
		}
	}
	second, f2 := -1, math.Inf(1)
	for i := range rest {
		if i != first && rest[i]/binaryE.Liquid[i] < f2 {
			second, f2 = i, rest[i]/binaryE.Liquid[i]
		}
	}
	third := 3 - first - second
	want := []struct{ T, melt float64 }{
		{ternaryE.T, 0}, {ternaryE.T, f1},
		{binaryE.T, f1}, {binaryE.T, f1 + f2},
	}
	p := melted(t, sys, x, descent.MeltOptions{Mode: descent.FractionalMelting})
	if len(p.Steps) != 6 {
		t.Fatalf("%d rows, want two at each of three temperatures", len(p.Steps))
	}
	for i, w := range want {
		if s := p.Steps[i]; math.Abs(s.T-w.T) > 1e-6 || math.Abs(s.MeltMole-w.melt) > 1e-9 {
			t.Errorf("row %d: %.7f K with %.10f molten, by hand %.7f K with %.10f", i, s.T, s.MeltMole, w.T, w.melt)
		}
	}
	for _, s := range p.Steps[4:] {
		// at the last solid's own melting point, where its driving force is nil
		if d := sys.Solids[third].Members[0].G.At(s.T); math.Abs(d) > 1e-6 || s.Liquid[third] != 1 {
			t.Errorf("%.6f K, %v: not the melting point of %s", s.T, s.Liquid, sys.Solids[third].Symbol)
		}
	}
	if last := p.Steps[5]; math.Abs(last.MeltMole-1) > 1e-12 || last.Pool.Distance(x) > 1e-12 {
		t.Errorf("in the end %.12f are molten, together %v; the bulk is %v", last.MeltMole, last.Pool, x)
	}
}

// Fractional melting of a solid solution by another road: small rises of T, each
// followed by the removal of all melt; two step lengths extrapolated.
func TestFractionalMeltingByRemoval(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	x, _ := sys.Components.Composition([3]float64{30, 35, 35}, ternary.Mass)
	p := melted(t, sys, x, descent.MeltOptions{Mode: descent.FractionalMelting, Steps: 400})
	start := p.Steps[0].T
	const rise = 20.0
	target := start + rise
	molten := func(n int) float64 {
		b, left := x, 1.0
		for k := 1; k <= n; k++ {
			q, err := tangent.Solve(sys, b, start+rise*float64(k)/float64(n))
			if err != nil {
				t.Fatal(err)
			}
			var c [3]float64
			for _, part := range q.Parts {
				if part.State.Phase != gibbs.Liquid {
					for i, v := range part.State.C {
						c[i] += part.Mole * v
					}
				}
			}
			left *= c[0] + c[1] + c[2]
			if b, err = ternary.Normalize(c); err != nil {
				t.Fatal(err)
			}
		}
		return 1 - left
	}
	coarse, fine := molten(400), molten(800)
	want := 2*fine - coarse
	got := math.NaN()
	for i := 1; i+1 < len(p.Steps); i++ {
		if a, b, c := p.Steps[i-1], p.Steps[i], p.Steps[i+1]; a.T < target && b.T >= target {
			got = lagrange(target, a.T, b.T, c.T, a.MeltMole, b.MeltMole, c.MeltMole)
		}
	}
	if math.Abs(got-want) > 1e-4 || math.Abs(fine-want) > math.Abs(coarse-want) {
		t.Errorf("%.0f K above the solidus %.6f are molten; by removal %.6f (%.6f, %.6f before extrapolation)", rise, got, want, coarse, fine)
	}
}

// Melting over random systems: every path that is returned passes its checks, and
// nearly all are returned.
func TestRandomMelting(t *testing.T) {
	done, failed := 0, 0
	for seed := int64(1); seed <= 50; seed++ {
		sys := trial.System(seed, trial.Options{})
		r := rand.New(rand.NewSource(3000 + seed))
		for k := 0; k < 3; k++ {
			a := [3]float64{r.Float64(), r.Float64(), r.Float64()}
			if k == 1 {
				a[r.Intn(3)] = 0 // on an edge
			}
			x, _ := ternary.Normalize(a)
			for _, m := range []descent.Mode{descent.BatchMelting, descent.FractionalMelting} {
				p, err := descent.Melt(sys, x, descent.MeltOptions{Mode: m, Steps: 10})
				if err != nil {
					failed++
					t.Logf("seed %d, %s, %v: %v", seed, m, x, err)
					continue
				}
				done++
				if !p.Checks.Passed {
					t.Errorf("seed %d, %s, %v: %v", seed, m, x, p.Checks.Problems)
				}
			}
		}
	}
	t.Logf("%d paths followed, %d refused", done, failed)
	if failed*100 > 3*(done+failed) {
		t.Errorf("%d of %d paths were refused", failed, done+failed)
	}
}

func BenchmarkMeltBatch(b *testing.B)      { benchmarkMelt(b, descent.BatchMelting) }
func BenchmarkMeltFractional(b *testing.B) { benchmarkMelt(b, descent.FractionalMelting) }

func benchmarkMelt(b *testing.B, m descent.Mode) {
	sys := trial.Builtin(b, "di-ab-an")
	x, _ := sys.Components.Composition([3]float64{30, 35, 35}, ternary.Mass)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := descent.Melt(sys, x, descent.MeltOptions{Mode: m}); err != nil {
			b.Fatal(err)
		}
	}
}
