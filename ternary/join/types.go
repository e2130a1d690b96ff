package join

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Options of Compute. The zero value chooses the temperatures.
type Options struct {
	TMin, TMax float64 // K; 0 means chosen from liquidus and solidus
	Count      int     // compositions at which lines are given; 0 means 200
}

// Point of a diagram. X is the share of the end To in moles of components: the
// composition is (1 − X)·From + X·To.
type Point struct{ X, T float64 } // T in kelvin

// Line is a boundary between two fields.
type Line struct {
	// Above and Below are the assemblages on either side, by falling T; of a
	// vertical line, left and right. Phases are indices in System.Solids,
	// gibbs.Liquid for the liquid; a phase in two forms is listed twice.
	Above, Below []int
	Points       []Point // by rising X
	Horizontal   bool
	Vertical     bool
}

// Field is a region of one assemblage.
type Field struct {
	Phases  []int
	Outline []Point // once round, first point not repeated
	Holes   [][]Point
}

// Level is a horizontal: a reaction at one temperature over a range of X.
type Level struct {
	T        float64 // K
	From, To float64 // X
	// States are the phases of the reaction at that temperature.
	States []gibbs.State
}

// Diagram is a section along a join.
type Diagram struct {
	System     *gibbs.System
	From, To   ternary.Composition
	TMin, TMax float64 // K
	Fields     []Field
	Lines      []Line
	Levels     []Level
	Nodes      []Point // where lines meet
	Checks     Checks
}

// Checks is the outcome of the diagram's examination of itself.
type Checks struct {
	Tested    int // points compared with the equilibrium at each
	Misplaced int // of these, in a field of another assemblage
	Passed    bool
	Problems  []string
}

// At is the composition at X.
func (d *Diagram) At(x float64) ternary.Composition { return mix(d.From, d.To, x) }

// Along is X of a composition's nearest point on the join, 0 to 1 within it, and its
// distance from the join, in mole fractions.
func (d *Diagram) Along(c ternary.Composition) (x, off float64) {
	var dd, dc float64
	for i := range c {
		u := d.To[i] - d.From[i]
		dd += u * u
		dc += u * (c[i] - d.From[i])
	}
	x = dc / dd
	for i := range c {
		off = math.Max(off, math.Abs(c[i]-d.From[i]-x*(d.To[i]-d.From[i])))
	}
	return x, off
}

func mix(a, b ternary.Composition, x float64) (c ternary.Composition) {
	for i := range c {
		c[i] = math.Max(0, (1-x)*a[i]+x*b[i])
	}
	return c
}
