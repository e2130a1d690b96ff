package render

import (
	"fmt"
	"math"
	"slices"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/pressure"
)

// PressureChart is the temperatures of a system's invariant points against pressure,
// composed for print: one line for each point, named by its solids, with the changes of
// kind marked. A zero Style is ColourStyle; a zero WidthMM is the style's.
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
	s   *pressure.Series
	sys *gibbs.System
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
	var pts []Point
	for _, a := range t.At {
		pts = append(pts, d.at(gigapascal(d.s.Pressures[a.Index]), celsius(a.Node.T)))
	}
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

// name is the phases of a point, with its edge.
func (d *pressureDrawing) name(t *pressure.Track) string {
	phases := append([]int{gibbs.Liquid}, t.Solids...)
	return assemblage(d.sys, phases)
}

// changes marks the pressures at which points change their kind, and fields come or
// go.
func (d *pressureDrawing) changes() {
	st := d.style
	l := d.scene.Layer("changes")
	var seen []float64
	for i := range d.s.Changes {
		c := &d.s.Changes[i]
		P := gigapascal(c.Pressure)
		a, b := d.at(P, d.y.from), d.at(P, d.y.to)
		if !slices.ContainsFunc(seen, func(v float64) bool { return math.Abs(v-P) < 1e-3*(d.x.to-d.x.from) }) {
			seen = append(seen, P)
			l.Path(PathItem{Path: Polyline([]Point{a, b}, false), Stroke: st.dashed(st.Rule, st.Muted, []float64{0.5, 0.8}), Role: "change"})
			d.words.lines.add(faint, segment{a, b})
		}
		if c.Kind != pressure.KindChanged {
			continue
		}
		q := d.at(P, celsius(c.Node.T))
		w := white
		d.mark(d.scene.Layer("points"), PathItem{Path: circle(q, ringRadius*0.8), Fill: &w, Stroke: st.stroke(st.Mark, st.Line)}, q, ringRadius)
		name := string(c.From) + " → " + string(c.To)
		t := measure(PlainRuns(name, st.Base, Regular))
		d.words.ask(label{role: "change", name: name, colour: st.Muted, wordings: []wording{t}, rank: 2,
			spots: append(about(q, ringRadius, 0, t, 0.5, 1, 2, 3), leaders(q, 1.2, 0, t, 5, 8, 12)...)})
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
