package liquidus_test

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

const (
	edgeScan = 100  // intervals of the test's own scan of an edge
	edgeTol  = 1e-6 // mole fraction, to which the test's own bisection agrees
)

// onEdge is the liquid a fraction u of the way along the edge without k.
func onEdge(k int, u float64) (x ternary.Composition) {
	x[(k+1)%3], x[(k+2)%3] = 1-u, u
	return x
}

// binary is the test's own solver of one edge: wherever the primary phase of the
// reference's scan changes, the crossing of the two saturation curves by
// bisection, again and again until neighbours differ by one crossing only.
func binary(sys *gibbs.System, k int, top, bottom float64) (at []float64) {
	primary := func(u float64) int {
		_, s := trial.Freezing(sys, onEdge(k, u), top, bottom, 1e-9)
		return s
	}
	var split func(a, b float64, pa, pb int)
	split = func(a, b float64, pa, pb int) {
		if pa == pb {
			return
		}
		mid := (a + b) / 2
		if b-a < edgeTol/4 {
			at = append(at, mid)
			return
		}
		pm := primary(mid)
		split(a, mid, pa, pm)
		split(mid, b, pm, pb)
	}
	last := primary(0)
	for n := 1; n <= edgeScan; n++ {
		p := primary(float64(n) / edgeScan)
		split(float64(n-1)/edgeScan, float64(n)/edgeScan, last, p)
		last = p
	}
	return at
}

// The points on the edges are those that a one-dimensional solver finds, and all
// of them.
func TestEdgesAgainstOwnSolver(t *testing.T) {
	found := 0
	for _, s := range oneLiquid(t) {
		p := whole(t, s.sys, liquidus.Options{})
		low, high := surface(t, s.sys).Limits()
		for k := 0; k < 3; k++ {
			want := binary(s.sys, k, high, low)
			got := 0
			for i := range p.Nodes {
				if n := &p.Nodes[i]; n.Edge == k {
					got++
					near := math.Inf(1)
					for _, u := range want {
						near = math.Min(near, math.Abs(u-n.Liquid[(k+2)%3]))
					}
					if near > edgeTol {
						t.Errorf("%s: %s at %v on edge %d is not among %v", s.name, n.ID, n.Liquid, k, want)
					}
				}
			}
			if got != len(want) {
				t.Errorf("%s: %d points on edge %d, own solver has %v", s.name, got, k, want)
			}
			found += got
		}
	}
	if found < 30 {
		t.Errorf("only %d edge points compared", found)
	}
}
