package descent_test

import (
	"math"
	"math/rand"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
	"thalweg/ternary/tangent"
)

func pathOf(t testing.TB, sys *gibbs.System, x ternary.Composition, m descent.Mode) *descent.Path {
	t.Helper()
	p, err := descent.Follow(sys, x, descent.Options{Mode: m})
	if err != nil {
		t.Fatalf("%s, %v: %v", m, x, err)
	}
	if !p.Checks.Passed {
		t.Errorf("%s, %v: %v", m, x, p.Checks.Problems)
	}
	return p
}

// The main job's sample: first plagioclase, then diopside; the fractional path
// ends where the cotectic is coldest, the equilibrium path at a solidus inside.
func TestHaplobasaltPaths(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	x, err := sys.Components.Composition([3]float64{30, 35, 35}, ternary.Mass)
	if err != nil {
		t.Fatal(err)
	}
	pr, err := liquidus.Compute(sys, liquidus.Options{})
	if err != nil {
		t.Fatal(err)
	}
	cold := pr.Nodes[0]
	for _, n := range pr.Nodes {
		if n.T < cold.T {
			cold = n
		}
	}
	pl, _ := sys.SolidIndex("Pl")
	fr := pathOf(t, sys, x, descent.Fractional)
	eq := pathOf(t, sys, x, descent.Equilibrium)
	for _, p := range []*descent.Path{fr, eq} {
		if p.Steps[0].Crystallising[0] != pl || len(p.Steps[0].Crystallising) != 1 {
			t.Errorf("%s: first solids %v, want plagioclase", p.Mode, p.Steps[0].Crystallising)
		}
		if p.Checks.MassBalance > 1e-12 {
			t.Errorf("%s: masses balance to %g", p.Mode, p.Checks.MassBalance)
		}
	}
	last := fr.Steps[len(fr.Steps)-1]
	if math.Abs(fr.EndT-cold.T) > 1e-3 || last.Liquid.Distance(cold.Liquid) > 1e-5 {
		t.Errorf("the fractional path ends at %.4f K, %v; the cotectic's low end is at %.4f K, %v", fr.EndT, last.Liquid, cold.T, cold.Liquid)
	}
	if eq.EndT < cold.T+30 {
		t.Errorf("the equilibrium path ends at %.2f K, at the cotectic's end", eq.EndT)
	}
	// all of the bulk's albite and anorthite are in the last plagioclase
	for _, a := range eq.Steps[len(eq.Steps)-1].Solids {
		if a.State.Phase == pl && math.Abs(a.State.Y[0]-x[1]/(x[1]+x[2])) > 1e-10 {
			t.Errorf("last plagioclase holds %.8f albite, the bulk %.8f", a.State.Y[0], x[1]/(x[1]+x[2]))
		}
	}
}

// Simple systems end at their eutectic, whatever the mode.
func TestPathsEndAtTheEutectic(t *testing.T) {
	for _, name := range []string{"di-an-fo", "lif-naf-kf"} {
		sys := trial.Builtin(t, name)
		pr, err := liquidus.Compute(sys, liquidus.Options{})
		if err != nil {
			t.Fatal(err)
		}
		var e liquidus.Node
		for _, n := range pr.Nodes {
			if n.ID == "E1" {
				e = n
			}
		}
		r := rand.New(rand.NewSource(3))
		for k := 0; k < 12; k++ {
			x, _ := ternary.Normalize([3]float64{0.1 + r.Float64(), 0.1 + r.Float64(), 0.1 + r.Float64()})
			for _, m := range []descent.Mode{descent.Fractional, descent.Equilibrium} {
				p := pathOf(t, sys, x, m)
				if math.Abs(p.EndT-e.T) > 1e-6 {
					t.Errorf("%s, %s, %v: ends at %.6f K, the eutectic lies at %.6f", name, m, x, p.EndT, e.T)
				}
				for _, a := range p.Steps[len(p.Steps)-1].Solids { // everything is solid: the bulk again
					if want := x[a.State.Phase]; math.Abs(a.Mole-want) > 1e-11 {
						t.Errorf("%s, %s: %.12f of %s at the end, the bulk holds %.12f", name, m, a.Mole, sys.Solids[a.State.Phase].Symbol, want)
					}
				}
			}
		}
	}
}

