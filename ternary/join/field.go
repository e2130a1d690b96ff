package join

import (
	"fmt"
	"math"
	"slices"
	"sort"
)

// edgeEnd tells an end of an edge by its exact coordinates: they are the same
// numbers wherever a point is used.
type edge struct{ a, b Point }

// touchTol is the length, in K, of the stretch of a station on which two cells are
// neighbours: a level has the same temperature on either side only to rounding.
const touchTol = 1e-6

// cell is the part of a field within a slab.
type cell struct {
	phases []int
	upper  []Point // by rising X
	lower  []Point
}

// cells of a slab, by falling T.
func (e *engine) cells(s *slab) []cell {
	flat := func(T float64) []Point { return []Point{{s.from, T}, {s.to, T}} }
	sets := s.left.sets()
	out := make([]cell, len(sets))
	for i, set := range sets {
		out[i].phases = set
		out[i].upper, out[i].lower = flat(e.tMax), flat(e.tMin)
		if i > 0 {
			out[i].upper = s.lines[i-1]
		}
		if i < len(s.lines) {
			out[i].lower = s.lines[i]
		}
	}
	return out
}

// side is the vertical stretch of a cell at a station, lower and upper end.
func (c *cell) side(right bool) (lo, hi float64) {
	if right {
		return c.lower[len(c.lower)-1].T, c.upper[len(c.upper)-1].T
	}
	return c.lower[0].T, c.upper[0].T
}

// build makes fields, lines and levels of the slabs.
func (e *engine) build(d *Diagram, slabs []slab) error {
	var all [][]cell
	for i := range slabs {
		all = append(all, e.cells(&slabs[i]))
	}
	// number the fields: cells of neighbouring slabs with the same assemblage
	// that touch at the station are one
	group := make([][]int, len(all))
	parent := []int{}
	find := func(i int) int {
		for parent[i] != i {
			i = parent[i]
		}
		return i
	}
	for i := range all {
		group[i] = make([]int, len(all[i]))
		for k := range all[i] {
			group[i][k] = len(parent)
			parent = append(parent, len(parent))
		}
	}
	for i := 1; i < len(all); i++ {
		for k := range all[i-1] {
			for m := range all[i] {
				lo1, hi1 := all[i-1][k].side(true)
				lo2, hi2 := all[i][m].side(false)
				if math.Min(hi1, hi2)-math.Max(lo1, lo2) > touchTol && slices.Equal(all[i-1][k].phases, all[i][m].phases) && !e.parted(slabs[i].from, all[i][m].phases) {
					parent[find(group[i][m])] = find(group[i-1][k])
				}
			}
		}
	}
	edges := map[int]map[edge]bool{}
	phases := map[int][]int{}
	var order []int
	for i := range all {
		var cuts [2][]float64
		for side, j := range [2]int{i - 1, i + 1} {
			if j >= 0 && j < len(all) {
				for m := range all[j] {
					lo, hi := all[j][m].side(side == 0)
					cuts[side] = append(cuts[side], lo, hi)
				}
			}
			sort.Float64s(cuts[side])
		}
		for k := range all[i] {
			g := find(group[i][k])
			if edges[g] == nil {
				edges[g] = map[edge]bool{}
				phases[g] = all[i][k].phases
				order = append(order, g)
			}
			all[i][k].walk(&slabs[i], cuts, func(a, b Point) {
				if a == b {
					return
				}
				if edges[g][edge{b, a}] {
					delete(edges[g], edge{b, a})
					return
				}
				edges[g][edge{a, b}] = true
			})
		}
	}
	for _, g := range order {
		rings, ok := chain(edges[g])
		if !ok {
			return fmt.Errorf("the outline of the field of %v does not close", phases[g])
		}
		if len(rings) == 0 {
			continue
		}
		d.Fields = append(d.Fields, Field{Phases: phases[g], Outline: rings[0], Holes: rings[1:]})
	}
	e.lines(d, slabs, all)
	return nil
}

// walk gives the directed edges of a cell, anticlockwise, with its vertical sides
// divided where the neighbours have ends.
func (c *cell) walk(s *slab, cuts [2][]float64, visit func(a, b Point)) {
	for i := 1; i < len(c.lower); i++ {
		visit(c.lower[i-1], c.lower[i])
	}
	lo, hi := c.side(true)
	at := divided(lo, hi, cuts[1])
	for i := 1; i < len(at); i++ {
		visit(Point{s.to, at[i-1]}, Point{s.to, at[i]})
	}
	for i := len(c.upper) - 1; i > 0; i-- {
		visit(c.upper[i], c.upper[i-1])
	}
	lo, hi = c.side(false)
	at = divided(lo, hi, cuts[0])
	for i := len(at) - 1; i > 0; i-- {
		visit(Point{s.from, at[i]}, Point{s.from, at[i-1]})
	}
}

// divided is the range lo to hi with the cuts, in order, within it.
func divided(lo, hi float64, cuts []float64) []float64 {
	out := []float64{lo}
	for _, v := range cuts {
		if v > out[len(out)-1] && v < hi {
			out = append(out, v)
		}
	}
	if hi > lo {
		out = append(out, hi)
	}
	return out
}

