package liquidus

import (
	"fmt"
	"math"

	"thalweg/ternary"
)

// mesh is a triangular lattice of liquids, all strictly inside the triangle:
// node (i, j) has fractions ((i+1/3), (j+1/3), (n−i−j+1/3))/(n+1).
type mesh struct {
	n       int
	nodes   []surface
	crossed [3][]crossing // by direction and node: curves that cross the link
}

// crossing lists the pairs of solids whose curves cross one link of the mesh.
type crossing struct {
	count int
	pairs [3][2]int
}

// links of a node: to (i, j+1), (i+1, j) and (i+1, j−1); along each one lattice
// coordinate is constant: i, j and k.
var links = [3][2]int{{0, 1}, {1, 0}, {1, -1}}

func (m *mesh) index(i, j int) int { return i*(m.n+1) + j }

func (m *mesh) has(i, j int) bool { return i >= 0 && j >= 0 && i+j <= m.n }

func (m *mesh) composition(i, j int) ternary.Composition {
	s := float64(m.n + 1)
	return ternary.Composition{(float64(i) + 1.0/3) / s, (float64(j) + 1.0/3) / s, (float64(m.n-i-j) + 1.0/3) / s}
}

// newMesh evaluates the liquidus at every node.
func (e *engine) newMesh(n int) *mesh {
	m := &mesh{n: n}
	size := (n + 1) * (n + 1)
	m.nodes = make([]surface, size)
	for d := range m.crossed {
		m.crossed[d] = make([]crossing, size)
	}
	ns := len(e.sys.Solids)
	pool := make([]saturated, size*ns)
	hints := make([]saturated, ns)
	for i := 0; i <= n; i++ {
		for j := 0; i+j <= n; j++ {
			k := m.index(i, j)
			all := pool[k*ns : (k+1)*ns]
			copy(all, hints)
			x := m.composition(i, j)
			m.nodes[k] = e.surface(x, all)
			copy(hints, all)
		}
	}
	return m
}

// mark records which links of the mesh the points of a curve cross.
func (m *mesh) mark(pts []tracePoint, a, b int) {
	s := float64(m.n + 1)
	coord := func(z vec) (c [3]float64) {
		for i, v := range compositionAt(z[0], z[1]) {
			c[i] = v*s - 1.0/3
		}
		return c
	}
	for n := 1; n < len(pts); n++ {
		p, q := coord(pts[n-1].z), coord(pts[n].z)
		for d := 0; d < 3; d++ {
			lo, hi := math.Min(p[d], q[d]), math.Max(p[d], q[d])
			for v := math.Ceil(lo); v <= hi; v++ {
				if q[d] == p[d] {
					break
				}
				u := (v - p[d]) / (q[d] - p[d])
				m.cross(d, p, q, u, a, b)
			}
		}
	}
}

// cross records a crossing of lattice line d (coordinate d whole) at the point
// p + u(q − p).
func (m *mesh) cross(d int, p, q [3]float64, u float64, a, b int) {
	i := p[0] + u*(q[0]-p[0])
	j := p[1] + u*(q[1]-p[1])
	var fi, fj int
	switch d {
	case 0: // link (i, j)–(i, j+1)
		fi, fj = int(math.Round(i)), int(math.Floor(j))
	case 1: // link (i, j)–(i+1, j)
		fi, fj = int(math.Floor(i)), int(math.Round(j))
	default: // link (i, j)–(i+1, j−1)
		fi = int(math.Floor(i))
		k := int(math.Round(float64(m.n) - i - j))
		fj = m.n - k - fi
	}
	if !m.has(fi, fj) {
		return
	}
	c := &m.crossed[d][m.index(fi, fj)]
	for n := 0; n < c.count; n++ {
		if c.pairs[n] == [2]int{a, b} {
			return
		}
	}
	if c.count < len(c.pairs) {
		c.pairs[c.count] = [2]int{a, b}
		c.count++
	}
}

// explains reports whether the curves across a link lead from solid a to b.
func (c *crossing) explains(a, b int) bool {
	reach := [4]int{a}
	n := 1
	for round := 0; round < c.count; round++ {
		for k := 0; k < c.count && n < len(reach); k++ {
			p := c.pairs[k]
			for r := 0; r < n; r++ {
				if reach[r] == p[0] {
					reach[n] = p[1]
					n++
					break
				}
				if reach[r] == p[1] {
					reach[n] = p[0]
					n++
					break
				}
			}
		}
	}
	for r := 0; r < n; r++ {
		if reach[r] == b {
			return true
		}
	}
	return false
}

// has reports whether a curve of solids a and b crosses the link.
func (c *crossing) has(a, b int) bool {
	for k := 0; k < c.count; k++ {
		if c.pairs[k] == [2]int{a, b} {
			return true
		}
	}
	return false
}

// explainMesh looks at every link whose ends have different primary phases and
// that no curve explains, finds the curve that crosses it, and follows it.
func (e *engine) explainMesh() {
	m := e.mesh
	for i := 0; i <= m.n; i++ {
		for j := 0; i+j <= m.n; j++ {
			a := &m.nodes[m.index(i, j)]
			for d, l := range links {
				if !m.has(i+l[0], j+l[1]) {
					continue
				}
				b := &m.nodes[m.index(i+l[0], j+l[1])]
				if a.primary < 0 || b.primary < 0 {
					continue
				}
				x, y := m.composition(i, j), m.composition(i+l[0], j+l[1])
				c := &m.crossed[d][m.index(i, j)]
				ca, cb := e.code(a), e.code(b)
				if ca != cb && !c.explains(ca, cb) || ca == cb && e.creased(a, b, y) && !c.has(ca, ca) {
					e.explainLink(x, y, *a, *b, 0)
				}
			}
		}
	}
}

