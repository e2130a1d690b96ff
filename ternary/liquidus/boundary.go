package liquidus

import (
	"fmt"
	"math"
	"sort"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

const (
	nodeSame  = 1e-7  // two nodes closer than this, with one set of solids, are one
	edgeStart = 2e-3  // how far inside the edge a curve's first point is solved
	edgeHug   = 1e-6  // nearer than this an invariant point is solved for directly
	edgeLeast = 1e-15 // the nearest that is tried
	knownNear = 2e-4  // a point this close to a curve of its solids lies on it
	portEmpty = -1000 // no phase
)

// port is a curve's end at a node: the two solids along it.
type port struct{ a, b int }

// departure is a curve still to be followed from a node.
type departure struct {
	node int
	port port
}

// rawCurve is a followed curve between nodes; from = to = -1 for a ring.
type rawCurve struct {
	a, b     int
	from, to int
	points   []tracePoint
}

func (e *engine) addNode(n Node) int {
	e.nodes = append(e.nodes, n)
	e.ports = append(e.ports, nil)
	return len(e.nodes) - 1
}

func makePort(a, b int) port {
	if a > b {
		a, b = b, a
	}
	return port{a, b}
}

// take marks a port as used; it reports false when it was already.
func (e *engine) take(node int, p port) bool {
	for _, q := range e.ports[node] {
		if q == p {
			return false
		}
	}
	e.ports[node] = append(e.ports[node], p)
	return true
}

// followEdges follows the curve of every edge node into the triangle.
func (e *engine) followEdges() {
	for _, ed := range e.edges {
		for n := 0; n < len(ed.nodes); n++ {
			e.followFromEdge(ed, ed.nodes[n], ed.at[n])
		}
	}
}

func (e *engine) followFromEdge(ed *edge, node int, at float64) {
	nd := &e.nodes[node]
	sa, sb := nd.Solids[0], nd.Solids[1]
	p := makePort(sa.Phase, sb.Phase)
	if !e.take(node, p) {
		return
	}
	third := -1
	for in := edgeStart; in > edgeLeast; in /= 10 {
		a := constraint{phase: sa.Phase, y: sa.Y}
		b := constraint{phase: sb.Phase, y: sb.Y}
		var s site
		pos, ok := e.solveInside(&s, &a, &b, ed.k, in, at, nd.T)
		if !ok || math.Abs(pos-at) > 0.05+20*in || pos < 0 || pos > 1 {
			continue
		}
		if w, c := e.worst(&s, sa.Phase, sb.Phase); w > zeroDrive {
			third = c
			continue
		}
		if third >= 0 && in < edgeHug && e.hugging(node, &s, a, b, third) {
			return
		}
		inward := vec{dxdp[ed.k][0], dxdp[ed.k][1], 0}
		_, ga := a.eval(e, &s)
		_, gb := b.eval(e, &s)
		dir, ok := tangent(ga, gb, inward)
		if !ok {
			continue
		}
		head := e.edgePoint(nd, s.z, dir)
		head.a, head.b = sa, sb
		e.finishCurve(node, []tracePoint{head}, newTracer(e, a, b).run(s.place(), dir, false))
		return
	}
	e.problem(fmt.Sprintf("the curve of %s and %s could not be followed from the edge at %s", e.symbol(sa.Phase), e.symbol(sb.Phase), e.place(nd.Liquid)))
}

// solveInside solves two constraints with the fraction of component k held at in,
// a little inside the edge, from position at along it. It returns the position.
func (e *engine) solveInside(s *site, a, b *constraint, k int, in, at, T float64) (float64, bool) {
	x0, dx := edgeLine((k+1)%3, (k+2)%3)
	for c := range x0 {
		x0[c] *= 1 - in
		dx[c] *= 1 - in
	}
	x0[k] = in
	return e.solveOnLine(s, a, b, x0, dx, at, T)
}

// edgePoint is the point of a node on an edge from which a curve goes to z.
func (e *engine) edgePoint(nd *Node, z, dir vec) tracePoint {
	px, py := nd.Liquid.XY()
	z0 := vec{px, py, nd.T / e.tRef}
	if d := z.minus(z0); d.norm() > 1e-12 {
		dir = d.scaled(1 / d.norm())
	}
	return tracePoint{x: nd.Liquid, z: z0, t: dir}
}

// hugging files the curve from an edge node to an invariant point so close to the
// edge that continuation cannot take steps between them: the field of third
// comes within a hair of the edge.
func (e *engine) hugging(node int, s *site, a, b constraint, third int) bool {
	c := constraint{phase: third, y: e.sys.Solids[third].Drive(&s.pot.Mu, s.T).Y}
	if !e.solvePoint(s, &a, &b, &c) {
		return false
	}
	end := tracePoint{x: s.x, z: s.z, a: a.state(), b: b.state()}
	to, ok := e.invariant(end, third)
	if !ok {
		return false
	}
	nd := &e.nodes[node]
	head := e.edgePoint(nd, s.z, vec{})
	head.a, head.b = nd.Solids[0], nd.Solids[1]
	if head.a.Phase != end.a.Phase {
		head.a, head.b = head.b, head.a
	}
	end.t = head.t
	e.take(to, makePort(a.phase, b.phase))
	e.addCurve(rawCurve{a: a.phase, b: b.phase, from: node, to: to, points: []tracePoint{head, end}})
	return true
}

// followPending follows curves from invariant points until none is left.
func (e *engine) followPending() {
	for len(e.pending) > 0 {
		d := e.pending[0]
		e.pending = e.pending[1:]
		if e.take(d.node, d.port) {
			e.followFromNode(d.node, d.port)
		}
	}
}

func (e *engine) followFromNode(node int, p port) {
	nd := &e.nodes[node]
	var a, b, c constraint
	c.phase = portEmpty
	for _, st := range nd.Solids {
		switch k := (constraint{phase: st.Phase, y: st.Y}); st.Phase {
		case p.a:
			a = k
		case p.b:
			b = k
		default:
			c = k
		}
	}
	var s site
	s.setOn(e, nd.Liquid, nd.T)
	_, ga := a.eval(e, &s)
	_, gb := b.eval(e, &s)
	_, gc := c.eval(e, &s)
	dir, ok := tangent(ga, gb, vec{1, 1, 1})
	if !ok {
		e.problem(fmt.Sprintf("the curve of %s and %s has no direction at %s", e.symbol(p.a), e.symbol(p.b), e.place(nd.Liquid)))
		return
	}
	if gc.dot(dir) > 0 {
		dir = dir.scaled(-1)
	}
	e.finishCurve(node, nil, newTracer(e, a, b).run(s.place(), dir, false))
}

// followSeed follows a curve both ways from a point found on it.
func (e *engine) followSeed(s *site, a, b constraint) {
	_, ga := a.eval(e, s)
	_, gb := b.eval(e, s)
	dir, ok := tangent(ga, gb, vec{1, 1, 1})
	if !ok {
		return
	}
	ahead := newTracer(e, a, b).run(s.place(), dir, true)
	if ahead.end == endClosed {
		e.addCurve(rawCurve{a: a.phase, b: b.phase, from: -1, to: -1, points: ahead.points})
		return
	}
	back := newTracer(e, a, b).run(s.place(), dir.scaled(-1), false)
	from, ok1 := e.endNode(a.phase, b.phase, back)
	to, ok2 := e.endNode(a.phase, b.phase, ahead)
	if !ok1 || !ok2 {
		return
	}
	pts := reversed(back.points)
	pts = append(pts[:len(pts)-1], ahead.points...)
	p := makePort(a.phase, b.phase)
	e.take(from, p)
	e.take(to, p)
	e.addCurve(rawCurve{a: a.phase, b: b.phase, from: from, to: to, points: pts})
}

func reversed(pts []tracePoint) []tracePoint {
	out := make([]tracePoint, len(pts))
	for i, p := range pts {
		p.t = p.t.scaled(-1)
		out[len(pts)-1-i] = p
	}
	return out
}

// finishCurve files a curve that began at a node.
func (e *engine) finishCurve(node int, head []tracePoint, t traced) {
	first := t.points[0]
	to, ok := e.endNode(first.a.Phase, first.b.Phase, t)
	if !ok {
		return
	}
	e.take(to, makePort(first.a.Phase, first.b.Phase))
	e.addCurve(rawCurve{a: first.a.Phase, b: first.b.Phase, from: node, to: to, points: append(head, t.points...)})
}

func (e *engine) addCurve(c rawCurve) {
	if c.a > c.b {
		c.a, c.b = c.b, c.a
		for i := range c.points {
			p := &c.points[i]
			p.a, p.b = p.b, p.a
		}
	}
	e.raw = append(e.raw, c)
	e.mesh.mark(c.points, c.a, c.b)
}

// endNode finds or makes the node at which a followed curve ends.
func (e *engine) endNode(a, b int, t traced) (int, bool) {
	last := t.points[len(t.points)-1]
	x := last.x
	T := last.z[2] * e.tRef
	switch t.end {
	case endPhase:
		return e.invariant(last, t.phase)
	case endEdge:
		x[t.edge] = 0
		ed := e.edges[t.edge]
		for _, n := range ed.nodes {
			nd := &e.nodes[n]
			if nd.Liquid.Distance(x) < 1e-6 && makePort(nd.Solids[0].Phase, nd.Solids[1].Phase) == makePort(a, b) {
				return n, true
			}
		}
		e.problem(fmt.Sprintf("the curve of %s and %s reaches the edge without %s at %s, where the edge has no such point", e.symbol(a), e.symbol(b), e.sys.Components[t.edge].Symbol, e.place(x)))
		return 0, false
	case endApex:
		return e.apexNode(t.edge, last), true
	case endLimit:
		e.problem(fmt.Sprintf("the curve of %s and %s rises beyond %.0f K at %s", e.symbol(a), e.symbol(b), T, e.place(x)))
		return 0, false
	}
	e.problem(fmt.Sprintf("the curve of %s and %s was lost after %d points at %s, %.1f K", e.symbol(a), e.symbol(b), len(t.points), e.place(x), T))
	return 0, false
}

// apexNode finds or makes the node for a curve that ends in an apex, as the
// boundary of a solid outside the triangle does.
func (e *engine) apexNode(k int, p tracePoint) int {
	for n := range e.nodes {
		if e.nodes[n].Kind == AtApex && e.nodes[n].Liquid[k] == 1 {
			return n
		}
	}
	return e.addNode(Node{Kind: AtApex, Edge: -1, Liquid: ternary.Apex(k), T: p.z[2] * e.tRef, Solids: []gibbs.State{p.a, p.b}})
}

// invariant finds or makes the node at which three solids coexist with liquid.
func (e *engine) invariant(p tracePoint, third int) (int, bool) {
	var s site
	s.set(e, p.place())
	c := constraint{phase: third}
	c.y = e.sys.Solids[third].Drive(&s.pot.Mu, s.T).Y
	c.eval(e, &s)
	a := constraint{phase: p.a.Phase, y: p.a.Y}
	b := constraint{phase: p.b.Phase, y: p.b.Y}
	ra, _ := a.eval(e, &s)
	rb, _ := b.eval(e, &s)
	solids := []gibbs.State{a.state(), b.state(), c.state()}
	sort.Slice(solids, func(i, j int) bool { return solids[i].Phase < solids[j].Phase })
	for n := range e.nodes {
		nd := &e.nodes[n]
		if nd.Edge >= 0 || len(nd.Solids) != 3 || nd.Liquid.Distance(s.x) > nodeSame {
			continue
		}
		if nd.Solids[0].Phase == solids[0].Phase && nd.Solids[1].Phase == solids[1].Phase && nd.Solids[2].Phase == solids[2].Phase {
			return n, true
		}
	}
	for i, q := range e.sys.Solids {
		if i == solids[0].Phase || i == solids[1].Phase || i == solids[2].Phase {
			continue
		}
		if q.Drive(&s.pot.Mu, s.T).D/e.rtRef > zeroDrive {
			e.problem(fmt.Sprintf("more than three solids (%s, %s, %s, %s) coexist with liquid at %s: the system is degenerate there",
				e.symbol(solids[0].Phase), e.symbol(solids[1].Phase), e.symbol(solids[2].Phase), e.symbol(i), e.place(s.x)))
			return 0, false
		}
	}
	res := math.Max(math.Abs(ra), math.Max(math.Abs(rb), math.Abs(c.last.D/e.rtRef))) * e.tRef / s.T
	n := e.addNode(Node{Edge: -1, Liquid: s.x, T: s.T, Solids: solids, Residual: res})
	e.pending = append(e.pending,
		departure{n, port{solids[0].Phase, solids[1].Phase}},
		departure{n, port{solids[0].Phase, solids[2].Phase}},
		departure{n, port{solids[1].Phase, solids[2].Phase}})
	return n, true
}

// known reports whether z lies on a curve of solids a and b that has already
// been followed.
func (e *engine) known(a, b int, z vec) bool {
	p := makePort(a, b)
	for i := range e.raw {
		c := &e.raw[i]
		if c.a != p.a || c.b != p.b {
			continue
		}
		for n := 1; n < len(c.points); n++ {
			p, q := &c.points[n-1], &c.points[n]
			d := q.z.minus(p.z)
			h := d.norm()
			if h == 0 {
				continue
			}
			u := z.minus(p.z).dot(d) / (h * h)
			if u < -0.05 || u > 1.05 {
				continue
			}
			u = math.Max(0, math.Min(1, u))
			near := z.minus(hermiteVec(p.z, q.z, p.t, q.t, h, u))
			if near.flat() < knownNear+0.002*h {
				return true
			}
		}
	}
	return false
}
