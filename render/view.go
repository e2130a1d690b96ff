package render

import (
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/liquidus"
)

// View is the part of a composition triangle that a figure shows, and how it is
// turned: the compositions, in mole fractions, at the top, lower left and lower
// right corner. Three pure components in another order turn the triangle; any
// other three are a window into it.
type View struct{ Top, Left, Right ternary.Composition }

// leastView is the area of a view, relative to the whole triangle, below which it
// is none.
const leastView = 1e-6

// look turns a triangle to a view.
func (t triangle) look(v *View) (triangle, error) {
	if v == nil {
		return t, nil
	}
	var m [3][3]float64 // columns: the corners, in fractions of the triangle's basis
	for k, x := range [3]ternary.Composition{v.Top, v.Left, v.Right} {
		if !x.Inside(1e-9) {
			return t, &FigureError{What: "a corner of the view lies outside the triangle", Where: "view",
				Why: fmt.Sprintf("its mole fractions are %.4g, %.4g, %.4g", x[0], x[1], x[2]), Remedy: "give compositions without negative amounts"}
		}
		f := t.components.Fractions(x, t.basis)
		for i := range f {
			m[i][k] = f[i]
		}
	}
	det := m[0][0]*(m[1][1]*m[2][2]-m[1][2]*m[2][1]) - m[0][1]*(m[1][0]*m[2][2]-m[1][2]*m[2][0]) + m[0][2]*(m[1][0]*m[2][1]-m[1][1]*m[2][0])
	if math.Abs(det) < leastView {
		return t, &FigureError{What: "the view has no area", Where: "view", Why: "its three corners lie on one line", Remedy: "choose corners that span a triangle"}
	}
	w := &window{corners: m}
	for i := range 3 {
		for k := range 3 {
			a, b := (i+1)%3, (i+2)%3
			c, d := (k+1)%3, (k+2)%3
			w.inverse[k][i] = (m[a][c]*m[b][d] - m[a][d]*m[b][c]) / det
		}
	}
	t.view = w
	return t, nil
}

// window is a view in fractions of the figure's basis.
type window struct {
	corners [3][3]float64 // of component i at corner k
	inverse [3][3]float64
}

// shares are the weights of the three corners that make up fractions f.
func (w *window) shares(f [3]float64) (s ternary.Composition) {
	for k := range s {
		for i := range f {
			s[k] += w.inverse[k][i] * f[i]
		}
	}
	return s
}

// fractions is the inverse of shares.
func (w *window) fractions(s [3]float64) (f [3]float64) {
	for i := range f {
		for k := range s {
			f[i] += w.corners[i][k] * s[k]
		}
	}
	return f
}

// viewTol is the share by which a point may lie outside a view and still belong to
// it.
const viewTol = 1e-9

// shares of the page's corners that make up a composition; for the whole triangle
// its fractions.
func (t triangle) shares(x ternary.Composition) ternary.Composition {
	f := t.components.Fractions(x, t.basis)
	if t.view == nil {
		return ternary.Composition(f)
	}
	return t.view.shares(f)
}

// shows reports that a composition lies in the view.
func (t triangle) shows(x ternary.Composition) bool {
	s := t.shares(x)
	return s[0] >= -viewTol && s[1] >= -viewTol && s[2] >= -viewTol
}

// between is the composition at a fraction u of the straight line on the page.
func (t triangle) between(a, b ternary.Composition, u float64) ternary.Composition {
	fa, fb := t.components.Fractions(a, t.basis), t.components.Fractions(b, t.basis)
	var f [3]float64
	for i := range f {
		f[i] = math.Max(0, fa[i]+u*(fb[i]-fa[i]))
	}
	x, err := t.components.Composition(f, t.basis)
	if err != nil {
		return a
	}
	return x
}

// crossing is the stretch of the line from a to b that lies in the view.
func (t triangle) crossing(a, b ternary.Composition) (u, v float64, ok bool) {
	sa, sb := t.shares(a), t.shares(b)
	u, v = 0, 1
	for k := range sa {
		pa, pb := sa[k]+viewTol, sb[k]+viewTol
		switch {
		case pa < 0 && pb < 0:
			return 0, 0, false
		case pa < 0:
			u = math.Max(u, pa/(pa-pb))
		case pb < 0:
			v = math.Min(v, pa/(pa-pb))
		}
	}
	return u, v, u < v
}

// cut divides a line of n points into the pieces that lie in the view: put is
// called with the number of the piece, the index of the point before and how far
// towards the next.
func (t triangle) cut(xs []ternary.Composition, put func(piece, i int, u float64)) {
	piece, open := 0, false
	for i := 0; i+1 < len(xs); i++ {
		u, v, ok := t.crossing(xs[i], xs[i+1])
		if !ok {
			if open {
				piece, open = piece+1, false
			}
			continue
		}
		if u > 0 && open {
			piece, open = piece+1, false
		}
		if !open {
			put(piece, i, u)
			open = true
		}
		put(piece, i, v)
		if v < 1 {
			piece, open = piece+1, false
		}
	}
}

