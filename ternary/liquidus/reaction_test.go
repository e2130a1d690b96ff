package liquidus_test

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
	"thalweg/ternary/tangent"
)

// A reaction goes the way that equilibria go: an even mixture of what is used up on
// cooling still is those phases a little above the node, and one of what is made is
// those a little below it. Two liquids are told apart by their compositions.
func TestReactionsAgainstEquilibria(t *testing.T) {
	list := subjects(t)
	for seed := int64(1); seed <= 12; seed++ {
		list = append(list, subject{"unmixing", trial.System(seed, trial.Options{Unmixing: true})})
	}
	const apart = 0.02 // mole fractions: more than phases move in 1e-5 of T, less than two liquids lie apart
	tested, backward := 0, 0
	kinds := map[liquidus.Kind]int{}
	for _, s := range list {
		p, err := liquidus.Compute(s.sys, liquidus.Options{})
		if err != nil || !p.Checks.Passed {
			continue
		}
		for i := range p.Nodes {
			n := &p.Nodes[i]
			gone, made := n.Reaction()
			if n.Kind == liquidus.Maximum || n.Kind == liquidus.Minimum || n.Kind == liquidus.Critical || gone == nil {
				continue
			}
			if n.Heat < 0 {
				backward++
			}
			states := func(side []int) (out []ternary.Composition) {
				for _, k := range side {
					if k == liquidus.Itself {
						out = append(out, n.Liquid)
					} else {
						out = append(out, n.Solids[k].Composition())
					}
				}
				return out
			}
			liquids := []ternary.Composition{n.Liquid}
			for _, st := range n.Solids {
				if st.Phase == gibbs.Liquid {
					liquids = append(liquids, st.Composition())
				}
			}
			if len(liquids) == 2 && distance(liquids[0], liquids[1]) < 3*apart {
				continue // too near to critical to tell them apart
			}
			for side, xs := range [2][]ternary.Composition{states(gone), states(made)} {
				var b ternary.Composition
				for _, x := range xs {
					for k := range b {
						b[k] += x[k] / float64(len(xs))
					}
				}
				if !b.Inside(0) {
					continue // a solid outside the triangle
				}
				T := n.T * (1 + [2]float64{1e-5, -1e-5}[side])
				q, err := tangent.Solve(s.sys, b, T)
				if err != nil {
					t.Errorf("%s, %s: %v", s.name, n.ID, err)
					continue
				}
				tested++
				kinds[n.Kind]++
				for _, x := range xs {
					near := math.Inf(1)
					for _, part := range q.Parts {
						near = min(near, distance(x, part.State.Composition()))
					}
					if near > apart {
						t.Errorf("%s, %s %s: on side %d the phase at %.3f is not stable at %.4f K", s.name, n.ID, n.Kind, side, [3]float64(x), T)
					}
				}
			}
		}
	}
	for _, k := range []liquidus.Kind{liquidus.Eutectic, liquidus.ReactionPoint, liquidus.Peritectic, liquidus.Monotectic, liquidus.Metatectic} {
		if kinds[k] == 0 {
			t.Errorf("no %s among %v", k, kinds)
		}
	}
	if tested < 100 || backward < 5 {
		t.Errorf("only %d mixtures tested, %d reactions that take up heat towards the solids", tested, backward)
	}
	t.Logf("%d mixtures, %d such reactions, %v", tested, backward, kinds)
}

func distance(a, b ternary.Composition) float64 {
	return math.Abs(a[0]-b[0]) + math.Abs(a[1]-b[1]) + math.Abs(a[2]-b[2])
}
