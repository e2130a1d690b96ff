package liquidus_test

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

// monotectic solves for the two liquids of the edge A–B of the case "two liquids"
// and for T: a regular solution separates into x and 1 − x of A with
// ln(x/(1 − x)) = (L/RT)(2x − 1), and A is saturated,
// RT ln x + L(1 − x)² = −ΔH(1 − T/Tm). Bisection in T with x found by bisection.
func monotectic() (T, rich float64) {
	const L, h, tm = trial.TwoLiquidsL, 30000.0, 1500.0
	liquid := func(T float64) float64 { // the liquid rich in A
		lo, hi := 0.5+1e-9, 1-1e-12
		for hi-lo > 1e-15 {
			x := (lo + hi) / 2
			if math.Log(x/(1-x)) < L/(ternary.R*T)*(2*x-1) {
				lo = x
			} else {
				hi = x
			}
		}
		return lo
	}
	lo, hi := 700.0, tm
	for hi-lo > 1e-11 {
		T = (lo + hi) / 2
		x := liquid(T)
		if ternary.R*T*math.Log(x)+L*(1-x)*(1-x) > -h*(1-T/tm) {
			lo = T // A has frozen
		} else {
			hi = T
		}
	}
	return T, liquid(T)
}

// Two monotectic points on the edge, as the closed form says, joined to each other.
func TestMonotectic(t *testing.T) {
	p := whole(t, trial.CaseNamed("two liquids"), liquidus.Options{})
	T, rich := monotectic()
	seen := 0
	for i := range p.Nodes {
		n := &p.Nodes[i]
		if n.Kind != liquidus.Monotectic || n.Edge != 2 {
			continue
		}
		seen++
		near := math.Min(math.Abs(n.Liquid[0]-rich), math.Abs(n.Liquid[0]-(1-rich)))
		if math.Abs(n.T-T) > 1e-6 || near > 1e-8 {
			t.Errorf("%s: %.8f K at %.9f, closed form %.8f K at %.9f and %.9f", n.ID, n.T, n.Liquid[0], T, rich, 1-rich)
		}
		if n.Conjugate < 0 || p.Nodes[n.Conjugate].Conjugate != i {
			t.Errorf("%s: conjugate %d", n.ID, n.Conjugate)
		}
	}
	if seen != 2 {
		t.Errorf("%d monotectic points on the edge, want 2", seen)
	}
}

// splitSubjects are systems with a two-liquid field and a whole projection.
func splitSubjects(t *testing.T) []subject {
	t.Helper()
	out := []subject{{"two liquids", trial.CaseNamed("two liquids")}}
	for seed := int64(1); len(out) < 6 && seed < 60; seed++ {
		sys := trial.System(seed, trial.Options{Unmixing: true})
		if r := try(seed, sys, liquidus.Options{}); r.split && len(r.problems) == 0 {
			out = append(out, subject{sys.Name, sys})
		}
	}
	if len(out) < 6 {
		t.Errorf("only %d whole systems with two liquids", len(out))
	}
	return out
}

// Conjugate liquids have the same potentials and the same solid, at nodes and all
// along the monotectic curves.
func TestConjugateLiquids(t *testing.T) {
	points := 0
	for _, s := range splitSubjects(t) {
		p := whole(t, s.sys, liquidus.Options{})
		for _, c := range p.Curves {
			for _, q := range c.Points {
				if q.Kind != liquidus.TwoLiquids {
					continue
				}
				for _, st := range q.Solids {
					if st.Phase == gibbs.Liquid && ternary.Composition(st.Y).Distance(q.Liquid) > 1e-4 {
						points++
						samePotentials(t, s, q.Liquid, ternary.Composition(st.Y), q.T)
					}
				}
			}
		}
		for i := range p.Nodes {
			n := &p.Nodes[i]
			if n.Kind != liquidus.Monotectic {
				continue
			}
			if n.Conjugate < 0 {
				t.Errorf("%s %s has no conjugate", s.name, n.ID)
				continue
			}
			o := &p.Nodes[n.Conjugate]
			if math.Abs(o.T-n.T) > 1e-9*n.T {
				t.Errorf("%s: %s at %v K, %s at %v K", s.name, n.ID, n.T, o.ID, o.T)
			}
			samePotentials(t, s, n.Liquid, o.Liquid, n.T)
		}
	}
	if points < 30 {
		t.Errorf("only %d pairs of liquids compared", points)
	}
}

func samePotentials(t *testing.T, s subject, x, y ternary.Composition, T float64) {
	t.Helper()
	// near a critical point the driving force is flat: what is solved to 1e-13
	// determines the second liquid, and so its potentials, to the root of that
	tol := 1e-8 * ternary.R * T / math.Min(1, x.Distance(y))
	a, b := trial.Potentials(s.sys.Liquid, x, T), trial.Potentials(s.sys.Liquid, y, T)
	for i := range a {
		if x[i] > 0 && y[i] > 0 && math.Abs(a[i]-b[i]) > tol {
			t.Errorf("%s: liquids %v and %v at %.2f K differ by %.1e RT in component %d", s.name, x, y, T, (a[i]-b[i])/(ternary.R*T), i)
		}
	}
}

// The two-liquid fields hold exactly the liquids that separate before a solid
// comes in: at T_L(x), taken without regard to separation, another liquid lies
// above the plane of x.
func TestTwoLiquidFields(t *testing.T) {
	for _, s := range splitSubjects(t) {
		p := whole(t, s.sys, liquidus.Options{})
		surf := surface(t, s.sys)
		inside := 0
		for _, x := range lattice(40) {
			if x[0]*x[1]*x[2] == 0 {
				x = x.Lerp(ternary.Composition{1. / 3, 1. / 3, 1. / 3}, 1e-3)
			}
			T, _ := surf.Liquidus(x)
			mu := trial.Potentials(s.sys.Liquid, x, T)
			d, _ := trial.Force(s.sys.Liquid, mu, T)
			want := d > 1e-7*ternary.R*T
			got, near := false, math.Inf(1)
			for i := range p.Fields {
				if f := &p.Fields[i]; f.TwoLiquids {
					got = got || holds(f, x)
					near = math.Min(near, toOutline(f, x))
				}
			}
			if got {
				inside++
			}
			if got != want && near > 2*outlineNear {
				t.Errorf("%s, %v: separates %v (D = %.1e RT), in a two-liquid field %v, %.1e from its outline", s.name, x, want, d/(ternary.R*T), got, near)
			}
		}
		if inside == 0 {
			t.Errorf("%s: no liquid of the lattice in a two-liquid field", s.name)
		}
	}
}
