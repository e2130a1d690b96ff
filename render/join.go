package render

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	joins "thalweg/ternary/join"
)

// Join is a diagram of temperature against composition along a join, composed for
// print: fields, boundaries, levels with their temperatures, the compositions of the
// phases that react there, and under it a key of the reactions. A zero Style is
// ColourStyle; a zero WidthMM is the style's.
type Join struct {
	Diagram    *joins.Diagram
	Marks      []JoinMark
	Basis      ternary.Basis
	Style      Style
	WidthMM    float64
	Provenance string
}

// JoinMark is a point of the diagram to be marked. Where all its phases lie on the
// join, their compositions are marked too, and joined by a tie line.
type JoinMark struct {
	Name   string
	X, T   float64 // X as in the diagram, T in kelvin
	Phases []gibbs.State
}

// onJoin is how far from the join, in mole fractions, a composition counts as on it.
const onJoin = 1e-6

// Proportions of the plot: its height as a share of its width, within limits in mm.
const (
	joinShape = 0.82
	joinLeast = 46.0
	joinMost  = 104.0
)

var joinLayers = []string{"fields", "tie lines", "boundaries", "frame", "points", "samples", "labels", "key"}

// Scene lays the figure out. It reports a FigureError for a missing diagram or a
// width that cannot hold a figure.
func (f Join) Scene() (*Scene, error) {
	if f.Diagram == nil || f.Diagram.System == nil {
		return nil, &FigureError{What: "there is no diagram to draw", Where: "figure", Why: "the diagram or its system is missing", Remedy: "compute the join first"}
	}
	st := f.Style.orDefault()
	var err error
	if f.WidthMM, err = st.drawnWidth(f.WidthMM); err != nil {
		return nil, err
	}
	return f.draw(st).scene.enlarged(st.zoom()), nil
}

// joinDrawing is a figure in the making.
type joinDrawing struct {
	plot
	d     *joins.Diagram
	basis ternary.Basis
}

func (f Join) draw(st Style) *joinDrawing {
	d := &joinDrawing{d: f.Diagram, basis: f.Basis}
	lowest, highest := celsius(d.d.TMin), celsius(d.d.TMax)
	d.x = axis{from: 0, to: 100, step: 20, unit: f.Basis.Unit()}
	d.y = newAxis(lowest, highest, 9, "°C")

	left := outerMargin + d.y.numberWidth(st)
	right := f.WidthMM - sideMargin
	ends := f.ends(st, right-left)
	key := f.key(st, f.WidthMM-2*keyMargin)
	foot := numberHeight(st) + 0.4*st.leading() + float64(max(len(ends[0]), len(ends[1]))-1)*st.leading() + CapHeight(st.Base) + Descent(st.Base)
	under := outerMargin
	if len(key.lines) > 0 {
		under += key.height() + 2.6
	}
	tall := max(joinLeast, min(joinMost, joinShape*(right-left)))
	head := tickLength + tickGap + CapHeight(st.Base) + 2*Descent(st.Base) + outerMargin
	flags := f.flags()
	if len(flags) > 0 {
		head = max(head, tickLength+2*tickGap+float64(len(flags))*st.leading()+outerMargin)
	}
	d.board = newBoard(st, triangle{components: d.d.System.Components, basis: f.Basis}, f.WidthMM, under+foot+tall+head, joinLayers...)
	d.lo = Point{left, under + foot}
	d.hi = Point{right, under + foot + tall}

	d.frame()
	d.heading(flags)
	d.footing(ends)
	if len(key.lines) > 0 {
		key.draw(d.scene.Layer("key"), keyMargin, outerMargin+key.height(), f.WidthMM-2*keyMargin)
		d.words.marks = append(d.words.marks, uprightBox(keyMargin, outerMargin, f.WidthMM-keyMargin, outerMargin+key.height()))
	}
	d.fields()
	d.boundaries()
	d.levels()
	d.melting()
	d.marks(f.Marks)
	d.nameFields()
	d.words.solve()
	f.describe(d.scene, d.putWords())
	return d
}

