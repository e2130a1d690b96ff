package tangent_test

import (
	"errors"
	"math"
	"math/rand"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/tangent"
)

const (
	balanceTol = 1e-12 // mol per mole of bulk
	planeTol   = 1e-10 // RT, of the parts and of the absent phases
	forceTol   = 1e-8  // RT, of the reference's driving forces
)

// bulk draws a composition: two in ten on an edge, one in ten an apex.
func bulk(rng *rand.Rand) ternary.Composition {
	b := inside(rng)
	switch k := rng.Intn(10); {
	case k == 0:
		return ternary.Apex(rng.Intn(3))
	case k <= 2:
		b[rng.Intn(3)] = 0
		b, _ = ternary.Normalize(b)
	}
	return b
}

// Every assemblage balances, lies on its plane, leaves nothing above it, and obeys the phase
// rule, whether the bulk lies inside, on an edge or at an apex. Residual
// and Margin are worked out again from the reference's driving forces.
func TestInnerChecks(t *testing.T) {
	edges, apexes := 0, 0
	for n, s := range subjects(t) {
		rng := rand.New(rand.NewSource(int64(100 + n)))
		for i := 0; i < 300; i++ {
			b := bulk(rng)
			T := s.low + (s.high-s.low)*rng.Float64()
			q, err := tangent.Solve(s.sys, b, T)
			if err != nil {
				t.Errorf("%s: %v", s.name, err)
				continue
			}
			live := 0
			for _, v := range b {
				if v > 0 {
					live++
				}
			}
			edges += btoi(live == 2)
			apexes += btoi(live == 1)
			checkAssemblage(t, s, q, live)
		}
	}
	if edges < 100 || apexes < 100 {
		t.Errorf("only %d bulks on edges and %d at apexes", edges, apexes)
	}
}

func btoi(b bool) int {
	if b {
		return 1
	}
	return 0
}

// checkAssemblage asserts all that must hold of one equilibrium.
func checkAssemblage(t *testing.T, s subject, q *tangent.Equilibrium, live int) {
	t.Helper()
	rt := ternary.R * q.T
	if len(q.Parts) == 0 || len(q.Parts) > live {
		t.Errorf("%s: %d phases of %d components at %v, %.2f K", s.name, len(q.Parts), live, q.Bulk, q.T)
	}
	var sum [3]float64
	present := map[int][][3]float64{}
	for k, part := range q.Parts {
		if part.Mole < 0 {
			t.Errorf("%s: amount %g of phase %d", s.name, part.Mole, part.State.Phase)
		}
		if k > 0 && q.Parts[k-1].State.Phase > part.State.Phase {
			t.Errorf("%s: parts out of order: %+v", s.name, q.Parts)
		}
		if y := part.State.Y; math.Abs(y[0]+y[1]+y[2]-1) > balanceTol {
			t.Errorf("%s: fractions %v", s.name, y)
		}
		for i, c := range part.State.C {
			sum[i] += part.Mole * c
		}
		present[part.State.Phase] = append(present[part.State.Phase], part.State.Y)
	}
	for i := range sum {
		if math.Abs(sum[i]-q.Bulk[i]) > balanceTol {
			t.Errorf("%s: Σ n·c = %v, bulk %v", s.name, sum, q.Bulk)
			break
		}
	}
	if q.Residual > planeTol || q.Margin > planeTol {
		t.Errorf("%s: residual %.1e, margin %.1e", s.name, q.Residual, q.Margin)
	}
	for ph := gibbs.Liquid; ph < len(s.sys.Solids); ph++ {
		p := s.sys.Liquid
		if ph != gibbs.Liquid {
			p = s.sys.Solids[ph]
		}
		d, y := trial.Force(p, q.Mu, q.T)
		if d > forceTol*rt {
			t.Errorf("%s: phase %d lies %.1e RT above the plane at %v, %.2f K", s.name, ph, d/rt, q.Bulk, q.T)
		}
		if ys := present[ph]; ys != nil && math.Abs(d) > forceTol*rt {
			t.Errorf("%s: phase %d is a part with D = %.1e RT at y = %v, %v", s.name, ph, d/rt, y, ys)
		}
	}
}

// A solid outside the triangle needs a component that the bulk lacks: on the
// edge without it the assemblage may hold the solid and a liquid inside.
func TestOutsideSolid(t *testing.T) {
	sys := trial.CaseNamed("outside")
	s := subject{name: "outside", sys: sys}
	rng := rand.New(rand.NewSource(7))
	with := 0
	for i := 0; i < 300; i++ {
		b := bulk(rng)
		q, err := tangent.Solve(sys, b, 1100+600*rng.Float64())
		if err != nil {
			t.Error(err)
			continue
		}
		checkAssemblage(t, s, q, 3)
		for _, p := range q.Parts {
			if p.State.Phase == 3 && b[1] == 0 {
				with++
			}
		}
	}
	if with == 0 {
		t.Error("no bulk on the edges A–C, A holds the solid")
	}
}

