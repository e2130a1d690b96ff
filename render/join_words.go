package render

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"thalweg/ternary/gibbs"
	joins "thalweg/ternary/join"
)

// levels marks the phases that react at the levels, where they lie on the join, and
// writes the temperature of every horizontal line on it.
func (d *joinDrawing) levels() {
	var dots []Point
	for i := range d.d.Levels {
		if v := &d.d.Levels[i]; v.T > d.d.TMin && v.T < d.d.TMax {
			dots = d.reacting(v, dots)
		}
	}
	type stretch struct{ from, to, T float64 }
	var all []stretch
	for i := range d.d.Lines {
		l := &d.d.Lines[i]
		if !l.Horizontal || l.Points[0].T <= d.d.TMin || l.Points[0].T >= d.d.TMax {
			continue
		}
		s := stretch{l.Points[0].X, l.Points[len(l.Points)-1].X, l.Points[0].T}
		known := false
		for k := range all {
			if o := &all[k]; math.Abs(o.T-s.T) < sameLevel && s.from <= o.to+onJoin && s.to >= o.from-onJoin {
				o.from, o.to, known = min(o.from, s.from), max(o.to, s.to), true
				break
			}
		}
		if !known {
			all = append(all, s)
		}
	}
	for _, s := range all {
		name := fmt.Sprintf("%.0f °C", celsius(s.T))
		t := measure(PlainRuns(name, d.style.Base, Regular))
		d.words.ask(label{role: "level", name: name, colour: d.style.Muted, wordings: []wording{t}, rank: 1,
			spots: d.astride(d.place(s.from, s.T), d.place(s.to, s.T), t, dots)})
	}
}

// sameLevel is the difference of temperature, K, within which pieces of a horizontal
// line share one label.
const sameLevel = 1e-3

// astride are places just above and below a level line, from its middle outwards and
// rather not beside the number of a dot, and beyond these with a leader line.
func (d *joinDrawing) astride(a, b Point, t wording, dots []Point) (out []spot) {
	h := (t.up + t.down) / 2
	for k := 0; k <= 40; k++ {
		u := 0.5 + float64((k+1)/2)/42*math.Pow(-1, float64(k))
		for _, side := range []float64{1, -1} {
			c := a.lerp(b, u).plus(Point{0, side * (h + roomGap)})
			if c.X-t.w/2 < a.X || c.X+t.w/2 > b.X {
				continue
			}
			s := spot{c: c, cost: 6*math.Abs(u-0.5) + 0.7*(1-side)}
			for _, q := range dots {
				if math.Abs(q.Y-a.Y) < 0.01 && math.Abs(q.X-c.X) < t.w/2+7 {
					s.cost += 3
				}
			}
			out = append(out, s)
		}
	}
	for _, s := range leaders(a.lerp(b, 0.5), 0, 0, t, 3, 5, 8, 12, 16, 21) {
		if s.cost += 8; d.inFrame(t.around(s.c, 0)) {
			out = append(out, s)
		}
	}
	return out
}

// reacting marks and names the compositions of a level's phases; dots are those
// marked already.
func (d *joinDrawing) reacting(v *joins.Level, dots []Point) []Point {
	st := d.style
	r := v.Reaction(d.d.System)
	l := d.scene.Layer("points")
	for _, s := range slices.Concat(r.High, r.Low) {
		x, off := d.d.Along(s.Composition())
		if off > onJoin || x < onJoin || x > 1-onJoin {
			continue
		}
		q := d.place(x, v.T)
		if slices.ContainsFunc(dots, func(o Point) bool { return o.distance(q) < 0.01 }) {
			continue
		}
		dots = append(dots, q)
		d.mark(l, PathItem{Path: circle(q, dotRadius), Fill: &st.Line}, q, dotRadius)
		name := percent(d.d.Share(x, d.basis))
		t := measure(PlainRuns(name, st.Base, Regular))
		var spots []spot
		for _, s := range append(about(q, dotRadius, 0, t, 0.5, 0.9, 1.5, 2.2, 3), leaders(q, 1, 0, t, 5, 8, 12)...) {
			if d.inFrame(t.around(s.c, 0)) {
				spots = append(spots, s)
			}
		}
		d.words.ask(label{role: "composition", name: name, colour: st.Text, wordings: []wording{t}, rank: 0, spots: spots})
	}
	return dots
}

// melting writes the temperatures at which the liquidus reaches the ends.
func (d *joinDrawing) melting() {
	st := d.style
	for i := range d.d.Lines {
		l := &d.d.Lines[i]
		if l.Role() != "liquidus" {
			continue
		}
		for _, p := range []joins.Point{l.Points[0], l.Points[len(l.Points)-1]} {
			if p.X != 0 && p.X != 1 {
				continue
			}
			q := d.place(p.X, p.T)
			name := fmt.Sprintf("%.0f °C", celsius(p.T))
			t := measure(PlainRuns(name, st.Base, Regular))
			side := 1 - 2*p.X
			var spots []spot
			for k, dy := range []float64{0.4, 1.2, 2.4, -0.4, -1.2, -2.4, 4, -4} {
				c := q.plus(Point{side * (t.w/2 + 1.2), dy + sign(dy)*(t.up+t.down)/2})
				if d.words.lines.meets(segment{q.plus(Point{side * 0.8, 0.5 * sign(dy)}), c}) > 0 {
					continue // it would seem to belong to another line
				}
				spots = append(spots, spot{c: c, cost: 0.7 * float64(k)})
			}
			d.words.ask(label{role: "melting point", name: name, colour: st.Muted, wordings: []wording{t}, rank: 3, spots: spots})
		}
	}
}