// place puts a point of the diagram, X and T in kelvin, on the page.
func (d *joinDrawing) place(x, T float64) Point {
	return d.at(100*d.d.Share(x, d.basis), T-zeroCelsius)
}

// clipped is place, with what lies beyond the frame set on it.
func (d *joinDrawing) clipped(x, T float64) Point {
	q := d.place(x, T)
	return Point{max(d.lo.X, min(d.hi.X, q.X)), max(d.lo.Y, min(d.hi.Y, q.Y))}
}

// flags are the warnings that a figure must carry.
func (f Join) flags() (out []string) {
	if w := f.Diagram.System.Withheld; len(w) > 0 {
		out = append(out, "metastable: without "+strings.Join(w, ", "))
	}
	if !f.Diagram.Checks.Passed {
		out = append(out, "incomplete")
	}
	return out
}

// heading sets the warnings above the frame.
func (d *joinDrawing) heading(flags []string) {
	st := d.style
	y := d.scene.Height - outerMargin - CapHeight(st.Base)
	for _, s := range flags {
		d.words.fixed("flag", s, measure(FormulaRuns(s, st.Base, Bold)), Point{d.lo.X + 1, y}, 0, st.Text)
		y -= st.leading()
	}
}

// ends are the words under the two ends of the join.
func (f Join) ends(st Style, wide float64) (out [2][]wording) {
	cs := f.Diagram.System.Components
	unit := TextWidth(PlainRuns(f.Basis.Unit(), st.Base, Regular))
	for i, x := range []ternary.Composition{f.Diagram.From, f.Diagram.To} {
		if k := apexOf(x); k >= 0 {
			out[i] = apexLines(st, cs[k], (wide-unit-8)/2)
			continue
		}
		var words [][]Run
		for k, v := range cs.Fractions(x, f.Basis) {
			if x[k] > 0 {
				words = append(words, PlainRuns(fmt.Sprintf("%s %s", cs[k].Symbol, percent(v)), st.Apex, Bold))
			}
		}
		for _, runs := range wrap(words, (wide-unit-8)/2) {
			out[i] = append(out[i], measure(runs))
		}
	}
	return out
}

// apexOf is the component that a composition consists of, or -1.
func apexOf(x ternary.Composition) int {
	for i, v := range x {
		if v == 1 {
			return i
		}
	}
	return -1
}

// percent writes a fraction as a percentage with one decimal where it needs one.
func percent(v float64) string {
	return strings.TrimSuffix(fmt.Sprintf("%.1f", 100*v), ".0")
}

// footing sets the names of the ends and the unit between them.
func (d *joinDrawing) footing(ends [2][]wording) {
	st := d.style
	base := d.lo.Y - numberHeight(st) - 0.4*st.leading() - CapHeight(st.Base)
	for i, lines := range ends {
		for k, t := range lines {
			at := Point{outerMargin, base - float64(k)*st.leading()}
			if i == 1 {
				at.X = d.scene.Width - outerMargin - t.w
			}
			d.words.fixed("apex", plain(t.runs), t, at, 0, st.Text)
		}
	}
	t := measure(PlainRuns(d.x.unit, st.Base, Regular))
	d.words.fixed("basis", d.x.unit, t, Point{(d.lo.X + d.hi.X - t.w) / 2, base}, 0, st.Text)
}

// ring is an outline on the page.
func (d *joinDrawing) ring(pts []joins.Point, anticlockwise bool) []Point {
	out := make([]Point, len(pts))
	for i, p := range pts {
		out[i] = d.clipped(p.X, p.T)
	}
	out = distinct(out, true)
	if len(out) > 2 && (area(out) > 0) != anticlockwise {
		slices.Reverse(out)
	}
	return out
}

