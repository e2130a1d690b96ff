package descent

import (
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

const (
	coolFirst = 0.5  // K, first step of cooling
	coolMax   = 12.0 // K, longest step
	coolMin   = 1e-7 // K, shortest: below it the path is given up
	meltAim   = 0.04 // aimed change of the melt fraction per step
	// aboveTol is the driving force, in RT, at which an absent phase has come in.
	aboveTol = 1e-11
)

// holding is the assemblage of the moment.
type holding struct {
	q   *tangent.Equilibrium
	dmu [3]float64
	dn  []float64
}

// equilibrium follows the path with all solids kept in contact.
func (w *walk) equilibrium(primary gibbs.State) error {
	T := w.path.LiquidT
	var pot gibbs.Potentials
	x := [3]float64(w.bulk)
	w.sys.Liquid.Potentials(&x, T, &pot)
	liquid := tangent.Part{State: gibbs.State{Phase: gibbs.Liquid, Y: x, C: x}, Mole: 1}
	q := &tangent.Equilibrium{T: T, Bulk: w.bulk, Mu: pot.Mu, Parts: []tangent.Part{liquid, {State: primary}}}
	q, done := w.enter(q, 1)
	for !done {
		h, err := w.sense(q)
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
	return holding{q, dmu, dn}, err
}

func (w *walk) lost(T float64, err error) error {
	return fmt.Errorf("the path was lost at %.3f °C: %w", T-ternary.ZeroCelsius, err)
}

// cool follows one assemblage down to its next event and through it. done
// reports that the path has ended.
func (w *walk) cool(h holding) (*tangent.Equilibrium, bool, error) {
	step := coolFirst
	for {
		if h.q.T-step < w.low {
			w.record(h.q, "")
			w.end(h.q.T, "the melt is still liquid at the lower limit of temperature")
			return nil, true, nil
		}
		if step < coolMin {
			return nil, false, w.lost(h.q.T, fmt.Errorf("the event could not be located"))
		}
		q, err := w.hold(h, h.q.T-step)
		if err != nil {
			step /= 4
			continue
		}
		next, err := w.sense(q)
		if err != nil {
			step /= 4
			continue
		}
		if ev, found := w.firstEvent(h, next); found {
			if ev == nil {
				step /= 2
				continue
			}
			w.rows(h, ev.q)
			q, done := w.pass(ev)
			return q, done, nil
		}
		if w.shy(h, next) && step > 0.05 {
			step /= 2
			continue
		}
		w.rows(h, q)
		change := math.Abs(w.meltMass(q) - w.meltMass(h.q))
		step = math.Min(coolMax, step*math.Max(0.3, math.Min(2.5, meltAim/math.Max(change, 1e-4))))
		h = next
	}
}

// hold solves the assemblage of h at T from its derivatives.
func (w *walk) hold(h holding, T float64) (*tangent.Equilibrium, error) {
	mu := h.q.Mu
	parts := append(make([]tangent.Part, 0, 4), h.q.Parts...)
	for i := range mu {
		mu[i] += h.dmu[i] * (T - h.q.T)
	}
	for i := range parts {
		parts[i].Mole += h.dn[i] * (T - h.q.T)
	}
	return tangent.Hold(w.sys, w.bulk, T, mu, parts)
}

// shy reports that an absent solid may have come and gone between two states:
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
		ma, mb := (slope(&da, &a.dmu))*dT, (slope(&db, &b.dmu))*dT
		if ma <= 0 || mb >= 0 {
			continue
		}
		// the highest a cubic with these ends can be is below both tangents
		u := (db.D - mb - da.D) / (ma - mb)
		if top := da.D + ma*math.Max(0, math.Min(1, u)); top > 0 {
			return true
		}
	}
	return false
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

// rows records the states between h and q at even spacing of the melt's mass.
func (w *walk) rows(h holding, q *tangent.Equilibrium) {
	f0, f1 := w.meltMass(h.q), w.meltMass(q)
	if f1 >= f0 {
		return
	}
	n := float64(w.steps)
	for k := math.Ceil(f0*n) - 1; k/n > f1; k-- {
		f := k / n
		if f >= f0 {
			continue
		}
		if m := w.meltAt(h, q, f); m != nil {
			w.record(m, "")
		}
	}
}

// meltAt finds the state with melt fraction f between two states by the
// Illinois form of false position.
func (w *walk) meltAt(h holding, q *tangent.Equilibrium, f float64) *tangent.Equilibrium {
	a, b := h.q.T, q.T
	fa, fb := w.meltMass(h.q)-f, w.meltMass(q)-f
	var best *tangent.Equilibrium
	side := 0
	for round := 0; round < 60; round++ {
		T := b - fb*(b-a)/(fb-fa)
		m, err := w.hold(h, T)
		if err != nil {
			return nil
		}
		best = m
		fm := w.meltMass(m) - f
		if math.Abs(fm) < 1e-13 || math.Abs(b-a) < 1e-11*a {
			break
		}
		if fm*fb > 0 {
			b, fb = T, fm
			if side == 1 {
				fa /= 2
			}
			side = 1
		} else {
			a, fa = T, fm
			if side == 2 {
				fb /= 2
			}
			side = 2
		}
	}
	return best
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