// Equilibrium rows against the cutting planes from scratch at the same T; events
// are where the assemblage changes.
func TestEquilibriumAgainstTangent(t *testing.T) {
	rows, events := 0, 0
	for seed := int64(1); seed <= 40; seed++ {
		sys := trial.System(seed, trial.Options{})
		r := rand.New(rand.NewSource(seed))
		x, _ := ternary.Normalize([3]float64{0.05 + r.Float64(), 0.05 + r.Float64(), 0.05 + r.Float64()})
		p, err := descent.Follow(sys, x, descent.Options{Mode: descent.Equilibrium, Steps: 12})
		if err != nil {
			t.Errorf("seed %d: %v", seed, err)
			continue
		}
		if !p.Checks.Passed {
			t.Errorf("seed %d: %v", seed, p.Checks.Problems)
		}
		for i := range p.Steps {
			s := &p.Steps[i]
			if s.Event == "" {
				rows++
				sameAssemblage(t, seed, sys, x, s)
			} else if s.T > 0 {
				events++
				const d = 1e-4 // K to either side: the assemblages differ
				above, err1 := tangent.Solve(sys, x, s.T+d)
				below, err2 := tangent.Solve(sys, x, s.T-d)
				if err1 != nil || err2 != nil {
					t.Errorf("seed %d, %.4f K: %v %v", seed, s.T, err1, err2)
				} else if phases(above) == phases(below) {
					t.Errorf("seed %d: %q at %.6f K, yet the assemblage is %s on both sides", seed, s.Event, s.T, phases(above))
				}
			}
		}
	}
	if rows < 200 || events < 100 {
		t.Errorf("only %d rows and %d events compared", rows, events)
	}
}

func phases(q *tangent.Equilibrium) string {
	s := ""
	for _, p := range q.Parts {
		s += string(rune('A' + 1 + p.State.Phase))
	}
	return s
}

func sameAssemblage(t *testing.T, seed int64, sys *gibbs.System, x ternary.Composition, s *descent.Step) {
	t.Helper()
	q, err := tangent.Solve(sys, x, s.T)
	if err != nil {
		t.Errorf("seed %d, %.4f K: %v", seed, s.T, err)
		return
	}
	melt := 0.0
	var got [64]float64
	for _, p := range q.Parts {
		if p.State.Phase == gibbs.Liquid {
			melt += p.Mole
		} else {
			got[p.State.Phase] += p.Mole
		}
	}
	if math.Abs(melt-s.MeltMole) > 1e-9 {
		t.Errorf("seed %d, %.4f K: melt %.10f, by cutting planes %.10f", seed, s.T, s.MeltMole, melt)
	}
	for _, a := range s.Solids {
		if math.Abs(got[a.State.Phase]-a.Mole) > 1e-9 {
			t.Errorf("seed %d, %.4f K: %s %.10f, by cutting planes %.10f", seed, s.T, sys.Solids[a.State.Phase].Symbol, a.Mole, got[a.State.Phase])
		}
	}
}

