package descent

import (
	"errors"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// drainTol is the error aimed at per step, in moles per mole of bulk.
const drainTol = 1e-10

// errCoarse says that a step was too long for its tolerance.
var errCoarse = errors.New("the integration's steps became too short")

// drain is what left the system in a step: moles of end-members by part of the
// assemblage, their contents in components and their enthalpy.
type drain struct {
	take [4][3]float64
	c    [3]float64
	h    float64
}

func (d *drain) axpy(s float64, e *drain) {
	for i := range d.c {
		d.c[i] += s * e.c[i]
		for k := range d.take {
			d.take[k][i] += s * e.take[k][i]
		}
	}
	d.h += s * e.h
}

// add books n formula units of a solid of molar enthalpy h.
func (s *stack) add(state *gibbs.State, n, h float64) {
	for k, y := range state.Y {
		s.total[state.Phase][k] += n * y
	}
	s.h += n * h
	s.used = true
}

// dried is the amount of a component in contact, in moles per mole of bulk, that
// is given up to the removed solids.
const dried = 1e-11

// dry takes traces of components out of what is in contact, with the solid
// solution that holds them: retained solids that leave almost nothing behind
// would otherwise stop the integration. It reports whether it did.
func (w *walk) dry(q *tangent.Equilibrium) (*tangent.Equilibrium, bool) {
	after, done := q, false
	for i, b := range q.Bulk {
		if !(b > 0 && b < dried) {
			continue
		}
		for _, p := range q.Parts {
			if p.State.Phase == gibbs.Liquid {
				continue
			}
			for k, e := range w.phase(p.State.Phase).Members {
				if done || e.C[i] <= 0 {
					continue
				}
				done = true
				after = cloned(q)
				s := gibbs.State{Phase: p.State.Phase, C: e.C}
				s.Y[k] = 1
				n := b / e.C[i]
				w.gone.add(&s, n, w.enthalpy(&s, q.T))
				for l, c := range e.C {
					after.Bulk[l] -= n * c
				}
				after.Bulk[i], after.Mu[i] = 0, math.Inf(-1)
			}
		}
		if !done {
			continue
		}
		kept := after.Parts[:0]
		for _, p := range after.Parts { // what cannot do without the component goes
			w.rid(&p, i)
			if p.State.Phase == gibbs.Liquid || !math.IsInf(w.phase(p.State.Phase).Drive(&after.Mu, after.T).D, -1) {
				kept = append(kept, p)
			}
		}
		after.Parts = kept
		break
	}
	return after, done
}

// rid takes a component out of a phase, where something is left.
func (w *walk) rid(part *tangent.Part, component int) {
	s := &part.State
	y, sum := s.Y, 0.0
	p := w.phase(s.Phase)
	for k, e := range p.Members {
		if e.C[component] != 0 {
			y[k] = 0
		}
		sum += y[k]
	}
	if sum <= 0 {
		return
	}
	for k := range y {
		y[k] /= sum
	}
	s.Y, s.C = y, p.Contents(y)
	part.Mole *= sum
}

// book adds what left in a step to the removed solids.
func (w *walk) book(q *tangent.Equilibrium, d *drain) {
	if w.keep >= 1 {
		return
	}
	for j, p := range q.Parts {
		if p.State.Phase == gibbs.Liquid || j >= len(d.take) {
			continue
		}
		for k, n := range d.take[j] {
			w.gone.total[p.State.Phase][k] += n
		}
	}
	w.gone.h += d.h
	w.gone.used = true
}

// drainTo carries an assemblage to T while a share 1 − keep of every solid that
// forms leaves the system:
//
//	db/dT = (1 − keep) Σ max(0, ±dn_φ/dT) c_φ
//
// b the contents in contact and dn/dT those of the closed system, for each small
// step is one of closed crystallisation and then of removal. The plane and the
// amounts follow from b and T at every stage; the formulas are those of
// Dormand & Prince. errCoarse is returned where the step is too long.
func (w *walk) drainTo(h holding, T float64) (holding, error) {
	dT := T - h.q.T
	var k [7]drain
	at := h
	w.outflow(&at, &k[0])
	for s := 1; s < 7; s++ {
		var d drain
		for j := 0; j < s; j++ {
			if c := dpA[s][j]; c != 0 {
				d.axpy(c*dT, &k[j])
			}
		}
		b := h.q.Bulk
		for i := range b {
			b[i] -= d.c[i]
		}
		q, err := w.hold(&at, b, h.q.T+dpC[s]*dT)
		if err != nil {
			return at, err
		}
		if at, err = w.sense(q); err != nil {
			return at, err
		}
		at.lost = d
		if s < 6 {
			w.outflow(&at, &k[s])
		}
	}
	w.outflow(&at, &k[6])
	var e drain
	for s := range dpE {
		e.axpy(dpE[s]*dT, &k[s])
	}
	size := 0.0
	for _, v := range e.c {
		size = math.Max(size, math.Abs(v))
	}
	if size > drainTol {
		return at, errCoarse
	}
	at.rate = math.Min(5, 0.9*math.Pow(drainTol/math.Max(size, 1e-5*drainTol), 0.2))
	return at, nil
}

// outflow is the rate, per kelvin, at which solids leave.
func (w *walk) outflow(h *holding, d *drain) {
	*d = drain{}
	for j, p := range h.q.Parts {
		n := -h.dn[j] // formed per kelvin of cooling
		if p.State.Phase == gibbs.Liquid || n <= 0 {
			continue
		}
		n *= -(1 - w.keep) // per kelvin of T
		for k, y := range p.State.Y {
			d.take[j][k] = n * y
			d.c[k] += n * p.State.C[k]
		}
		d.h += n * w.enthalpy(&p.State, h.q.T)
	}
}

// fused stands for the driving force, in RT, of a second composition of a phase
// where there is none.
const fused = 1e-9

// pinSlack is by how many kelvin the last digits may move an event.
const pinSlack = 1e-6

// pinAlong is pin for an open system, where the contents in contact depend on T,
// and for a second liquid close to the first: false position on the amount, or
// the driving force, of the part.
func (w *walk) pinAlong(a, b *holding, parts []tangent.Part, zero int) (event, bool) {
	arrives := zero >= len(a.q.Parts)
	state := parts[zero].State
	value := func(h *holding) float64 {
		if !arrives {
			return -h.q.Parts[zero].Mole
		}
		d := w.phase(state.Phase).DriveFrom(&h.q.Mu, h.q.T, state.Y)
		all := append(cloned(h.q).Parts, tangent.Part{State: gibbs.State{Phase: state.Phase, Y: d.Y}})
		if collapsed(all, len(all)-1) {
			return -fused
		}
		state.Y, state.C = d.Y, d.C
		return d.D / (ternary.R * h.q.T)
	}
	lo, hi := a.q.T, b.q.T
	flo, fhi := value(a), value(b)
	at, side := *b, 0
	if flo >= 0 {
		at, fhi, lo, hi = *a, 0, a.q.T, a.q.T
	}
	for round := 0; round < 150 && fhi > 1e-14 && math.Abs(hi-lo) > 1e-13*lo; round++ {
		T := hi - fhi*(hi-lo)/(fhi-flo)
		if round%5 == 4 || (T-lo)*(T-hi) >= 0 {
			T = (lo + hi) / 2
		}
		m, err := w.move(*a, T)
		if err != nil {
			return event{}, false
		}
		if v := value(&m); v > 0 {
			hi, fhi, at = T, v, m
			if side == 1 {
				flo /= 2
			}
			side = 1
		} else {
			lo, flo = T, v
			if side == 2 {
				fhi /= 2
			}
			side = 2
		}
	}
	q := cloned(at.q)
	if arrives {
		q.Parts = append(q.Parts, tangent.Part{State: state})
	} else {
		q.Parts[zero].Mole = 0
	}
	lost := at.lost
	if at.q == a.q {
		lost = drain{}
	}
	// the last digits, with what is in contact held fixed
	if e, err := tangent.Event(w.sys, q.Bulk, q.T, q.Mu, q.Parts, zero); err == nil && math.Abs(e.T-q.T) < pinSlack && !collapsed(e.Parts, zero) {
		q = e
	}
	return event{q: q, part: zero, lost: lost}, true
}

// takeOut carries out the next removal.
func (w *walk) takeOut(q *tangent.Equilibrium) *tangent.Equilibrium {
	r := w.removals[0]
	w.removals = w.removals[1:]
	share := r.Fraction
	if share == 0 {
		share = 1
	}
	after := cloned(q)
	name := ""
	for i := range after.Parts {
		p := &after.Parts[i]
		if p.State.Phase == gibbs.Liquid || len(r.Phases) > 0 && !contains(r.Phases, p.State.Phase) {
			continue
		}
		n := share * p.Mole
		w.gone.add(&p.State, n, w.enthalpy(&p.State, q.T))
		p.Mole -= n
		for k, c := range p.State.C {
			after.Bulk[k] -= n * c
		}
		if name != "" {
			name += ", "
		}
		name += w.symbol(p.State.Phase) + " removed"
	}
	if name == "" {
		name = "nothing to remove"
	}
	w.record(after, nil, name)
	return after
}
