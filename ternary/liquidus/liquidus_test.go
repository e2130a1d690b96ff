package liquidus_test

import (
	"math"
	"testing"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
	"thalweg/ternary/tangent"
)

// The detailed seeds hold what their comment promises.
func TestSubjectsVary(t *testing.T) {
	seen := map[string]bool{}
	for _, s := range subjects(t) {
		seen[[]string{"Muggianu", "Kohler", "Toop"}[s.sys.Liquid.Mixing.Extension]] = true
		if s.sys.Liquid.Mixing.Ternary != [3]gibbs.TFunc{} {
			seen["ternary terms"] = true
		}
		for _, p := range s.sys.Solids {
			if len(p.Members) > 1 {
				seen[[]string{"", "", "binary solution", "ternary solution"}[len(p.Members)]] = true
				continue
			}
			if c := p.Members[0].C; c[0] > 0 && c[1] > 0 && c[2] > 0 {
				seen["compound inside"] = true
			}
		}
	}
	for _, k := range []string{"Muggianu", "Kohler", "Toop", "ternary terms", "binary solution", "ternary solution", "compound inside"} {
		if !seen[k] {
			t.Errorf("no subject has %s", k)
		}
	}
}

const (
	sampled = 500  // liquids per system
	nearT   = 0.05 // K, what the two roads may differ by
)

// T_L and the primary phase by two other roads: a scan downward in T with the
// reference's potentials and driving forces, and the stable assemblage just above
// and just below.
func TestLiquidusByOtherRoads(t *testing.T) {
	for n, s := range oneLiquid(t) {
		t.Run(s.name, func(t *testing.T) {
			t.Parallel()
			surf := surface(t, s.sys)
			low, high := surf.Limits()
			for _, x := range sample(int64(n), sampled) {
				T, primary := surf.Liquidus(x)
				want, solid := trial.Freezing(s.sys, x, high, low, nearT/10)
				if math.IsInf(T, 0) || math.IsInf(want, 0) {
					if T != want {
						t.Errorf("%v: T_L = %v, scan %v", x, T, want)
					}
					continue
				}
				if math.Abs(T-want) > nearT {
					t.Errorf("%v: T_L = %.3f K, scan %.3f K", x, T, want)
				}
				if primary.Phase != solid && math.Abs(surf.Saturation(solid, x)-T) > nearT {
					t.Errorf("%v: primary %d, scan %d", x, primary.Phase, solid)
				}
				above, err := tangent.Solve(s.sys, x, T+nearT)
				if err != nil {
					t.Error(err)
					continue
				}
				if len(above.Parts) != 1 || above.Parts[0].State.Phase != gibbs.Liquid {
					t.Errorf("%v at T_L + %g K: %+v", x, nearT, above.Parts)
				}
				below, err := tangent.Solve(s.sys, x, T-nearT)
				if err != nil {
					t.Error(err)
					continue
				}
				found := false
				for _, p := range below.Parts {
					found = found || p.State.Phase == primary.Phase && p.Mole > 0
				}
				if !found && math.Abs(surf.Saturation(solid, x)-T) > nearT {
					t.Errorf("%v at T_L − %g K: solid %d is not among %+v", x, nearT, primary.Phase, below.Parts)
				}
			}
		})
	}
}

// drivenTol is the residual, in RT, with which a node must satisfy the conditions
// of equilibrium when they are written down anew.
const drivenTol = 1e-8

// Every node: its solids lie on the plane of its liquid, nothing else lies
// above it, the liquid does not unmix.
func TestNodesFromScratch(t *testing.T) {
	nodes := 0
	for _, s := range oneLiquid(t) {
		p := whole(t, s.sys, liquidus.Options{})
		for _, n := range p.Nodes {
			if n.Kind == liquidus.AtApex {
				continue
			}
			nodes++
			rt := 8.314462618 * n.T
			mu := trial.Potentials(s.sys.Liquid, n.Liquid, n.T)
			present := map[int]bool{}
			for _, st := range n.Solids {
				present[st.Phase] = true
				d, y := trial.Force(s.sys.Solids[st.Phase], mu, n.T)
				if math.Abs(d)/rt > drivenTol {
					t.Errorf("%s %s: solid %d has D = %.1e RT", s.name, n.ID, st.Phase, d/rt)
				}
				for k := range y {
					if math.Abs(y[k]-st.Y[k]) > 1e-5 {
						t.Errorf("%s %s: solid %d has y = %v, want %v", s.name, n.ID, st.Phase, st.Y, y)
					}
				}
			}
			for i, q := range s.sys.Solids {
				if d, _ := trial.Force(q, mu, n.T); !present[i] && d/rt > drivenTol {
					t.Errorf("%s %s: absent solid %d lies %.1e RT above", s.name, n.ID, i, d/rt)
				}
			}
			if d, _ := trial.Force(s.sys.Liquid, mu, n.T); d/rt > drivenTol {
				t.Errorf("%s %s: another liquid lies %.1e RT above", s.name, n.ID, d/rt)
			}
		}
	}
	if nodes < 60 {
		t.Errorf("only %d nodes checked", nodes)
	}
}
