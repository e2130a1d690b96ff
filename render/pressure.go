package render

import (
	"fmt"
	"math"
	"slices"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/pressure"
)

// PressureChart is the temperatures of a system's invariant points against pressure,
// composed for print: one line for each point, named by its solids, a ring where its kind
// changes, a dot where it comes or goes, and a dotted line where a field does. A zero Style is ColourStyle; a zero WidthMM is the style's.
type PressureChart struct {
	Series     *pressure.Series
	Style      Style
	WidthMM    float64
	Provenance string
}

var pressureLayers = []string{"frame", "changes", "curves", "points", "labels"}

// Scene lays the chart out. It reports a FigureError for a missing series or a width
// that cannot hold a figure.
func (f PressureChart) Scene() (*Scene, error) {
	if f.Series == nil || len(f.Series.Projections) < 2 {
		return nil, &FigureError{What: "there is no series to draw", Where: "figure", Why: "it has fewer than two pressures", Remedy: "compute several pressures first"}
	}
	st := f.Style.orDefault()
	var err error
	if f.WidthMM, err = st.drawnWidth(f.WidthMM); err != nil {
		return nil, err
	}
	return f.draw(st).scene.enlarged(st.zoom()), nil
}

// pressureDrawing is a chart in the making.
type pressureDrawing struct {
	plot
	s     *pressure.Series
	sys   *gibbs.System
	rules []arc // across the chart, where a field comes or goes
}

func gigapascal(P float64) float64 { return P / 1e9 }

func (f PressureChart) draw(st Style) *pressureDrawing {
	s := f.Series
	d := &pressureDrawing{s: s, sys: s.Projections[0].System}
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, t := range s.Points {
		for _, a := range t.At {
			lo, hi = min(lo, celsius(a.Node.T)), max(hi, celsius(a.Node.T))
		}
	}
	if !(lo <= hi) {
		lo, hi = 0, 100
	}
	room := max(10, 0.08*(hi-lo))
	first, last := gigapascal(s.Pressures[0]), gigapascal(s.Pressures[len(s.Pressures)-1])
	if first < 0.02*last {
		first = 0 // one atmosphere is nothing on such a scale
	}
	d.x = newAxis(first, last, 6, "pressure, GPa")
	d.y = newAxis(lo-room, hi+room, 8, "°C")
	left := outerMargin + d.y.numberWidth(st)
	right := f.WidthMM - sideMargin
	note := ""
	if slices.ContainsFunc(s.Points, func(t pressure.Track) bool { return t.Edge >= 0 }) {
		note = "dashed: on an edge of the triangle"
	}
	foot := outerMargin + numberHeight(st) + 0.5*st.leading() + CapHeight(st.Base) + Descent(st.Base)
	if note != "" {
		foot += st.leading()
	}
	tall := max(chartLeast, min(chartMost, 0.85*(right-left)))
	head := tickLength + tickGap + CapHeight(st.Base) + 2*Descent(st.Base) + outerMargin
	d.board = newBoard(st, triangle{components: d.sys.Components}, f.WidthMM, foot+tall+head, pressureLayers...)
	d.lo, d.hi = Point{left, foot}, Point{right, foot + tall}
	d.frame()
	t := measure(PlainRuns(d.x.unit, st.Base, Regular))
	base := outerMargin + Descent(st.Base)
	if note != "" {
		n := measure(PlainRuns(note, st.Base, Regular))
		d.words.fixed("note", note, n, Point{(left + right - n.w) / 2, base}, 0, st.Muted)
		base += st.leading()
	}
	d.words.fixed("basis", d.x.unit, t, Point{(left + right - t.w) / 2, base}, 0, st.Text)
	if flag := d.flag(); flag != "" {
		t := measure(FormulaRuns(flag, st.Base, Bold))
		d.words.fixed("flag", flag, t, Point{d.hi.X - t.w, d.hi.Y + tickLength + tickGap + t.down}, 0, st.Text)
	}
	d.changes()
	for i := range s.Points {
		d.track(i)
	}
	d.words.solve()
	d.cutRules()
	d.describe(f, d.putWords())
	return d
}

// flag is what is to be known of the whole.
func (d *pressureDrawing) flag() string {
	s := metastable(d.sys)
	if len(d.s.Problems) > 0 {
		if s != "" {
			s += "; "
		}
		s += "incomplete"
	}
	return s
}

// track draws the line of one point, and names it.
func (d *pressureDrawing) track(i int) {
	st := d.style
	t := &d.s.Points[i]
	pts := d.places(t)
	dash := []float64(nil)
	if t.Edge >= 0 { // a point on an edge of the triangle
		dash = []float64{1.4, 0.9}
	}
	name := d.name(t)
	w := measure(FormulaRuns(name, st.Base, Regular))
	l := label{role: "point", name: name, colour: st.Text, wordings: []wording{w}, rank: 1}
	if line := distinct(pts, false); len(line) > 1 {
		a := smooth(line, false, nil)
		d.scene.Layer("curves").Path(PathItem{Path: a.path(), Stroke: st.dashed(st.Boundary, st.Line, dash), Role: "curve"})
		d.words.lines.add(rigid, a.chords(1.5)...)
		for k := 1; k < 14; k++ {
			u := float64(k) / 14
			q := a.at(u * a.length())
			n := a.nearest(q).left()
			for _, side := range []float64{1, -1} {
				m := n.times(side)
				off := math.Abs(m.X)*w.w/2 + math.Abs(m.Y)*(w.up+w.down)/2 + 0.8
				l.spots = append(l.spots, spot{c: q.plus(m.times(off)), cost: 3*math.Abs(u-0.6) + 0.15*(1-side)})
			}
		}
	} else if len(pts) > 0 {
		d.mark(d.scene.Layer("points"), PathItem{Path: circle(pts[0], dotRadius), Fill: &st.Line}, pts[0], dotRadius)
		l.spots = about(pts[0], dotRadius, 0, w, 0.5, 1, 2, 3)
	} else {
		return
	}
	d.words.ask(l)
}

