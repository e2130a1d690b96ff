package liquidus_test

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// rise is the entropy taken up by L → Σ n·solids at a node, J/K per mole of
// liquid. It is negative for every ordinary freezing reaction.
func rise(sys *gibbs.System, n *liquidus.Node) float64 {
	_, s, _ := sys.Liquid.Gibbs(n.Liquid, n.T)
	dS := -s
	for k, st := range n.Solids {
		ph := sys.Liquid // a second liquid
		if st.Phase != gibbs.Liquid {
			ph = sys.Solids[st.Phase]
		}
		_, sk, _ := ph.Gibbs(st.Y, n.T)
		dS += n.Coefficients[k] * sk
	}
	return dS
}

// The reactions of invariant points balance, their kinds follow from the signs,
// and the curves run as the reactions say: along the curve on which a solid is
// absent T falls towards the point exactly when the reaction forms that solid
// on cooling.
func TestReactions(t *testing.T) {
	checked := map[liquidus.Kind]int{}
	for _, s := range subjects(t) {
		p := whole(t, s.sys, liquidus.Options{})
		for i := range p.Nodes {
			n := &p.Nodes[i]
			if n.Coefficients == nil {
				continue
			}
			sum, negative := [3]float64{}, 0
			for k, st := range n.Solids {
				if n.Coefficients[k] < 0 {
					negative++
				}
				for c := range sum {
					sum[c] += n.Coefficients[k] * st.C[c]
				}
			}
			for c := range sum {
				if math.Abs(sum[c]-n.Liquid[c]) > 1e-9 {
					t.Errorf("%s %s: Σ n·c = %v, liquid %v", s.name, n.ID, sum, n.Liquid)
				}
			}
			if rise(s.sys, n) >= 0 {
				continue // takes up heat: see TestHeatTakingReaction
			}
			if n.Kind == liquidus.Monotectic {
				checked[n.Kind]++
				continue // one of its phases is a liquid: another name, whatever the signs
			}
			want := liquidus.Eutectic
			switch {
			case len(n.Solids) == 2 && negative == 1, negative == 2:
				want = liquidus.Peritectic
			case negative == 1:
				want = liquidus.ReactionPoint
			}
			if n.Kind != want {
				t.Errorf("%s %s: kind %s, coefficients %v", s.name, n.ID, n.Kind, n.Coefficients)
			}
			checked[n.Kind]++
			if len(n.Solids) == 3 {
				checkFalls(t, s.name, p, i)
			}
		}
	}
	for _, k := range []liquidus.Kind{liquidus.Eutectic, liquidus.ReactionPoint, liquidus.Peritectic} {
		if checked[k] == 0 {
			t.Errorf("no %s among the subjects", k)
		}
	}
}

// checkFalls compares the curves at a node with its coefficients.
func checkFalls(t *testing.T, name string, p *liquidus.Projection, node int) {
	t.Helper()
	n := &p.Nodes[node]
	curves := 0
	for i := range p.Curves {
		c := &p.Curves[i]
		if c.From != node && c.To != node {
			continue
		}
		curves++
		if c.From == c.To || c.Points[0].Kind == liquidus.Polymorph {
			continue
		}
		for k, st := range n.Solids {
			if st.Phase == c.Solids[0] || st.Phase == c.Solids[1] {
				continue
			}
			if falls := c.To == node; falls != (n.Coefficients[k] > 0) && math.Abs(n.Coefficients[k]) > 1e-6 {
				t.Errorf("%s %s: T falls towards the point along the curve without solid %d: %v; coefficients %v", name, n.ID, st.Phase, falls, n.Coefficients)
			}
		}
	}
	if curves != 3 {
		t.Errorf("%s %s has %d curves", name, n.ID, curves)
	}
}