// chain makes rings of directed edges, the largest first.
func chain(edges map[edge]bool) ([][]Point, bool) {
	next := map[Point][]Point{}
	var starts []Point
	for k := range edges {
		if len(next[k.a]) == 0 {
			starts = append(starts, k.a)
		}
		next[k.a] = append(next[k.a], k.b)
	}
	sort.Slice(starts, func(i, j int) bool {
		return starts[i].X < starts[j].X || starts[i].X == starts[j].X && starts[i].T < starts[j].T
	})
	for p := range next {
		sort.Slice(next[p], func(i, j int) bool {
			a, b := next[p][i], next[p][j]
			return a.X < b.X || a.X == b.X && a.T < b.T
		})
	}
	var rings [][]Point
	for _, s := range starts {
		for len(next[s]) > 0 {
			ring := []Point{}
			at := s
			for {
				out := next[at]
				if len(out) == 0 {
					return nil, false
				}
				to := out[len(out)-1]
				next[at] = out[:len(out)-1]
				ring = append(ring, at)
				at = to
				if at == s {
					break
				}
			}
			rings = append(rings, ring)
		}
	}
	sort.SliceStable(rings, func(i, j int) bool { return math.Abs(area(rings[i])) > math.Abs(area(rings[j])) })
	return rings, true
}

func area(ring []Point) float64 {
	sum := 0.0
	for i, p := range ring {
		q := ring[(i+1)%len(ring)]
		sum += p.X*q.T - q.X*p.T
	}
	return sum / 2
}

// lines joins the lines of neighbouring slabs, and adds the vertical ones.
func (e *engine) lines(d *Diagram, slabs []slab, all [][]cell) {
	open := map[string]int{}
	for i := range slabs {
		s := &slabs[i]
		still := map[string]int{}
		for k, pts := range s.lines {
			c := &s.left.changes[k]
			key := fmt.Sprint(c.above, c.below)
			if n, ok := open[key]; ok {
				l := &d.Lines[n]
				if end := l.Points[len(l.Points)-1]; math.Abs(end.T-pts[0].T) < 1e-3 {
					l.Points = append(l.Points, pts[1:]...)
					still[key] = n
					continue
				}
			}
			d.Lines = append(d.Lines, Line{Above: c.above, Below: c.below, Points: slices.Clone(pts)})
			still[key] = len(d.Lines) - 1
		}
		open = still
		if i > 0 {
			e.vertical(d, s.from, all[i-1], all[i])
			e.nodes(d, &slabs[i-1], s)
		}
	}
	for i := range d.Lines {
		l := &d.Lines[i]
		if l.Vertical || len(l.Points) < 2 {
			continue
		}
		first, last := l.Points[0], l.Points[len(l.Points)-1]
		l.Horizontal = last.X > first.X
		for _, p := range l.Points {
			l.Horizontal = l.Horizontal && math.Abs(p.T-first.T) <= levelTol*first.T
		}
	}
	e.levels(d, slabs)
}

// vertical adds the vertical lines at a station: where the assemblages left and
// right of it differ over a range of T.
func (e *engine) vertical(d *Diagram, x float64, left, right []cell) {
	for i := range left {
		for k := range right {
			lo1, hi1 := left[i].side(true)
			lo2, hi2 := right[k].side(false)
			lo, hi := math.Max(lo1, lo2), math.Min(hi1, hi2)
			if hi-lo > stitchTol && (!slices.Equal(left[i].phases, right[k].phases) || e.parted(x, left[i].phases)) {
				d.Lines = append(d.Lines, Line{Above: left[i].phases, Below: right[k].phases, Points: []Point{{x, lo}, {x, hi}}, Vertical: true})
			}
		}
	}
}

// nodes notes where lines of neighbouring slabs meet.
func (e *engine) nodes(d *Diagram, a, b *slab) {
	ends := map[float64]int{}
	for _, l := range a.lines {
		ends[l[len(l)-1].T]++
	}
	var ts []float64
	for T, n := range ends {
		if n > 1 {
			ts = append(ts, T)
		}
	}
	for _, l := range b.lines {
		T := l[0].T
		if n := 0; !slices.Contains(ts, T) {
			for _, o := range b.lines {
				if o[0].T == T {
					n++
				}
			}
			if n > 1 {
				ts = append(ts, T)
			}
		}
	}
	sort.Float64s(ts)
	for i, T := range ts {
		if i == 0 || T-ts[i-1] > 1e-3 {
			d.Nodes = append(d.Nodes, Point{b.from, T})
		}
	}
}

// levels gathers the horizontals at one temperature, by falling T.
func (e *engine) levels(d *Diagram, slabs []slab) {
	for i := range slabs {
		s := &slabs[i]
		for k := range s.lines {
			c := &s.left.changes[k]
			if !c.level() {
				continue
			}
			merged := false
			for j := range d.Levels {
				l := &d.Levels[j]
				if math.Abs(l.T-c.T) < 1e-5 && math.Abs(l.To-s.from) < 1e-9 {
					l.To, merged = s.to, true
				}
			}
			if !merged {
				l := Level{T: c.T, From: s.from, To: s.to}
				for _, p := range c.eq.Parts {
					l.States = append(l.States, p.State)
				}
				d.Levels = append(d.Levels, l)
			}
		}
	}
	sort.SliceStable(d.Levels, func(i, j int) bool { return d.Levels[i].T > d.Levels[j].T })
}
