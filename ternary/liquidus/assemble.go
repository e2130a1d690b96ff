package liquidus

import (
	"fmt"
	"math"
	"sort"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// assemble turns the followed curves into the projection's nodes and arcs.
func (e *engine) assemble() *Projection {
	p := &Projection{System: e.sys}
	for k := range p.Apexes {
		s := e.surface(ternary.Apex(k), nil)
		p.Apexes[k] = ApexPoint{Solid: s.primary, T: s.T}
	}
	for _, r := range e.raw {
		e.splitCurve(p, r)
	}
	for n := range e.nodes {
		nd := &e.nodes[n]
		switch nd.Kind {
		case Maximum, Minimum, LoopStart, AtApex, Critical:
		default:
			nd.Coefficients = reaction(nd.Liquid, nd.Solids)
			nd.Kind = kindOfNode(nd.Coefficients)
			if nd.Coefficients != nil {
				if nd.Heat = e.heatOf(nd); nd.Heat < 0 {
					nd.Kind = Metatectic
				}
			}
			if nd.Solids[len(nd.Solids)-1].Phase == gibbs.Liquid {
				nd.Kind = Monotectic
			}
		}
	}
	e.nameNodes(p)
	for _, ed := range e.edges {
		e.findStops(ed, p.Nodes)
	}
	e.buildFields(p)
	e.findExtrema(p)
	return p
}

// heatOf is T·(S of one mole of liquid − S of the solids made from it).
func (e *engine) heatOf(nd *Node) float64 {
	_, s, _ := e.sys.Liquid.Gibbs(nd.Liquid, nd.T)
	for k, st := range nd.Solids {
		_, sk, _ := e.phaseOf(st.Phase).Gibbs(st.Y, nd.T)
		s -= nd.Coefficients[k] * sk
	}
	return nd.T * s
}

// splitCurve cuts a followed curve at its extrema of T into arcs.
func (e *engine) splitCurve(p *Projection, r rawCurve) {
	pts := r.points
	from, to := r.from, r.to
	if from < 0 { // a ring: begin at its first extremum, if it has one
		first := -1
		for i := range pts {
			if pts[i].extremum {
				first = i
				break
			}
		}
		if first < 0 {
			n := e.nodeAt(LoopStart, pts[0])
			e.addArc(p, r, pts, n, n)
			return
		}
		n := len(pts) - 1 // the last point repeats the first
		ring := append(append([]tracePoint(nil), pts[first:n]...), pts[:first+1]...)
		pts = ring
		from = e.nodeAt(e.extremumKind(pts, 0), pts[0])
		to = from
	}
	start := 0
	for i := 1; i < len(pts)-1; i++ {
		if !pts[i].extremum {
			continue
		}
		mid := e.nodeAt(e.extremumKind(pts, i), pts[i])
		e.addArc(p, r, pts[start:i+1], from, mid)
		from, start = mid, i
	}
	e.addArc(p, r, pts[start:], from, to)
}

func (e *engine) extremumKind(pts []tracePoint, i int) Kind {
	if i+1 < len(pts) && pts[i+1].z[2] < pts[i].z[2] {
		return Maximum
	}
	return Minimum
}

func (e *engine) nodeAt(k Kind, p tracePoint) int {
	return e.addNode(Node{Kind: k, Edge: -1, Liquid: p.x, T: p.z[2] * e.tRef, Solids: []gibbs.State{p.a, p.b}})
}

// addArc appends an arc, turned so that T does not rise along it.
func (e *engine) addArc(p *Projection, r rawCurve, pts []tracePoint, from, to int) {
	first, last := pts[0], pts[len(pts)-1]
	down := first.z[2] > last.z[2]
	if first.z[2] == last.z[2] || r.b >= 0 && e.samePlace(r.a, r.b) {
		down = from <= to
	}
	if !down {
		pts = reversed(pts)
		from, to = to, from
	}
	pts = e.splitKinds(pts)
	c := Curve{Solids: [2]int{r.a, r.b}, From: from, To: to, Points: make([]Point, len(pts))}
	for i, q := range pts {
		c.Points[i] = e.curvePoint(q)
	}
	for i := range c.Points { // a point without a kind of its own takes its neighbour's
		if c.Points[i].Kind == Degenerate {
			switch {
			case i > 0:
				c.Points[i].Kind, c.Points[i].Consumed = c.Points[i-1].Kind, c.Points[i-1].Consumed
			case len(c.Points) > 1:
				c.Points[0].Kind, c.Points[0].Consumed = c.Points[1].Kind, c.Points[1].Consumed
			}
		}
	}
	if nd := &e.nodes[from]; nd.Edge >= 0 || nd.Kind != "" {
		c.Points[0].Liquid = nd.Liquid
	}
	if nd := &e.nodes[to]; nd.Edge >= 0 || nd.Kind == AtApex {
		c.Points[len(pts)-1].Liquid = nd.Liquid
	}
	p.Curves = append(p.Curves, c)
}

// curvePoint computes what a falling temperature does at a point, whose tangent
// looks down the curve.
func (e *engine) curvePoint(q tracePoint) Point {
	pt := Point{
		Liquid:   q.x,
		T:        q.z[2] * e.tRef,
		Solids:   [2]gibbs.State{q.a, q.b},
		Consumed: -1,
	}
	for i := range pt.Tangent {
		pt.Tangent[i] = dxdp[i][0]*q.t[0] + dxdp[i][1]*q.t[1]
	}
	pt.Kind, pt.Consumed = kindOf(pt.Liquid, pt.Tangent, q.a, q.b)
	if q.extremum {
		pt.Kind, pt.Consumed = Degenerate, -1
	}
	if l := q.t.flat(); l > 0 {
		for i := range pt.Tangent {
			pt.Tangent[i] /= l
		}
	}
	return pt
}

// splitKinds inserts a point wherever a curve changes between cotectic and
// reaction, solved for exactly.
func (e *engine) splitKinds(pts []tracePoint) []tracePoint {
	out := []tracePoint{pts[0]}
	for i := 1; i < len(pts); i++ {
		p, q := pts[i-1], pts[i]
		a, b := e.curvePoint(p), e.curvePoint(q)
		if a.Kind != Degenerate && b.Kind != Degenerate && (a.Kind != b.Kind || a.Consumed != b.Consumed) {
			if m, ok := e.kindChange(p, q, a); ok {
				out = append(out, m)
			}
		}
		out = append(out, q)
	}
	return out
}

// kindChange bisects the cubic between two points for the change of kind; the
// point returned is the first of the new kind.
func (e *engine) kindChange(p, q tracePoint, kp Point) (tracePoint, bool) {
	h := q.z.minus(p.z).norm()
	lo, hi := 0.0, 1.0
	var found tracePoint
	ok := false
	for round := 0; round < 40; round++ {
		u := (lo + hi) / 2
		var s site
		at := betweenPlaces(p.place(), q.place(), p.t, q.t, h, u)
		if !at.inside() {
			return found, false
		}
		s.set(e, at)
		a := constraint{phase: p.a.Phase, y: p.a.Y}
		b := constraint{phase: p.b.Phase, y: p.b.Y}
		dir, solved := e.correct(&s, &a, &b, q.z.minus(p.z).scaled(1/h))
		if !solved {
			return found, false
		}
		m := tracePoint{x: s.x, z: s.z, t: dir, a: a.state(), b: b.state()}
		k := e.curvePoint(m)
		if k.Kind == kp.Kind && k.Consumed == kp.Consumed {
			lo = u
		} else {
			hi, found, ok = u, m, true
		}
	}
	return found, ok
}

// nameNodes sorts nodes by falling temperature within their kind and gives them
// their identifiers; indices in the curves follow.
func (e *engine) nameNodes(p *Projection) {
	n := len(e.nodes)
	order := make([]int, n)
	for i := range order {
		order[i] = i
	}
	rank := func(nd *Node) int {
		switch {
		case nd.Kind == Maximum, nd.Kind == Minimum, nd.Kind == LoopStart, nd.Kind == AtApex, nd.Kind == Critical:
			return 2
		case nd.Edge >= 0:
			return 1
		}
		return 0
	}
	sort.SliceStable(order, func(i, j int) bool {
		a, b := &e.nodes[order[i]], &e.nodes[order[j]]
		if ra, rb := rank(a), rank(b); ra != rb {
			return ra < rb
		}
		return a.T > b.T
	})
	prefix := map[Kind]string{Monotectic: "M", Metatectic: "X", Eutectic: "E", ReactionPoint: "R", Peritectic: "P", Transition: "T"}
	small := map[Kind]string{Monotectic: "l", Metatectic: "x", Critical: "c", Eutectic: "e", ReactionPoint: "r", Peritectic: "p", Transition: "t",
		Maximum: "m", Minimum: "n", LoopStart: "o", AtApex: "a"}
	count := map[string]int{}
	place := make([]int, n)
	for to, from := range order {
		nd := e.nodes[from]
		id := prefix[nd.Kind]
		if id == "" || nd.Edge >= 0 {
			id = small[nd.Kind]
		}
		count[id]++
		nd.ID = fmt.Sprintf("%s%d", id, count[id])
		place[from] = to
		p.Nodes = append(p.Nodes, nd)
	}
	for i := range p.Nodes {
		if c := p.Nodes[i].Conjugate; c >= 0 {
			p.Nodes[i].Conjugate = place[c]
		}
	}
	for i := range p.Curves {
		p.Curves[i].From, p.Curves[i].To = place[p.Curves[i].From], place[p.Curves[i].To]
	}
	for _, ed := range e.edges {
		for i := range ed.nodes {
			ed.nodes[i] = place[ed.nodes[i]]
		}
	}
	sort.SliceStable(p.Curves, func(i, j int) bool {
		a, b := &p.Curves[i], &p.Curves[j]
		if a.Solids != b.Solids {
			return a.Solids[0] < b.Solids[0] || a.Solids[0] == b.Solids[0] && a.Solids[1] < b.Solids[1]
		}
		return p.Nodes[a.From].T > p.Nodes[b.From].T
	})
}

// nodeResidual is the largest driving force, in RT, that a solved node may keep.
const nodeResidual = 1e-9

// finish draws up the checks.
func (e *engine) finish(p *Projection) {
	ck := &p.Checks
	for i := range p.Nodes {
		ck.MaxResidual = math.Max(ck.MaxResidual, p.Nodes[i].Residual)
	}
	if ck.MaxResidual > nodeResidual {
		e.problem(fmt.Sprintf("an invariant point is solved only to %.1e RT", ck.MaxResidual))
	}
	e.checkDirections(p)
	ck.Problems = e.problems
	ck.Passed = len(e.problems) == 0
}

// checkDirections asserts the rule that joins the kind of an invariant point to
// its curves: along the curve on which solid C is absent, T falls towards the
// point exactly when C is a product of L ↔ aA + bB + cC as it runs on cooling
// (Schreinemakers).
func (e *engine) checkDirections(p *Projection) {
	for i := range p.Curves {
		c := &p.Curves[i]
		if c.Solids[1] >= 0 && e.samePlace(c.Solids[0], c.Solids[1]) {
			continue
		}
		for _, at := range [2]int{c.From, c.To} {
			nd := &p.Nodes[at]
			if len(nd.Coefficients) != 3 {
				continue
			}
			end := c.Points[0].Solids
			if at == c.To {
				end = c.Points[len(c.Points)-1].Solids
			}
			i, j := matchStates(nd.Solids, end[0], -1), -1
			j = matchStates(nd.Solids, end[1], i)
			for k := range nd.Solids {
				if k == i || k == j {
					continue
				}
				towards := at == c.To
				if c.From != c.To && math.Abs(nd.Coefficients[k]) > 1e-6 && (nd.Coefficients[k]*nd.Heat > 0) != towards {
					e.problem(fmt.Sprintf("at %s the curve of %s and %s runs against its reaction", nd.ID, e.symbol(c.Solids[0]), e.symbol(c.Solids[1])))
				}
			}
		}
	}
}
