package liquidus_test

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

// fieldsOf lists the fields of the solid with this symbol.
func fieldsOf(t *testing.T, p *liquidus.Projection, symbol string) (out []*liquidus.Field) {
	t.Helper()
	k, ok := p.System.SolidIndex(symbol)
	if !ok {
		t.Fatalf("no solid %s", symbol)
	}
	for i := range p.Fields {
		if p.Fields[i].Solid == k {
			out = append(out, &p.Fields[i])
		}
	}
	return out
}

// nodesOf lists the nodes of a kind.
func nodesOf(p *liquidus.Projection, k liquidus.Kind) (out []liquidus.Node) {
	for _, n := range p.Nodes {
		if n.Kind == k {
			out = append(out, n)
		}
	}
	return out
}

// Two forms of A: the curve between their fields is an isotherm of the
// temperature of transition.
func TestPolymorphs(t *testing.T) {
	p := whole(t, trial.CaseNamed("polymorphs"), liquidus.Options{})
	points := 0
	for _, c := range p.Curves {
		for _, q := range c.Points {
			if q.Kind == liquidus.Polymorph {
				points++
				if math.Abs(q.T-trial.PolymorphT) > 1e-6 {
					t.Errorf("T = %v at %v, want %v", q.T, q.Liquid, trial.PolymorphT)
				}
			}
		}
	}
	if points < 5 || len(nodesOf(p, liquidus.Transition)) != 2 {
		t.Errorf("%d points, nodes %v", points, p.Nodes)
	}
	// and it leaves A's own boundary as it would be without the low form: x_A of
	// the ideal law at the transition, on both edges
	h, tm := 30000.0, 1500.0
	want := math.Exp(-h / ternary.R * (1.0/trial.PolymorphT - 1/tm))
	for _, n := range nodesOf(p, liquidus.Transition) {
		if math.Abs(n.Liquid[0]-want) > 1e-9 {
			t.Errorf("%s at %v, the ideal law says x_A = %.9f", n.ID, n.Liquid, want)
		}
	}
}

// A compound inside another field: a hole, bounded by a ring with one highest
// and one lowest point on the line A–K, on which the ring's two ends lie by symmetry.
func TestRing(t *testing.T) {
	p := whole(t, trial.CaseNamed("ring"), liquidus.Options{})
	if p.Checks.Pieces != 2 {
		t.Errorf("%d pieces, want 2", p.Checks.Pieces)
	}
	if f := fieldsOf(t, p, "A"); len(f) != 1 || len(f[0].Holes) != 1 {
		t.Errorf("field of A: %d, want one with one hole", len(f))
	}
	k := fieldsOf(t, p, "K")
	if len(k) != 1 {
		t.Fatalf("%d fields of K", len(k))
	}
	if want := (ternary.Composition{0.6, 0.2, 0.2}); k[0].Peak.Distance(want) > 1e-9 {
		t.Errorf("peak of K at %v, want its composition", k[0].Peak)
	}
	high, low := nodesOf(p, liquidus.Maximum), nodesOf(p, liquidus.Minimum)
	if len(high) != 1 || len(low) != 1 {
		t.Fatalf("%d maxima and %d minima on the ring", len(high), len(low))
	}
	for _, n := range []liquidus.Node{high[0], low[0]} {
		if math.Abs(n.Liquid[1]-n.Liquid[2]) > 1e-6 {
			t.Errorf("%s at %v is off the line of symmetry", n.ID, n.Liquid)
		}
	}
	// of the two points of the line A–K on the ring the warmer lies towards A
	if high[0].Liquid[0] < 0.6 || low[0].Liquid[0] > 0.6 {
		t.Errorf("maximum at %v, minimum at %v", high[0].Liquid, low[0].Liquid)
	}
}

// A field far smaller than a cell of the mesh is found, and one of its two corners is a
// point at which cooling makes liquid.
func TestIsland(t *testing.T) {
	p := whole(t, trial.CaseNamed("island"), liquidus.Options{})
	k := fieldsOf(t, p, "K")
	if len(k) != 1 {
		t.Fatalf("%d fields of K", len(k))
	}
	cell := 1.0 / (liquidus.DefaultMesh * liquidus.DefaultMesh)
	if a := k[0].AreaFraction(p.System.Components, ternary.Mole); a <= 0 || a > cell {
		t.Errorf("share %.2e, want a positive one below that of a cell, %.2e", a, cell)
	}
	for _, n := range p.Nodes {
		if len(n.Solids) == 3 && math.Abs(n.Liquid[0]-n.Liquid[1]) > 1e-9 {
			t.Errorf("%s at %v is off the line of symmetry", n.ID, n.Liquid)
		}
	}
}

