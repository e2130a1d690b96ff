package render

import (
	"fmt"
	"math"
)

// axis is one scale of a rectangular plot. Values rise to the right and upwards.
type axis struct {
	from, to float64
	step     float64 // between numbers; ticks without one stand half-way
	unit     string
}

// newAxis has at most so many numbers, at the multiples of 1, 2 or 5 times a power
// of ten.
func newAxis(from, to float64, most int, unit string) axis {
	return axis{from: from, to: to, step: roundStep((to - from) / float64(most)), unit: unit}
}

// roundStep is the smallest of 1, 2, 5, 10, … that is not below least.
func roundStep(least float64) float64 {
	if !(least > 0) || math.IsInf(least, 0) {
		return 1
	}
	ten := math.Pow(10, math.Floor(math.Log10(least)))
	for _, f := range []float64{1, 2, 5} {
		if f*ten >= least*(1-1e-9) {
			return f * ten
		}
	}
	return 10 * ten
}

// share is the place of a value between the ends, 0 to 1.
func (a axis) share(v float64) float64 { return (v - a.from) / (a.to - a.from) }

// tick is a mark of a scale: number is empty half-way between two.
type tick struct {
	value  float64
	number string
}

// ticks are the marks of a scale, in order.
func (a axis) ticks() (out []tick) {
	half := a.step / 2
	decimals := 0
	if a.step < 1 {
		decimals = int(math.Ceil(-math.Log10(a.step) - 1e-9))
	}
	// adding 0 turns -0 into 0
	for k := math.Ceil(a.from/half-1e-6) + 0; k*half <= a.to+1e-6*half; k++ {
		t := tick{value: k * half}
		if math.Mod(k, 2) == 0 {
			t.number = fmt.Sprintf("%.*f", decimals, k*half)
		}
		out = append(out, t)
	}
	return out
}

// plot is a rectangular diagram on a board: lo and hi are its corners on the page.
type plot struct {
	*board
	lo, hi Point
	x, y   axis
}

// at is the place on the page of a point of the diagram.
func (p *plot) at(x, y float64) Point {
	u, v := p.x.share(x), p.y.share(y)
	return Point{p.lo.X + u*(p.hi.X-p.lo.X), p.lo.Y + v*(p.hi.Y-p.lo.Y)}
}

// numberWidth is the room that the numbers of a vertical scale take, ticks and gaps
// included, mm.
func (a axis) numberWidth(st Style) float64 {
	w := 0.0
	for _, t := range a.ticks() {
		w = max(w, TextWidth(PlainRuns(t.number, st.Base, Regular)))
	}
	return w + tickLength + tickGap
}

// numberHeight is the room that the numbers of a horizontal scale take.
func numberHeight(st Style) float64 { return tickLength + 2*tickGap + CapHeight(st.Base) }

// frame draws the rectangle with ticks that point outward on all sides, numbers at
// the left and below, and the unit of the vertical scale above its numbers.
func (p *plot) frame() {
	st := p.style
	l := p.scene.Layer("frame")
	rim := []Point{p.lo, {p.hi.X, p.lo.Y}, p.hi, {p.lo.X, p.hi.Y}}
	line := st.stroke(st.Frame, st.Line)
	line.Round = false
	l.Path(PathItem{Path: Polyline(rim, true), Stroke: line, Role: "frame"})
	for i, q := range rim {
		p.words.lines.add(rigid, straight([]Point{q, rim[(i+1)%4]}).chords(3)...)
	}
	for _, t := range p.x.ticks() {
		q := Point{p.at(t.value, p.y.from).X, p.lo.Y}
		p.tick(l, q, Point{0, -1}, t)
		p.tick(l, Point{q.X, p.hi.Y}, Point{0, 1}, tick{})
	}
	for _, t := range p.y.ticks() {
		q := Point{p.lo.X, p.at(p.x.from, t.value).Y}
		p.tick(l, q, Point{-1, 0}, t)
		p.tick(l, Point{p.hi.X, q.Y}, Point{1, 0}, tick{})
	}
	t := measure(PlainRuns(p.y.unit, st.Base, Regular))
	at := Point{p.lo.X - tickLength - tickGap - t.w, p.hi.Y + tickLength + tickGap + t.down}
	if y := p.y.ticks(); len(y) > 0 {
		top := p.at(p.x.from, y[len(y)-1].value).Y + t.up/2 + 2*labelGap + t.down
		at.Y = max(at.Y, top) // clear of the highest number
	}
	p.words.fixed("basis", p.y.unit, t, at, 0, st.Text)
}

// tick draws one tick outward from q, with its number.
func (p *plot) tick(l *Layer, q, out Point, t tick) {
	st := p.style
	length := tickLength
	if t.number == "" {
		length *= 0.6
	}
	end := q.plus(out.times(length))
	l.Path(PathItem{Path: Polyline([]Point{q, end}, false), Stroke: st.stroke(st.Tick, st.Line), Role: "tick"})
	p.words.lines.add(rigid, segment{q, end})
	if t.number == "" {
		return
	}
	w := measure(PlainRuns(t.number, st.Base, Regular))
	c := q.plus(out.times(tickLength + tickGap)).plus(Point{out.X * w.w / 2, out.Y * w.up / 2})
	p.words.fixed("tick label", t.number, w, w.baseline(c, 0), 0, st.Muted)
}
