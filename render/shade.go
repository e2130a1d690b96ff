package render

import (
	"fmt"
	"math"

	"thalweg/ternary/liquidus"
)

// shadeCells is the number of cells along an edge of the net on which the
// liquidus temperature is taken for shading. A cell is then 0.5 to 1.4 mm wide,
// and a step of the scale changes the colour by less than is seen, so that the
// edges of the steps need not follow the isotherms drawn over them.
const shadeCells = 96

// shading is the liquidus temperature on a triangular net: row i holds the nodes
// with i/shadeCells of component 0, from component 1 to component 2, in the basis
// of the figure.
type shading struct {
	t    []float64 // K; −Inf where there is none
	p    []Point   // on the page
	low  float64
	high float64
	ramp []Colour // hottest first
}

// newShading takes the temperatures. It is nil for a style that does not shade.
func newShading(f Figure, st Style, tri triangle) (*shading, error) {
	if len(st.Ramp) == 0 {
		return nil, nil
	}
	surface, err := liquidus.NewSurface(f.Projection.System)
	if err != nil {
		return nil, fmt.Errorf("the temperatures for the shading: %w", err)
	}
	cs := f.Projection.System.Components
	s := &shading{low: math.Inf(1), high: math.Inf(-1), ramp: st.Ramp}
	for i := 0; i <= shadeCells; i++ {
		for j := 0; j <= shadeCells-i; j++ {
			at := [3]float64{float64(i) / shadeCells, float64(shadeCells-i-j) / shadeCells, float64(j) / shadeCells}
			if tri.view != nil {
				at = tri.view.fractions(at)
			}
			x, err := cs.Composition(at, f.Basis)
			if err != nil {
				return nil, fmt.Errorf("the net for the shading: %w", err)
			}
			t, _ := surface.Liquidus(x)
			if math.IsInf(t, 0) || math.IsNaN(t) {
				t = math.Inf(-1) // left white
			} else {
				s.low, s.high = min(s.low, t), max(s.high, t)
			}
			s.t = append(s.t, t)
		}
	}
	// the coldest liquids are points between the nodes of the net
	for _, n := range shownNodes(f.Projection) {
		s.low, s.high = min(s.low, n.T), max(s.high, n.T)
	}
	if !(s.low < s.high) {
		return nil, &FigureError{What: "there is nothing to shade", Where: "figure style", Why: "the liquidus temperature is the same everywhere", Remedy: "colour the fields by their solids"}
	}
	return s, nil
}

// node is the place of a node in t.
func node(i, j int) int { return i*(shadeCells+1) - i*(i-1)/2 + j }

// put finds the nodes' places on the page.
func (s *shading) put(tri triangle) {
	a, b, c := tri.corner(0), tri.corner(1), tri.corner(2)
	s.p = s.p[:0]
	for i := 0; i <= shadeCells; i++ {
		for j := 0; j <= shadeCells-i; j++ {
			u, w := float64(i)/shadeCells, float64(j)/shadeCells
			s.p = append(s.p, a.times(u).plus(b.times(1-u-w)).plus(c.times(w)))
		}
	}
}

// draw fills, one over the other, the areas that are hotter than each step.
func (s *shading) draw(l *Layer, tri triangle) {
	s.put(tri)
	n := len(s.ramp)
	for k := range n {
		c := s.ramp[n-1-k]
		p := s.above(s.low + float64(k)/float64(n)*(s.high-s.low))
		if !p.Empty() {
			l.Path(PathItem{Path: p, Fill: &c, Role: "shade"})
		}
	}
}

// outer stands for one node beyond all edges, colder than everything. With cells
// between it and each edge the net is closed like a sphere, and so every outline
// is.
const outer = -1

// knot is a node of the net with its place on the page.
type knot struct {
	id int
	t  float64
	p  Point
}

// side names the side of two cells between an inner and an outer node, which an
// outline crosses.
type side struct{ in, out int }

// above is the area with t ≥ level. Each cell that the outline crosses gives one
// stretch of it, with the hotter side on its left; the stretches are then joined.
func (s *shading) above(level float64) Path {
	next := map[side]side{}
	place := map[side]Point{}
	var order []side // of the starts, so that the path is the same in every run
	cross := func(in, out knot) side {
		k := side{in.id, out.id}
		f := (in.t - level) / (in.t - out.t) // 0 beside the outer node
		if out.id == outer || math.IsInf(out.t, -1) {
			f = 0
		}
		place[k] = in.p.lerp(out.p, f)
		return k
	}
	cell := func(c [3]knot) { // anticlockwise
		for r := range 3 {
			a, b, d := c[r], c[(r+1)%3], c[(r+2)%3]
			inA, inB, inD := a.t >= level, b.t >= level, d.t >= level
			var from, to side
			switch {
			case inA && !inB && !inD:
				from, to = cross(a, b), cross(a, d)
			case !inA && inB && inD:
				from, to = cross(d, a), cross(b, a)
			default:
				continue
			}
			next[from] = to
			order = append(order, from)
		}
	}
	s.cells(cell)
	return join(order, next, place)
}

// cells calls f for every cell of the closed net.
func (s *shading) cells(f func([3]knot)) {
	k := func(i, j int) knot { n := node(i, j); return knot{n, s.t[n], s.p[n]} }
	beyond := knot{id: outer, t: math.Inf(-1)}
	for i := range shadeCells {
		for j := range shadeCells - i {
			f([3]knot{k(i, j), k(i, j+1), k(i+1, j)})
			if j > 0 {
				f([3]knot{k(i, j), k(i+1, j), k(i+1, j-1)})
			}
		}
		f([3]knot{k(0, i+1), k(0, i), beyond})
		f([3]knot{k(i, 0), k(i+1, 0), beyond})
		f([3]knot{k(i+1, shadeCells-i-1), k(i, shadeCells-i), beyond})
	}
}

// join links stretches into closed outlines, each started once.
func join(order []side, next map[side]side, place map[side]Point) Path {
	var out Path
	done := map[side]bool{}
	for _, start := range order {
		var ring []Point
		for at := start; !done[at]; at = next[at] {
			done[at] = true
			ring = append(ring, place[at])
		}
		if ring = distinct(ring, true); len(ring) > 2 {
			out.Append(Polyline(ring, true))
		}
	}
	return out
}

// swatch draws the scale, coldest at the left, w by h mm.
func (s *shading) swatch(l *Layer, at Point, w, h float64, frame *Stroke) {
	n := len(s.ramp)
	box := func(x float64) Path {
		return Polyline([]Point{{x, at.Y}, {at.X + w, at.Y}, {at.X + w, at.Y + h}, {x, at.Y + h}}, true)
	}
	for k := range n {
		c := s.ramp[n-1-k]
		l.Path(PathItem{Path: box(at.X + w*float64(k)/float64(n)), Fill: &c, Role: "key symbol"})
	}
	l.Path(PathItem{Path: box(at.X), Stroke: frame, Role: "key symbol"})
}
