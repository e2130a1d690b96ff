package render

import (
	"fmt"
	"math"
	"strings"

	"thalweg/ternary"
)

// Measures of the frame, mm.
const (
	tickLength  = 1.4
	tickGap     = 0.55 // between a tick and its number
	apexGap     = 1.7  // between the upper apex and its words
	sideMargin  = 3.0  // between the lower corners and the edge of the page
	outerMargin = 0.8  // between the outermost words and the edge of the page
)

// scale describes how the percentages of one component run along a side:
// anticlockwise round the triangle, each towards the corner that is richer in it.
// Ticks point outward along the line on which that percentage holds, so that
// the eye can follow it inward.
type scale struct {
	component int
	from, to  int     // corners
	low, high float64 // percentages at them
	step      float64 // between numbers; ticks without one stand half-way
	tick      Point   // outward direction
}

// scales are those of the base, the right and the left side.
func (t triangle) scales() (out []scale) {
	for _, side := range [3][2]int{{1, 2}, {2, 0}, {0, 1}} {
		s := scale{component: -1, from: side[0], to: side[1]}
		for i := range 3 {
			low, high := 100*t.cornerFraction(i, s.from), 100*t.cornerFraction(i, s.to)
			if high-low > s.high-s.low+1e-9 {
				s.component, s.low, s.high = i, low, high
			}
		}
		s.step = 20
		if !t.whole() {
			s.step = roundStep((s.high - s.low) / 6)
		}
		s.tick = t.along(s.component, 3-s.from-s.to)
		out = append(out, s)
	}
	return out
}

// along is the direction, out of the side opposite a corner, in which a component's
// percentage stays the same.
func (t triangle) along(component, corner int) Point {
	f := [3]float64{}
	for k := range f {
		f[k] = t.cornerFraction(component, k)
	}
	// a direction d in shares, Σ d = 0, with Σ f·d = 0
	d := ternary.Composition{f[1] - f[2], f[2] - f[0], f[0] - f[1]}
	x, y := d.XY()
	u := Point{x, y}.unit()
	if u.dot(outward(corner)) < 0 {
		u = u.times(-1)
	}
	return u
}

// board is a triangle being drawn: the parts that projections and isothermal
// sections have in common.
type board struct {
	style Style
	tri   triangle
	scene *Scene
	words *placer
}

func newBoard(st Style, tri triangle, w, h float64, layers ...string) *board {
	b := &board{style: st, tri: tri, scene: NewScene(w, h), words: newPlacer(w, h)}
	for _, name := range layers {
		b.scene.Layer(name)
	}
	return b
}

// frame draws the triangle, its ticks with their numbers, the names of the
// apexes, and the basis once under the base.
func (b *board) frame() {
	st := b.style
	l := b.scene.Layer("frame")
	rim := b.tri.rim()
	line := st.stroke(st.Frame, st.Line)
	line.Round = false
	l.Path(PathItem{Path: Polyline(rim, true), Stroke: line, Role: "frame"})
	for i, p := range rim {
		b.words.lines.add(rigid, straight([]Point{p, rim[(i+1)%3]}).chords(3)...)
	}
	for _, s := range b.tri.scales() {
		b.ticks(l, s)
	}
	b.apexes()
}

func (b *board) ticks(l *Layer, s scale) {
	st := b.style
	from, to := b.tri.corner(s.from), b.tri.corner(s.to)
	decimals := max(0, int(math.Ceil(-math.Log10(s.step)-1e-9)))
	half := s.step / 2
	middle := s.step * math.Round((s.low+s.high)/2/s.step)
	for k := math.Floor(s.low/half+1e-6) + 1; k*half < s.high-1e-6*half; k++ {
		v := k * half
		p := from.lerp(to, (v-s.low)/(s.high-s.low))
		numbered := math.Mod(k, 2) == 0
		length := tickLength
		if !numbered {
			length *= 0.6
		}
		q := p.plus(s.tick.times(length))
		l.Path(PathItem{Path: Polyline([]Point{p, q}, false), Stroke: st.stroke(st.Tick, st.Line), Role: "tick"})
		b.words.lines.add(rigid, segment{p, q})
		if !numbered {
			continue
		}
		number := fmt.Sprintf("%.*f", decimals, v)
		symbol := b.tri.components[s.component].Symbol
		runs := PlainRuns(number, st.Base, Regular)
		if !b.tri.whole() && v == middle { // whose percentage it is, once a side
			runs = append(PlainRuns(number+" ", st.Base, Regular), FormulaRuns(symbol, st.Base, Regular)...)
		}
		t := measure(runs)
		h := t.up / 2
		c := q.plus(s.tick.times(tickGap)).plus(Point{s.tick.X * t.w / 2, s.tick.Y * h})
		if math.Abs(s.tick.Y) > 1e-9 {
			c.X += sign(s.tick.X) * t.w / 8
		}
		if c.X-t.w/2 < outerMargin || c.X+t.w/2 > b.scene.Width-outerMargin {
			continue // no room between a window's corner and the edge of the page
		}
		b.words.fixed("tick label", number+" "+symbol, t, t.baseline(c, 0), 0, st.Muted)
	}
}

