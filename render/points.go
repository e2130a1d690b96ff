package render

import (
	"fmt"
	"math"
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// Symbols, mm.
const (
	ringRadius = 0.75 // invariant point
	dotRadius  = 0.5  // point on an edge, extremum

	diamondRadius = 0.8 // composition of a compound
)

// circle is a circle of four cubic arcs; they stray from it by 2.7e-4 of r.
func circle(c Point, r float64) Path {
	const k = 0.5522847498 // 4/3 tan(π/8)
	var p Path
	p.MoveTo(c.X+r, c.Y)
	p.CubeTo(c.X+r, c.Y+k*r, c.X+k*r, c.Y+r, c.X, c.Y+r)
	p.CubeTo(c.X-k*r, c.Y+r, c.X-r, c.Y+k*r, c.X-r, c.Y)
	p.CubeTo(c.X-r, c.Y-k*r, c.X-k*r, c.Y-r, c.X, c.Y-r)
	p.CubeTo(c.X+k*r, c.Y-r, c.X+r, c.Y-k*r, c.X+r, c.Y)
	p.Close()
	return p
}

// mark draws a symbol and keeps words off a square of half-width r about it.
func (b *board) mark(l *Layer, item PathItem, c Point, r float64) {
	item.Role = "marker"
	l.Path(item)
	if item.Stroke != nil {
		r += item.Stroke.Width / 2
	}
	b.words.marks = append(b.words.marks, box{c, Point{1, 0}, r, r})
}

// shownNodes are the nodes that get a symbol: loop starts are bookkeeping. Minima of
// solid solutions are shown with them; domes are not, for compounds have symbols of
// their own.
func shownNodes(p *liquidus.Projection) []liquidus.Node {
	var out []liquidus.Node
	for _, n := range p.Nodes {
		if n.Kind == liquidus.LoopStart {
			continue
		}
		if n.ID == "" {
			n.ID = fmt.Sprint(len(out) + 1)
		}
		out = append(out, n)
	}
	for _, n := range p.Extrema {
		if n.Kind == liquidus.Minimum {
			out = append(out, n)
		}
	}
	return out
}

func isRing(n liquidus.Node) bool {
	return n.Edge < 0 && n.Kind != liquidus.Maximum && n.Kind != liquidus.Minimum && n.Kind != liquidus.Critical
}

// points draws the nodes and asks for their numbers.
func (d *drawing) points() {
	l := d.scene.Layer("points")
	st := d.style
	for _, n := range shownNodes(d.pr) {
		q := d.tri.at(n.Liquid)
		t := measure(PlainRuns(n.ID, st.Base, Bold))
		lab := label{role: "point label", name: n.ID, colour: st.Text, wordings: []wording{t}, rank: 1, must: true}
		switch {
		case isRing(n):
			w := white
			d.mark(l, PathItem{Path: circle(q, ringRadius), Fill: &w, Stroke: st.stroke(st.Mark, st.Line)}, q, ringRadius)
			lab.spots = about(q, ringRadius, 0, t, 0.5, 0.9, 1.5, 2.2)
		case n.Edge >= 0:
			d.mark(l, PathItem{Path: circle(q, dotRadius), Fill: &st.Line}, q, dotRadius)
			lab.spots = about(q, dotRadius, 0, t, 0.5, 0.9, 1.5, 2.2)
			if side := d.tri.sideOf(n.Edge); side >= 0 {
				lab.spots = outside(q, outward(side), t)
			}
			lab.rank, lab.must = 3, false
		default:
			d.mark(l, PathItem{Path: circle(q, dotRadius), Fill: &st.Line}, q, dotRadius)
			lab.spots = about(q, dotRadius, 0, t, 0.5, 0.9, 1.5, 2.2)
			lab.rank = 3
		}
		d.words.ask(lab)
	}
}

// outside lists places beyond the edge whose outward normal is out, then
// places all round.
func outside(q, out Point, t wording) []spot {
	var spots []spot
	for _, s := range about(q, dotRadius, 0, t, 0.6, 1.2, 2.0, 3.0, 4.2) {
		along := s.c.minus(q).unit().dot(out)
		s.home = nil // the edge lies between
		if along < 0.3 {
			s.cost += 12
		} else {
			s.cost = s.cost*0.6 + 2*(1-along)
		}
		spots = append(spots, s)
	}
	return spots
}

// compoundDot is the composition of one or more stoichiometric solids.
type compoundDot struct {
	at    Point
	names []string
	own   bool // it lies in its own field, whose name says what it is
}

// compounds marks the compositions of stoichiometric solids other than the
// components that lie in the triangle. Solids of one composition share a
// diamond; one that lies in its solid's own field needs no name.
func (d *drawing) compounds() {
	l := d.scene.Layer("points")
	st := d.style
	for _, c := range d.compoundDots() {
		w := white
		d.mark(l, PathItem{Path: diamond(c.at, diamondRadius), Fill: &w, Stroke: st.stroke(st.Mark, st.Line)}, c.at, diamondRadius)
		if c.own {
			continue
		}
		name := strings.Join(c.names, ", ")
		t := measure(FormulaRuns(name, st.Base, Italic))
		lab := label{role: "compound", name: name, colour: st.Text, wordings: []wording{t}, rank: 4}
		if e := d.tri.edgeOf(c.at); e >= 0 {
			lab.spots = outside(c.at, outward(e), t)
		} else {
			lab.spots = about(c.at, diamondRadius, 0, t, 0.5, 0.9, 1.5, 2.5)
		}
		d.words.ask(lab)
	}
}

// compoundPlaces lists the solids that get a diamond, by index, with their
// compositions.
func compoundPlaces(sys *gibbs.System) map[int]ternary.Composition {
	out := map[int]ternary.Composition{}
	for i, s := range sys.Solids {
		if len(s.Members) != 1 {
			continue
		}
		c := gibbs.State{C: s.Members[0].C}.Composition()
		if c.Inside(1e-9) && max(c[0], c[1], c[2]) < 1-1e-6 {
			out[i] = c
		}
	}
	return out
}

func (d *drawing) compoundDots() (out []*compoundDot) {
	places := compoundPlaces(d.pr.System)
	for i, s := range d.pr.System.Solids {
		c, ok := places[i]
		if !ok || !d.tri.shows(c) {
			continue
		}
		q := d.tri.at(c)
		var dot *compoundDot
		for _, o := range out {
			if o.at.distance(q) < 0.1 {
				dot = o
			}
		}
		if dot == nil {
			dot = &compoundDot{at: q}
			out = append(out, dot)
		}
		dot.names = append(dot.names, s.Symbol)
		dot.own = dot.own || d.inField(i, q)
	}
	return out
}

// inField reports whether q lies in a field of solid i; a point on an edge of
// the triangle counts by what lies just inside.
func (d *drawing) inField(i int, q Point) bool {
	if e := d.tri.edgeOf(q); e >= 0 {
		q = q.minus(outward(e).times(0.3))
	}
	for k, f := range d.pr.Fields {
		if f.Solid == i && len(d.regions[k].rings) > 0 && d.regions[k].contains(q) {
			return true
		}
	}
	return false
}

// diamond is a square on its corner, from its centre r to each.
func diamond(c Point, r float64) Path {
	return Polyline([]Point{{c.X + r, c.Y}, {c.X, c.Y + r}, {c.X - r, c.Y}, {c.X, c.Y - r}}, true)
}

// reaction writes the reaction at a node: what a falling temperature turns
// into what; where that is not unique, the phases that coexist.
func reaction(sys *gibbs.System, n liquidus.Node) string {
	names := solidNames(sys, n.Solids)
	side := func(list []int) string {
		var out []string
		for _, i := range list {
			if i == liquidus.Itself {
				out = append(out, "L")
			} else {
				out = append(out, names[i])
			}
		}
		return strings.Join(out, " + ")
	}
	gone, made := n.Reaction()
	if gone == nil || made == nil {
		return strings.Join(append([]string{"L"}, names...), " + ")
	}
	return side(gone) + " → " + side(made)
}

// solidNames are the symbols of solids; a phase that is there twice gets a
// prime the second time.
func solidNames(sys *gibbs.System, states []gibbs.State) []string {
	var out []string
	for i, s := range states {
		name := "L2" // the liquid of the point itself is L
		if s.Phase != gibbs.Liquid {
			name = sys.Solids[s.Phase].Symbol
		}
		for _, o := range states[:i] {
			if o.Phase == s.Phase {
				name += "′"
			}
		}
		out = append(out, name)
	}
	return out
}

// percents writes a composition in the figure's basis, one decimal each.
func (t triangle) percents(x ternary.Composition) [3]string {
	var out [3]string
	for i, f := range t.components.Fractions(x, t.basis) {
		v := math.Round(f*1000) / 10
		if v == 0 {
			v = 0 // no minus sign
		}
		out[i] = strings.Replace(fmt.Sprintf("%.1f", v), "-", "−", 1)
	}
	return out
}
