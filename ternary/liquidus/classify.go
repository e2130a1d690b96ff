package liquidus

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// coefficients solves for the amounts a and b of two solids (formula units per
// mole of liquid components) whose removal moves the liquid along the
// direction t of composition (Σ t = 0): t = a(σ_A x − c_A) + b(σ_B x − c_B).
// ok is false where the three compositions are collinear.
func coefficients(x ternary.Composition, t [3]float64, ca, cb [3]float64) (a, b float64, ok bool) {
	sa, sb := ca[0]+ca[1]+ca[2], cb[0]+cb[1]+cb[2]
	var u, v [3]float64
	for i := range x {
		u[i], v[i] = sa*x[i]-ca[i], sb*x[i]-cb[i]
	}
	// use the two Cartesian directions
	cart := func(w [3]float64) (float64, float64) { return w[2] + w[0]/2, w[0] * math.Sqrt(3) / 2 }
	ux, uy := cart(u)
	vx, vy := cart(v)
	tx, ty := cart(t)
	det := ux*vy - uy*vx
	if math.Abs(det) <= 1e-9*math.Hypot(ux, uy)*math.Hypot(vx, vy) {
		return 0, 0, false
	}
	return (tx*vy - ty*vx) / det, (ux*ty - uy*tx) / det, true
}

// kindOf tells a cotectic from a reaction curve at a point where the liquid
// moves along t on cooling; consumed is the solid that dissolves, or -1.
func kindOf(x ternary.Composition, t [3]float64, sa, sb gibbs.State) (k CurveKind, consumed int) {
	if sb.Phase == gibbs.Liquid {
		return TwoLiquids, -1
	}
	if parallel(sa.C, sb.C) {
		return Polymorph, -1
	}
	a, b, ok := coefficients(x, t, sa.C, sb.C)
	switch {
	case !ok:
		return Degenerate, -1
	case a < 0:
		return Reaction, 0
	case b < 0:
		return Reaction, 1
	}
	return Cotectic, -1
}

// reaction balances x = Σ n_k c_k for the solids of an invariant point: the
// formula units made from one mole of liquid. nil where it is not unique.
func reaction(x ternary.Composition, solids []gibbs.State) []float64 {
	switch len(solids) {
	case 3:
		a, b, c := vec(solids[0].C), vec(solids[1].C), vec(solids[2].C)
		det := a.dot(b.cross(c))
		if math.Abs(det) <= 1e-9*a.norm()*b.norm()*c.norm() {
			return nil
		}
		v := vec(x)
		return []float64{v.dot(b.cross(c)) / det, v.dot(c.cross(a)) / det, v.dot(a.cross(b)) / det}
	case 2:
		// least squares in the plane of the two compositions
		a, b, v := vec(solids[0].C), vec(solids[1].C), vec(x)
		aa, ab, bb := a.dot(a), a.dot(b), b.dot(b)
		det := aa*bb - ab*ab
		if det <= 1e-12*aa*bb {
			return nil
		}
		n := []float64{(v.dot(a)*bb - v.dot(b)*ab) / det, (v.dot(b)*aa - v.dot(a)*ab) / det}
		rest := v.plus(a, -n[0]).plus(b, -n[1])
		if rest.norm() > 1e-7 {
			return nil
		}
		return n
	}
	return nil
}

// kindOfNode classifies by the signs of the reaction.
func kindOfNode(coef []float64) Kind {
	negative := 0
	for _, c := range coef {
		if c < 0 {
			negative++
		}
	}
	if coef == nil {
		return Transition
	}
	if len(coef) == 2 {
		if negative == 0 {
			return Eutectic
		}
		return Peritectic
	}
	switch negative {
	case 0:
		return Eutectic
	case 1:
		return ReactionPoint
	}
	return Peritectic
}
