package join_test

import (
	"flag"
	"fmt"
	"math"
	"math/rand"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/join"
	"thalweg/ternary/liquidus"
)

var long = flag.Bool("long", false, "run the long variants of the tests")

func compute(t testing.TB, sys *gibbs.System, from, to ternary.Composition, o join.Options) *join.Diagram {
	t.Helper()
	d, err := join.Compute(sys, from, to, o)
	if err != nil {
		t.Fatalf("%s, %v to %v: %v", sys.Name, from, to, err)
	}
	if !d.Checks.Passed {
		t.Errorf("%s, %v to %v: %v", sys.Name, from, to, d.Checks.Problems)
	}
	return d
}

// Every edge of every built-in system, and lines through its inside, pass their
// checks; the horizontals of an edge are the invariant points of the projection.
func TestBuiltinJoins(t *testing.T) {
	for _, name := range systems.Names() {
		sys := trial.Builtin(t, name)
		pr, err := liquidus.Compute(sys, liquidus.Options{})
		if err != nil {
			t.Fatal(err)
		}
		for k := 0; k < 3; k++ {
			from, to := ternary.Apex(k), ternary.Apex((k+1)%3)
			d := compute(t, sys, from, to, join.Options{})
			for _, n := range pr.Nodes {
				if n.Edge != 3-k-(k+1)%3 || len(n.Solids) < 2 {
					continue
				}
				x, _ := d.Along(n.Liquid)
				best := math.Inf(1)
				for _, l := range d.Levels {
					if x >= l.From-1e-9 && x <= l.To+1e-9 {
						best = math.Min(best, math.Abs(l.T-n.T))
					}
				}
				meets := math.Inf(1)
				for _, p := range d.Nodes {
					if math.Abs(p.T-n.T) < 0.01 {
						meets = math.Min(meets, math.Abs(p.X-x))
					}
				}
				if best > 1e-6 || meets > 1e-6 {
					t.Errorf("%s: %s at %.7f K, X = %.8f: the nearest horizontal is %.1e K off, the nearest node %.1e", name, n.ID, n.T, x, best, meets)
				}
			}
		}
		for _, j := range [][2]ternary.Composition{{{0.5, 0.5, 0}, {0, 0, 1}}, {{0.5, 0.2, 0.3}, {0.1, 0.4, 0.5}}, {{0.1, 0.1, 0.8}, {0.7, 0.2, 0.1}}} {
			compute(t, sys, j[0], j[1], join.Options{})
		}
	}
}

// Random systems, three edges and a line through the inside each: nearly all are
// complete; the rest say why.
func TestRandomJoins(t *testing.T) {
	seeds := int64(7)
	if *long {
		seeds = 60
	}
	complete, n := 0, 0
	for _, o := range []trial.Options{{}, {Unmixing: true}, {Solvus: true}} {
		for seed := int64(1); seed <= seeds; seed++ {
			sys := trial.System(seed, o)
			r := rand.New(rand.NewSource(seed))
			for k := 0; k < 4; k++ {
				a, b := ternary.Apex(k%3), ternary.Apex((k+1)%3)
				if k == 3 {
					a, _ = ternary.Normalize([3]float64{r.Float64(), r.Float64(), r.Float64()})
					b, _ = ternary.Normalize([3]float64{r.Float64(), r.Float64(), r.Float64()})
				}
				d, err := join.Compute(sys, a, b, join.Options{Count: 40})
				n++
				switch {
				case err != nil:
					t.Logf("seed %d, %+v: %v", seed, o, err)
				case !d.Checks.Passed:
					t.Logf("seed %d, %+v: %v", seed, o, d.Checks.Problems)
				default:
					complete++
				}
			}
		}
	}
	if complete*100 < 97*n {
		t.Errorf("%d of %d joins complete, want 97 %%", complete, n)
	}
}

// loop is a system with an ideal solid solution of A and B in an ideal liquid.
func loop(W float64) *gibbs.System {
	var cs ternary.Components
	liquid := gibbs.NewLiquid(cs, gibbs.Mixing{})
	m := gibbs.Mixing{}
	if W != 0 {
		m.Pairs = []gibbs.Pair{{I: 0, J: 1, L: []gibbs.TFunc{{A: W}}}}
	}
	ss := (&gibbs.Phase{Symbol: "S", Members: []gibbs.EndMember{
		{Symbol: "a", C: ternary.Apex(0), G: gibbs.Melting(gibbs.Fusion{T: 1500, H: 40000}, 0)},
		{Symbol: "b", C: ternary.Apex(1), G: gibbs.Melting(gibbs.Fusion{T: 1200, H: 30000}, 0)},
	}, Mixing: m}).Prepare()
	c := (&gibbs.Phase{Symbol: "C", Members: []gibbs.EndMember{{C: ternary.Apex(2), G: gibbs.Melting(gibbs.Fusion{T: 1000, H: 20000}, 0)}}}).Prepare()
	return &gibbs.System{Name: "loop", Components: cs, Liquid: liquid, Solids: []*gibbs.Phase{ss, c}}
}

