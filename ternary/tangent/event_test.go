package tangent_test

import (
	"math"
	"math/rand"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/tangent"
)

// assemblage lists the phases of an equilibrium.
func assemblage(q *tangent.Equilibrium) (out [4]int) {
	for k := range out {
		out[k] = -2
		if k < len(q.Parts) {
			out[k] = q.Parts[k].State.Phase
		}
	}
	return out
}

// Event against bisection: where the assemblage changes along T by one phase, the
// temperature at which that phase's amount vanishes.
func TestEvent(t *testing.T) {
	found := 0
	for n, s := range subjects(t) {
		rng := rand.New(rand.NewSource(int64(300 + n)))
		for i := 0; i < 12; i++ {
			b := inside(rng)
			lo, hi := s.low, s.high*1.05
			q, err := tangent.Solve(s.sys, b, hi)
			if err != nil {
				t.Error(err)
				continue
			}
			first := assemblage(q)
			for hi-lo > 1e-7 {
				mid := (lo + hi) / 2
				m, err := tangent.Solve(s.sys, b, mid)
				if err != nil {
					t.Error(err)
					break
				}
				if assemblage(m) == first {
					hi, q = mid, m
				} else {
					lo = mid
				}
			}
			below, err := tangent.Solve(s.sys, b, lo-0.05)
			if err != nil || len(below.Parts) != len(q.Parts)+1 {
				continue // a phase left, or two came at once
			}
			zero := -1
			for k, p := range below.Parts {
				known := false
				for _, r := range q.Parts {
					known = known || r.State.Phase == p.State.Phase
				}
				if !known {
					zero = k
				}
			}
			if zero < 0 {
				continue
			}
			e, err := tangent.Event(s.sys, b, below.T, below.Mu, below.Parts, zero)
			if err != nil {
				t.Errorf("%s: %v", s.name, err)
				continue
			}
			found++
			if math.Abs(e.T-hi) > 1e-5 || e.Parts[zero].Mole != 0 {
				t.Errorf("%s, %v: event at %.8f K, bisected %.8f K, amount %g", s.name, b, e.T, hi, e.Parts[zero].Mole)
			}
		}
	}
	if found < 40 {
		t.Errorf("only %d events compared", found)
	}
}

// Slopes against differences of Solve.
func TestSlopes(t *testing.T) {
	const h = 1e-3 // K
	checked := 0
	for n, s := range subjects(t) {
		rng := rand.New(rand.NewSource(int64(400 + n)))
		for i := 0; i < 40; i++ {
			b := inside(rng)
			T := s.low + (s.high-s.low)*rng.Float64()
			q, err0 := tangent.Solve(s.sys, b, T)
			up, err1 := tangent.Solve(s.sys, b, T+h)
			down, err2 := tangent.Solve(s.sys, b, T-h)
			if err0 != nil || err1 != nil || err2 != nil {
				t.Errorf("%s: %v %v %v", s.name, err0, err1, err2)
				continue
			}
			if assemblage(up) != assemblage(q) || assemblage(down) != assemblage(q) || free(q) {
				continue
			}
			dmu, dn, err := tangent.Slopes(s.sys, q)
			if err != nil {
				t.Errorf("%s: %v", s.name, err)
				continue
			}
			checked++
			for k := range dmu {
				want := (up.Mu[k] - down.Mu[k]) / (2 * h)
				if math.Abs(dmu[k]-want) > 1e-4*(1+math.Abs(want)) {
					t.Errorf("%s: dμ/dT = %.9g, differences %.9g", s.name, dmu[k], want)
				}
			}
			for k := range dn {
				want := (up.Parts[k].Mole - down.Parts[k].Mole) / (2 * h)
				if math.Abs(dn[k]-want) > 1e-7+1e-5*math.Abs(want) {
					t.Errorf("%s: dn/dT = %.9g, differences %.9g", s.name, dn[k], want)
				}
			}
		}
	}
	if checked < 100 {
		t.Errorf("only %d slopes compared", checked)
	}
}

