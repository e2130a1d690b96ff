package liquidus

import (
	"fmt"
	"math"
	"sort"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// edgeSamples is the number of intervals in which an edge is searched.
const edgeSamples = 40

// edgeSample is one liquid on an edge.
type edgeSample struct {
	at float64 // fraction of the way from the first to the second component
	surface
}

// edge is a binary system: component k is absent, the liquid goes from
// component i = k+1 to j = k+2 (cyclic).
type edge struct {
	k       int
	samples []edgeSample
	nodes   []int     // engine nodes, in the order in which they were found
	at      []float64 // their positions
	stops   []stop    // samples, nodes and peaks in order of rising position
	extrema []edgeExtremum
}

// edgeExtremum is an extremum of T along an edge within one field.
type edgeExtremum struct {
	at   float64
	kind Kind
}

// stop is a point of an edge between which the liquidus rises or falls steadily;
// before and after are the primary phases on either side.
type stop struct {
	at, T         float64
	before, after int
}

// edgeLine returns the start and the direction of the edge from component i to j.
func edgeLine(i, j int) (x0, dx ternary.Composition) {
	x0[i] = 1
	dx[i], dx[j] = -1, 1
	return x0, dx
}

// scanEdge finds the changes of the primary phase along an edge.
func (e *engine) scanEdge(k int) *edge {
	ed := &edge{k: k}
	x0, dx := edgeLine((k+1)%3, (k+2)%3)
	hints := make([]saturated, len(e.sys.Solids))
	pool := make([]saturated, (edgeSamples+1)*len(hints))
	for n := 0; n <= edgeSamples; n++ {
		at := float64(n) / edgeSamples
		all := pool[n*len(hints) : (n+1)*len(hints)]
		copy(all, hints)
		s := e.surface(onLine(x0, dx, at), all)
		copy(hints, all)
		ed.samples = append(ed.samples, edgeSample{at, s})
	}
	ed.samples = e.hiddenOnEdge(ed, x0, dx)
	for n := 1; n < len(ed.samples); n++ {
		e.splitEdge(ed, x0, dx, ed.samples[n-1], ed.samples[n], 0)
	}
	return ed
}

// findStops merges samples, nodes, the peaks of solids whose composition lies on
// the edge, and extrema of solid solutions between samples.
func (e *engine) findStops(ed *edge, nodes []Node) {
	x0, dx := edgeLine((ed.k+1)%3, (ed.k+2)%3)
	for i := range ed.samples {
		s := &ed.samples[i]
		if !ed.nodeAt(s.at) {
			c := e.code(&s.surface)
			ed.stops = append(ed.stops, stop{s.at, s.T, c, c})
		}
	}
	add := func(at float64) {
		if s := e.surface(onLine(x0, dx, at), nil); s.primary >= 0 {
			c := e.code(&s)
			ed.stops = append(ed.stops, stop{at, s.T, c, c})
		}
	}
	j := (ed.k + 2) % 3
	for _, p := range e.sys.Solids {
		if !p.Stoichiometric() {
			continue
		}
		if x, err := ternary.Normalize(p.Members[0].C); err == nil && x[ed.k] == 0 && x.Inside(0) && x[j] > 0 && x[j] < 1 {
			add(x[j])
			ed.extrema = append(ed.extrema, edgeExtremum{x[j], Maximum})
		}
	}
	for n := 1; n+1 < len(ed.samples); n++ {
		a, b, c := &ed.samples[n-1], &ed.samples[n], &ed.samples[n+1]
		if a.primary == b.primary && b.primary == c.primary && b.primary >= 0 && !e.sys.Solids[b.primary].Stoichiometric() && (b.T-a.T)*(c.T-b.T) < 0 {
			at := e.extremumOnEdge(b.primary, x0, dx, a.at, c.at, b.T > a.T)
			add(at)
			kind := Minimum
			if b.T > a.T {
				kind = Maximum
			}
			ed.extrema = append(ed.extrema, edgeExtremum{at, kind})
		}
	}
	for n, k := range ed.nodes {
		nd := &nodes[k]
		left, right := e.beside(onLine(x0, dx, ed.at[n]-1e-7)), e.beside(onLine(x0, dx, ed.at[n]+1e-7))
		ed.stops = append(ed.stops, stop{ed.at[n], nd.T, left, right})
	}
	sort.SliceStable(ed.stops, func(i, j int) bool { return ed.stops[i].at < ed.stops[j].at })
}

// beside is the region mark of a liquid.
func (e *engine) beside(x ternary.Composition) int {
	s := e.surface(x, nil)
	return e.code(&s)
}

// nodeAt reports whether a node stands at a position: a sample there would have
// one of two primary phases by rounding alone.
func (ed *edge) nodeAt(at float64) bool {
	for _, a := range ed.at {
		if math.Abs(a-at) < 1e-9 {
			return true
		}
	}
	return false
}

// extremumOnEdge finds an extremum of T_φ along an edge by golden section.
func (e *engine) extremumOnEdge(p int, x0, dx ternary.Composition, lo, hi float64, max bool) float64 {
	const g = 0.6180339887498949
	T := func(at float64) float64 {
		c := e.column(onLine(x0, dx, at))
		t := e.saturation(p, &c, saturated{}).T
		if max {
			return t
		}
		return -t
	}
	for round := 0; round < 45; round++ {
		u, v := hi-g*(hi-lo), lo+g*(hi-lo)
		if T(u) > T(v) {
			hi = v
		} else {
			lo = u
		}
	}
	return (lo + hi) / 2
}

// hiddenOnEdge adds samples where a phase that is primary at neither end of an
// interval has a local maximum of T_φ − T_L: fields narrower than the mesh.
func (e *engine) hiddenOnEdge(ed *edge, x0, dx ternary.Composition) []edgeSample {
	out := []edgeSample{ed.samples[0]}
	s := ed.samples
	gap := func(n, p int) float64 { return s[n].all[p].T - s[n].T }
	for n := 1; n < len(s); n++ {
		for p := range e.sys.Solids {
			if s[n].primary == p || s[n-1].primary == p || math.IsInf(s[n].all[p].T, 0) || math.IsInf(s[n-1].all[p].T, 0) {
				continue
			}
			lo, hi := n-1, n
			peak := (lo == 0 || gap(lo, p) >= gap(lo-1, p)) && (hi == len(s)-1 || gap(hi, p) >= gap(hi+1, p))
			if !peak {
				continue
			}
			if q, ok := e.edgePeak(p, x0, dx, s[lo], s[hi]); ok {
				out = append(out, q)
				break
			}
		}
		out = append(out, s[n])
	}
	return out
}

// edgePeak maximises T_p − T_L between two samples by golden section and
// returns the sample if the phase is primary there.
func (e *engine) edgePeak(p int, x0, dx ternary.Composition, a, b edgeSample) (edgeSample, bool) {
	const g = 0.6180339887498949
	lo, hi := a.at, b.at
	for round := 0; round < 26; round++ {
		u, v := hi-g*(hi-lo), lo+g*(hi-lo)
		su := e.surface(onLine(x0, dx, u), append([]saturated(nil), a.all...))
		sv := e.surface(onLine(x0, dx, v), append([]saturated(nil), b.all...))
		if su.primary == p {
			return edgeSample{u, su}, true
		}
		if sv.primary == p {
			return edgeSample{v, sv}, true
		}
		if su.all[p].T-su.T > sv.all[p].T-sv.T {
			hi = v
		} else {
			lo = u
		}
	}
	return edgeSample{}, false
}

// splitEdge finds the nodes between two neighbouring samples.
func (e *engine) splitEdge(ed *edge, x0, dx ternary.Composition, a, b edgeSample, depth int) {
	if a.primary < 0 || b.primary < 0 || e.code(&a.surface) == e.code(&b.surface) && !e.creased(&a.surface, &b.surface, onLine(x0, dx, b.at)) {
		return
	}
	if math.IsInf(a.T, 1) || math.IsInf(b.T, 1) {
		return // a solid outside the triangle: the edge is not a binary system
	}
	if depth > 60 {
		e.problem(fmt.Sprintf("the edge without %s has a point where more than two solids meet near %.6g", e.sys.Components[ed.k].Symbol, a.at))
		return
	}
	mid := (a.at + b.at) / 2
	T := math.Min(a.T, b.T)
	ca, cb := e.between(&a.surface, &b.surface)
	if depth > 1 { // close enough for Newton's method
		var s site
		if at, ok := e.solveOnLine(&s, &ca, &cb, x0, dx, mid, T); ok && at >= a.at-1e-12 && at <= b.at+1e-12 {
			if w, _ := e.worst(&s, ca.phase, cb.phase); w <= zeroDrive && e.distinct(&s, &ca, &cb) {
				e.addEdgeNode(ed, at, &s, &ca, &cb)
				return
			}
		}
	}
	sm := e.surface(onLine(x0, dx, mid), append([]saturated(nil), a.all...))
	m := edgeSample{mid, sm}
	e.splitEdge(ed, x0, dx, a, m, depth+1)
	e.splitEdge(ed, x0, dx, m, b, depth+1)
}

// between returns the two conditions that hold at the boundary between two
// regions: two solids, a solid and a second liquid, or two forms of one solid.
func (e *engine) between(a, b *surface) (ca, cb constraint) {
	if b.split {
		a, b = b, a
	}
	if a.split { // b is not: its solid and the liquid that a separates towards
		return constraint{phase: b.primary, y: b.all[b.primary].Y}, constraint{phase: gibbs.Liquid, y: a.other}
	}
	return constraint{phase: a.primary, y: a.all[a.primary].Y}, constraint{phase: b.primary, y: b.all[b.primary].Y}
}

// distinct reports that a solution has not collapsed: the second liquid is not
// the liquid itself, two forms of one solid differ, and each is stable against
// its neighbours.
func (e *engine) distinct(s *site, a, b *constraint) bool {
	if b.phase == gibbs.Liquid {
		return !sameForm(b.y, s.x) && e.convex(gibbs.Liquid, s.x, s.T) && e.convex(gibbs.Liquid, b.y, s.T)
	}
	if a.phase != b.phase {
		return true
	}
	return !sameForm(a.y, b.y) && e.convex(a.phase, a.y, s.T) && e.convex(b.phase, b.y, s.T)
}

// convex reports that a phase is stable at y against unmixing into neighbours; a
// phase that lacks an end-member there is judged without it.
func (e *engine) convex(phase int, y [3]float64, T float64) bool {
	_, _, ok := e.phaseOf(phase).Curvature(y, T)
	return ok
}

// creased reports that two liquids with one primary solid meet different forms
// of it: b's form is not the one that a's form turns into there.
func (e *engine) creased(a, b *surface, x ternary.Composition) bool {
	p := a.primary
	if p < 0 || p != b.primary || a.split || b.split || math.IsInf(b.T, 0) || !e.sys.Solids[p].CanUnmix(b.T) {
		return false
	}
	c := e.column(x)
	mu := c.at(b.T)
	q := e.sys.Solids[p].DriveFrom(&mu, b.T, a.all[p].Y)
	d := 0.0
	for k := range q.Y {
		d += math.Abs(q.Y[k] - b.all[p].Y[k])
	}
	return d > 1e-3
}

// worst is the largest driving force, in R·tRef, of the solids other than a and
// b, and the solid whose it is.
func (e *engine) worst(s *site, a, b int) (w float64, who int) {
	w, who = math.Inf(-1), -1
	for i, p := range e.sys.Solids {
		if i == a || i == b {
			continue
		}
		if d := p.Drive(&s.pot.Mu, s.T).D / e.rtRef; d > w {
			w, who = d, i
		}
	}
	return w, who
}

func (e *engine) addEdgeNode(ed *edge, at float64, s *site, a, b *constraint) {
	n := Node{
		Edge:   ed.k,
		Liquid: s.x,
		T:      s.T,
		Solids: []gibbs.State{a.state(), b.state()},
	}
	n.Residual = math.Max(math.Abs(a.last.D), math.Abs(b.last.D)) / (ternary.R * s.T)
	if b.phase != gibbs.Liquid && n.Solids[0].Phase > n.Solids[1].Phase {
		n.Solids[0], n.Solids[1] = n.Solids[1], n.Solids[0]
	}
	ed.nodes = append(ed.nodes, e.addNode(n))
	ed.at = append(ed.at, at)
}
