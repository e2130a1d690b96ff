package liquidus

import (
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// A monotectic curve is followed in terms of one of its two liquids, with the
// other as a phase whose driving force is zero; its other side is the course of
// that other liquid.

// splitCode is the mark, beside the indices of solids, of liquids that separate
// into two before anything crystallises.
func (e *engine) splitCode() int { return len(e.sys.Solids) }

// secondLiquid is the most stable other liquid at the site: D > 0 means that the
// liquid there is not stable, −Inf that there is no other.
func (e *engine) secondLiquid(mu *[3]float64, x ternary.Composition, T float64) gibbs.Drive {
	best := gibbs.Drive{D: math.Inf(-1)}
	l := e.sys.Liquid
	if math.IsInf(T, 0) || !l.CanUnmix(T) {
		return best
	}
	for _, q := range l.Maxima(mu, T) {
		if !sameForm(q.Y, x) && q.D > best.D {
			best = q
		}
	}
	return best
}

// splitTol is the driving force, in RT, of a second liquid above which a liquid
// is taken to separate.
const splitTol = 1e-9

// splits reports whether the liquid x is unstable at T against separating, and
// towards which liquid.
func (e *engine) splits(x ternary.Composition, T float64) (gibbs.Drive, bool) {
	if math.IsInf(T, 0) || !e.sys.Liquid.CanUnmix(T) {
		return gibbs.Drive{}, false
	}
	c := e.column(x)
	mu := c.at(T)
	q := e.secondLiquid(&mu, x, T)
	return q, q.D > splitTol*ternary.R*T
}

// inherit looks whether a liquid that seemed stable separates towards the same
// second liquid as a neighbour does: near a critical point the two are too
// close together for the search from scratch.
func (e *engine) inherit(s *surface, x ternary.Composition, from *surface) bool {
	if s.split || !from.split || math.IsInf(s.T, 0) || !e.sys.Liquid.CanUnmix(s.T) {
		return false
	}
	c := e.column(x)
	mu := c.at(s.T)
	q := e.sys.Liquid.DriveFrom(&mu, s.T, from.other)
	if q.D > splitTol*ternary.R*s.T && !sameForm(q.Y, x) {
		s.split, s.other = true, q.Y
	}
	return s.split
}

// spreadSplits lets every node of the mesh inherit from its neighbours until
// nothing changes.
func (e *engine) spreadSplits() {
	m := e.mesh
	for changed := true; changed; {
		changed = false
		for i := 0; i <= m.n; i++ {
			for j := 0; i+j <= m.n; j++ {
				for _, l := range links {
					if !m.has(i+l[0], j+l[1]) {
						continue
					}
					a, b := &m.nodes[m.index(i, j)], &m.nodes[m.index(i+l[0], j+l[1])]
					if !a.split && e.inherit(a, m.composition(i, j), b) || !b.split && e.inherit(b, m.composition(i+l[0], j+l[1]), a) {
						changed = true
					}
				}
			}
		}
	}
}

// conjugatePoint is a point of a monotectic curve seen from its second liquid.
func (e *engine) conjugatePoint(p tracePoint) tracePoint {
	q := p
	q.x = ternary.Composition(p.b.C)
	px, py := q.x.XY()
	q.z = vec{px, py, p.z[2]}
	q.b = gibbs.State{Phase: gibbs.Liquid, Y: p.x, C: p.x}
	if t, ok := e.conjugateTangent(&p, &q); ok {
		q.t = t
	}
	return q
}

// conjugateTangent is how the second liquid moves as the first moves along its
// tangent: dy = (∂c/∂μ)dμ + (∂c/∂T)dT.
func (e *engine) conjugateTangent(p, q *tracePoint) (vec, bool) {
	for i := range q.x {
		if q.x[i] <= 0 || p.x[i] <= 0 {
			return vec{}, false
		}
	}
	var s site
	s.set(e, p.place())
	h, ct, ok := e.sys.Liquid.Curvature(q.x, s.T)
	if !ok {
		return vec{}, false
	}
	dT := p.t[2] * e.tRef
	var dmu, dy [3]float64
	for i := range dmu {
		dmu[i] = s.pot.DT[i] * dT
		for j := range dxdp {
			dmu[i] += s.pot.DY[i][j] * (dxdp[j][0]*p.t[0] + dxdp[j][1]*p.t[1])
		}
	}
	for i := range dy {
		dy[i] = ct[i] * dT
		for j := range dmu {
			dy[i] += h[i][j] * dmu[j]
		}
	}
	var t vec
	t[0], t[1] = ternary.Composition(dy).XY()
	t[2] = p.t[2]
	l := t.norm()
	return t.scaled(1 / l), l > 0
}

// conjugate is the other side of a monotectic curve.
func (e *engine) conjugate(c *rawCurve) (rawCurve, bool) {
	o := rawCurve{a: c.a, b: c.b, from: -1, to: -1, points: make([]tracePoint, len(c.points))}
	for i, p := range c.points {
		o.points[i] = e.conjugatePoint(p)
	}
	for i := range o.points { // ends without a tangent of their own
		if t := o.points[i].t; t == c.points[i].t && len(o.points) > 1 {
			j := min(i+1, len(o.points)-1)
			k := max(j-1, 0)
			if d := o.points[j].z.minus(o.points[k].z); d.norm() > 0 {
				o.points[i].t = d.scaled(1 / d.norm())
			}
		}
	}
	if c.from < 0 {
		return o, true
	}
	var ok1, ok2 bool
	o.from, ok1 = e.partner(c.from, &o.points[0])
	o.to, ok2 = e.partner(c.to, &o.points[len(o.points)-1])
	return o, ok1 && ok2
}

// partner is the node of the second liquid of a node.
func (e *engine) partner(n int, at *tracePoint) (int, bool) {
	nd := &e.nodes[n]
	if nd.Kind == Critical {
		return n, true
	}
	if nd.Conjugate >= 0 {
		return nd.Conjugate, true
	}
	if nd.Edge >= 0 {
		for _, m := range e.edges[nd.Edge].nodes {
			o := &e.nodes[m]
			if m != n && o.Liquid.Distance(at.x) < 1e-5 && o.Solids[1].Phase == gibbs.Liquid {
				nd.Conjugate, o.Conjugate = m, n
				return m, true
			}
		}
	}
	e.problem(fmt.Sprintf("the second liquid of the point at %s was not found at %s", e.place(nd.Liquid), e.place(at.x)))
	return 0, false
}

// conjugateNode makes the node of the second liquid of an invariant point.
func (e *engine) conjugateNode(n int) int {
	nd := e.nodes[n]
	o := nd
	o.Liquid = ternary.Composition(nd.Solids[2].C)
	o.Solids = append([]gibbs.State(nil), nd.Solids...)
	o.Solids[2] = gibbs.State{Phase: gibbs.Liquid, Y: nd.Liquid, C: nd.Liquid}
	m := e.addNode(o)
	e.nodes[n].Conjugate, e.nodes[m].Conjugate = m, n
	return m
}

// criticalNode makes the node at which the two liquids of a curve, or the two
// forms of its solid, become one: the course of the curve in the square of the
// tie line's length is extended to zero.
func (e *engine) criticalNode(t *traced) int {
	n := len(t.points)
	p, q := &t.points[max(n-3, 0)], &t.points[n-1]
	form := func(p *tracePoint) (u, v [3]float64) {
		if p.b.Phase == gibbs.Liquid {
			return p.x, p.b.Y
		}
		return p.a.Y, p.b.Y
	}
	tie := func(p *tracePoint) float64 {
		u, v := form(p)
		d := 0.0
		for k := range u {
			d += (u[k] - v[k]) * (u[k] - v[k])
		}
		return d
	}
	dp, dq := tie(p), tie(q)
	w := 0.0 // weight of p, so that the square extrapolates to zero
	if dp != dq {
		w = -dq / (dp - dq)
	}
	mix := func(a, b float64) float64 { return b + w*(a-b) }
	end := *q
	var y [3]float64
	up, vp := form(p)
	uq, vq := form(q)
	for k := range y {
		y[k] = mix((up[k]+vp[k])/2, (uq[k]+vq[k])/2)
		end.x[k] = mix(p.x[k], q.x[k])
	}
	if q.b.Phase == gibbs.Liquid {
		end.x = y
	}
	end.z[2] = mix(p.z[2], q.z[2])
	if q.b.Phase == gibbs.Liquid {
		c := e.column(end.x)
		if s := e.saturation(q.a.Phase, &c, saturated{T: end.z[2] * e.tRef}); !math.IsInf(s.T, 0) {
			end.z[2] = s.T / e.tRef
		}
	}
	end.z[0], end.z[1] = end.x.XY()
	ph := e.phaseOf(q.b.Phase)
	end.b = gibbs.State{Phase: q.b.Phase, Y: y, C: ph.Contents(y)}
	if q.a.Phase == q.b.Phase {
		end.a = end.b
	}
	if d := end.z.minus(q.z); d.norm() > 1e-12 {
		end.t = d.scaled(1 / d.norm())
	}
	t.points = append(t.points, end)
	for i := range e.nodes {
		nd := &e.nodes[i]
		if nd.Kind == Critical && nd.Liquid.Distance(end.x) < 1e-4 && nd.Solids[0].Phase == end.a.Phase {
			return i
		}
	}
	return e.addNode(Node{Kind: Critical, Edge: -1, Liquid: end.x, T: end.z[2] * e.tRef, Solids: []gibbs.State{end.a, end.b}})
}
