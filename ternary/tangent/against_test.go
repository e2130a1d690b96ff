package tangent_test

import (
	"math"
	"math/rand"
	"testing"

	"gonum.org/v1/gonum/mat"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/tangent"
)

// bounds are what the programme guarantees about an exact assemblage.
type bounds struct {
	energy float64         // E, J per mole of bulk
	amount float64         // largest error of a present phase's amount, mol
	absent map[int]float64 // largest amount of an absent phase, mol
}

// bound works out E, and from it the bounds of the amounts.
func (p *programme) bound(q *tangent.Equilibrium) bounds {
	b := bounds{absent: map[int]float64{}}
	for _, part := range q.Parts {
		b.energy += part.Mole * math.Max(0, p.interpolated(part.State.Phase, part.State.Y))
	}
	// rounding of the programme's own sums, a few 1e-12 RT
	b.energy += 1e-10 * ternary.R * p.T
	missing := 0.0
	spread := make([]float64, len(q.Parts))
	big := make([]float64, len(q.Parts))
	for _, col := range p.cols {
		s := col.g
		for i := range col.c {
			if col.c[i] != 0 {
				s -= q.Mu[i] * col.c[i]
			}
		}
		k := nearest(q, col)
		if k < 0 {
			if n := b.energy / math.Max(s, 1e-300); n > b.absent[col.phase] {
				b.absent[col.phase] = n
			}
			continue
		}
		d := distance(col.c, q.Parts[k].State.C)
		if d > 1e-9 {
			spread[k] = math.Max(spread[k], d*d/math.Max(s, 1e-300))
		}
		big[k] = math.Max(big[k], norm(col.c))
	}
	for ph, n := range b.absent {
		missing += n * norm(p.largest(ph))
	}
	for k := range q.Parts {
		missing += math.Sqrt((q.Parts[k].Mole + 1) * spread[k] * b.energy)
	}
	b.amount = missing / smallestSingular(q)
	return b
}

// nearest is the part of a column's phase whose contents are nearest, or −1.
func nearest(q *tangent.Equilibrium, col column) int {
	best, which := math.Inf(1), -1
	for k, part := range q.Parts {
		if part.State.Phase == col.phase {
			if d := distance(col.c, part.State.C); d < best {
				best, which = d, k
			}
		}
	}
	return which
}

// largest is the contents of greatest norm among a phase's end-members.
func (p *programme) largest(phase int) (c [3]float64) {
	for _, m := range p.phase(phase).Members {
		if norm(m.C) > norm(c) {
			c = m.C
		}
	}
	return c
}

func norm(a [3]float64) float64 { return math.Sqrt(a[0]*a[0] + a[1]*a[1] + a[2]*a[2]) }

func distance(a, b [3]float64) float64 {
	return norm([3]float64{a[0] - b[0], a[1] - b[1], a[2] - b[2]})
}

// smallestSingular is that of the matrix whose columns are the parts' contents.
func smallestSingular(q *tangent.Equilibrium) float64 {
	a := mat.NewDense(3, len(q.Parts), nil)
	for k, part := range q.Parts {
		for i, v := range part.State.C {
			a.Set(i, k, v)
		}
	}
	var svd mat.SVD
	if !svd.Factorize(a, mat.SVDNone) {
		return 0
	}
	values := svd.Values(nil)
	return values[len(values)-1]
}

// energy is Σ n·G of an assemblage, J per mole of bulk, from Phase.Gibbs.
func energy(sys *gibbs.System, q *tangent.Equilibrium) (sum float64) {
	for _, part := range q.Parts {
		ph := sys.Liquid
		if part.State.Phase != gibbs.Liquid {
			ph = sys.Solids[part.State.Phase]
		}
		g, _, _ := ph.Gibbs(part.State.Y, q.T)
		sum += part.Mole * g
	}
	return sum
}

const compared = 500 // pairs (b, T) per system