// The loop of an ideal solution in closed form: with k_i = exp(ΔG_i/RT) the ratio
// of solid to liquid fraction, x_L(a) = (1 − k_b)/(k_a − k_b), x_S = k_a·x_L.
func TestIdealLoop(t *testing.T) {
	d := compute(t, loop(0), ternary.Apex(0), ternary.Apex(1), join.Options{Count: 50})
	n := 0
	for _, l := range d.Lines {
		for _, p := range l.Points {
			if p.X < 0.01 || p.X > 0.99 {
				continue
			}
			k := func(T, H float64) float64 { return math.Exp(H / ternary.R * (1/p.T - 1/T)) }
			ka, kb := k(1500, 40000), k(1200, 30000)
			want := (1 - kb) / (ka - kb) // of the liquid
			if len(l.Above) == 2 {       // below this line there is only solid
				want *= ka
			}
			n++
			if math.Abs(1-p.X-want) > 1e-9 {
				t.Errorf("line %v/%v at %.4f K: %.12f of A, in closed form %.12f", l.Above, l.Below, p.T, 1-p.X, want)
			}
		}
	}
	if n < 90 {
		t.Errorf("only %d points compared", n)
	}
}

// A symmetric solvus in closed form: W(1 − 2y) = RT ln((1 − y)/y), up to its
// critical temperature W/2R.
func TestSymmetricSolvus(t *testing.T) {
	const W = 15000.0
	critical := W / (2 * ternary.R)
	d := compute(t, loop(W), ternary.Apex(0), ternary.Apex(1), join.Options{TMin: 500, TMax: 1600, Count: 50})
	n, top := 0, 0.0
	for _, l := range d.Lines {
		if len(l.Above) != 1 || len(l.Below) != 2 || l.Above[0] != 0 || l.Below[0] != 0 || l.Below[1] != 0 {
			continue
		}
		for _, p := range l.Points {
			top = math.Max(top, p.T)
			if p.T < 510 || math.Abs(p.X-0.5) < 0.01 {
				continue
			}
			tol := 1e-6
			if math.Abs(p.X-0.5) < 0.05 {
				tol = 1e-4 // the two forms are about to become one: bracketed, not solved for
			}
			want := W * (1 - 2*p.X) / (ternary.R * math.Log((1-p.X)/p.X))
			n++
			if math.Abs(p.T-want) > tol {
				t.Errorf("X = %.4f: %.8f K, in closed form %.8f", p.X, p.T, want)
			}
		}
	}
	if n < 20 || math.Abs(top-critical) > 0.1 {
		t.Errorf("%d points; the top lies at %.4f K, W/2R = %.4f", n, top, critical)
	}
}

// Lever rule by hand, and tie lines that end on the curves: at T the liquid's
// composition is where the liquidus is at T.
func TestReading(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	d := compute(t, sys, ternary.Apex(1), ternary.Apex(2), join.Options{})
	const X, T = 0.5, 1700.0
	q, err := d.Read(X, T)
	if err != nil || len(q.Parts) != 2 {
		t.Fatalf("%v, %d phases", err, len(q.Parts))
	}
	xl, off := d.Along(q.Parts[0].State.Composition())
	xs, off2 := d.Along(q.Parts[1].State.Composition())
	if off > 1e-12 || off2 > 1e-12 {
		t.Errorf("the tie line leaves the edge by %g and %g", off, off2)
	}
	if byHand := (xs - X) / (xs - xl); math.Abs(q.Parts[0].Mole-byHand) > 1e-12 {
		t.Errorf("%.14f of liquid, by the lever rule %.14f", q.Parts[0].Mole, byHand)
	}
	// the diagram along the edge once more, asked at these compositions alone
	for i, x := range []float64{xl, xs} {
		surf, _ := liquidus.NewSurface(sys)
		if i == 0 {
			if at, _ := surf.Liquidus(d.At(x)); math.Abs(at-T) > 1e-9*T {
				t.Errorf("the tie line ends %g K off the liquidus", at-T)
			}
		}
		f1, ok1 := d.FieldAt(x-1e-3, T)
		f2, ok2 := d.FieldAt(x+1e-3, T)
		if !ok1 || !ok2 || fmt.Sprint(f1) == fmt.Sprint(f2) {
			t.Errorf("no line passes X = %.4f at %g K", x, T)
		}
	}
}

func TestRefusals(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	for _, j := range [][2]ternary.Composition{{{1, 0, 0}, {1, 0, 0}}, {{1.2, -0.2, 0}, {0, 0, 1}}} {
		if _, err := join.Compute(sys, j[0], j[1], join.Options{}); err == nil {
			t.Errorf("no error for %v", j)
		}
	}
	if _, err := join.Compute(sys, ternary.Apex(0), ternary.Apex(1), join.Options{TMin: 1500, TMax: 1400}); err == nil {
		t.Error("no error for an empty range of temperature")
	}
}

func ExampleCompute() {
	f, _ := systems.Builtin("di-ab-an")
	sys, _ := f.AtReference(nil)
	d, _ := join.Compute(sys, ternary.Apex(0), ternary.Apex(2), join.Options{})
	for _, l := range d.Levels {
		fmt.Printf("%.0f °C: %d phases react\n", l.T-ternary.ZeroCelsius, len(l.States))
	}
	fmt.Println(len(d.Fields), "fields")
	// Output:
	// 1274 °C: 3 phases react
	// 4 fields
}

func BenchmarkJoin(b *testing.B) {
	sys := trial.Builtin(b, "di-ab-an")
	for _, j := range []struct {
		name     string
		from, to ternary.Composition
	}{{"edge", ternary.Apex(0), ternary.Apex(2)}, {"inside", ternary.Composition{0.5, 0.2, 0.3}, ternary.Composition{0.1, 0.4, 0.5}}} {
		b.Run(j.name, func(b *testing.B) {
			for b.Loop() {
				if _, err := join.Compute(sys, j.from, j.to, join.Options{Count: 200}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