// twin is the part of a renamed system's answer that has the phase and the contents
// of a: two forms of one phase may stand in either order.
func twin(a tangent.Part, parts []tangent.Part, perm [3]int) (best tangent.Part) {
	near := math.Inf(1)
	for _, c := range parts {
		d := 0.0
		for i, k := range perm {
			d += math.Abs(c.State.C[i] - a.State.C[k])
		}
		if c.State.Phase == a.State.Phase && d < near {
			best, near = c, d
		}
	}
	return best
}

// Renaming the components renames the answer and changes nothing else.
func TestPermutingComponents(t *testing.T) {
	perm := [3]int{2, 0, 1}
	for n, s := range subjects(t) {
		other := trial.Permute(s.sys, perm)
		rng := rand.New(rand.NewSource(int64(200 + n)))
		for i := 0; i < 200; i++ {
			b := bulk(rng)
			T := s.low + (s.high-s.low)*rng.Float64()
			p, err1 := tangent.Solve(s.sys, b, T)
			q, err2 := tangent.Solve(other, ternary.Composition{b[perm[0]], b[perm[1]], b[perm[2]]}, T)
			if err1 != nil || err2 != nil {
				t.Errorf("%s: %v, %v", s.name, err1, err2)
				continue
			}
			if len(p.Parts) != len(q.Parts) {
				t.Errorf("%s: %+v and %+v", s.name, p.Parts, q.Parts)
				continue
			}
			for k := range p.Parts {
				a := p.Parts[k]
				c := twin(a, q.Parts, perm)
				// near a boundary an amount answers to rounding 1/σ times enlarged
				tol := 1e-9 / smallestSingular(p)
				if a.State.Phase != c.State.Phase || c.State.C == [3]float64{} || math.Abs(a.Mole-c.Mole) > tol {
					t.Errorf("%s, %v, %.2f K: %+v and %+v", s.name, b, T, a, c)
				}
			}
		}
	}
}

// A bulk of a pure component freezes at its melting point and not before.
func TestPureComponents(t *testing.T) {
	tm, dH := [3]float64{900, 1000, 1100}, [3]float64{18000, 20000, 22000}
	sys := trial.Ideal(tm, dH)
	for k := range tm {
		for _, d := range []float64{-1e-6, 1e-6} {
			q, err := tangent.Solve(sys, ternary.Apex(k), tm[k]+d)
			if err != nil {
				t.Fatal(err)
			}
			want := gibbs.Liquid
			if d < 0 {
				want = k
			}
			if len(q.Parts) != 1 || q.Parts[0].State.Phase != want || math.Abs(q.Parts[0].Mole-1) > balanceTol {
				t.Errorf("component %d at Tm %+g K: %+v", k, d, q.Parts)
			}
			for i := range q.Mu {
				if (i != k) != math.IsInf(q.Mu[i], -1) {
					t.Errorf("component %d: μ = %v", k, q.Mu)
				}
			}
		}
	}
}

// The lever rule on an edge of an ideal system, in closed form.
func TestLeverRule(t *testing.T) {
	tm, dH := [3]float64{900, 1000, 1100}, [3]float64{18000, 20000, 22000}
	sys := trial.Ideal(tm, dH)
	b, T := ternary.Composition{0.2, 0.8, 0}, 900.0
	x := math.Exp(-dH[1] / ternary.R * (1/T - 1/tm[1])) // liquid saturated with B
	want := b[0] / (1 - x)                              // A is all in the liquid
	q, err := tangent.Solve(sys, b, T)
	if err != nil {
		t.Fatal(err)
	}
	l, ok := q.Liquid()
	if !ok || len(q.Parts) != 2 || math.Abs(l.Mole-want) > 1e-12 || math.Abs(l.State.Y[1]-x) > 1e-12 {
		t.Errorf("%+v, want %.6f mol of liquid with x = %.6f", q.Parts, want, x)
	}
}

// A temperature at which a bulk cannot be described is an error of its own type.
func TestNotFound(t *testing.T) {
	sys := trial.Ideal([3]float64{900, 1000, 1100}, [3]float64{18000, 20000, 22000})
	_, err := tangent.Solve(sys, ternary.Composition{0.3, 0.3, 0.4}, math.NaN())
	var nf *tangent.NotFoundError
	if !errors.As(err, &nf) {
		t.Errorf("error %v (%T), want a *NotFoundError", err, err)
	}
}