// The stable assemblage, its Gibbs energy and its amounts against the linear
// programme, within the bounds derived in programme_test.go.
func TestAgainstLinearProgramme(t *testing.T) {
	for n, s := range subjects(t) {
		t.Run(s.name, func(t *testing.T) {
			t.Parallel()
			rng := rand.New(rand.NewSource(int64(n)))
			sharp, kinds := 0, map[int]int{}
			for i := 0; i < compared; i++ {
				b := inside(rng)
				T := s.low + (s.high-s.low)*rng.Float64()
				q, err := tangent.Solve(s.sys, b, T)
				if err != nil {
					t.Error(err)
					continue
				}
				p, amount, err := minimise(s.sys, b, T)
				if err != nil {
					t.Errorf("%v, %.2f K: the programme failed: %v", b, T, err)
					continue
				}
				kinds[len(q.Parts)]++
				if compare(t, s.sys, q, p, amount) < 0.02 {
					sharp++
				}
			}
			t.Logf("%d of %d amounts bounded within 0.02 mol; parts %v", sharp, compared, kinds)
			if sharp < compared/2 {
				t.Errorf("only %d of %d comparisons bind the amounts to 0.02 mol", sharp, compared)
			}
		})
	}
}

// The same over systems whose liquid separates, whose solid solution unmixes, or
// both: two forms of one phase are two parts.
func TestAgainstLinearProgrammeWithGaps(t *testing.T) {
	const seeds, each = 100, 16
	forms, n := 0, 0
	for seed := int64(1); seed <= seeds; seed++ {
		o := trial.Options{Unmixing: seed%3 != 0, Solvus: seed%3 != 1}
		sys := trial.System(seed, o)
		rng := rand.New(rand.NewSource(seed))
		top := 0.0
		for k := 0; k < 3; k++ {
			T, _ := trial.Freezing(sys, ternary.Apex(k), 4000, 100, 1)
			top = math.Max(top, T)
		}
		for i := 0; i < each; i++ {
			var b ternary.Composition
			var T float64
			var q *tangent.Equilibrium
			var err error
			// every second comparison looks for an assemblage with two forms
			for try := 0; try == 0 || i%2 == 1 && try < 40 && err == nil && twoForms(q) == 0; try++ {
				b, T = inside(rng), top*(0.4+0.8*rng.Float64())
				q, err = tangent.Solve(sys, b, T)
			}
			if err != nil {
				t.Errorf("seed %d: %v", seed, err)
				continue
			}
			p, amount, err := minimise(sys, b, T)
			if err != nil {
				t.Errorf("seed %d, %v, %.2f K: the programme failed: %v", seed, b, T, err)
				continue
			}
			n++
			forms += twoForms(q)
			compare(t, sys, q, p, amount)
		}
	}
	t.Logf("%d assemblages compared, %d with two forms of a phase", n, forms)
	if forms < n/6 {
		t.Errorf("only %d of %d assemblages hold two forms of a phase", forms, n)
	}
}

// twoForms is 1 where a phase is there in two forms, else 0.
func twoForms(q *tangent.Equilibrium) int {
	for k := 1; k < len(q.Parts); k++ {
		if q.Parts[k].State.Phase == q.Parts[k-1].State.Phase {
			return 1
		}
	}
	return 0
}

// compare checks one assemblage and returns the bound of its amounts.
func compare(t *testing.T, sys *gibbs.System, q *tangent.Equilibrium, p *programme, amount []float64) float64 {
	t.Helper()
	rt := ternary.R * q.T
	lp := 0.0
	byPart, byAbsent := make([]float64, len(q.Parts)), map[int]float64{}
	for k, n := range amount {
		if n == 0 {
			continue
		}
		lp += n * p.cols[k].g
		if part := nearest(q, p.cols[k]); part >= 0 {
			byPart[part] += n
		} else {
			byAbsent[p.cols[k].phase] += n
		}
	}
	b := p.bound(q)
	over := lp - energy(sys, q)
	if over < -1e-10*rt || over > b.energy {
		t.Errorf("%v, %.2f K: G of the programme − G = %.3e RT, must be from 0 to %.3e", q.Bulk, q.T, over/rt, b.energy/rt)
	}
	for k, part := range q.Parts {
		if d := math.Abs(byPart[k] - part.Mole); d > b.amount {
			t.Errorf("%v, %.2f K: phase %d amounts to %.6f, programme %.6f, bound %.1e", q.Bulk, q.T, part.State.Phase, part.Mole, byPart[k], b.amount)
		}
	}
	for ph, n := range byAbsent {
		if n > b.absent[ph]*(1+1e-9) {
			t.Errorf("%v, %.2f K: phase %d is absent, the programme has %.2e of it, bound %.1e", q.Bulk, q.T, ph, n, b.absent[ph])
		}
	}
	return b.amount
}
