package render

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/descent"
)

// Measures of a path, mm.
const (
	pathArrowLength = 2.7
	pathArrowHalf   = 0.85
	crossTick       = 0.95 // half length of a tick across a path
	pathCasing      = 0.32 // white on either side of a path
	sampleRadius    = 1.0
)

// leapDash is the pattern of a leap from one liquid to another, mm.
var leapDash = []float64{0.5, 0.9}

// trail is a path on the page.
type trail struct {
	path   *descent.Path
	number int
	colour Colour
	legs   []arc // of the liquid, from event to event
	leaps  []segment
	marks  []trailMark
	ticks  []trailTick
	solid  [][]Point // the bulk of the solids
}

// trailMark is a place at which something happens.
type trailMark struct {
	at Point
	t  float64 // °C
}

// trailTick is where another tenth has crystallised.
type trailTick struct{ at, dir Point }

// melt is the fraction of the bulk that is liquid, in the figure's basis.
func melt(s descent.Step, basis ternary.Basis) float64 {
	if basis == ternary.Mole {
		return s.MeltMole
	}
	return s.MeltMass
}

func (d *drawing) newTrail(i int, p *descent.Path) trail {
	t := trail{path: p, number: i, colour: d.style.pathColour(i)}
	pts := make([]Point, len(p.Steps))
	for k, s := range p.Steps {
		pts[k] = d.tri.at(s.Liquid)
	}
	start := 0
	for k, s := range p.Steps {
		end := k == len(p.Steps)-1
		if s.Event != "" || end || k == 0 {
			if d.tri.shows(s.Liquid) {
				t.note(pts[k], celsius(s.T))
			}
		}
		if leaps(p, k) {
			for _, q := range d.inView([]Point{pts[k-1], pts[k]}) {
				t.leaps = append(t.leaps, segment{q[0], q[len(q)-1]})
			}
			start = k
			continue
		}
		if k > start && (s.Event != "" || end) {
			for _, run := range d.inView(pts[start : k+1]) {
				if leg := smooth(run, false, d.tri.rim()); !leg.empty() && leg.length() > 0.05 {
					t.legs = append(t.legs, leg)
				}
			}
			start = k
		}
	}
	t.tenths(p.Steps, pts, d.tri.basis)
	if d.tri.view != nil {
		t.ticks = slices.DeleteFunc(t.ticks, func(k trailTick) bool { return d.tri.rim().excess(k.at) > 0 })
	}
	t.solid = d.tri.rim().clip(d.bulkSolid(p))
	return t
}

// inView is the part of a line that lies on the triangle of the page.
func (d *drawing) inView(pts []Point) [][]Point {
	if d.tri.view == nil {
		return [][]Point{pts}
	}
	return d.tri.rim().clip(pts)
}

// leaps reports that the liquid of step k is not on the way from that of the step
// before: fractional melting goes on elsewhere.
func leaps(p *descent.Path, k int) bool {
	return k > 0 && strings.HasPrefix(p.Steps[k].Event, descent.MeltingGoesOn)
}

// note records a mark unless one stands there already at that temperature.
func (t *trail) note(q Point, temp float64) {
	for _, m := range t.marks {
		if m.at.distance(q) < 0.8 && math.Abs(m.t-temp) < 0.5 {
			return
		}
	}
	t.marks = append(t.marks, trailMark{q, temp})
}

// tenths finds where the melt fraction passes 0.9, 0.8, … up or down while the
// liquid moves. Where it stands still, at an invariant point, there is no place to
// tick.
func (t *trail) tenths(steps []descent.Step, pts []Point, basis ternary.Basis) {
	for k := 1; k < len(steps); k++ {
		f0, f1 := melt(steps[k-1], basis), melt(steps[k], basis)
		if pts[k].distance(pts[k-1]) < 1e-3 || f1 == f0 {
			continue
		}
		for n := 9; n >= 1; n-- {
			f := float64(n) / 10
			if f0 > f && f1 <= f || f0 < f && f1 >= f {
				t.ticks = append(t.ticks, trailTick{pts[k-1].lerp(pts[k], (f0-f)/(f0-f1)), pts[k].minus(pts[k-1]).unit()})
			}
		}
	}
}

// bulkSolid is the path of the mean composition of all solids.
func (d *drawing) bulkSolid(p *descent.Path) []Point {
	var out []Point
	for _, s := range p.Steps {
		var c [3]float64
		for _, a := range s.Solids {
			for i := range c {
				c[i] += a.Mole * a.State.C[i]
			}
		}
		if sum := c[0] + c[1] + c[2]; sum > 1e-9 {
			out = append(out, d.tri.at(ternary.Composition{c[0] / sum, c[1] / sum, c[2] / sum}))
		}
	}
	return distinct(out, false)
}

