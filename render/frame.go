package render

import (
	"fmt"
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

// scale describes how the percentages of one component run along an edge:
// anticlockwise round the triangle, each towards the apex of its component.
// Ticks point outward along the line on which that percentage holds, so that
// the eye can follow it inward.
type scale struct {
	component int
	from, to  int   // corners: 0 % and 100 %
	tick      Point // outward direction
}

var scales = [3]scale{
	{component: 2, from: 1, to: 2, tick: polar(240)}, // base
	{component: 0, from: 2, to: 0, tick: polar(0)},   // right edge
	{component: 1, from: 0, to: 1, tick: polar(120)}, // left edge
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
	for _, s := range scales {
		b.ticks(l, s)
	}
	b.apexes()
}

func (b *board) ticks(l *Layer, s scale) {
	st := b.style
	from, to := b.tri.corner(s.from), b.tri.corner(s.to)
	for k := 1; k < 10; k++ {
		p := from.lerp(to, float64(k)/10)
		length := tickLength
		if k%2 == 1 {
			length *= 0.6
		}
		q := p.plus(s.tick.times(length))
		l.Path(PathItem{Path: Polyline([]Point{p, q}, false), Stroke: st.stroke(st.Tick, st.Line), Role: "tick"})
		b.words.lines.add(rigid, segment{p, q})
		if k%2 == 1 {
			continue
		}
		t := measure(PlainRuns(fmt.Sprint(10*k), st.Base, Regular))
		h := t.up / 2
		c := q.plus(s.tick.times(tickGap)).plus(Point{s.tick.X * t.w / 2, s.tick.Y * h})
		if s.tick.Y != 0 {
			c.X += sign(s.tick.X) * t.w / 8
		}
		b.words.fixed("tick label", fmt.Sprintf("%d %s", 10*k, b.tri.components[s.component].Symbol), t, t.baseline(c, 0), 0, st.Muted)
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

// newFooting measures the frame's words for a triangle of a given side between
// page margins.
func newFooting(st Style, cs ternary.Components, basis ternary.Basis, side float64) footing {
	var f footing
	f.unit = measure(PlainRuns(basis.Unit(), st.Base, Regular))
	room := (side + 2*(sideMargin-outerMargin) - f.unit.w - 6) / 2
	for i, c := range cs {
		f.lines[i] = apexLines(st, c, room)
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
	f := newFooting(st, b.tri.components, b.tri.basis, b.tri.side)
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
	c := b.tri.components[i]
	name := c.Symbol
	if line > 0 {
		name = c.Name + " " + c.Formula.String()
	}
	b.words.fixed("apex", name, t, at, 0, b.style.Text)
}
