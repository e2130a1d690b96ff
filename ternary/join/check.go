package join

import (
	"fmt"
	"math"
	"slices"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
	"thalweg/ternary/tangent"
)

const (
	// checkX and checkT are the mesh of points at which a diagram is compared
	// with equilibria, off its round numbers.
	checkX, checkT = 17, 13
	// checkNear is the distance of a point from a line, relative to the range of T
	// and of X, within which it may belong to either side.
	checkNear = 2e-4
	// checkRounds is how often columns are added where a point was misplaced.
	checkRounds = 4
)

// Compute returns the diagram along the join between two compositions. An error
// means that the question makes no sense or an equilibrium could not be found; a
// diagram that fails its own examination is returned with Checks.Passed false.
func Compute(sys *gibbs.System, from, to ternary.Composition, o Options) (*Diagram, error) {
	if !from.Inside(0) || !to.Inside(0) {
		return nil, fmt.Errorf("an end of the join lies outside the triangle")
	}
	if from.Distance(to) < 1e-6 {
		return nil, fmt.Errorf("the two ends of the join are one composition")
	}
	if o.Count <= 0 {
		o.Count = 200
	}
	surf, err := liquidus.NewSurface(sys)
	if err != nil {
		return nil, err
	}
	e := &engine{sys: sys, from: from, to: to, mesh: columnMesh}
	if err := e.limits(o, func(x ternary.Composition) float64 { T, _ := surf.Liquidus(x); return T }); err != nil {
		return nil, err
	}
	xs := make([]float64, 0, o.Count)
	for k := 1; k < o.Count; k++ {
		xs = append(xs, float64(k)/float64(o.Count))
	}
	var at []float64
	for round := 0; ; round++ {
		d, missed, err := e.attempt(xs, at)
		if err != nil {
			return nil, err
		}
		if d.Checks.Passed || round == checkRounds {
			return d, nil
		}
		for _, p := range missed {
			at = append(at, p.X)
			e.extra = append(e.extra, p.T)
		}
	}
}

// attempt makes a diagram with columns also at the given X, and returns the points
// that it misplaces.
func (e *engine) attempt(xs, at []float64) (*Diagram, []Point, error) {
	slabs, err := e.slabs(at)
	if err != nil {
		return nil, nil, err
	}
	for i := range slabs {
		if err := e.trace(&slabs[i], xs); err != nil {
			return nil, nil, err
		}
	}
	for i := 1; i < len(slabs); i++ {
		stitch(&slabs[i-1], &slabs[i])
	}
	d := &Diagram{System: e.sys, From: e.from, To: e.to, TMin: e.tMin, TMax: e.tMax}
	if err := e.build(d, slabs); err != nil {
		return nil, nil, err
	}
	missed := e.check(d)
	return d, missed, nil
}

// check compares the diagram with equilibria at points all over it, and its fields
// with the whole.
func (e *engine) check(d *Diagram) (missed []Point) {
	c := &d.Checks
	sum := 0.0
	for i := range d.Fields {
		sum += math.Abs(area(d.Fields[i].Outline))
		for _, h := range d.Fields[i].Holes {
			sum -= math.Abs(area(h))
		}
	}
	if whole := d.TMax - d.TMin; math.Abs(sum-whole) > 1e-9*whole {
		c.Problems = append(c.Problems, fmt.Sprintf("the fields cover %.9f of the diagram", sum/whole))
	}
	for i := 0; i < checkX; i++ {
		for k := 0; k < checkT; k++ {
			// a lattice turned a little, so that no point falls on a straight line
			x := (float64(i) + 0.5 + 0.31*math.Sin(float64(3*k+i))) / checkX
			T := d.TMin + (d.TMax-d.TMin)*(float64(k)+0.5+0.27*math.Cos(float64(5*i+k)))/checkT
			q, err := e.solve(x, T)
			if err != nil {
				c.Problems = append(c.Problems, err.Error())
				continue
			}
			c.Tested++
			want := phasesOf(q)
			f, near := d.fieldAt(x, T)
			if f == nil || !slices.Equal(f.Phases, want) && !near {
				c.Misplaced++
				missed = append(missed, Point{x, T})
			}
		}
	}
	if c.Misplaced > 0 {
		c.Problems = append(c.Problems, fmt.Sprintf("%d of %d points lie in a field of another assemblage than their own", c.Misplaced, c.Tested))
	}
	c.Passed = len(c.Problems) == 0
	return missed
}

// fieldAt is the field that holds a point; near says that a line is close.
func (d *Diagram) fieldAt(x, T float64) (in *Field, near bool) {
	for i := range d.Fields {
		f := &d.Fields[i]
		rings := append([][]Point{f.Outline}, f.Holes...)
		inside := false
		for _, ring := range rings {
			for k, p := range ring {
				q := ring[(k+1)%len(ring)]
				if (p.X > x) != (q.X > x) {
					at := p.T + (x-p.X)/(q.X-p.X)*(q.T-p.T)
					if at > T {
						inside = !inside
					}
					near = near || math.Abs(at-T) < checkNear*(d.TMax-d.TMin)
				}
				near = near || math.Abs(p.X-x) < checkNear && (p.T-T)*(q.T-T) <= 0
			}
		}
		if inside && in == nil {
			in = f
		}
	}
	return in, near
}

// FieldAt is the assemblage of the field that holds a point of the diagram.
func (d *Diagram) FieldAt(x, T float64) ([]int, bool) {
	f, _ := d.fieldAt(x, T)
	if f == nil {
		return nil, false
	}
	return f.Phases, true
}

// Read is the equilibrium at X and T: the phases, their compositions and, by the
// lever rule, their amounts. The error is a *tangent.NotFoundError.
func (d *Diagram) Read(x, T float64) (*tangent.Equilibrium, error) {
	return tangent.Solve(d.System, d.At(x), T)
}