// explainLink follows the curves between two liquids with different primary
// phases, unless they are already known.
func (e *engine) explainLink(x, y ternary.Composition, a, b surface, depth int) {
	if a.primary < 0 || b.primary < 0 || e.code(&a) == e.code(&b) && !e.creased(&a, &b, y) {
		return
	}
	if math.IsInf(a.T, 1) && math.IsInf(b.T, 1) {
		return
	}
	if depth > 45 {
		e.problem(fmt.Sprintf("the boundary between %s and %s could not be found near %s", e.symbol(a.primary), e.symbol(b.primary), e.place(x)))
		return
	}
	if e.nearCritical(x) {
		return // too close to a critical point to tell the regions apart
	}
	if depth > 2 {
		var s site
		dx := ternary.Composition{y[0] - x[0], y[1] - x[1], y[2] - x[2]}
		ca, cb := e.between(&a, &b)
		at, ok := e.solveOnLine(&s, &ca, &cb, x, dx, 0.5, math.Min(a.T, b.T))
		if ok && at >= -1e-9 && at <= 1+1e-9 && e.distinct(&s, &ca, &cb) {
			if w, _ := e.worst(&s, ca.phase, cb.phase); w <= zeroDrive {
				if !e.known(ca.phase, cb.phase, s.z) {
					e.followSeed(&s, ca, cb)
					e.followPending()
				}
				return
			}
		}
	}
	mid := x.Lerp(y, 0.5)
	c := e.surface(mid, append([]saturated(nil), a.all...))
	if !e.inherit(&c, mid, &a) {
		e.inherit(&c, mid, &b)
	}
	e.explainLink(x, mid, a, c, depth+1)
	e.explainLink(mid, y, c, b, depth+1)
}

// criticalNear is the distance from a critical point, in triangle sides, within
// which the rim of its field is drawn but not resolved.
const criticalNear = 1.5 * tieCritical

func (e *engine) nearCritical(x ternary.Composition) bool {
	for i := range e.nodes {
		if e.nodes[i].Kind == Critical && e.nodes[i].Liquid.Distance(x) < criticalNear {
			return true
		}
	}
	return false
}

// findIslands looks for fields smaller than the mesh: for every solid, local
// maxima of T_φ − T_L over the nodes at which it is not primary are refined.
func (e *engine) findIslands() {
	m := e.mesh
	for p := range e.sys.Solids {
		for i := 0; i <= m.n; i++ {
			for j := 0; i+j <= m.n; j++ {
				if e.islandCandidate(p, i, j) {
					e.refineIsland(p, i, j)
				}
			}
		}
	}
}

// gap is T_φ − T_L at a node; −Inf where it is not finite.
func (m *mesh) gap(p, i, j int) float64 {
	s := &m.nodes[m.index(i, j)]
	g := s.all[p].T - s.T
	if math.IsNaN(g) {
		return math.Inf(-1)
	}
	return g
}

func (e *engine) islandCandidate(p, i, j int) bool {
	m := e.mesh
	if m.nodes[m.index(i, j)].primary == p {
		return false
	}
	g := m.gap(p, i, j)
	if math.IsInf(g, 0) {
		return false
	}
	fall := 0.0 // mean drop of the gap to the neighbours: a scale for its height
	count := 0
	for _, l := range [6][2]int{{0, 1}, {1, 0}, {1, -1}, {0, -1}, {-1, 0}, {-1, 1}} {
		if !m.has(i+l[0], j+l[1]) {
			continue
		}
		h := m.gap(p, i+l[0], j+l[1])
		if h > g {
			return false
		}
		if !math.IsInf(h, 0) {
			fall += g - h
			count++
		}
	}
	// Between nodes a smooth maximum rises above its highest node by less than
	// the mean drop around it; four times that leaves room for a cusp.
	return count > 0 && -g <= 4*fall/float64(count)+1e-9*e.tRef
}

// refineIsland climbs T_p − T_L from a node by a pattern search with shrinking
// hexagons and follows the outline of a field if it finds one.
func (e *engine) refineIsland(p, i, j int) {
	m := e.mesh
	x := m.composition(i, j)
	base := m.nodes[m.index(i, j)]
	best := m.gap(p, i, j)
	scratch := append([]saturated(nil), base.all...)
	h := 0.5 / float64(m.n+1)
	for round := 0; round < 40 && h > 1e-6; round++ {
		moved := false
		for _, d := range hexagon {
			y := ternary.Composition{x[0] + h*d[0], x[1] + h*d[1], x[2] + h*d[2]}
			if !y.Inside(-1e-9) {
				continue
			}
			s := e.surface(y, scratch)
			if s.primary == p {
				found := s
				found.all = append([]saturated(nil), s.all...)
				e.explainLink(m.composition(i, j), y, base, found, 0)
				return
			}
			if g := s.all[p].T - s.T; g > best {
				best, x, moved = g, y, true
			}
		}
		if !moved {
			h /= 2
		}
	}
}