// Both modes over random systems: every path that is returned passes its checks,
// and nearly all are returned.
func TestRandomPaths(t *testing.T) {
	done, failed := 0, 0
	for seed := int64(1); seed <= 60; seed++ {
		sys := trial.System(seed, trial.Options{})
		r := rand.New(rand.NewSource(1000 + seed))
		for k := 0; k < 3; k++ {
			a := [3]float64{r.Float64(), r.Float64(), r.Float64()}
			if k == 1 {
				a[r.Intn(3)] = 0 // on an edge
			}
			x, _ := ternary.Normalize(a)
			for _, m := range []descent.Mode{descent.Fractional, descent.Equilibrium} {
				p, err := descent.Follow(sys, x, descent.Options{Mode: m, Steps: 10})
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
	if failed*100 > 2*(done+failed) {
		t.Errorf("%d of %d paths were refused", failed, done+failed)
	}
}

// The fractional path by another road: equilibrium crystallisation over small
// steps of T with the solids thrown away after each; its error falls with the
// step, and two steps extrapolated meet the path.
func TestFractionalByRemoval(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	x, _ := sys.Components.Composition([3]float64{30, 35, 35}, ternary.Mass)
	p := pathOf(t, sys, x, descent.Fractional)
	const target = 1460.0 // K, on the cotectic
	melt := func(n int) float64 {
		b, left := x, 1.0
		for k := 1; k <= n; k++ {
			T := p.LiquidT + (target-p.LiquidT)*float64(k)/float64(n)
			q, err := tangent.Solve(sys, b, T)
			if err != nil {
				t.Fatal(err)
			}
			l, ok := q.Liquid()
			if !ok {
				t.Fatal("no liquid left")
			}
			left *= l.Mole
			b = ternary.Composition(l.State.C)
		}
		return left
	}
	coarse, fine := melt(400), melt(800)
	want := 2*fine - coarse
	got := math.NaN()
	for i := 1; i < len(p.Steps); i++ {
		if a, b := p.Steps[i-1], p.Steps[i]; a.T > target && b.T <= target {
			u := (a.T - target) / (a.T - b.T)
			// melt against T is curved between rows: fit a parabola through three
			c := p.Steps[i+1]
			got = lagrange(target, a.T, b.T, c.T, a.MeltMole, b.MeltMole, c.MeltMole)
			_ = u
		}
	}
	if math.Abs(got-want) > 2e-4 || math.Abs(fine-want) > math.Abs(coarse-want) {
		t.Errorf("melt left at %.0f K: %.6f by the path, %.6f by removal (%.6f, %.6f before extrapolation)", target, got, want, coarse, fine)
	}
}

func lagrange(x, x0, x1, x2, y0, y1, y2 float64) float64 {
	return y0*(x-x1)*(x-x2)/((x0-x1)*(x0-x2)) + y1*(x-x0)*(x-x2)/((x1-x0)*(x1-x2)) + y2*(x-x0)*(x-x1)/((x2-x0)*(x2-x1))
}

// Away from a stoichiometric solid the liquid moves in a straight line, and the
// melt left follows the lever rule.
func TestStraightLine(t *testing.T) {
	sys := trial.Builtin(t, "lif-naf-kf")
	x := ternary.Composition{0.2, 0.6, 0.2}
	for _, m := range []descent.Mode{descent.Fractional, descent.Equilibrium} {
		p := pathOf(t, sys, x, m)
		seen := 0
		for _, s := range p.Steps {
			if len(s.Crystallising) != 1 || s.Crystallising[0] != 1 || s.MeltMole >= 1 {
				continue
			}
			seen++
			if math.Abs(s.Liquid[0]-s.Liquid[2]) > 1e-12 {
				t.Errorf("%s: liquid %v leaves the line from NaF through the bulk", m, s.Liquid)
			}
			if want := x[0] / s.Liquid[0]; math.Abs(s.MeltMole-want) > 1e-12 {
				t.Errorf("%s: melt %.12f, by the lever rule %.12f", m, s.MeltMole, want)
			}
		}
		if seen < 5 {
			t.Errorf("%s: only %d rows with NaF alone", m, seen)
		}
	}
}

// The heat released against the integral of T dS over the rows (trapezoid), and
// for the whole of a pure component against its heat of fusion.
func TestHeat(t *testing.T) {
	sys := trial.Builtin(t, "lif-naf-kf")
	p := pathOf(t, sys, ternary.Apex(1), descent.Equilibrium)
	m := sys.Components.MolarMasses()[1]
	// 33.346 kJ/mol: NIST-JANAF Thermochemical Tables, 4th ed. 1998, table F-035
	if got, want := p.Steps[len(p.Steps)-1].Heat, 33346/m; math.Abs(got-want) > 1e-6 {
		t.Errorf("pure NaF releases %.4f J/g, its heat of fusion is %.4f", got, want)
	}
	x := ternary.Composition{0.3, 0.4, 0.3}
	p, err := descent.Follow(sys, x, descent.Options{Mode: descent.Equilibrium, Steps: 400})
	if err != nil {
		t.Fatal(err)
	}
	entropy := func(s *descent.Step) float64 {
		_, S, _ := sys.Liquid.Gibbs(s.Liquid, s.T)
		S *= s.MeltMole
		for _, a := range s.Solids {
			_, k, _ := sys.Solids[a.State.Phase].Gibbs(a.State.Y, s.T)
			S += a.Mole * k
		}
		return S
	}
	q, mass := 0.0, 0.0
	for i, w := range sys.Components.MolarMasses() {
		mass += x[i] * w
	}
	for i := 1; i < len(p.Steps); i++ {
		a, b := &p.Steps[i-1], &p.Steps[i]
		q -= (a.T + b.T) / 2 * (entropy(b) - entropy(a)) / mass
		if math.Abs(q-b.Heat) > 2e-3*math.Max(1, b.Heat) {
			t.Fatalf("%.3f K: heat %.6f J/g, −∫T dS gives %.6f", b.T, b.Heat, q)
		}
	}
}

// Rayleigh's law: a trace in a liquid from which an ideal solid solution forms at
// nearly constant temperature and composition leaves with a constant partition
// coefficient, x = x0·F^(K−1).
func TestRayleighLimit(t *testing.T) {
	var cs ternary.Components
	liquid := gibbs.NewLiquid(cs, gibbs.Mixing{})
	g := func(T, H float64) gibbs.TFunc { return gibbs.Melting(gibbs.Fusion{T: T, H: H}, 0) }
	ss := (&gibbs.Phase{Symbol: "S", Members: []gibbs.EndMember{
		{C: ternary.Apex(0), G: g(1000, 1e6)}, // so large a heat that T hardly changes
		{C: ternary.Apex(1), G: g(900, 30000)},
	}}).Prepare()
	sys := &gibbs.System{Components: cs, Liquid: liquid, Solids: []*gibbs.Phase{ss}}
	x := ternary.Composition{1 - 1e-6, 1e-6, 0}
	p := pathOf(t, sys, x, descent.Fractional)
	K := math.Exp(-30000 / ternary.R * (1/900.0 - 1/1000.0)) // of the trace at 1000 K
	checked := 0
	for _, s := range p.Steps {
		if s.MeltMole < 0.05 || s.MeltMole > 0.95 {
			continue
		}
		checked++
		if want := 1e-6 * math.Pow(s.MeltMole, K-1); math.Abs(s.Liquid[1]-want) > 1e-4*want {
			t.Errorf("melt %.3f: trace %.8g, Rayleigh's law %.8g", s.MeltMole, s.Liquid[1], want)
		}
	}
	if checked < 20 {
		t.Errorf("only %d rows compared", checked)
	}
}

func BenchmarkPathFractional(b *testing.B)  { benchmarkPath(b, descent.Fractional) }
func BenchmarkPathEquilibrium(b *testing.B) { benchmarkPath(b, descent.Equilibrium) }

func benchmarkPath(b *testing.B, m descent.Mode) {
	sys := trial.Builtin(b, "di-ab-an")
	x, _ := sys.Components.Composition([3]float64{30, 35, 35}, ternary.Mass)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := descent.Follow(sys, x, descent.Options{Mode: m}); err != nil {
			b.Fatal(err)
		}
	}
}