// marks draws the points asked for, with tie lines, and names them.
func (d *joinDrawing) marks(list []JoinMark) {
	st := d.style
	l := d.scene.Layer("samples")
	for i, m := range list {
		if m.T < d.d.TMin || m.T > d.d.TMax {
			continue
		}
		q := d.place(m.X, m.T)
		fill := st.pathColour(i)
		if ends, ok := d.tie(m); ok {
			pts := []Point{ends[0], ends[len(ends)-1]}
			d.scene.Layer("tie lines").Path(PathItem{Path: Polyline(pts, false), Stroke: st.dashed(st.Polymorph, fill, []float64{1.2, 0.8}), Role: "tie line"})
			d.words.lines.add(rigid, straight(pts).chords(2.5)...)
			w := white
			for _, e := range ends {
				d.mark(l, PathItem{Path: circle(e, dotRadius), Fill: &w, Stroke: st.stroke(st.Mark, fill)}, e, dotRadius)
			}
		}
		d.mark(l, PathItem{Path: sampleShape(i, q, 1.0), Fill: &fill, Stroke: st.stroke(0.5, white)}, q, 1.1)
		t := measure(PlainRuns(m.Name, st.Base, Bold))
		d.words.ask(label{role: "sample", name: m.Name, colour: st.Text, wordings: []wording{t}, rank: 1,
			spots: append(about(q, 1.2, 0, t, 0.5, 1, 2, 3), leaders(q, 1.5, 0, t, 5, 8, 12)...)})
	}
}

// tie are the places of a mark's phases, from left to right, if they are at least two
// and all on the join.
func (d *joinDrawing) tie(m JoinMark) (out []Point, ok bool) {
	for _, s := range m.Phases {
		x, off := d.d.Along(s.Composition())
		if off > onJoin || x < -onJoin || x > 1+onJoin {
			return nil, false
		}
		out = append(out, d.place(x, m.T))
	}
	sort.Slice(out, func(i, j int) bool { return out[i].X < out[j].X })
	return out, len(out) > 1
}

// key lists the reactions at the levels, the hottest first.
func (f Join) key(st Style, width float64) table {
	k := table{leading: st.leading(), size: st.Base}
	levels := slices.Clone(f.Diagram.Levels)
	sort.SliceStable(levels, func(i, j int) bool { return levels[i].T > levels[j].T })
	column := 0.0
	for i := range levels {
		column = max(column, TextWidth(PlainRuns(fmt.Sprintf("%.0f °C", celsius(levels[i].T)), st.Base, Regular)))
	}
	seen := map[string]bool{}
	for i := range levels {
		at := fmt.Sprintf("%.0f °C", celsius(levels[i].T))
		text := f.reaction(&levels[i])
		if seen[at+text] {
			continue
		}
		seen[at+text] = true
		var words [][]Run
		for _, w := range strings.Fields(text) {
			words = append(words, FormulaRuns(w, st.Base, Regular))
		}
		for n, runs := range wrap(words, width-column-1.6) {
			line := tableLine{entries: []entry{{runs: runs, x: column + 1.6, colour: st.Text}}}
			if n == 0 {
				line.entries = append(line.entries, entry{runs: PlainRuns(at, st.Base, Regular), x: column, right: true, colour: st.Text})
			}
			k.add(line)
		}
	}
	return k
}

// reaction writes what happens at a level on cooling, each phase with its share of the
// end To where it lies on the join: "eutectic: L 42.1 → Di 0 + An 100".
func (f Join) reaction(v *joins.Level) string {
	d := f.Diagram
	r := v.Reaction(d.System)
	side := func(list []gibbs.State) string {
		var out []string
		for _, s := range list {
			name := phaseSymbol(d.System, s.Phase)
			if x, off := d.Along(s.Composition()); off <= onJoin {
				name += " (" + percent(math.Max(0, d.Share(x, f.Basis))) + ")"
			}
			out = append(out, name)
		}
		return strings.Join(out, " + ")
	}
	return r.Kind + ": " + side(r.High) + " → " + side(r.Low)
}

// endName names an end of the join in a sentence.
func (f Join) endName(end int) string {
	c := f.Diagram.From
	if end == 1 {
		c = f.Diagram.To
	}
	cs := f.Diagram.System.Components
	if k := apexOf(c); k >= 0 {
		return cs[k].Symbol
	}
	var out []string
	for k, v := range cs.Fractions(c, f.Basis) {
		if c[k] > 0 {
			out = append(out, cs[k].Symbol+" "+percent(v))
		}
	}
	return strings.Join(out, " ")
}

// describe fills in the metadata.
func (f Join) describe(page *Scene, left []string) {
	d := f.Diagram
	page.Title = d.System.Title
	if page.Title == "" {
		page.Title = d.System.Name
	}
	page.Subject = "Temperature against composition along a join"
	page.Provenance = f.Provenance
	var s strings.Builder
	fmt.Fprintf(&s, "Temperature against composition from %s to %s, %s, %.0f to %.0f °C: %d fields.",
		f.endName(0), f.endName(1), f.Basis.Unit(), celsius(d.TMin), celsius(d.TMax), len(d.Fields))
	for _, w := range f.flags() {
		fmt.Fprintf(&s, " %s.", strings.ToUpper(w[:1])+w[1:])
	}
	var names []string
	for i := range d.Fields {
		names = append(names, assemblage(d.System, d.Fields[i].Phases))
	}
	fmt.Fprintf(&s, " Fields: %s.", strings.Join(names, "; "))
	for i := range d.Levels {
		fmt.Fprintf(&s, " %.0f °C, %s.", celsius(d.Levels[i].T), f.reaction(&d.Levels[i]))
	}
	if len(left) > 0 {
		fmt.Fprintf(&s, " Left out for want of room: %s.", strings.Join(left, "; "))
	}
	page.Description = s.String()
}
