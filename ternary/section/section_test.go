package section_test

import (
	"fmt"
	"math"
	"math/rand"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/section"
	"thalweg/ternary/tangent"
)

func compute(t testing.TB, sys *gibbs.System, T float64) *section.Section {
	t.Helper()
	s, err := section.Compute(sys, T, section.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if !s.Checks.Passed {
		t.Errorf("%.1f K: %v", T, s.Checks.Problems)
	}
	return s
}

// The built-in systems at many temperatures: the regions tile the triangle, and
// bulk compositions drawn at random lie in the region of their own assemblage.
func TestRegionsAgainstEquilibria(t *testing.T) {
	r := rand.New(rand.NewSource(1))
	tested := 0
	for _, name := range []string{"di-ab-an", "di-an-fo", "lif-naf-kf", "fo-an-silica", "ab-or-silica"} {
		sys := trial.Builtin(t, name)
		for k := 0; k < 8; k++ {
			T := 730 + 1100*r.Float64()
			s := compute(t, sys, T)
			for n := 0; n < 60; n++ {
				x, _ := ternary.Normalize([3]float64{r.Float64(), r.Float64(), r.Float64()})
				q, err := tangent.Solve(sys, x, T)
				if err != nil {
					t.Fatal(err)
				}
				in, near := regionOf(s, x)
				if near || in == nil {
					continue // as near to a boundary as its chords may stray
				}
				tested++
				if got, want := phases(in.Phases), phases(partsOf(q)); got != want {
					t.Errorf("%s, %.1f K, %v: in the region of %s, the equilibrium is %s", name, T, x, got, want)
				}
			}
		}
	}
	if tested < 1000 {
		t.Errorf("only %d bulk compositions compared", tested)
	}
}

func partsOf(q *tangent.Equilibrium) (p []int) {
	for _, x := range q.Parts {
		p = append(p, x.State.Phase)
	}
	return p
}

func phases(p []int) string {
	count := map[int]int{}
	for _, i := range p {
		count[i]++
	}
	return fmt.Sprint(count)
}

// regionOf finds the region that holds x; near says that a boundary is within
// 3e-3 of a side.
func regionOf(s *section.Section, x ternary.Composition) (in *section.Region, near bool) {
	for i := range s.Regions {
		r := &s.Regions[i]
		if r.Contains(x) {
			in = r
		}
		for _, ring := range append([][]ternary.Composition{r.Outline}, r.Holes...) {
			for k := range ring {
				if distance(x, ring[k], ring[(k+1)%len(ring)]) < 3e-3 {
					near = true
				}
			}
		}
	}
	return in, near
}

func distance(x, a, b ternary.Composition) float64 {
	px, py := x.XY()
	ax, ay := a.XY()
	bx, by := b.XY()
	dx, dy := bx-ax, by-ay
	u := 0.0
	if l := dx*dx + dy*dy; l > 0 {
		u = math.Max(0, math.Min(1, ((px-ax)*dx+(py-ay)*dy)/l))
	}
	return math.Hypot(px-ax-u*dx, py-ay-u*dy)
}

// Random systems, half of them with gaps: at least 97 % of the sections pass their
// own examination, and none panics.
func TestRandomSections(t *testing.T) {
	passed, all := 0, 0
	for seed := int64(1); seed <= 60; seed++ {
		sys := trial.System(seed, trial.Options{Unmixing: seed%2 == 0})
		for _, T := range []float64{800, 1300} {
			all++
			s, err := section.Compute(sys, T, section.Options{})
			if err != nil {
				t.Logf("seed %d, %g K: %v", seed, T, err)
				continue
			}
			if s.Checks.Passed {
				passed++
			} else {
				t.Logf("seed %d, %g K: %v", seed, T, s.Checks.Problems)
			}
		}
	}
	t.Logf("%d of %d sections passed", passed, all)
	if passed*100 < 97*all {
		t.Errorf("%d of %d sections passed, want 97 %%", passed, all)
	}
}

// Every tie line's ends lie on the plane of the equilibrium of its middle, and the
// lever rule gives the middle equal amounts of its ends.
func TestTieLines(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	s := compute(t, sys, 1480)
	tested := 0
	for i := range s.Regions {
		for _, l := range s.Regions[i].TieLines {
			a, b := l.A.Composition(), l.B.Composition()
			mid := a.Lerp(b, 0.5)
			if mid[0] <= 0 || mid[1] <= 0 || mid[2] <= 0 {
				continue
			}
			q, err := tangent.Solve(sys, mid, s.T)
			if err != nil {
				t.Errorf("the middle of a tie line %v: %v", mid, err)
				continue
			}
			tested++
			for _, p := range q.Parts {
				if p.Mole < 1e-9 && len(q.Parts) == 3 {
					continue // the tie line is a side of a three-phase triangle
				}
				x := p.State.Composition()
				if d := math.Min(x.Distance(a), x.Distance(b)); d > 1e-9 {
					t.Errorf("tie line %v–%v: the equilibrium of its middle has a phase %g away", a, b, d)
				}
				// formula units of one mole of components here
				if math.Abs(p.Mole-0.5) > 1e-8 {
					t.Errorf("the middle of a tie line has %.10f of a phase, by the lever rule 0.5", p.Mole)
				}
			}
		}
	}
	if tested < 10 {
		t.Errorf("only %d tie lines tested", tested)
	}
}

// The closed form of an ideal loop: at T, liquid and solid of two components that
// both mix ideally have x_i/y_i = exp(−ΔH_i/R·(1/T − 1/T_i)).
func TestIdealLoop(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	const T = 1600.0
	s := compute(t, sys, T)
	ab := math.Exp(-62800 / ternary.R * (1/T - 1/(1118+ternary.ZeroCelsius)))
	an := math.Exp(-135500 / ternary.R * (1/T - 1/(1553+ternary.ZeroCelsius)))
	solid := (1 - ab) / (an - ab) // anorthite
	liquid := an * solid
	found := false
	for i := range s.Regions {
		for _, l := range s.Regions[i].TieLines {
			a, b := l.A.Composition(), l.B.Composition()
			if a[0] == 0 && b[0] == 0 && a[1] > 0 && b[1] > 0 {
				found = true
				if math.Abs(a[2]-liquid) > 1e-10 || math.Abs(b[2]-solid) > 1e-10 {
					t.Errorf("tie line on albite–anorthite from %.12f to %.12f anorthite, closed form %.12f to %.12f", a[2], b[2], liquid, solid)
				}
			}
		}
	}
	if !found {
		t.Error("no tie line on the edge")
	}
}

// A regular liquid with one gap: the ends of the gap on the edge meet the closed
// form, and it closes at a critical point.
func TestLiquidGap(t *testing.T) {
	const W = 20000.0
	const T = 1000.0 // critical temperature W/2R = 1202.7 K
	liquid := gibbs.NewLiquid(ternary.Components{}, gibbs.Mixing{Pairs: []gibbs.Pair{{I: 0, J: 1, L: []gibbs.TFunc{{A: W}}}}})
	sys := &gibbs.System{Liquid: liquid, Solids: []*gibbs.Phase{(&gibbs.Phase{Symbol: "A", Members: []gibbs.EndMember{
		{C: ternary.Apex(0), G: gibbs.Melting(gibbs.Fusion{T: 300, H: 5000}, 0)}}}).Prepare()}}
	s := compute(t, sys, T)
	if len(s.Critical) != 1 {
		t.Fatalf("%d critical points, want 1", len(s.Critical))
	}
	c := s.Critical[0]
	if math.Abs(c[0]-c[1]) > 1e-6 {
		t.Errorf("the critical point %v is not on the symmetry line", c)
	}
	if want := ternary.R * T / W; math.Abs(c[0]-want) > 1e-5 { // ∂²G/∂(x0−x1)² = 0: RT/x0 = W
		t.Errorf("critical point at x0 = %.7f, closed form RT/W = %.7f", c[0], want)
	}
	ok := false
	for i := range s.Regions {
		for _, l := range s.Regions[i].TieLines {
			a, b := l.A.Composition(), l.B.Composition()
			if a[2] == 0 && b[2] == 0 {
				y := math.Min(a[0], b[0])
				if miss := W*(1-2*y) - ternary.R*T*math.Log((1-y)/y); math.Abs(miss) > 1e-6 {
					t.Errorf("gap on the edge misses the closed form by %g J/mol", miss)
				}
				ok = true
			}
		}
	}
	if !ok {
		t.Error("no tie line on the edge")
	}
}

func TestRefusals(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	for _, T := range []float64{0, -5, math.NaN()} {
		if _, err := section.Compute(sys, T, section.Options{}); err == nil {
			t.Errorf("no error at %g K", T)
		}
	}
}

func ExampleCompute() {
	f, _ := systems.Builtin("lif-naf-kf")
	sys, _ := f.AtReference(nil)
	s, err := section.Compute(sys, 600+ternary.ZeroCelsius, section.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	n := s.Checks.OneTwoThree
	fmt.Printf("%d one-phase, %d two-phase, %d three-phase regions\n", n[0], n[1], n[2])
	fmt.Println(s.Checks.Passed)
	// Output:
	// 1 one-phase, 5 two-phase, 2 three-phase regions
	// true
}

func BenchmarkSection(b *testing.B) {
	sys := trial.Builtin(b, "di-ab-an")
	for b.Loop() {
		if _, err := section.Compute(sys, 1480, section.Options{}); err != nil {
			b.Fatal(err)
		}
	}
}
