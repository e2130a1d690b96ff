package render

import (
	"math"

	"thalweg/ternary"
)

// triangle maps compositions to the page: component 0 on top, 1 at the lower
// left, 2 at the lower right, unless a view says otherwise.
type triangle struct {
	components ternary.Components
	basis      ternary.Basis
	origin     Point   // lower left corner, mm
	side       float64 // mm
	view       *window // nil for the whole triangle in the order of the components
}

// at places a composition, given in mole fractions, by its fractions in the
// triangle's basis.
func (t triangle) at(x ternary.Composition) Point { return t.place(t.shares(x)) }

// place puts shares of the page's corners on the page.
func (t triangle) place(s ternary.Composition) Point {
	px, py := s.XY()
	return t.origin.plus(Point{px, py}.times(t.side))
}

// all maps a line of compositions.
func (t triangle) all(xs []ternary.Composition) []Point {
	out := make([]Point, len(xs))
	for i, x := range xs {
		out[i] = t.at(x)
	}
	return out
}

// corner is the place of corner i: top, lower left, lower right.
func (t triangle) corner(i int) Point { return t.place(ternary.Apex(i)) }

// rim is the triangle as a convex polygon.
func (t triangle) rim() convex { return convex{t.corner(1), t.corner(2), t.corner(0)} }

func (t triangle) height() float64 { return t.side * math.Sqrt(3) / 2 }

// outward is the unit normal of the side opposite corner i.
func outward(i int) Point { return [3]Point{{0, -1}, polar(30), polar(150)}[i] }

// edgeOf is the side that q lies on, by the corner opposite, or -1.
func (t triangle) edgeOf(q Point) int {
	for i := range 3 {
		s := segment{t.corner((i + 1) % 3), t.corner((i + 2) % 3)}
		if s.distance(q) < 0.02 {
			return i
		}
	}
	return -1
}