// apexLines are the words at an apex: the symbol, and name and formula where
// they say more, on one line if it is no wider than room, mm, else on more.
func apexLines(st Style, c ternary.Component, room float64) []wording {
	lines := []wording{measure(FormulaRuns(c.Symbol, st.Apex, Bold))}
	formula := c.Formula.String()
	if c.Name == formula {
		formula = ""
	}
	if c.Symbol == formula {
		formula = ""
	}
	both := ""
	var words [][]Run
	if c.Name != c.Symbol {
		both = c.Name
		for _, w := range strings.Fields(c.Name) {
			words = append(words, FormulaRuns(w, st.Base, Regular))
		}
	}
	if both != "" && formula != "" {
		both += "  "
	}
	both += formula
	if both == "" {
		return lines
	}
	if one := measure(FormulaRuns(both, st.Base, Regular)); one.w <= room {
		return append(lines, one)
	}
	for _, runs := range wrap(words, room) {
		lines = append(lines, measure(runs))
	}
	if formula != "" {
		lines = append(lines, measure(FormulaRuns(formula, st.Base, Regular)))
	}
	return lines
}

// footing is the room that words take round a triangle on a page.
type footing struct {
	above, below float64 // mm above the upper apex and below the base
	lines        [3][]wording
	first        float64 // baseline of the first line under the base, below the base
	unit         wording
}

// cornerLines are the words at a corner of the page: those of its component or,
// where it is none, its composition.
func (t triangle) cornerLines(st Style, corner int, room float64) []wording {
	if i := t.pure(corner); i >= 0 {
		return apexLines(st, t.components[i], room)
	}
	var words [][]Run
	for i, c := range t.components {
		if v := 100 * t.cornerFraction(i, corner); v > 1e-6 {
			runs := append(FormulaRuns(c.Symbol, st.Base, Bold), PlainRuns(fmt.Sprintf(" %.4g", v), st.Base, Regular)...)
			words = append(words, runs)
		}
	}
	var out []wording
	for _, runs := range wrap(words, room) {
		out = append(out, measure(runs))
	}
	return out
}

// newFooting measures the frame's words for a triangle between page margins.
func newFooting(st Style, tri triangle) footing {
	var f footing
	basis, side := tri.basis, tri.side
	f.unit = measure(PlainRuns(basis.Unit(), st.Base, Regular))
	room := (side + 2*(sideMargin-outerMargin) - f.unit.w - 6) / 2
	for i := range 3 {
		f.lines[i] = tri.cornerLines(st, i, room)
	}
	f.first = tickLength*0.87 + tickGap + CapHeight(st.Base) + 0.9 + 0.35*st.leading()
	if room := 0.2*side + sideMargin - outerMargin - 5.5; max(f.lines[1][0].w, f.lines[2][0].w) > room {
		f.first += 0.4 * st.leading() // clear of the lowest numbers
	}
	n := max(len(f.lines[1]), len(f.lines[2]), 2)
	f.below = f.first + float64(n-1)*st.leading() + Descent(st.Base)
	f.above = apexGap + float64(len(f.lines[0])-1)*st.leading() + CapHeight(st.Apex) + Descent(st.Base) + outerMargin
	return f
}

func widest(lines []wording) float64 {
	w := 0.0
	for _, l := range lines {
		w = max(w, l.w)
	}
	return w
}

// apexes names the three components and the basis.
func (b *board) apexes() {
	st := b.style
	f := newFooting(st, b.tri)
	top := b.tri.corner(0)
	y := top.Y + apexGap + Descent(st.Base)
	for i := len(f.lines[0]) - 1; i >= 0; i-- {
		t := f.lines[0][i]
		b.apexWord(0, t, Point{top.X - t.w/2, y}, i)
		y += st.leading()
	}
	left := b.tri.origin.X - sideMargin + outerMargin
	right := b.tri.corner(2).X + sideMargin - outerMargin
	for i, t := range f.lines[1] {
		b.apexWord(1, t, Point{left, b.tri.origin.Y - f.first - float64(i)*st.leading()}, i)
	}
	for i, t := range f.lines[2] {
		b.apexWord(2, t, Point{right - t.w, b.tri.origin.Y - f.first - float64(i)*st.leading()}, i)
	}
	b.words.fixed("basis", b.tri.basis.Unit(), f.unit,
		Point{b.tri.origin.X + b.tri.side/2 - f.unit.w/2, b.tri.origin.Y - f.first - st.leading()}, 0, st.Text)
}

func (b *board) apexWord(i int, t wording, at Point, line int) {
	name := "corner"
	if k := b.tri.pure(i); k >= 0 {
		c := b.tri.components[k]
		name = c.Symbol
		if line > 0 {
			name = c.Name + " " + c.Formula.String()
		}
	}
	b.words.fixed("apex", name, t, at, 0, b.style.Text)
}