// free reports that the plane is not determined: fewer stoichiometric phases
// than components and no solution among the parts.
func free(q *tangent.Equilibrium) bool {
	for _, p := range q.Parts {
		if p.State.Y[0] < 1 && p.State.Y[1] < 1 && p.State.Y[2] < 1 {
			return false
		}
	}
	return len(q.Parts) < 3
}

// Above lists the phases over the plane of a liquid, highest first, as the
// reference's driving forces do.
func TestAbove(t *testing.T) {
	seen := 0
	for n, s := range subjects(t) {
		rng := rand.New(rand.NewSource(int64(500 + n)))
		for i := 0; i < 60; i++ {
			x := inside(rng)
			T := s.low + (s.high-s.low)*rng.Float64()
			mu := trial.Potentials(s.sys.Liquid, x, T)
			parts := []tangent.Part{{State: gibbs.State{Phase: gibbs.Liquid, Y: x, C: x}, Mole: 1}}
			got := tangent.Above(s.sys, mu, T, parts, 1e-7)
			last := math.Inf(1)
			listed := map[int]bool{}
			for _, st := range got {
				if st.Phase == gibbs.Liquid {
					continue // another liquid
				}
				listed[st.Phase] = true
				d := -value(s.sys.Solids[st.Phase], st, mu, T)
				if d > last*(1+1e-9) {
					t.Errorf("%s: %v out of order", s.name, got)
				}
				last = d
			}
			for k, p := range s.sys.Solids {
				if d, _ := trial.Force(p, mu, T); (d > 1e-7*ternary.R*T) != listed[k] {
					t.Errorf("%s: solid %d has D = %g J/mol, listed %v", s.name, k, d, listed[k])
				}
			}
			seen += len(got)
		}
	}
	if seen < 100 {
		t.Errorf("only %d phases above", seen)
	}
}

// value is G − μ·c of a phase at a state.
func value(p *gibbs.Phase, st gibbs.State, mu [3]float64, T float64) float64 {
	g, _, _ := p.Gibbs(st.Y, T)
	for i, c := range st.C {
		if c != 0 {
			g -= mu[i] * c
		}
	}
	return g
}

// Refine from a coarse start gives what Solve gives, and drops a phase whose
// amount would be negative; Hold keeps it.
func TestRefineAndHold(t *testing.T) {
	sys := trial.Ideal([3]float64{900, 1000, 1100}, [3]float64{18000, 20000, 22000})
	b, T := ternary.Composition{0.2, 0.7, 0.1}, 930.0
	q, err := tangent.Solve(sys, b, T)
	if err != nil {
		t.Fatal(err)
	}
	start := append([]tangent.Part(nil), q.Parts...)
	mu := q.Mu
	for i := range mu {
		mu[i] += 300 * float64(i-1)
	}
	r, err := tangent.Refine(sys, b, T, mu, start)
	if err != nil {
		t.Fatal(err)
	}
	for k := range q.Parts {
		if math.Abs(r.Parts[k].Mole-q.Parts[k].Mole) > 1e-12 {
			t.Errorf("refined %+v, want %+v", r.Parts, q.Parts)
		}
	}
	// with C as well: its amount must come out negative, for C is not stable
	extra := tangent.Part{State: gibbs.State{Phase: 2, Y: [3]float64{1}, C: [3]float64{0, 0, 1}}, Mole: 0.01}
	h, err := tangent.Hold(sys, b, T, q.Mu, append(start, extra))
	if err != nil {
		t.Fatal(err)
	}
	if n := h.Parts[len(h.Parts)-1].Mole; n >= 0 {
		t.Errorf("amount of C held is %g, want it negative", n)
	}
	r, err = tangent.Refine(sys, b, T, q.Mu, append(start, extra))
	if err != nil || assemblage(r) != assemblage(q) {
		t.Errorf("refined with C: %+v, %v; want the assemblage %v", r, err, assemblage(q))
	}
}