// Along every curve T does not rise, both solids stay on the plane, and the kind
// of every point is that of a mass balance drawn up from scratch.
func TestCurves(t *testing.T) {
	kinds := map[liquidus.CurveKind]int{}
	for _, s := range subjects(t) {
		p := whole(t, s.sys, liquidus.Options{})
		surf := surface(t, s.sys)
		for _, c := range p.Curves {
			for i := range c.Points {
				q := &c.Points[i]
				if i > 0 && q.T > c.Points[i-1].T+1e-9*q.T {
					t.Errorf("%s: T rises along the curve of %v from %v to %v", s.name, c.Solids, c.Points[i-1].T, q.T)
				}
				for k := range c.Solids {
					if c.Solids[k] == gibbs.Liquid {
						continue // a second liquid: see TestMonotecticCurves
					}
					if T := surf.Saturation(c.Solids[k], q.Liquid); math.Abs(T-q.T) > 1e-6*q.T {
						t.Errorf("%s: solid %d saturates at %v, the curve's point is at %v", s.name, c.Solids[k], T, q.T)
					}
				}
				if c.Solids[1] == gibbs.Liquid || i == 0 || i == len(c.Points)-1 || math.Min(q.Liquid[0], math.Min(q.Liquid[1], q.Liquid[2])) < 1e-3 {
					continue
				}
				want, sure := balanceKind(surf, q)
				if sure && q.Kind != want {
					t.Errorf("%s: curve of %v at %v is %s, the balance says %s", s.name, c.Solids, q.Liquid, q.Kind, want)
				}
				if sure {
					kinds[want]++
				}
			}
		}
	}
	for _, k := range []liquidus.CurveKind{liquidus.Cotectic, liquidus.Reaction} {
		if kinds[k] < 20 {
			t.Errorf("only %d points are %s", kinds[k], k)
		}
	}
}

// balanceKind solves x = (1 − a − b)·(x + d) + a·A + b·B for the amounts of two
// solids that a small step d down the curve forms. The direction of d is that in
// which the two saturation temperatures stay equal and fall, from differences of
// the surfaces. sure is false where an amount is too near zero to tell.
func balanceKind(surf *liquidus.Surface, q *liquidus.Point) (kind liquidus.CurveKind, sure bool) {
	const h = 1e-4
	var slope [2][2]float64 // of the two surfaces along (1, −1, 0) and (0, 1, −1)
	for k := range slope {
		for j := range slope[k] {
			up, down := q.Liquid, q.Liquid
			up[j], up[j+1] = up[j]+h, up[j+1]-h
			down[j], down[j+1] = down[j]-h, down[j+1]+h
			slope[k][j] = surf.Saturation(q.Solids[k].Phase, up) - surf.Saturation(q.Solids[k].Phase, down)
		}
	}
	u, v := slope[0][1]-slope[1][1], slope[1][0]-slope[0][0]
	if u*slope[0][0]+v*slope[0][1] > 0 {
		u, v = -u, -v
	}
	n := h / math.Hypot(u, v)
	d := [3]float64{n * u, n * (v - u), -n * v}
	var a, b [3]float64
	ca, cb := q.Solids[0].Composition(), q.Solids[1].Composition()
	for k := range d {
		a[k] = ca[k] - q.Liquid[k] - d[k]
		b[k] = cb[k] - q.Liquid[k] - d[k]
	}
	// −d = na·a + nb·b in the two free coordinates
	det := a[0]*b[1] - a[1]*b[0]
	na := (-d[0]*b[1] + d[1]*b[0]) / det
	nb := (-a[0]*d[1] + a[1]*d[0]) / det
	scale := math.Abs(na) + math.Abs(nb)
	if math.Abs(det) < 1e-3 || math.Min(math.Abs(na), math.Abs(nb)) < 0.1*scale {
		return "", false
	}
	if na > 0 && nb > 0 {
		return liquidus.Cotectic, true
	}
	return liquidus.Reaction, true
}

// A node lies inside the triangle or exactly on its edge, at the liquidus.
func TestNodesLieWhereTheySay(t *testing.T) {
	for _, s := range subjects(t) {
		p := whole(t, s.sys, liquidus.Options{})
		surf := surface(t, s.sys)
		for i := range p.Nodes {
			n := &p.Nodes[i]
			if n.Kind == liquidus.AtApex {
				continue
			}
			if sum := n.Liquid[0] + n.Liquid[1] + n.Liquid[2]; math.Abs(sum-1) > 1e-12 || !n.Liquid.Inside(0) {
				t.Errorf("%s %s: liquid %v", s.name, n.ID, n.Liquid)
			}
			if onEdge := n.Edge >= 0; onEdge && n.Liquid[max(0, n.Edge)] != 0 {
				t.Errorf("%s %s: on edge %d with liquid %v", s.name, n.ID, n.Edge, n.Liquid)
			}
			x := n.Liquid
			if T, _ := surf.Liquidus(x); math.Abs(T-n.T) > 1e-7*n.T {
				t.Errorf("%s %s: T = %v, liquidus %v", s.name, n.ID, n.T, T)
			}
			for _, st := range n.Solids {
				if st.Phase == gibbs.Liquid {
					continue
				}
				c := s.sys.Solids[st.Phase].Contents(st.Y)
				if ternary.Composition(c).Distance(st.C) > 1e-12 {
					t.Errorf("%s %s: contents %v of y = %v", s.name, n.ID, st.C, st.Y)
				}
			}
		}
	}
}