// paths draws the lines of the paths; their symbols follow in pathSymbols.
func (d *drawing) paths() {
	for i, p := range d.fig.Paths {
		if p == nil || len(p.Steps) == 0 {
			continue
		}
		t := d.newTrail(i, p)
		d.trails = append(d.trails, t)
		if !d.fig.hides("bulk solid") {
			d.solidPath(t)
		}
		d.liquidPath(t)
	}
	d.interleave()
	for _, t := range d.trails {
		d.crossTicks(t)
	}
}

func (d *drawing) solidPath(t trail) {
	l := d.scene.Layer("bulk solid")
	for _, line := range t.solid {
		a := straight(line)
		if a.empty() {
			continue
		}
		l.Path(PathItem{Path: Polyline(line, false), Stroke: d.style.dashed(d.style.SolidPath, t.colour, d.style.solidDash(t.number)), Role: "bulk solid"})
		d.words.lines.add(rigid, a.chords(1.5)...)
	}
}

func (t trail) liquid() Path {
	var whole Path
	for _, leg := range t.legs {
		whole.Append(leg.path())
	}
	return whole
}

func (d *drawing) liquidPath(t trail) {
	l := d.scene.Layer("paths")
	st := d.style
	for _, q := range t.leaps {
		line := Polyline([]Point{q.a, q.b}, false)
		l.Path(PathItem{Path: line, Stroke: st.dashed(st.SolidPath, t.colour, leapDash), Role: "leap"})
		d.words.lines.add(rigid, straight([]Point{q.a, q.b}).chords(1.5)...)
	}
	whole := t.liquid()
	if whole.Empty() {
		return
	}
	for _, leg := range t.legs {
		d.words.lines.add(rigid, leg.chords(1.5)...)
	}
	l.Path(PathItem{Path: whole, Stroke: st.stroke(st.Path+2*pathCasing*pointPerMM, white), Role: "casing"})
	st.drawPath(l, whole, t.number, "path")
}

// interleave draws the paths once more in long dashes, the first on top, so
// that where several run along one line each shows in turn. Where a path runs
// alone the dashes fall on its own colour and are not seen.
func (d *drawing) interleave() {
	const stretch = 2.4 // mm of each path in a period
	n := len(d.trails)
	if d.style.PathCore != 0 {
		return // hollow paths are told apart by their cores
	}
	l := d.scene.Layer("paths")
	for k := n - 2; k >= 0; k-- {
		t := d.trails[k]
		whole := t.liquid()
		if whole.Empty() {
			continue
		}
		dash := []float64{stretch * float64(k+1), stretch * float64(n-1-k)}
		l.Path(PathItem{Path: whole, Stroke: d.style.dashed(d.style.Path, t.colour, dash), Role: "path"})
	}
}

// crossTicks draws the ticks at every tenth crystallised.
func (d *drawing) crossTicks(t trail) {
	l := d.scene.Layer("paths")
	for _, k := range t.ticks {
		n := k.dir.left().times(crossTick)
		s := segment{k.at.minus(n), k.at.plus(n)}
		l.Path(PathItem{Path: Polyline([]Point{s.a, s.b}, false), Stroke: d.style.stroke(d.style.Mark, t.colour), Role: "tenth"})
		d.words.lines.add(rigid, s)
	}
}

// drawPath draws the line of path number i: in colour a stroke, in ink a hollow
// one whose core may be dashed.
func (s Style) drawPath(l *Layer, p Path, i int, role string) {
	c := s.pathColour(i)
	if s.PathCore == 0 {
		l.Path(PathItem{Path: p, Stroke: s.dashed(s.Path, c, s.pathDash(i)), Role: role})
		return
	}
	l.Path(PathItem{Path: p, Stroke: s.stroke(s.Path, c), Role: role})
	l.Path(PathItem{Path: p, Stroke: s.dashed(s.PathCore, white, s.pathDash(i)), Role: role + " core"})
}

// pathSymbols puts arrowheads on the legs, marks the last liquid and the final
// solid, and asks for the temperatures of the events.
func (d *drawing) pathSymbols() {
	l := d.scene.Layer("path symbols")
	for _, t := range d.trails {
		d.pathEnds(l, t)
		for _, leg := range t.legs {
			d.pathArrow(l, t, leg)
		}
		d.eventLabels(t)
	}
}

