package descent

import (
	"errors"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

const (
	coolFirst = 0.5   // K, first step of cooling
	coolMax   = 15.0  // K, longest step
	coolMin   = 1e-11 // K, shortest: below it the path is given up
	meltAim   = 0.06  // aimed change of the melt fraction per step
	shyStep   = 0.05  // K, step below which no phase is suspected to come and go within
	// A step in which the melt fraction changes by more than leapMelt, and by more
	// than leapRatio times what the slopes at its ends say, is halved down to
	// leapStep, in kelvin.
	leapMelt  = 0.02
	leapRatio = 1.5
	leapStep  = 1e-8
	// aboveTol is the driving force, in RT, at which an absent phase has come in.
	aboveTol = 1e-11
	// maxStages bounds the assemblages of a path.
	maxStages = 400
)

// holding is the assemblage of the moment, with derivatives with respect to T.
// q.Bulk is what is in contact.
type holding struct {
	q    *tangent.Equilibrium
	dmu  [3]float64
	dn   []float64 // of the closed system
	lost drain     // what left since the holding that this one was reached from
	rate float64   // factor by which the step could have been longer
}

// equilibrium follows the path with solids in contact.
func (w *walk) equilibrium(primary gibbs.State) error {
	T := w.path.LiquidT
	var pot gibbs.Potentials
	x := [3]float64(w.bulk)
	w.sys.Liquid.Potentials(&x, T, &pot)
	liquid := tangent.Part{State: gibbs.State{Phase: gibbs.Liquid, Y: x, C: x}, Mole: 1}
	q := &tangent.Equilibrium{T: T, Bulk: w.bulk, Mu: pot.Mu, Parts: []tangent.Part{liquid, {State: primary}}}
	q, done := w.enter(q, 1)
	return w.stages(q, done)
}

// stages follows one assemblage after another.
func (w *walk) stages(q *tangent.Equilibrium, done bool) error {
	for n := 0; !done; n++ {
		h, err := w.sense(q)
		if err == nil && n > maxStages {
			err = errors.New("the path does not come to an end")
		}
		if err != nil {
			return w.lost(q.T, err)
		}
		q, done, err = w.cool(h)
		if err != nil {
			return err
		}
	}
	return nil
}

// sense adds the derivatives with respect to T.
func (w *walk) sense(q *tangent.Equilibrium) (holding, error) {
	dmu, dn, err := tangent.Slopes(w.sys, q)
	return holding{q: q, dmu: dmu, dn: dn, rate: math.Inf(1)}, err
}

// cool follows one assemblage to its next event and through it, down on
// cooling, up on heating. done reports that the path has ended.
func (w *walk) cool(h holding) (*tangent.Equilibrium, bool, error) {
	step := coolFirst
	for {
		T, removal := w.target(h.q.T, step)
		if T < w.low || T > w.high {
			w.record(h.q, nil, "")
			w.end(h.q.T, w.atLimit())
			return nil, true, nil
		}
		if step < coolMin {
			return nil, false, w.lost(h.q.T, errors.New("the event could not be located"))
		}
		next, err := w.move(h, T)
		if err != nil {
			step /= 3
			continue
		}
		if ev, found := w.firstEvent(h, next); found {
			if ev == nil {
				step /= 2
				continue
			}
			w.rows(h, w.until(h, ev))
			w.book(ev.q, &ev.lost)
			q, done := w.pass(ev)
			return q, done, nil
		}
		if step > shyStep && w.shy(h, next) || step > leapStep && w.leapt(&h, &next) {
			step /= 2
			continue
		}
		w.rows(h, next)
		w.book(next.q, &next.lost)
		if removal {
			return w.takeOut(next.q), false, nil
		}
		if w.keep < 1 {
			if q, done := w.dry(next.q); done {
				if v, dependent := w.nullReaction(q.Parts, q.T); dependent {
					q, ended := w.runReaction(q, v, "")
					return q, ended, nil
				}
				return q, false, nil
			}
		}
		change := math.Abs(w.meltMass(next.q) - w.meltMass(h.q))
		grow := math.Max(0.3, math.Min(2.5, meltAim/math.Max(change, 1e-4)))
		step = math.Min(coolMax, step*math.Min(grow, next.rate))
		next.lost = drain{}
		h = next
	}
}

// target is the temperature one step away, or that of the next removal.
func (w *walk) target(T, step float64) (float64, bool) {
	next := T + w.dir*step
	if len(w.removals) > 0 && next <= w.removals[0].T {
		return math.Min(w.removals[0].T, T), true
	}
	return next, false
}

func (w *walk) atLimit() string {
	if w.dir > 0 {
		return "not all is molten at the upper limit of temperature"
	}
	return "the melt is still liquid at the lower limit of temperature"
}

// move carries an assemblage to T with its derivatives.
func (w *walk) move(h holding, T float64) (holding, error) {
	if w.keep < 1 {
		return w.drainTo(h, T)
	}
	q, err := w.hold(&h, h.q.Bulk, T)
	if err != nil {
		return holding{}, err
	}
	return w.sense(q)
}

// hold solves the assemblage of h at T from its derivatives, with contents b in
// contact.
func (w *walk) hold(h *holding, b ternary.Composition, T float64) (*tangent.Equilibrium, error) {
	mu := h.q.Mu
	parts := append(make([]tangent.Part, 0, 4), h.q.Parts...)
	for i := range mu {
		mu[i] += h.dmu[i] * (T - h.q.T)
	}
	for i := range parts {
		parts[i].Mole += h.dn[i] * (T - h.q.T)
	}
	return tangent.Hold(w.sys, b, T, mu, parts)
}

// leapt reports that the amount of melt changed between two states in a way that
// the slopes at both do not explain: the solution may have gone over to another
// branch.
func (w *walk) leapt(a, b *holding) bool {
	dT := b.q.T - a.q.T
	change := w.meltMass(b.q) - w.meltMass(a.q)
	s, t := w.meltSlope(a)*dT, w.meltSlope(b)*dT
	return math.Abs(change) > leapMelt && math.Abs(change) > leapRatio*math.Max(math.Abs(s), math.Abs(t))
}

// shy reports that an absent phase may have come and gone between two states:
// the cubic through its driving force at both comes close to zero.
func (w *walk) shy(a, b holding) bool {
	dT := b.q.T - a.q.T
	for i, p := range w.sys.Solids {
		if holds(a.q.Parts, i) {
			continue
		}
		da, db := p.Drive(&a.q.Mu, a.q.T), p.Drive(&b.q.Mu, b.q.T)
		if math.IsInf(da.D, -1) {
			continue
		}
		if hump(da.D, db.D, slope(&da, &a.dmu)*dT, slope(&db, &b.dmu)*dT) {
			return true
		}
	}
	return false
}

// hump reports that a function with values a, b and slopes ma, mb per step at
// its ends may rise above zero between them: the highest that a cubic with these
// ends can be is below both tangents.
func hump(a, b, ma, mb float64) bool {
	if ma <= 0 || mb >= 0 {
		return false
	}
	u := (b - mb - a) / (ma - mb)
	return a+ma*math.Max(0, math.Min(1, u)) > 0
}

func slope(d *gibbs.Drive, dmu *[3]float64) float64 {
	s := d.S
	for i, c := range d.C {
		if c != 0 {
			s += c * dmu[i]
		}
	}
	return s
}

func holds(parts []tangent.Part, phase int) bool {
	for _, p := range parts {
		if p.State.Phase == phase {
			return true
		}
	}
	return false
}

// meltMass is the mass fraction of liquid.
func (w *walk) meltMass(q *tangent.Equilibrium) float64 {
	m := 0.0
	for _, p := range q.Parts {
		if p.State.Phase == gibbs.Liquid {
			m += p.Mole * w.weigh(p.State.C)
		}
	}
	return m / w.total
}
