package join

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

const (
	// columnMesh is the number of intervals of T at which a column is first asked.
	columnMesh = 14
	// columnStep is how far from a change, relative to T, the assemblages on
	// either side of it are asked for.
	columnStep = 1e-8
	// columnLeast is the interval of T, in K, below which a change that Newton's
	// method does not find counts as located.
	columnLeast = 1e-7
	// eventShort and eventOver are what the state at a change may show of others:
	// an amount below zero, and a driving force in RT.
	eventShort = 1e-9
	eventOver  = 1e-8
)

// change is a change of the assemblage with T at one composition.
type change struct {
	T            float64
	above, below []int
	eq           *tangent.Equilibrium // the state there, nil if it was only bracketed
	zero         int                  // the part of eq without amount
	limit        bool                 // not a change, but a limit of T
}

// column is all changes at one X, by falling T.
type column struct {
	x       float64
	top     []int
	changes []change
}

// sets are the assemblages of the column, by falling T.
func (c *column) sets() [][]int {
	out := [][]int{c.top}
	for _, k := range c.changes {
		out = append(out, k.below)
	}
	return out
}

type engine struct {
	sys        *gibbs.System
	from, to   ternary.Composition
	tMin, tMax float64
	mesh       int
	extra      []float64 // temperatures at which every column is asked besides
}

// phasesOf is the assemblage of an equilibrium; traces of less than rounding do
// not count.
func phasesOf(q *tangent.Equilibrium) []int {
	var out []int
	for _, p := range q.Parts {
		out = append(out, p.State.Phase)
	}
	slices.Sort(out)
	return out
}

// solve is the equilibrium at X and T; where T hits a change exactly, or two forms
// of a phase are about to become one, that of a temperature a little beside it.
func (e *engine) solve(x, T float64) (*tangent.Equilibrium, error) {
	b := mix(e.from, e.to, x)
	var err error
	for _, shift := range [9]float64{0, 3e-10, -4e-10, 5e-9, -6e-9, 1e-7, -2e-7, 3e-6, -4e-6} {
		var q *tangent.Equilibrium
		if q, err = tangent.Solve(e.sys, b, T*(1+shift)); err == nil {
			return q, nil
		}
	}
	return nil, err
}

// column finds all changes at X.
func (e *engine) column(x float64) (*column, error) {
	ts := append([]float64(nil), e.extra...)
	for k := 0; k <= e.mesh; k++ {
		ts = append(ts, e.tMax+(e.tMin-e.tMax)*float64(k)/float64(e.mesh))
	}
	slices.Sort(ts)
	slices.Reverse(ts)
	c := &column{x: x}
	var last *tangent.Equilibrium
	for _, T := range ts {
		q, err := e.solve(x, T)
		if err != nil {
			return nil, err
		}
		if last == nil {
			c.top = phasesOf(q)
		} else if err := e.split(c, last, q, 0); err != nil {
			return nil, err
		}
		last = q
	}
	return c, nil
}

// split finds the changes between two temperatures, hi above lo.
func (e *engine) split(c *column, hi, lo *tangent.Equilibrium, depth int) error {
	above, below := phasesOf(hi), phasesOf(lo)
	if e.same(hi, lo) {
		return nil
	}
	if hi.T-lo.T < columnLeast || depth > 60 {
		c.changes = append(c.changes, change{T: (hi.T + lo.T) / 2, above: above, below: below})
		return nil
	}
	for _, k := range e.candidates(hi, lo) {
		// the assemblages just above and just below
		step := math.Min(columnStep*k.T, (hi.T-lo.T)/4)
		u, err1 := e.solve(c.x, math.Min(hi.T, k.T+step))
		d, err2 := e.solve(c.x, math.Max(lo.T, k.T-step))
		if err1 != nil || err2 != nil {
			continue
		}
		if e.same(u, d) {
			continue
		}
		if !e.same(hi, u) {
			if err := e.split(c, hi, u, depth+1); err != nil {
				return err
			}
		}
		k.above, k.below = phasesOf(u), phasesOf(d)
		c.changes = append(c.changes, k)
		if !e.same(d, lo) {
			return e.split(c, d, lo, depth+1)
		}
		return nil
	}
	mid, err := e.solve(c.x, (hi.T+lo.T)/2)
	if err != nil {
		return err
	}
	if err := e.split(c, hi, mid, depth+1); err != nil {
		return err
	}
	return e.split(c, mid, lo, depth+1)
}