// cutLine is cut for compositions.
func (t triangle) cutLine(xs []ternary.Composition) (out [][]ternary.Composition) {
	if t.view == nil {
		return [][]ternary.Composition{xs}
	}
	t.cut(xs, func(piece, i int, u float64) {
		if piece == len(out) {
			out = append(out, nil)
		}
		x := t.between(xs[i], xs[i+1], u)
		switch u {
		case 0:
			x = xs[i]
		case 1:
			x = xs[i+1]
		}
		out[piece] = append(out[piece], x)
	})
	return out
}

// cutRing is a ring within the view; pieces are joined along its sides.
func (t triangle) cutRing(ring []ternary.Composition) []ternary.Composition {
	if t.view == nil {
		return ring
	}
	for k := range 3 {
		var out []ternary.Composition
		for i, a := range ring {
			b := ring[(i+1)%len(ring)]
			pa, pb := t.shares(a)[k], t.shares(b)[k]
			if pa >= 0 {
				out = append(out, a)
			}
			if pa >= 0 != (pb >= 0) {
				out = append(out, t.between(a, b, pa/(pa-pb)))
			}
		}
		if ring = out; len(ring) < 3 {
			return nil
		}
	}
	return ring
}

// cutProjection is what a view shows of a projection.
func (t triangle) cutProjection(p *liquidus.Projection) *liquidus.Projection {
	if t.view == nil {
		return p
	}
	q := *p
	q.Nodes, q.Extrema, q.Curves, q.Fields, q.Isotherms, q.Unmixed = nil, nil, nil, nil, nil, nil
	for _, n := range p.Nodes {
		if t.shows(n.Liquid) {
			q.Nodes = append(q.Nodes, n)
		}
	}
	for _, n := range p.Extrema {
		if t.shows(n.Liquid) {
			q.Extrema = append(q.Extrema, n)
		}
	}
	for _, c := range p.Curves {
		xs := make([]ternary.Composition, len(c.Points))
		for i, pt := range c.Points {
			xs[i] = pt.Liquid
		}
		var pieces []liquidus.Curve
		t.cut(xs, func(piece, i int, u float64) {
			if piece == len(pieces) {
				pieces = append(pieces, liquidus.Curve{Solids: c.Solids, From: c.From, To: c.To})
			}
			a, b := c.Points[i], c.Points[i+1]
			pt := a
			if u == 1 {
				pt = b
			} else if u > 0 {
				pt.Liquid, pt.T = t.between(a.Liquid, b.Liquid, u), a.T+u*(b.T-a.T)
			}
			pieces[piece].Points = append(pieces[piece].Points, pt)
		})
		q.Curves = append(q.Curves, pieces...)
	}
	for _, f := range p.Fields {
		outline := t.cutRing(f.Outline)
		if len(outline) < 3 {
			continue
		}
		g := f
		g.Outline, g.Holes = outline, nil
		for _, h := range f.Holes {
			if ring := t.cutRing(h); len(ring) > 2 {
				g.Holes = append(g.Holes, ring)
			}
		}
		q.Fields = append(q.Fields, g)
	}
	for _, iso := range p.Isotherms {
		out := liquidus.Isotherm{T: iso.T}
		for _, l := range iso.Lines {
			xs := l.Points
			if l.Closed && len(xs) > 0 {
				xs = append(append([]ternary.Composition{}, xs...), xs[0])
			}
			pieces := t.cutLine(xs)
			if l.Closed && len(pieces) == 1 && len(pieces[0]) == len(xs) {
				out.Lines = append(out.Lines, l) // whole
				continue
			}
			for _, piece := range pieces {
				out.Lines = append(out.Lines, liquidus.IsothermLine{Solid: l.Solid, Points: piece, TieLine: l.TieLine})
			}
		}
		if len(out.Lines) > 0 {
			q.Isotherms = append(q.Isotherms, out)
		}
	}
	for _, x := range p.Unmixed {
		if t.shows(x) {
			q.Unmixed = append(q.Unmixed, x)
		}
	}
	return &q
}

// pure is the component that is pure at a corner of the page, or −1.
func (t triangle) pure(corner int) int {
	if t.view == nil {
		return corner
	}
	for i := range 3 {
		if t.view.corners[i][corner] > 1-1e-9 {
			return i
		}
	}
	return -1
}

// at corner k a component has this fraction.
func (t triangle) cornerFraction(component, corner int) float64 {
	if t.view == nil {
		if component == corner {
			return 1
		}
		return 0
	}
	return t.view.corners[component][corner]
}

// sideOf is the side of the page, named by the corner opposite, on which a
// component is absent, or −1.
func (t triangle) sideOf(component int) int {
	for k := range 3 {
		if t.cornerFraction(component, (k+1)%3) < 1e-9 && t.cornerFraction(component, (k+2)%3) < 1e-9 {
			return k
		}
	}
	return -1
}

// whole reports that the three corners are the three components.
func (t triangle) whole() bool { return t.pure(0) >= 0 && t.pure(1) >= 0 && t.pure(2) >= 0 }