// pathEnds rings the last liquid and boxes the final solid.
func (d *drawing) pathEnds(l *Layer, t trail) {
	st := d.style
	end := t.path.Steps[len(t.path.Steps)-1]
	if last := d.tri.at(end.Liquid); d.tri.shows(end.Liquid) {
		d.mark(l, PathItem{Path: circle(last, 1.35), Stroke: st.stroke(st.Mark+0.2, t.colour)}, last, 1.35)
		if !d.onNode(last) {
			d.mark(l, PathItem{Path: circle(last, 0.45), Fill: &t.colour}, last, 0.45)
		}
	}
	if bulk := d.bulkSolid(t.path); !d.fig.hides("bulk solid") && len(bulk) > 0 && d.tri.rim().excess(bulk[len(bulk)-1]) < 0.02 {
		q := bulk[len(bulk)-1]
		d.mark(l, PathItem{Path: square(q, 1.45), Stroke: st.stroke(st.Mark, t.colour)}, q, 1.45)
	}
}

func (d *drawing) onNode(q Point) bool {
	for _, n := range shownNodes(d.pr) {
		if d.tri.at(n.Liquid).distance(q) < 0.8 {
			return true
		}
	}
	return false
}

// pathArrow puts a head on a leg, away from its ends, from ticks and from what
// else stands there; the place nearest the middle wins.
func (d *drawing) pathArrow(l *Layer, t trail, leg arc) {
	size := leg.length()
	if size < pathArrowLength+3 {
		return
	}
	if d.shared(leg) {
		return
	}
	best, bestCost := arrow{}, math.Inf(1)
	for k := range 21 {
		f := 0.2 + 0.6*float64(k)/20
		h := arrowOn(leg, f*size+pathArrowLength/2, pathArrowLength, pathArrowHalf)
		cost := math.Abs(f - 0.5)
		for _, m := range d.words.marks {
			if h.box().grown(0.4).overlaps(m) {
				cost += 10
			}
		}
		for _, tick := range t.ticks {
			if h.box().grown(0.4).contains(tick.at) {
				cost++
			}
		}
		if cost < bestCost {
			best, bestCost = h, cost
		}
	}
	if bestCost < 10 {
		d.putArrow(l, best, t.colour)
	}
}

// shared reports whether a boundary curve's arrowhead lies on the leg already and
// points its way.
func (d *drawing) shared(leg arc) bool {
	for _, h := range d.heads {
		w := box{h.tip.minus(h.dir.times(h.length / 2)), h.dir, h.length / 2, 0.1}
		if u := leg.nearest(w.c); len(leg.inside([]box{w})) > 0 && math.Abs(h.dir.cross(u)) < 0.2 && h.dir.dot(u) > 0 {
			return true
		}
	}
	return false
}

// eventLabels asks for the temperatures of events, but not at invariant points,
// whose temperatures the key gives, nor twice at one place.
func (d *drawing) eventLabels(t trail) {
	st := d.style
	for _, m := range t.marks {
		w := measure(PlainRuns(fmt.Sprintf("%.0f °C", m.t), st.Base, Regular))
		if d.known(m) {
			continue
		}
		d.noted = append(d.noted, m)
		spots := append(about(m.at, 1.4, 0, w, 0.4, 1.0, 1.8, 2.8), leaders(m.at, 0.9, 0, w, 5, 6.5, 8, 10.5, 13, 16)...)
		for i := range spots {
			if d.tri.rim().excess(spots[i].c) > 0 {
				spots[i].cost += 5 // where the temperatures of the edges would stand
			}
		}
		d.words.ask(label{role: "event label", name: plain(w.runs), colour: st.Text, wordings: []wording{w}, spots: spots, rank: 5})
	}
}

func (d *drawing) known(m trailMark) bool {
	for _, n := range shownNodes(d.pr) {
		if d.tri.at(n.Liquid).distance(m.at) < 0.8 && math.Abs(celsius(n.T)-m.t) < 0.6 {
			return true
		}
	}
	for _, o := range d.noted {
		if o.at.distance(m.at) < 0.8 && math.Abs(o.t-m.t) < 0.6 {
			return true
		}
	}
	return false
}

func square(c Point, r float64) Path {
	return Polyline([]Point{{c.X - r, c.Y - r}, {c.X + r, c.Y - r}, {c.X + r, c.Y + r}, {c.X - r, c.Y + r}}, true)
}