// candidates are the temperatures between two states at which a phase of one that
// the other lacks has no amount.
func (e *engine) candidates(hi, lo *tangent.Equilibrium) (out []change) {
	try := func(q *tangent.Equilibrium, parts []tangent.Part, zero int) {
		ev, err := tangent.Event(e.sys, q.Bulk, (hi.T+lo.T)/2, q.Mu, parts, zero)
		if err == nil && ev.T <= hi.T && ev.T >= lo.T && e.sound(ev, zero) {
			out = append(out, change{T: ev.T, eq: ev, zero: zero})
		}
	}
	if i := e.leapt(hi, lo); i >= 0 {
		try(hi, append(slices.Clone(hi.Parts), lo.Parts[i]), len(hi.Parts))
		try(lo, append(slices.Clone(lo.Parts), hi.Parts[i]), len(lo.Parts))
	}
	for _, i := range lacking(lo.Parts, hi.Parts) { // comes in on cooling
		try(hi, append(slices.Clone(hi.Parts), lo.Parts[i]), len(hi.Parts))
	}
	for _, i := range lacking(hi.Parts, lo.Parts) { // goes out on cooling
		try(hi, slices.Clone(hi.Parts), i)
		try(lo, append(slices.Clone(lo.Parts), hi.Parts[i]), len(lo.Parts))
	}
	return out
}

// lacking are the indices of the parts of a whose phase b does not hold, or holds
// once less. Of two forms of a phase the one further from the form in b comes first;
// the other follows, for far from the change it may be the nearer one.
func lacking(a, b []tangent.Part) (out []int) {
	count := map[int]int{}
	for _, p := range a {
		count[p.State.Phase]++
	}
	for _, p := range b {
		count[p.State.Phase]--
	}
	distance := func(i int) float64 {
		d := math.Inf(1)
		for _, p := range b {
			if p.State.Phase == a[i].State.Phase {
				d = math.Min(d, spread(p.State.Y, a[i].State.Y))
			}
		}
		return d
	}
	for i, p := range a {
		if count[p.State.Phase] > 0 {
			out = append(out, i)
		}
	}
	slices.SortStableFunc(out, func(i, k int) int { return cmp.Compare(distance(k), distance(i)) })
	return out
}

// spread is the distance of two compositions in end-member fractions.
func spread(a, b [3]float64) float64 {
	return math.Abs(a[0]-b[0]) + math.Abs(a[1]-b[1]) + math.Abs(a[2]-b[2])
}

// sound reports that a state is one of equilibrium, with the part zero about to
// come or go.
func (e *engine) sound(q *tangent.Equilibrium, zero int) bool {
	for i, p := range q.Parts {
		if i != zero && p.Mole < -eventShort {
			return false
		}
		for k := range q.Parts[:i] {
			if q.Parts[k].State.Phase == p.State.Phase && alike(q.Parts[k].State.Y, p.State.Y) {
				return false
			}
		}
	}
	return len(tangent.Above(e.sys, q.Mu, q.T, q.Parts, eventOver)) == 0
}

func alike(a, b [3]float64) bool {
	return spread(a, b) < 1e-5
}

// limits chooses the range of temperatures: from below the last liquid to above
// the liquidus, along the whole join.
func (e *engine) limits(o Options, liquidus func(ternary.Composition) float64) error {
	e.tMin, e.tMax = o.TMin, o.TMax
	top, bottom := math.Inf(-1), math.Inf(1)
	for k := 0; k <= 16; k++ {
		if T := liquidus(mix(e.from, e.to, float64(k)/16)); !math.IsInf(T, 0) {
			top = math.Max(top, T)
			bottom = math.Min(bottom, T)
		}
	}
	if math.IsInf(top, -1) {
		return fmt.Errorf("no composition of the join has a liquidus")
	}
	if e.tMin == 0 {
		solid := bottom
		for k := 0; k <= 8; k++ {
			x := math.Min(1-stationStep, math.Max(stationStep, float64(k)/8))
			for T := bottom; T > 0.2*bottom; T -= 0.04 * bottom {
				q, err := e.solve(x, T)
				if err != nil {
					continue
				}
				if _, molten := q.Liquid(); !molten {
					break
				}
				solid = math.Min(solid, T)
			}
		}
		e.tMin = solid - 0.04*bottom - 0.25*(top-solid)
		if e.tMin < 0.2*bottom {
			e.tMin = 0.2 * bottom
		}
	}
	if e.tMax == 0 {
		e.tMax = top + 0.12*(top-e.tMin)
	}
	if !(e.tMax > e.tMin && e.tMin > 0) {
		return fmt.Errorf("the temperatures %.1f to %.1f °C are no range", e.tMin-ternary.ZeroCelsius, e.tMax-ternary.ZeroCelsius)
	}
	return nil
}
