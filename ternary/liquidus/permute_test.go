package liquidus_test

import (
	"fmt"
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

// permuteTol is how far a node may move, in mole fraction and relative
// temperature, when the components are renamed: only rounding differs.
const permuteTol = 1e-9

// back maps a composition of the permuted system to the original's components.
func back(x ternary.Composition, perm [3]int) (y ternary.Composition) {
	for i, k := range perm {
		y[k] = x[i]
	}
	return y
}

// Renaming the components changes nothing but the names.
func TestPermutingComponents(t *testing.T) {
	perms := [][3]int{{1, 0, 2}, {1, 2, 0}, {2, 1, 0}}
	for n, s := range subjects(t) {
		perm := perms[n%len(perms)]
		t.Run(s.name, func(t *testing.T) {
			t.Parallel()
			p := whole(t, s.sys, liquidus.Options{})
			q := whole(t, trial.Permute(s.sys, perm), liquidus.Options{})
			matchNodes(t, p, q, perm)
			if a, b := curveCount(p), curveCount(q); fmt.Sprint(a) != fmt.Sprint(b) {
				t.Errorf("curves by pair of solids: %v and %v", a, b)
			}
			for solid := range s.sys.Solids {
				a, b := solidArea(p, solid), solidArea(q, solid)
				// outlines differ by the places of their points only
				if math.Abs(a-b) > 2*outlineNear {
					t.Errorf("solid %d has a share of %.6f and %.6f", solid, a, b)
				}
			}
		})
	}
}

// matchNodes finds for every node of q the one of p with the same solids.
func matchNodes(t *testing.T, p, q *liquidus.Projection, perm [3]int) {
	t.Helper()
	if len(p.Nodes) != len(q.Nodes) {
		t.Errorf("%d nodes and %d", len(p.Nodes), len(q.Nodes))
		return
	}
	for _, b := range q.Nodes {
		x := back(b.Liquid, perm)
		best, which := math.Inf(1), -1
		for i := range p.Nodes {
			if a := &p.Nodes[i]; phases(a.Solids) == phases(b.Solids) && a.Liquid.Distance(x) < best {
				best, which = a.Liquid.Distance(x), i
			}
		}
		if which < 0 {
			t.Errorf("%s with solids %s has no counterpart", b.ID, phases(b.Solids))
			continue
		}
		a := &p.Nodes[which]
		// the place of an extremum is where dT = 0: its square is what is solved
		tol := permuteTol
		if a.Kind == liquidus.Maximum || a.Kind == liquidus.Minimum || a.Kind == liquidus.LoopStart {
			tol = 1e-5
		}
		if a.Kind == liquidus.LoopStart {
			continue // an arbitrary point of its ring
		}
		tolT := permuteTol
		if a.Kind == liquidus.Critical { // extrapolated from the last points of its curve
			tol, tolT = 1e-6, 1e-7
		}
		if best > tol || math.Abs(a.T-b.T) > tolT*a.T || a.Kind != b.Kind {
			t.Errorf("%s %s moved by %.1e, %.1e K, became %s %s", a.ID, a.Kind, best, b.T-a.T, b.ID, b.Kind)
		}
		for k := range a.Coefficients {
			if math.Abs(a.Coefficients[k]-b.Coefficients[k]) > 1e-6*(1+math.Abs(a.Coefficients[k])) {
				t.Errorf("%s: coefficients %v and %v", a.ID, a.Coefficients, b.Coefficients)
			}
		}
	}
}

func phases(s []gibbs.State) string {
	var out []int
	for _, st := range s {
		out = append(out, st.Phase)
	}
	return fmt.Sprint(out)
}

// curveCount counts curves by their pair of solids.
func curveCount(p *liquidus.Projection) map[[2]int]int {
	out := map[[2]int]int{}
	for _, c := range p.Curves {
		out[c.Solids]++
	}
	return out
}

func solidArea(p *liquidus.Projection, solid int) (a float64) {
	for i := range p.Fields {
		if p.Fields[i].Solid == solid {
			a += p.Fields[i].AreaFraction(p.System.Components, ternary.Mole)
		}
	}
	return a
}
