package descent

import (
	"errors"
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

const (
	// solidusFirst is the first step, in kelvin, of the search for a temperature
	// on the other side of the solidus; solidusGrow is by how much each is longer.
	solidusFirst = 8.0
	solidusGrow  = 1.7
	// solidusTol is the bracket, relative to T, below which the search gives up.
	solidusTol = 1e-11
	// anyMelt is an amount of liquid, in moles per mole of bulk, that counts.
	anyMelt = 1e-11
	// planeTol is the pivot, relative to the largest, below which the solids
	// leave the plane of potentials free to turn.
	planeTol = 1e-9
)

// bracket is a temperature without liquid and one with.
type bracket struct {
	solid, molten *tangent.Equilibrium
}

// solidus finds where contents b begin to melt: the assemblage of solids with a
// liquid of amount zero, at the temperature at which the liquid reaches their
// plane. below is a temperature at or under the solidus, above one over it that
// is met on the way; each may be NaN, not both.
//
// It comes from the side of the solids: their assemblage by cutting planes, then
// Newton's method for the temperature at which the liquid's driving force
// against their plane is zero. Where the solids leave the plane free to turn (two
// on a join, one alone) there is no such equation, and the solidus is where the
// last of them appears beside the liquid.
func (w *walk) solidus(b ternary.Composition, below, above float64) (*tangent.Equilibrium, error) {
	r, err := w.bracketSolidus(b, below, above)
	if err != nil {
		return nil, err
	}
	for round := 0; round < 80; round++ {
		if q, ok := w.firstMelt(b, &r); ok {
			return q, nil
		}
		if r.molten.T-r.solid.T < solidusTol*r.molten.T {
			break
		}
		mid, err := w.solveNear(b, (r.molten.T+r.solid.T)/2, r.molten.T-r.solid.T)
		if err != nil {
			return nil, err
		}
		r.take(mid)
	}
	return nil, fmt.Errorf("the solidus lies between %.6f and %.6f °C but could not be solved for", r.solid.T-ternary.ZeroCelsius, r.molten.T-ternary.ZeroCelsius)
}

// take replaces the side of the bracket to which an equilibrium belongs.
func (r *bracket) take(q *tangent.Equilibrium) {
	if melted(q) {
		r.molten = q
	} else {
		r.solid = q
	}
}

func melted(q *tangent.Equilibrium) bool {
	for _, p := range q.Parts {
		if p.State.Phase == gibbs.Liquid && p.Mole > anyMelt {
			return true
		}
	}
	return false
}

// solveNear is tangent.Solve at T or, where that fails, a little beside it.
func (w *walk) solveNear(b ternary.Composition, T, width float64) (q *tangent.Equilibrium, err error) {
	for _, shift := range [9]float64{0, 0.1, -0.13, 0.31, -0.29, 0.43, -0.41, 0.03, -0.05} {
		if q, err = tangent.Solve(w.sys, b, T+shift*width); err == nil {
			return q, nil
		}
	}
	return nil, err
}

// bracketSolidus steps from one side of the solidus until it has been crossed.
func (w *walk) bracketSolidus(b ternary.Composition, below, above float64) (r bracket, err error) {
	T, dir := above, -1.0
	if !math.IsNaN(below) {
		T, dir = below, 1
	}
	step := solidusFirst
	for r.solid == nil || r.molten == nil {
		if T == w.low && r.solid == nil {
			return r, errors.New("there is liquid down to the lower limit of temperature, so that there is no solidus")
		}
		T = math.Max(T+dir*step, w.low)
		if T > w.high {
			return r, errors.New("nothing melts up to the upper limit of temperature")
		}
		q, err := w.solveNear(b, T, step)
		if err != nil {
			return r, err
		}
		r.take(q)
		if dir > 0 && r.solid == nil { // the solidus is closer than one step
			r.solid = &tangent.Equilibrium{T: below}
		}
		if dir < 0 && r.molten == nil {
			r.molten = &tangent.Equilibrium{T: above}
		}
		step *= solidusGrow
	}
	return r, nil
}

// firstMelt tries to solve for the solidus from either side of a bracket.
func (w *walk) firstMelt(b ternary.Composition, r *bracket) (*tangent.Equilibrium, bool) {
	if len(r.solid.Parts) > 0 {
		if w.determined(onlySolids(r.solid)) {
			return w.fromSolids(b, r)
		}
		if len(r.molten.Parts) > 0 {
			return w.fromMelt(b, r)
		}
	}
	return nil, false
}

// onlySolids drops traces of liquid.
func onlySolids(q *tangent.Equilibrium) *tangent.Equilibrium {
	c := *q
	c.Parts = nil
	for _, p := range q.Parts {
		if p.State.Phase != gibbs.Liquid {
			c.Parts = append(c.Parts, p)
		}
	}
	return &c
}

// fromSolids solves for the temperature at which the liquid reaches the plane of
// the solids.
func (w *walk) fromSolids(b ternary.Composition, r *bracket) (*tangent.Equilibrium, bool) {
	q := onlySolids(r.solid)
	best := gibbs.Drive{D: math.Inf(-1)}
	for _, d := range w.sys.Liquid.Maxima(&q.Mu, q.T) {
		if d.D > best.D {
			best = d
		}
	}
	parts := append(cloned(q).Parts, tangent.Part{State: gibbs.State{Phase: gibbs.Liquid, Y: best.Y, C: best.C}})
	e, err := tangent.Event(w.sys, b, q.T, q.Mu, parts, len(parts)-1)
	return e, err == nil && w.soundSolidus(e, r)
}

// fromMelt solves for the temperature at which a solid of the cold side appears
// beside the liquid of the hot side, and turns the liquid into solids there.
func (w *walk) fromMelt(b ternary.Composition, r *bracket) (*tangent.Equilibrium, bool) {
	for _, p := range onlySolids(r.solid).Parts {
		if holds(r.molten.Parts, p.State.Phase) {
			continue
		}
		parts := append(cloned(r.molten).Parts, tangent.Part{State: p.State})
		e, err := tangent.Event(w.sys, b, r.molten.T, r.molten.Mu, parts, len(parts)-1)
		if err != nil {
			continue
		}
		q, ok := w.freeze(e)
		if ok && w.soundSolidus(q, r) {
			return q, true
		}
	}
	return nil, false
}

// freeze turns the liquid of an assemblage into solids by the reaction among its
// phases.
func (w *walk) freeze(q *tangent.Equilibrium) (*tangent.Equilibrium, bool) {
	v, dependent := w.reactionAmong(q.Parts)
	at := -1
	for i, p := range q.Parts {
		if p.State.Phase == gibbs.Liquid {
			if at >= 0 {
				return nil, false
			}
			at = i
		}
	}
	if !dependent || at < 0 || v[at] == 0 {
		return nil, false
	}
	after := cloned(q)
	run := -q.Parts[at].Mole / v[at]
	for i := range after.Parts {
		after.Parts[i].Mole += run * v[i]
	}
	after.Parts[at].Mole = 0
	// the liquid goes last
	after.Parts = append(append(after.Parts[:at:at], after.Parts[at+1:]...), after.Parts[at])
	return after, true
}

// soundSolidus checks a solution: within the bracket, all amounts positive,
// nothing above the plane.
func (w *walk) soundSolidus(q *tangent.Equilibrium, r *bracket) bool {
	if q.T < r.solid.T-eventSlack || q.T > r.molten.T+eventSlack {
		return false
	}
	for i := range q.Parts {
		if q.Parts[i].Mole < -eventShort {
			return false
		}
		q.Parts[i].Mole = math.Max(0, q.Parts[i].Mole)
	}
	return len(tangent.Above(w.sys, q.Mu, q.T, q.Parts, eventOver)) == 0
}

// determined reports that the phases hold the plane of potentials: that the
// matrix Σ (c·cᵀ + n·RT·∂c/∂μ) of the components present is not singular.
func (w *walk) determined(q *tangent.Equilibrium) bool {
	var m [4][5]float64
	var live [3]int
	n := 0
	for i := range q.Mu {
		if !math.IsInf(q.Mu[i], -1) {
			live[n] = i
			n++
		}
	}
	top := 0.0
	for _, p := range q.Parts {
		curve, _, ok := w.phase(p.State.Phase).Curvature(p.State.Y, q.T)
		if !ok {
			return false
		}
		for a := 0; a < n; a++ {
			for b := 0; b < n; b++ {
				i, k := live[a], live[b]
				m[a][b] += p.State.C[i]*p.State.C[k] + p.Mole*ternary.R*q.T*curve[i][k]
				top = math.Max(top, math.Abs(m[a][b]))
			}
		}
	}
	for a := 0; a < n; a++ {
		for b := 0; b < n; b++ {
			m[a][b] *= 1e-14 / (planeTol * top) // eliminate's threshold is 1e-14
		}
	}
	_, ok := eliminate(&m, n)
	return ok
}