// At an invariant point whose reaction takes up heat the curves run the other way
// round: T falls towards the point along the curve without a solid exactly when
// the reaction, read on cooling, forms that solid.
func TestHeatTakingReaction(t *testing.T) {
	p := whole(t, trial.CaseNamed("island"), liquidus.Options{})
	found := 0
	for i := range p.Nodes {
		n := &p.Nodes[i]
		if len(n.Coefficients) != 3 || rise(p.System, n) <= 0 {
			continue
		}
		found++
		if n.Kind != liquidus.Metatectic {
			t.Errorf("%s is called %s", n.ID, n.Kind)
		}
		for _, c := range p.Curves {
			if c.From != i && c.To != i {
				continue
			}
			for k, st := range n.Solids {
				if st.Phase != c.Solids[0] && st.Phase != c.Solids[1] && (c.To == i) != (n.Coefficients[k] < 0) {
					t.Errorf("%s: the curve without solid %d runs with the coefficients %v", n.ID, st.Phase, n.Coefficients)
				}
			}
		}
	}
	if found != 1 {
		t.Errorf("%d such points, want 1", found)
	}
}

// Alkemade's theorem: where the join of two solids crosses their boundary curve,
// T has a maximum along the curve. The point is a crossing of two curves on the
// join, solved here by bisection in closed form: with x_A = x_B = s the compound
// AB freezes at T where 2RT ln s = G_AB − …, C where ln(1 − 2s) = −(ΔH/R)(1/T − 1/Tm).
func TestJoin(t *testing.T) {
	const (
		tmAB, hAB = 1300.0, 65000.0
		tmC, hC   = 1250.0, 30000.0
	)
	// AB in its own liquid, x_A = x_B = ½: 2RT ln(2s) = −ΔH(1 − T/Tm)
	freezeAB := func(s float64) float64 { return hAB / (hAB/tmAB - 2*ternary.R*math.Log(2*s)) }
	freezeC := func(s float64) float64 { return hC / (hC/tmC - ternary.R*math.Log(1-2*s)) }
	lo, hi := 0.01, 0.49
	for hi-lo > 1e-14 {
		if mid := (lo + hi) / 2; freezeAB(mid) < freezeC(mid) {
			lo = mid
		} else {
			hi = mid
		}
	}
	p := whole(t, trial.CaseNamed("join"), liquidus.Options{})
	top := nodesOf(p, liquidus.Maximum)
	if len(top) != 1 {
		t.Fatalf("%d maxima, want 1", len(top))
	}
	if want := (ternary.Composition{lo, lo, 1 - 2*lo}); top[0].Liquid.Distance(want) > 1e-7 {
		t.Errorf("maximum at %v, want %v", top[0].Liquid, want)
	}
	if want := freezeC(lo); math.Abs(top[0].T-want) > 1e-6 {
		t.Errorf("maximum at %.6f K, want %.6f", top[0].T, want)
	}
}

// A solid outside the triangle: its saturation is RT ln(xA/xB) = −27700 + 30 T.
func TestOutside(t *testing.T) {
	sys := trial.CaseNamed("outside")
	p := whole(t, sys, liquidus.Options{Isotherms: []float64{1200, 1250, 1300, 1400, 1500}})
	k := fieldsOf(t, p, "K")
	if len(k) != 1 || !math.IsInf(k[0].PeakT, 1) {
		t.Fatalf("fields of K: %+v", k)
	}
	surf := surface(t, sys)
	for _, x := range []ternary.Composition{{0.78, 0.17, 0.05}, {0.5, 0.15, 0.35}, {0.4, 0.05, 0.55}, {0.3, 0.005, 0.695}} {
		want := 27700 / (30 - ternary.R*math.Log(x[0]/x[1]))
		if r := math.Log(x[0] / x[1]); ternary.R*r >= 30 {
			want = math.Inf(1)
		}
		if got := surf.Saturation(3, x); got != want && math.Abs(got-want) > 1e-7 {
			t.Errorf("%v: %.6f K, the formula says %.6f", x, got, want)
		}
	}
	// the edge A–C holds no point: K is oversaturated along all of it
	for _, n := range p.Nodes {
		if n.Edge == 1 {
			t.Errorf("%s on the edge A–C at %v", n.ID, n.Liquid)
		}
	}
	// A never melts congruently: its field does not hold its apex
	for _, f := range fieldsOf(t, p, "A") {
		for _, x := range f.Outline {
			if x[0] > 0.9 {
				t.Errorf("the field of A reaches %v", x)
			}
		}
	}
	// the point with A, C and K: L + K → A + C, by the signs
	for _, n := range nodesOf(p, liquidus.ReactionPoint) {
		if c := n.Coefficients; !(c[0] > 0 && c[1] > 0 && c[2] < 0) || n.Solids[2].Phase != 3 {
			t.Errorf("%s: %v of %v", n.ID, c, n.Solids)
		}
	}
	if n := len(nodesOf(p, liquidus.ReactionPoint)); n != 1 {
		t.Errorf("%d reaction points, want 1", n)
	}
}

// Without a solid there is no liquidus: an error.
func TestNoSolid(t *testing.T) {
	sys := *trial.CaseNamed("join")
	sys.Solids = nil
	if _, err := liquidus.Compute(&sys, liquidus.Options{}); err == nil {
		t.Error("no error for a system without solids")
	}
}
