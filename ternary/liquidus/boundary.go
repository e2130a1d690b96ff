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
)

// port is a curve's end at a node: the two of the node's phases that go along it,
// as indices in Node.Solids.
type port struct{ a, b int }

// departure is a curve still to be followed from a node.
type departure struct {
	node int
	port port
}

// rawCurve is a followed curve between nodes; from = to = -1 for a ring. b is
// gibbs.Liquid along a monotectic curve.
type rawCurve struct {
	a, b     int
	from, to int
	points   []tracePoint
}

func (e *engine) addNode(n Node) int {
	n.Conjugate = -1
	e.nodes = append(e.nodes, n)
	e.ports = append(e.ports, nil)
	return len(e.nodes) - 1
}

// portOf is the port of a node through which a curve of two phases leaves: the
// node's phases that are nearest in composition.
func (e *engine) portOf(node int, a, b gibbs.State) port {
	i, j := e.match(node, a, -1), -1
	j = e.match(node, b, i)
	if i > j {
		i, j = j, i
	}
	return port{i, j}
}

// match finds the phase of a node that is a state, other than number not.
func (e *engine) match(node int, st gibbs.State, not int) int {
	return matchStates(e.nodes[node].Solids, st, not)
}

// matchStates finds the state of a list that is nearest in composition to st and
// of its phase, other than number not; -1 where there is none.
func matchStates(list []gibbs.State, st gibbs.State, not int) int {
	best, dist := -1, math.Inf(1)
	for i, s := range list {
		if i == not || s.Phase != st.Phase {
			continue
		}
		d := 0.0
		for k := range s.Y {
			d += math.Abs(s.Y[k] - st.Y[k])
		}
		if d < dist {
			best, dist = i, d
		}
	}
	return best
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
	if !e.take(node, port{0, 1}) {
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
		run := newTracer(e, a, b).run(s.place(), dir, false)
		points := []tracePoint{head}
		if x, found := newTracer(e, a, b).extremum(&head, &run.points[0], a, b); found {
			points = append(points, x) // T turns before the first step is done
		}
		e.finishCurve(node, points, run)
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
	end := tracePoint{x: s.x, z: s.z, a: a.state(), b: b.state(), c: c.state()}
	to, ok := e.invariant(end)
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
	e.file(rawCurve{a: a.phase, b: b.phase, from: node, to: to, points: []tracePoint{head, end}})
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
	as := func(i int) constraint { return constraint{phase: nd.Solids[i].Phase, y: nd.Solids[i].Y} }
	a, b, c := as(p.a), as(p.b), as(3-p.a-p.b)
	if a.phase == gibbs.Liquid { // the second liquid comes last
		a, b = b, a
	}
	var s site
	s.setOn(e, nd.Liquid, nd.T)
	_, ga := a.eval(e, &s)
	_, gb := b.eval(e, &s)
	_, gc := c.eval(e, &s)
	dir, ok := tangent(ga, gb, vec{1, 1, 1})
	if !ok {
		e.problem(fmt.Sprintf("the curve of %s and %s has no direction at %s", e.symbol(a.phase), e.symbol(b.phase), e.place(nd.Liquid)))
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
		e.file(rawCurve{a: a.phase, b: b.phase, from: -1, to: -1, points: ahead.points})
		return
	}
	back := newTracer(e, a, b).run(s.place(), dir.scaled(-1), false)
	from, ok1 := e.endNode(a.phase, b.phase, &back)
	to, ok2 := e.endNode(a.phase, b.phase, &ahead)
	if !ok1 || !ok2 {
		return
	}
	pts := reversed(back.points)
	pts = append(pts[:len(pts)-1], ahead.points...)
	e.file(rawCurve{a: a.phase, b: b.phase, from: from, to: to, points: pts})
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
	to, ok := e.endNode(first.a.Phase, first.b.Phase, &t)
	if !ok {
		return
	}
	e.file(rawCurve{a: first.a.Phase, b: first.b.Phase, from: node, to: to, points: append(head, t.points...)})
}

// file adds a followed curve, marks its ports, and does the same for the
// conjugate side of a monotectic curve.
func (e *engine) file(c rawCurve) {
	e.markPorts(&c)
	if c.b == gibbs.Liquid {
		o, ok := e.conjugate(&c)
		if !ok {
			return
		}
		e.markPorts(&o)
		e.raw = append(e.raw, c, o)
		e.mesh.mark(c.points, c.a, e.splitCode())
		e.mesh.mark(o.points, c.a, e.splitCode())
		return
	}
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

func (e *engine) markPorts(c *rawCurve) {
	if c.from < 0 {
		return
	}
	first, last := &c.points[0], &c.points[len(c.points)-1]
	e.take(c.from, e.portOf(c.from, first.a, first.b))
	e.take(c.to, e.portOf(c.to, last.a, last.b))
}

// endNode finds or makes the node at which a followed curve ends.
func (e *engine) endNode(a, b int, t *traced) (int, bool) {
	last := t.points[len(t.points)-1]
	x := last.x
	T := last.z[2] * e.tRef
	switch t.end {
	case endPhase:
		return e.invariant(last)
	case endEdge:
		x[t.edge] = 0
		ed := e.edges[t.edge]
		for _, n := range ed.nodes {
			nd := &e.nodes[n]
			if nd.Liquid.Distance(x) < 1e-6 && (nd.Solids[0].Phase == a && nd.Solids[1].Phase == b || nd.Solids[0].Phase == b && nd.Solids[1].Phase == a) {
				return n, true
			}
		}
		return e.edgeNodeFrom(ed, &last), true
	case endApex:
		return e.apexNode(t.edge, last), true
	case endCritical:
		return e.criticalNode(t), true
	case endLimit:
		e.problem(fmt.Sprintf("the curve of %s and %s rises beyond %.0f K at %s", e.symbol(a), e.symbol(b), T, e.place(x)))
		return 0, false
	}
	e.problem(fmt.Sprintf("the curve of %s and %s was lost after %d points at %s, %.1f K", e.symbol(a), e.symbol(b), len(t.points), e.place(x), T))
	return 0, false
}

// edgeNodeFrom adds a node that the scan of an edge missed and a curve led to.
func (e *engine) edgeNodeFrom(ed *edge, p *tracePoint) int {
	x := p.x
	x[ed.k] = 0
	add := func(x ternary.Composition, a, b gibbs.State) int {
		n := e.addNode(Node{Edge: ed.k, Liquid: x, T: p.z[2] * e.tRef, Solids: []gibbs.State{a, b}})
		ed.nodes = append(ed.nodes, n)
		ed.at = append(ed.at, x[(ed.k+2)%3])
		return n
	}
	n := add(x, p.a, p.b)
	if p.b.Phase == gibbs.Liquid {
		m := add(ternary.Composition(p.b.C), p.a, gibbs.State{Phase: gibbs.Liquid, Y: x, C: x})
		e.nodes[n].Conjugate, e.nodes[m].Conjugate = m, n
	}
	return n
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

// invariant finds or makes the node at which three phases coexist with liquid.
func (e *engine) invariant(p tracePoint) (int, bool) {
	var s site
	s.set(e, p.place())
	var cs [3]constraint
	res := 0.0
	for i, st := range [3]gibbs.State{p.a, p.b, p.c} {
		cs[i] = constraint{phase: st.Phase, y: st.Y}
		r, _ := cs[i].eval(e, &s)
		res = math.Max(res, math.Abs(r)*e.tRef/s.T)
	}
	solids := []gibbs.State{cs[0].state(), cs[1].state(), cs[2].state()}
	sort.SliceStable(solids, func(i, j int) bool {
		a, b := &solids[i], &solids[j]
		if a.Phase != b.Phase {
			return uint(a.Phase) < uint(b.Phase) // a second liquid comes last
		}
		return a.Y[0] > b.Y[0]
	})
	if solids[1].Phase == gibbs.Liquid {
		e.problem(fmt.Sprintf("three liquids coexist at %s: such fields are not computed", e.place(s.x)))
		return 0, false
	}
	for n := range e.nodes {
		nd := &e.nodes[n]
		if nd.Edge < 0 && nd.Liquid.Distance(s.x) < nodeSame && sameStates(nd.Solids, solids) {
			return n, true
		}
	}
	for i, q := range e.sys.Solids {
		if i == cs[0].phase || i == cs[1].phase || i == cs[2].phase {
			continue
		}
		if q.Drive(&s.pot.Mu, s.T).D/e.rtRef > zeroDrive {
			e.problem(fmt.Sprintf("more than three solids (%s, %s, %s, %s) coexist with liquid at %s: the system is degenerate there",
				e.symbol(solids[0].Phase), e.symbol(solids[1].Phase), e.symbol(solids[2].Phase), e.symbol(i), e.place(s.x)))
			return 0, false
		}
	}
	n := e.addNode(Node{Edge: -1, Liquid: s.x, T: s.T, Solids: solids, Residual: res})
	e.depart(n)
	if solids[2].Phase == gibbs.Liquid {
		e.depart(e.conjugateNode(n))
	}
	return n, true
}

// depart puts all curves of an invariant point on the list.
func (e *engine) depart(n int) {
	e.pending = append(e.pending, departure{n, port{0, 1}}, departure{n, port{0, 2}}, departure{n, port{1, 2}})
}

func sameStates(a, b []gibbs.State) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if a[i].Phase != b[i].Phase {
			return false
		}
		for k := range a[i].Y {
			if math.Abs(a[i].Y[k]-b[i].Y[k]) > 1e-4 {
				return false
			}
		}
	}
	return true
}

// known reports whether z lies on a curve of solids a and b that has already
// been followed.
func (e *engine) known(a, b int, z vec) bool {
	for i := range e.raw {
		c := &e.raw[i]
		if (c.a != a || c.b != b) && (c.a != b || c.b != a) {
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