// outline is a field on the page.
func (d *joinDrawing) outline(f *joins.Field) (out region) {
	ring := d.ring(f.Outline, true)
	if len(ring) < 3 {
		return out
	}
	out.rings = append(out.rings, ring)
	for _, h := range f.Holes {
		if ring := d.ring(h, false); len(ring) > 2 {
			out.rings = append(out.rings, ring)
		}
	}
	return out
}

// fields tints the fields: the colour tells one phase from three, and melt from
// solids alone; fields of two phases with melt stay white.
func (d *joinDrawing) fields() {
	l := d.scene.Layer("fields")
	for i := range d.d.Fields {
		f := &d.d.Fields[i]
		r := d.outline(f)
		c, ok := d.tint(f.Phases)
		if !ok || len(r.rings) == 0 {
			continue
		}
		var path Path
		for _, ring := range r.rings {
			path.Append(Polyline(ring, true))
		}
		l.Path(PathItem{Path: path, Fill: &c, Role: "field"})
	}
}

func (d *joinDrawing) tint(phases []int) (Colour, bool) {
	t := d.style.Tints
	if len(t) == 0 {
		return Colour{}, false
	}
	melt := slices.Contains(phases, gibbs.Liquid)
	switch {
	case len(phases) == 1 && melt:
		return t[1%len(t)], true
	case len(phases) == 1:
		return t[3%len(t)], true
	case len(phases) == 3 && melt:
		return t[0], true
	case len(phases) == 2 && !melt:
		return blend(t[2%len(t)], white, 0.4), true
	case len(phases) == 3:
		return t[2%len(t)], true
	}
	return Colour{}, false
}

// nameFields asks for the names of the fields, those with most room first: names
// that stand outside a small field come to terms with them.
func (d *joinDrawing) nameFields() {
	type named struct {
		r      region
		name   string
		radius float64
	}
	var list []named
	for i := range d.d.Fields {
		f := &d.d.Fields[i]
		if r := d.outline(f); len(r.rings) > 0 {
			_, radius := r.pole(0.1)
			list = append(list, named{r, assemblage(d.d.System, f.Phases), radius})
		}
	}
	slices.SortStableFunc(list, func(a, b named) int { return cmp.Compare(b.radius, a.radius) })
	for _, n := range list {
		d.nameRegion(n.r, n.name, func(b box) (float64, bool) { return 0, d.inFrame(b) })
	}
}

// inFrame reports that an upright box lies within the frame.
func (d *joinDrawing) inFrame(b box) bool {
	return b.c.X-b.w > d.lo.X && b.c.X+b.w < d.hi.X && b.c.Y-b.h > d.lo.Y && b.c.Y+b.h < d.hi.Y
}

// boundaries draws the lines: liquidus and solidus heaviest, vertical lines and
// levels finer.
func (d *joinDrawing) boundaries() {
	st := d.style
	for i := range d.d.Lines {
		line := &d.d.Lines[i]
		pts := make([]Point, 0, len(line.Points))
		for _, p := range line.Points {
			pts = append(pts, d.clipped(p.X, p.T))
		}
		pts = distinct(pts, false)
		if len(pts) < 2 || d.onFrame(pts) {
			continue
		}
		width := st.Boundary
		switch line.Role() {
		case "vertical", "level", "boundary":
			width = st.Polymorph
		}
		d.scene.Layer("boundaries").Path(PathItem{Path: Polyline(pts, false), Stroke: st.stroke(width, st.Line), Role: "boundary"})
		d.words.lines.add(rigid, straight(pts).chords(2.5)...)
	}
}

// onFrame reports that a line runs along the frame.
func (d *joinDrawing) onFrame(pts []Point) bool {
	along := func(on func(Point) bool) bool {
		return !slices.ContainsFunc(pts, func(q Point) bool { return !on(q) })
	}
	const near = 0.02 // mm
	return along(func(q Point) bool { return q.X < d.lo.X+near }) || along(func(q Point) bool { return q.X > d.hi.X-near }) ||
		along(func(q Point) bool { return q.Y < d.lo.Y+near }) || along(func(q Point) bool { return q.Y > d.hi.Y-near })
}
