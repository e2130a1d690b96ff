package trial

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// The same seed gives the same system, another seed another.
func TestSystemIsReproducible(t *testing.T) {
	a, b, c := System(5, Options{}), System(5, Options{}), System(6, Options{})
	x, T := [3]float64{0.2, 0.3, 0.5}, 1200.0
	ga, _, _ := a.Liquid.Gibbs(x, T)
	gb, _, _ := b.Liquid.Gibbs(x, T)
	gc, _, _ := c.Liquid.Gibbs(x, T)
	if ga != gb || len(a.Solids) != len(b.Solids) || ga == gc {
		t.Errorf("G of seeds 5, 5, 6: %v %v %v", ga, gb, gc)
	}
}

// Over many seeds the generator makes everything that it promises.
func TestSystemVariety(t *testing.T) {
	count := map[string]int{}
	for seed := int64(1); seed <= 300; seed++ {
		s := System(seed, Options{})
		if len(s.Solids) > 8 {
			t.Errorf("seed %d has %d solids", seed, len(s.Solids))
		}
		count[[]string{"Muggianu", "Kohler", "Toop"}[s.Liquid.Mixing.Extension]]++
		if s.Liquid.Mixing.Ternary != [3]gibbs.TFunc{} {
			count["ternary terms"]++
		}
		for i, p := range s.Solids {
			switch len(p.Members) {
			case 2:
				count["binary solution"]++
			case 3:
				count["ternary solution"]++
			default:
				if c := p.Members[0].C; c[0] > 0 && c[1] > 0 && c[2] > 0 {
					count["inside"]++
				}
			}
			for _, q := range s.Solids[:i] {
				if p.Stoichiometric() && q.Stoichiometric() && p.Members[0].C == q.Members[0].C {
					count["two forms"]++
				}
			}
		}
	}
	for _, k := range []string{"Muggianu", "Kohler", "Toop", "ternary terms", "binary solution", "ternary solution", "inside", "two forms"} {
		if count[k] < 10 {
			t.Errorf("%s: only %d in 300 seeds", k, count[k])
		}
	}
}

// The reference's potentials meet the exact identity Σ x μ = G, and its driving
// force meets the closed form of an ideal solution.
func TestReference(t *testing.T) {
	for seed := int64(1); seed <= 40; seed++ {
		s := System(seed, Options{})
		x, T := ternary.Composition{0.15, 0.25, 0.6}, 1100.0
		mu := Potentials(s.Liquid, x, T)
		g, _, _ := s.Liquid.Gibbs(x, T)
		if d := x[0]*mu[0] + x[1]*mu[1] + x[2]*mu[2] - g; math.Abs(d) > 1e-6 {
			t.Errorf("seed %d: Σ x μ − G = %g J/mol", seed, d)
		}
	}
	checked := 0
	for seed := int64(1); seed <= 60; seed++ {
		s := System(seed, Options{Ideal: true})
		for _, p := range s.Solids {
			if p.Stoichiometric() {
				continue
			}
			mu, T := [3]float64{-9000, -12000, -3000}, 1100.0
			rt := p.Mixing.Sites * ternary.R * T
			sum := 0.0
			for _, m := range p.Members {
				sum += math.Exp((linear(m.C, mu) - m.G.At(T)) / rt)
			}
			want := rt * math.Log(sum)
			if got, _ := Force(p, mu, T); math.Abs(got-want) > 1e-8*rt {
				t.Errorf("seed %d: D = %.9g, closed form %.9g", seed, got, want)
			}
			checked++
		}
	}
	if checked < 10 {
		t.Errorf("only %d solutions checked", checked)
	}
}

// A permuted system has the same Gibbs energies at the permuted composition.
func TestPermute(t *testing.T) {
	perm := [3]int{2, 0, 1}
	for seed := int64(1); seed <= 40; seed++ {
		s := System(seed, Options{})
		q := Permute(s, perm)
		x := [3]float64{0.2, 0.3, 0.5}
		g, _, _ := s.Liquid.Gibbs(x, 1000)
		h, _, _ := q.Liquid.Gibbs([3]float64{x[perm[0]], x[perm[1]], x[perm[2]]}, 1000)
		if math.Abs(g-h) > 1e-9 {
			t.Errorf("seed %d: G = %v and %v", seed, g, h)
		}
	}
}
