package liquidus

import (
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// crossingPoint is where an isotherm meets a boundary curve or an edge.
type crossingPoint struct {
	x     ternary.Composition
	z     vec
	curve int    // index of the curve, or -1
	edge  int    // index of the absent component, or -1
	solid [2]int // the fields on either side; on an edge both are the same
	y     [2][3]float64
	used  [2]bool
	at    float64 // position on the edge
}

const crossingSame = 1e-5 // distance at which a line's end is matched to a crossing

// isotherm traces all pieces of the isotherm of T within the fields.
func (e *engine) isotherm(p *Projection, T float64) Isotherm {
	iso := Isotherm{T: T}
	cs := e.curveCrossings(p, T)
	for _, ed := range e.edges {
		cs = append(cs, e.edgeCrossings(ed, T)...)
	}
	for i := range cs {
		sides := 2
		if cs[i].edge >= 0 || cs[i].solid[1] == gibbs.Liquid {
			sides = 1
		}
		for side := 0; side < sides; side++ {
			if cs[i].used[side] {
				continue
			}
			cs[i].used[side] = true
			pts, ok := e.isothermFrom(&cs[i], side, T, cs)
			if !ok {
				e.problem(fmt.Sprintf("the isotherm of %.1f K in the field of %s was lost", T, e.symbol(cs[i].solid[side])))
				continue
			}
			iso.Lines = append(iso.Lines, IsothermLine{Solid: cs[i].solid[side], Points: pts})
		}
	}
	iso.Lines = append(iso.Lines, e.tieLines(cs)...)
	for i := range p.Extrema {
		x := &p.Extrema[i]
		if x.Edge >= 0 {
			continue
		}
		for k := range p.Fields {
			f := &p.Fields[k]
			if f.TwoLiquids || f.Solid != x.Solids[0].Phase || !f.contains(x.Liquid) {
				continue
			}
			if pts, ok := e.closedIsotherm(f, x, T, iso.Lines); ok {
				iso.Lines = append(iso.Lines, IsothermLine{Solid: f.Solid, Points: e.line(pts), Closed: true})
			}
		}
	}
	return iso
}

// line converts traced points, with one point of the cubic between each two.
func (e *engine) line(pts []tracePoint) []ternary.Composition {
	out := make([]ternary.Composition, 0, 2*len(pts))
	for i := range pts {
		q := &pts[i]
		if i > 0 {
			p := &pts[i-1]
			if h := q.z.minus(p.z).norm(); h > 1e-9 {
				out = append(out, betweenPlaces(p.place(), q.place(), p.t, q.t, h, 0.5).x)
			}
		}
		out = append(out, q.x)
	}
	return out
}

// curveCrossings finds where T lies on the boundary curves: at most once on
// each, since T does not rise along an arc.
func (e *engine) curveCrossings(p *Projection, T float64) []crossingPoint {
	var out []crossingPoint
	for i := range p.Curves {
		c := &p.Curves[i]
		n := len(c.Points)
		if !(c.Points[0].T > T && c.Points[n-1].T <= T) || c.Solids[1] >= 0 && e.samePlace(c.Solids[0], c.Solids[1]) {
			continue
		}
		k := 1
		for k < n-1 && c.Points[k].T > T {
			k++
		}
		a, b := &c.Points[k-1], &c.Points[k]
		u := 0.5
		if a.T != b.T {
			u = (a.T - T) / (a.T - b.T)
		}
		var s site
		x := a.Liquid.Lerp(b.Liquid, u)
		for j := range x {
			x[j] = math.Max(x[j], 1e-12)
		}
		s.setOn(e, x, T)
		ca := constraint{phase: c.Solids[0], y: b.Solids[0].Y}
		cb := constraint{phase: c.Solids[1], y: b.Solids[1].Y}
		ct := constraint{phase: isothermal, t: T}
		if !e.solvePoint(&s, &ca, &cb, &ct) {
			e.problem(fmt.Sprintf("the crossing of the isotherm of %.1f K with the curve of %s and %s was not found", T, e.symbol(c.Solids[0]), e.symbol(c.Solids[1])))
			continue
		}
		out = append(out, crossingPoint{x: s.x, z: s.z, curve: i, edge: -1, solid: c.Solids, y: [2][3]float64{ca.y, cb.y}})
	}
	return out
}

// edgeCrossings finds where T_L = T on an edge.
func (e *engine) edgeCrossings(ed *edge, T float64) []crossingPoint {
	var out []crossingPoint
	x0, dx := edgeLine((ed.k+1)%3, (ed.k+2)%3)
	for n := 1; n < len(ed.stops); n++ {
		a, b := &ed.stops[n-1], &ed.stops[n]
		if a.after != b.before || (a.T > T) == (b.T > T) || a.after < 0 || a.after == e.splitCode() {
			continue
		}
		at, sol := e.edgeCrossing(a, b, x0, dx, T)
		x := onLine(x0, dx, at)
		px, py := x.XY()
		out = append(out, crossingPoint{x: x, z: vec{px, py, T / e.tRef}, curve: -1, edge: ed.k, at: at,
			solid: [2]int{a.after, a.after}, y: [2][3]float64{sol.Y, sol.Y}})
	}
	return out
}

// edgeCrossing finds where T_φ = T between two stops of an edge: by Newton's
// method from the chord, by bisection where that leaves the interval.
func (e *engine) edgeCrossing(a, b *stop, x0, dx ternary.Composition, T float64) (at float64, sol saturated) {
	lo, hi := a.at, b.at
	rising := b.T > a.T
	for round := 0; round < 80 && hi-lo > 1e-15; round++ {
		at = (lo + hi) / 2
		if round == 0 && !math.IsInf(a.T, 0) && !math.IsInf(b.T, 0) {
			at = lo + (hi-lo)*(T-a.T)/(b.T-a.T)
		}
		c := e.column(onLine(x0, dx, at))
		sol = e.saturation(a.after, &c, saturated{T: T})
		if round%8 == 0 {
			var s site
			ca := constraint{phase: a.after, y: sol.Y}
			ct := constraint{phase: isothermal, t: T}
			if root, ok := e.solveOnLine(&s, &ca, &ct, x0, dx, at, T); ok && root >= lo && root <= hi {
				return root, saturated{T: T, Y: ca.y}
			}
		}
		if (sol.T < T) == rising {
			lo = at
		} else {
			hi = at
		}
	}
	return at, sol
}

// isothermFrom follows the isotherm from a crossing into one of its fields.
func (e *engine) isothermFrom(c *crossingPoint, side int, T float64, cs []crossingPoint) ([]ternary.Composition, bool) {
	a := constraint{phase: c.solid[side], y: c.y[side]}
	t := constraint{phase: isothermal, t: T}
	var s site
	head := e.buffer[:0]
	var dir vec
	if c.edge >= 0 {
		at, d, ok := e.isothermInside(c, &a, t)
		if !ok {
			return nil, false
		}
		s.set(e, at)
		step := s.z.minus(c.z)
		head = append(head, tracePoint{x: c.x, z: c.z, t: step.scaled(1 / step.norm())})
		dir = d
	} else {
		s.setOn(e, c.x, T)
		b := constraint{phase: c.solid[1-side], y: c.y[1-side]}
		_, ga := a.eval(e, &s)
		_, gb := b.eval(e, &s)
		d, ok := tangent(ga, vec{0, 0, 1}, vec{1, 1, 0})
		if !ok {
			return nil, false
		}
		if gb.dot(d) > 0 {
			d = d.scaled(-1)
		}
		dir = d
	}
	follow := newTracer(e, a, t)
	if cap(head) > 1 {
		follow.buffer = head[len(head):]
	}
	tr := follow.run(s.place(), dir, false)
	pts := append(head, tr.points...) // in place, unless the buffer grew
	e.buffer = pts
	return e.line(pts), e.matchEnd(tr, c.solid[side], cs)
}

// isothermInside solves the isotherm's first point inside the edge.
func (e *engine) isothermInside(c *crossingPoint, a *constraint, t constraint) (at place, dir vec, ok bool) {
	for in := edgeStart; in > edgeLeast; in /= 10 {
		ca, ct := *a, t
		var s site
		pos, solved := e.solveInside(&s, &ca, &ct, c.edge, in, c.at, t.t)
		if !solved || math.Abs(pos-c.at) > 0.05+20*in {
			continue
		}
		if w, _ := e.worst(&s, a.phase, a.phase); w > zeroDrive {
			continue
		}
		_, ga := ca.eval(e, &s)
		d, good := tangent(ga, vec{0, 0, 1}, vec{dxdp[c.edge][0], dxdp[c.edge][1], 0})
		if good {
			*a = ca
			return s.place(), d, true
		}
	}
	return place{}, vec{}, false
}

// matchEnd marks the crossing at which a traced isotherm ends as used.
func (e *engine) matchEnd(tr traced, solid int, cs []crossingPoint) bool {
	if tr.end != endPhase && tr.end != endEdge {
		return false
	}
	last := tr.points[len(tr.points)-1].z
	for i := range cs {
		c := &cs[i]
		if c.z.minus(last).flat() > crossingSame {
			continue
		}
		for side := 0; side < 2; side++ {
			if c.solid[side] == solid && !c.used[side] {
				c.used[side] = true
				return true
			}
		}
	}
	return false
}

// tieLines are the isotherm's straight pieces across two-liquid fields, between
// its crossings with the two sides of a monotectic curve.
func (e *engine) tieLines(cs []crossingPoint) []IsothermLine {
	var out []IsothermLine
	for i := range cs {
		c := &cs[i]
		if c.curve < 0 || c.solid[1] != gibbs.Liquid {
			continue
		}
		o := ternary.Composition(c.y[1])
		if c.x[0] < o[0] || c.x[0] == o[0] && c.x[1] < o[1] {
			continue // drawn from the other side
		}
		out = append(out, IsothermLine{Solid: c.solid[0], Points: []ternary.Composition{c.x, o}, TieLine: true})
	}
	return out
}

// closedIsotherm traces the ring of T round an extremum of a field, if there is
// one and it is not among the lines already traced.
func (e *engine) closedIsotherm(f *Field, top *Node, T float64, lines []IsothermLine) ([]tracePoint, bool) {
	above := top.T > T
	// walk from the extremum towards the nearest point of the outline
	near := f.Outline[0]
	for _, x := range f.Outline {
		if x.Distance(top.Liquid) < near.Distance(top.Liquid) {
			near = x
		}
	}
	c := e.column(near)
	if (e.saturation(f.Solid, &c, saturated{}).T > T) == above {
		return nil, false // T is not reached inside the field: no ring
	}
	lo, hi := 0.0, 1.0
	var sol saturated
	for round := 0; round < 60; round++ {
		mid := (lo + hi) / 2
		c := e.column(top.Liquid.Lerp(near, mid))
		sol = e.saturation(f.Solid, &c, sol)
		if (sol.T > T) == above {
			lo = mid
		} else {
			hi = mid
		}
	}
	x := top.Liquid.Lerp(near, (lo+hi)/2)
	if !f.contains(x) || onLines(x, f.Solid, lines) {
		return nil, false
	}
	var s site
	s.setOn(e, x, T)
	a := constraint{phase: f.Solid, y: sol.Y}
	t := constraint{phase: isothermal, t: T}
	_, ga := a.eval(e, &s)
	dir, ok := tangent(ga, vec{0, 0, 1}, vec{1, 1, 0})
	if !ok {
		return nil, false
	}
	tr := newTracer(e, a, t).run(s.place(), dir, true)
	return tr.points, tr.end == endClosed
}

// onLines reports whether x lies on a traced line of the solid.
func onLines(x ternary.Composition, solid int, lines []IsothermLine) bool {
	px, py := x.XY()
	for _, l := range lines {
		if l.Solid != solid {
			continue
		}
		for i := 1; i < len(l.Points); i++ {
			ax, ay := l.Points[i-1].XY()
			bx, by := l.Points[i].XY()
			dx, dy := bx-ax, by-ay
			h := math.Hypot(dx, dy)
			if h == 0 {
				continue
			}
			u := ((px-ax)*dx + (py-ay)*dy) / (h * h)
			if u < 0 || u > 1 {
				continue
			}
			if math.Abs((px-ax)*dy-(py-ay)*dx)/h < 1e-3 {
				return true
			}
		}
	}
	return false
}