// places are the points of a track on the page, up to the changes by which it comes
// and goes.
func (d *pressureDrawing) places(t *pressure.Track) (pts []Point) {
	if t.From != nil {
		pts = append(pts, d.change(t.From))
	}
	for _, a := range t.At {
		pts = append(pts, d.at(gigapascal(d.s.Pressures[a.Index]), celsius(a.Node.T)))
	}
	if t.To != nil {
		pts = append(pts, d.change(t.To))
	}
	return pts
}

// change is the place of the point that changes.
func (d *pressureDrawing) change(c *pressure.Change) Point {
	return d.at(gigapascal(c.Pressure), celsius(c.Node.T))
}

// name is the phases of a point, and its edge where another edge has a point of the
// same phases.
func (d *pressureDrawing) name(t *pressure.Track) string {
	name := assemblage(d.sys, append([]int{gibbs.Liquid}, t.Solids...))
	same := func(o pressure.Track) bool { return slices.Equal(o.Solids, t.Solids) && o.Edge != t.Edge }
	if t.Edge >= 0 && slices.ContainsFunc(d.s.Points, same) {
		c := d.sys.Components
		ends := [3][2]int{{1, 2}, {0, 2}, {0, 1}}[t.Edge]
		name += ", " + c[ends[0]].Symbol + "–" + c[ends[1]].Symbol
	}
	return name
}

// changes marks where points change their kind, come or go, and where fields do.
func (d *pressureDrawing) changes() {
	for i := range d.s.Changes {
		c := &d.s.Changes[i]
		switch c.Kind {
		case pressure.FieldGained:
			d.rule(c, "field gained")
		case pressure.FieldLost:
			d.rule(c, "field lost")
		case pressure.KindChanged:
			d.ring(c)
		}
	}
	for i := range d.s.Points {
		t := &d.s.Points[i]
		for _, c := range []*pressure.Change{t.From, t.To} {
			if c == nil {
				continue
			}
			q := d.change(c)
			d.mark(d.scene.Layer("points"), PathItem{Path: circle(q, dotRadius), Fill: &d.style.Line, Role: "marker"}, q, dotRadius)
		}
	}
}

// ring marks and names a change of kind.
func (d *pressureDrawing) ring(c *pressure.Change) {
	st := d.style
	q := d.change(c)
	w := white
	d.mark(d.scene.Layer("points"), PathItem{Path: circle(q, ringRadius*0.8), Fill: &w, Stroke: st.stroke(st.Mark, st.Line), Role: "marker"}, q, ringRadius)
	name := string(c.From) + " → " + string(c.To)
	t := measure(PlainRuns(name, st.Base, Regular))
	d.words.ask(label{role: "change", name: name, colour: st.Muted, wordings: []wording{t}, rank: 2,
		spots: append(about(q, ringRadius, 0, t, 0.5, 1, 2, 3), leaders(q, 1.2, 0, t, 5, 8, 12)...)})
}

// rule is a line at a pressure, with what a solid's field does there beside it.
func (d *pressureDrawing) rule(c *pressure.Change, does string) {
	st := d.style
	P := gigapascal(c.Pressure)
	a, b := d.at(P, d.y.from), d.at(P, d.y.to)
	line := straight([]Point{a, b})
	d.rules = append(d.rules, line)
	d.words.lines.add(faint, line.chords(2.5)...)
	name := phaseSymbol(d.sys, c.Solid) + ": " + does
	t := measure(append(FormulaRuns(phaseSymbol(d.sys, c.Solid), st.Base, Regular), PlainRuns(": "+does, st.Base, Regular)...))
	l := label{role: "change", name: name, colour: st.Muted, wordings: []wording{t}, rank: 3}
	for k := range 40 {
		u := 0.97 - 0.94*float64(k)/39
		q := a.lerp(b, u)
		for _, side := range []float64{1, -1} {
			l.spots = append(l.spots, spot{c: q.plus(Point{side * (t.w/2 + roomGap), 0}), cost: 2*(1-u) + 0.3*(1-side), home: &q})
		}
	}
	d.words.ask(l)
}

// cutRules draws the rules with gaps where words stand.
func (d *pressureDrawing) cutRules() {
	st := d.style
	gaps := d.gaps()
	for _, r := range d.rules {
		var path Path
		for _, piece := range r.without(r.inside(gaps), 0.7) {
			path.Append(piece.path())
		}
		if !path.Empty() {
			d.scene.Layer("changes").Path(PathItem{Path: path, Stroke: st.dashed(st.Rule, st.Muted, []float64{0.5, 0.8}), Role: "change"})
		}
	}
}

// describe fills in the metadata.
func (d *pressureDrawing) describe(f PressureChart, left []string) {
	d.scene.Title = d.sys.Title
	if d.scene.Title == "" {
		d.scene.Title = d.sys.Name
	}
	d.scene.Subject = "Invariant points against pressure"
	d.scene.Provenance = f.Provenance
	d.scene.Description = fmt.Sprintf("Temperatures of %d invariant points of %s from %g to %g GPa; %d changes.", len(d.s.Points), d.scene.Title, d.x.from, d.x.to, len(d.s.Changes))
	if len(left) > 0 {
		d.scene.Description += fmt.Sprintf(" Left out for want of room: %v.", left)
	}
}
