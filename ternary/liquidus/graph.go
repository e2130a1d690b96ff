package liquidus

import (
	"fmt"
	"math"
	"sort"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// The projection is a planar graph: its vertices are the apexes of the
// triangle and the nodes, its arcs the boundary curves and the stretches of the
// triangle's sides between vertices, its faces the primary fields.

// arc is one arc of the graph; solids left and right of its direction, -1 for
// the outside.
type arc struct {
	from, to    int
	points      []vec // both ends included
	left, right int
	curve       int // index in Projection.Curves, or -1 for a stretch of a side
}

// graph is the planar graph. Vertex v < 3 is apex v; others are node v − 3.
type graph struct {
	e        *engine
	vertices int
	at       []vec
	arcs     []arc
	out      [][]half // outgoing half-edges by vertex, counter-clockwise
}

// half is a half-edge: an arc in one of its directions.
type half struct {
	arc  int
	back bool
}

func (g *graph) ends(h half) (from, to int) {
	a := &g.arcs[h.arc]
	if h.back {
		return a.to, a.from
	}
	return a.from, a.to
}

func (g *graph) left(h half) int {
	if h.back {
		return g.arcs[h.arc].right
	}
	return g.arcs[h.arc].left
}

// newGraph collects vertices and arcs.
func (e *engine) newGraph(p *Projection) *graph {
	g := &graph{e: e, vertices: 3 + len(p.Nodes)}
	g.at = make([]vec, g.vertices)
	vertex := make([]int, len(p.Nodes)) // of node
	for k := 0; k < 3; k++ {
		g.at[k][0], g.at[k][1] = ternary.Apex(k).XY()
	}
	for n := range p.Nodes {
		vertex[n] = 3 + n
		if p.Nodes[n].Kind == AtApex {
			for k := 0; k < 3; k++ {
				if p.Nodes[n].Liquid[k] == 1 {
					vertex[n] = k
				}
			}
		}
		g.at[3+n][0], g.at[3+n][1] = p.Nodes[n].Liquid.XY()
	}
	for i := range p.Curves {
		c := &p.Curves[i]
		a := arc{from: vertex[c.From], to: vertex[c.To], curve: i, points: smoothPoints(c)}
		a.left, a.right = e.sides(c)
		g.arcs = append(g.arcs, a)
	}
	for k := range e.edges {
		g.addSide(p, e.edges[k])
	}
	for n := range p.Nodes {
		if c := p.Nodes[n].Conjugate; c > n && p.Nodes[n].Edge < 0 {
			g.addTieLine(p, n, c)
		}
	}
	g.sortOutgoing()
	return g
}

// addSide adds the stretches of one side of the triangle, inside on the left.
func (g *graph) addSide(p *Projection, ed *edge) {
	i, j := (ed.k+1)%3, (ed.k+2)%3
	order := make([]int, len(ed.nodes))
	for n := range order {
		order[n] = n
	}
	sort.Slice(order, func(a, b int) bool { return ed.at[order[a]] < ed.at[order[b]] })
	at, v, last := 0.0, i, -1
	add := func(to int, end float64) {
		x0, dx := edgeLine(i, j)
		left := g.e.beside(onLine(x0, dx, (at+end)/2))
		if left == g.e.splitCode() && v >= 3 {
			left = g.e.twoLiquidLabel(p.Nodes[ed.nodes[last]].Solids[0].Phase)
		}
		g.arcs = append(g.arcs, arc{from: v, to: to, points: []vec{g.at[v], g.at[to]}, left: left, right: -1, curve: -1})
		at, v = end, to
	}
	for _, n := range order {
		add(3+ed.nodes[n], ed.at[n])
		last = n
	}
	add(j, 1)
}

// twoLiquidLabel marks faces in which two liquids meet a solid; labels of other
// faces are the solids themselves.
func (e *engine) twoLiquidLabel(solid int) int { return len(e.sys.Solids) + solid }

// addTieLine joins the two liquids of an invariant point: it divides the
// two-liquid field of one solid from that of the other.
func (g *graph) addTieLine(p *Projection, n, c int) {
	a, b := &p.Nodes[n], &p.Nodes[c]
	arc := arc{from: 3 + n, to: 3 + c, points: []vec{g.at[3+n], g.at[3+c]}, curve: -1, left: -2, right: -2}
	dir := g.at[3+c].minus(g.at[3+n])
	for i := range p.Curves {
		k := &p.Curves[i]
		if k.Solids[1] != gibbs.Liquid || k.From != n && k.To != n {
			continue
		}
		next := k.Points[1].Liquid
		if k.To == n {
			next = k.Points[len(k.Points)-2].Liquid
		}
		x, y := next.XY()
		label := g.e.twoLiquidLabel(k.Solids[0])
		if d := (vec{x, y}).minus(g.at[3+n]); dir[0]*d[1]-dir[1]*d[0] > 0 {
			arc.left = label
		} else {
			arc.right = label
		}
	}
	if arc.left < 0 || arc.right < 0 {
		g.e.problem(fmt.Sprintf("the two-liquid fields on either side of the tie line from %s to %s are not known", a.ID, b.ID))
	}
	g.arcs = append(g.arcs, arc)
}

// smoothPoints is the curve's course with two points of the cubic between each
// two computed ones.
func smoothPoints(c *Curve) []vec {
	out := make([]vec, 0, 3*len(c.Points))
	for n := range c.Points {
		p := &c.Points[n]
		var z vec
		z[0], z[1] = p.Liquid.XY()
		if n > 0 {
			q := &c.Points[n-1]
			var y, ty, tz vec
			y[0], y[1] = q.Liquid.XY()
			ty[0], ty[1] = ternary.Composition(q.Tangent).XY()
			tz[0], tz[1] = ternary.Composition(p.Tangent).XY()
			if h := z.minus(y).norm(); h > 1e-9 {
				out = append(out, hermiteVec(y, z, ty, tz, h, 1.0/3), hermiteVec(y, z, ty, tz, h, 2.0/3))
			}
		}
		out = append(out, z)
	}
	return out
}

// sides tells which solid is primary left and right of a curve's direction, from
// the gradients of the two saturation temperatures at its middle.
func (e *engine) sides(c *Curve) (left, right int) {
	n := len(c.Points) / 2
	p, q := &c.Points[n-1], &c.Points[n]
	if c.Solids[1] == gibbs.Liquid {
		return e.monotecticSides(c, p, q)
	}
	var y, z vec
	y[0], y[1] = p.Liquid.XY()
	z[0], z[1] = q.Liquid.XY()
	a := constraint{phase: c.Solids[0], y: q.Solids[0].Y}
	b := constraint{phase: c.Solids[1], y: q.Solids[1].Y}
	if n == 1 {
		a.y, b.y = p.Solids[0].Y, p.Solids[1].Y
		if len(c.Points) > 2 {
			a.y, b.y = q.Solids[0].Y, q.Solids[1].Y
		}
	}
	var s site
	s.setOn(e, p.Liquid.Lerp(q.Liquid, 0.5), (p.T+q.T)/2)
	_, ga := a.eval(e, &s)
	_, gb := b.eval(e, &s)
	d := z.minus(y)
	nx, ny := -d[1], d[0]
	slope := -(ga[0]*nx+ga[1]*ny)/ga[2] + (gb[0]*nx+gb[1]*ny)/gb[2]
	if slope > 0 {
		return c.Solids[0], c.Solids[1]
	}
	return c.Solids[1], c.Solids[0]
}

// monotecticSides: the two-liquid field is on the side of the second liquid.
func (e *engine) monotecticSides(c *Curve, p, q *Point) (left, right int) {
	ax, ay := p.Liquid.XY()
	bx, by := q.Liquid.XY()
	cx, cy := ternary.Composition(p.Solids[1].C).Lerp(ternary.Composition(q.Solids[1].C), 0.5).XY()
	two := e.twoLiquidLabel(c.Solids[0])
	if (bx-ax)*(cy-ay)-(by-ay)*(cx-ax) > 0 {
		return two, c.Solids[0]
	}
	return c.Solids[0], two
}

// direction is the angle at which a half-edge leaves its vertex.
func (g *graph) direction(h half) float64 {
	pts := g.arcs[h.arc].points
	a, b := pts[0], pts[1]
	if h.back {
		a, b = pts[len(pts)-1], pts[len(pts)-2]
	}
	return math.Atan2(b[1]-a[1], b[0]-a[0])
}

func (g *graph) sortOutgoing() {
	g.out = make([][]half, g.vertices)
	for i := range g.arcs {
		a := &g.arcs[i]
		g.out[a.from] = append(g.out[a.from], half{i, false})
		g.out[a.to] = append(g.out[a.to], half{i, true})
	}
	for v := range g.out {
		hs := g.out[v]
		sort.SliceStable(hs, func(i, j int) bool { return g.direction(hs[i]) < g.direction(hs[j]) })
	}
}

// next is the half-edge that follows h round the face on its left.
func (g *graph) next(h half) half {
	_, v := g.ends(h)
	twin := half{h.arc, !h.back}
	hs := g.out[v]
	for i := range hs {
		if hs[i] == twin {
			return hs[(i+len(hs)-1)%len(hs)]
		}
	}
	return twin
}

// cycle is one closed walk round a face or round a piece of the graph.
type cycle struct {
	halves []half
	points []vec
	area   float64 // positive: round a face; negative: round the outside of a piece
}

func (g *graph) cycles() []cycle {
	seen := make(map[half]bool, 2*len(g.arcs))
	var out []cycle
	for i := range g.arcs {
		for _, back := range [2]bool{false, true} {
			h := half{i, back}
			if seen[h] {
				continue
			}
			var c cycle
			for !seen[h] {
				seen[h] = true
				c.halves = append(c.halves, h)
				c.points = append(c.points, g.walk(h)...)
				h = g.next(h)
			}
			c.area = signedArea(c.points)
			out = append(out, c)
		}
	}
	return out
}

// walk returns the points of a half-edge without its last.
func (g *graph) walk(h half) []vec {
	pts := g.arcs[h.arc].points
	if !h.back {
		return pts[:len(pts)-1]
	}
	out := make([]vec, 0, len(pts)-1)
	for i := len(pts) - 1; i > 0; i-- {
		out = append(out, pts[i])
	}
	return out
}

func signedArea(pts []vec) float64 {
	s := 0.0
	for i := range pts {
		p, q := pts[i], pts[(i+1)%len(pts)]
		s += p[0]*q[1] - q[0]*p[1]
	}
	return s / 2
}

// pieces counts the connected pieces of the graph and its vertices in use.
func (g *graph) pieces() (vertices, pieces int) {
	parent := make([]int, g.vertices)
	for i := range parent {
		parent[i] = i
	}
	find := func(v int) int {
		for parent[v] != v {
			v = parent[v]
		}
		return v
	}
	used := make([]bool, g.vertices)
	for i := range g.arcs {
		a, b := g.arcs[i].from, g.arcs[i].to
		used[a], used[b] = true, true
		parent[find(a)] = find(b)
	}
	for v := range used {
		if !used[v] {
			continue
		}
		vertices++
		if find(v) == v {
			pieces++
		}
	}
	return vertices, pieces
}

// label is the solid of a face: all its half-edges must agree.
func (g *graph) label(c *cycle) (int, error) {
	solid := g.left(c.halves[0])
	for _, h := range c.halves[1:] {
		if l := g.left(h); l != solid {
			return -1, fmt.Errorf("a field is bounded as if it belonged both to %s and to %s", g.name(solid), g.name(l))
		}
	}
	return solid, nil
}

func (g *graph) name(solid int) string {
	switch n := len(g.e.sys.Solids); {
	case solid < 0:
		return "the outside"
	case solid >= n:
		return "two liquids with " + g.e.symbol(solid-n)
	}
	return g.e.symbol(solid)
}

// contains reports whether a point lies inside a closed polygon.
func contains(poly []vec, x, y float64) bool {
	in := false
	for i, j := 0, len(poly)-1; i < len(poly); j, i = i, i+1 {
		a, b := poly[i], poly[j]
		if (a[1] > y) != (b[1] > y) && x < (b[0]-a[0])*(y-a[1])/(b[1]-a[1])+a[0] {
			in = !in
		}
	}
	return in
}
