package descent

import (
	"math"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// event is a state at which the amount of one part vanishes.
type event struct {
	q       *tangent.Equilibrium
	part    int   // index of the part in q.Parts
	arrives bool  // the phase comes in; else it goes out
	lost    drain // what left since the start of the step
}

const (
	// eventSlack is by how many kelvin an event may lie outside its step.
	eventSlack = 1e-9
	// eventShort and eventOver are what the state at an event may show of other
	// events: an amount below zero, and a driving force in RT.
	eventShort = 1e-10
	eventOver  = 1e-9
)

// firstEvent looks for the event between a and the later state b. found says
// that there is one; the event is nil when it could not be pinned down and the
// step must be shorter.
func (w *walk) firstEvent(a, b holding) (ev *event, found bool) {
	try := func(parts []tangent.Part, zero int, arrives bool, share float64) {
		found = true
		e, ok := w.pin(&a, &b, parts, zero, share)
		if !ok || collapsed(e.q.Parts, zero) || w.dir*(e.q.T-a.q.T) < -eventSlack || w.dir*(e.q.T-b.q.T) > eventSlack {
			return
		}
		e.arrives = arrives
		if ev == nil || w.dir*(e.q.T-ev.q.T) < 0 {
			ev = &e
		}
	}
	for i, p := range b.q.Parts {
		if p.Mole < 0 {
			m := a.q.Parts[i].Mole
			try(a.q.Parts, i, false, m/(m-p.Mole))
		}
	}
	for _, s := range tangent.Above(w.sys, b.q.Mu, b.q.T, b.q.Parts, aboveTol) {
		parts := append(append([]tangent.Part(nil), a.q.Parts...), tangent.Part{State: s})
		da := w.phase(s.Phase).DriveFrom(&a.q.Mu, a.q.T, s.Y).D
		db := w.phase(s.Phase).DriveFrom(&b.q.Mu, b.q.T, s.Y).D
		share := 0.5
		if da < 0 && db > 0 {
			share = da / (da - db)
		}
		try(parts, len(parts)-1, true, share)
	}
	if ev == nil {
		return nil, found
	}
	// the state at the event must itself be stable
	for i, p := range ev.q.Parts {
		if i != ev.part && p.Mole < -eventShort {
			return nil, true
		}
	}
	if len(tangent.Above(w.sys, ev.q.Mu, ev.q.T, ev.q.Parts, eventOver)) > 0 {
		return nil, true
	}
	return ev, true
}

// collapsed reports that a part became identical with another of its phase.
func collapsed(parts []tangent.Part, i int) bool {
	for k := range parts {
		if k != i && parts[k].State.Phase == parts[i].State.Phase && alike(&parts[k].State.Y, &parts[i].State.Y) {
			return true
		}
	}
	return false
}

// pin solves for the event at which parts[zero] has no amount, a share of the
// way from a to b.
func (w *walk) pin(a, b *holding, parts []tangent.Part, zero int, share float64) (event, bool) {
	if w.keep < 1 {
		return w.pinAlong(a, b, parts, zero)
	}
	T := a.q.T + share*(b.q.T-a.q.T)
	mu := a.q.Mu
	start := append([]tangent.Part(nil), parts...)
	for i := range mu {
		mu[i] += a.dmu[i] * (T - a.q.T)
	}
	for i := range start {
		if i < len(a.dn) {
			start[i].Mole += a.dn[i] * (T - a.q.T)
		}
	}
	q, err := tangent.Event(w.sys, a.q.Bulk, T, mu, start, zero)
	if err != nil || collapsed(q.Parts, zero) {
		return w.pinAlong(a, b, parts, zero)
	}
	return event{q: q, part: zero}, true
}

// until is the state at an event as the end of a step that began at h: with the
// parts of h alone.
func (w *walk) until(h holding, ev *event) holding {
	q := cloned(ev.q)
	q.Parts = q.Parts[:len(h.q.Parts)]
	next, err := w.sense(q)
	if err != nil { // the secant will do for rows
		dT := q.T - h.q.T
		next = holding{q: q, dn: make([]float64, len(q.Parts))}
		for i := range q.Parts {
			next.dn[i] = (q.Parts[i].Mole - h.q.Parts[i].Mole) / dT
		}
		for i := range q.Mu {
			next.dmu[i] = (q.Mu[i] - h.q.Mu[i]) / dT
		}
	}
	return next
}

func cloned(q *tangent.Equilibrium) *tangent.Equilibrium {
	c := *q
	c.Parts = append(make([]tangent.Part, 0, len(q.Parts)+1), q.Parts...)
	return &c
}

// without is the assemblage without one of its parts.
func without(q *tangent.Equilibrium, part int) *tangent.Equilibrium {
	c := cloned(q)
	c.Parts = append(c.Parts[:part], c.Parts[part+1:]...)
	return c
}

// pass records an event and returns the assemblage after it.
func (w *walk) pass(ev *event) (*tangent.Equilibrium, bool) {
	if ev.arrives {
		return w.enter(ev.q, ev.part)
	}
	out := ev.q.Parts[ev.part]
	next := without(ev.q, ev.part)
	w.record(ev.q, nil, w.symbol(out.State.Phase)+" out")
	liquids := count(next.Parts, true)
	switch {
	case liquids == 0:
		w.end(ev.q.T, "the last liquid is used up")
		return nil, true
	case w.dir > 0 && len(next.Parts) == liquids:
		w.end(ev.q.T, "the last solid is molten")
		return nil, true
	}
	return next, false
}

// count returns the number of parts that are liquid, or that are solid.
func count(parts []tangent.Part, liquid bool) (n int) {
	for _, p := range parts {
		if (p.State.Phase == gibbs.Liquid) == liquid {
			n++
		}
	}
	return n
}

// goneTol is the amount, in moles per mole of bulk, at which a phase counts as
// used up by a reaction.
const goneTol = 1e-12

// enter lets the part with no amount into the assemblage. Where its composition
// is a combination of the others' (four phases, or fewer on a join) T stands
// still while a reaction runs.
func (w *walk) enter(q *tangent.Equilibrium, part int) (*tangent.Equilibrium, bool) {
	name := w.symbol(q.Parts[part].State.Phase) + " in"
	v, dependent := w.nullReaction(q.Parts, q.T)
	if !dependent {
		w.record(q, nil, name)
		return q, false
	}
	return w.runReaction(q, v, name+", ")
}

// runReaction lets a reaction run at constant T until a phase is used up.
func (w *walk) runReaction(q *tangent.Equilibrium, v []float64, name string) (*tangent.Equilibrium, bool) {
	w.record(q, nil, name+w.describe(q.Parts, v)+" begins")
	after, gone := w.react(q, v)
	w.record(after, nil, gone)
	w.skipRows(w.meltMass(after))
	switch liquids := count(after.Parts, true); {
	case liquids == 0:
		w.end(q.T, "the last liquid is used up in "+w.describe(q.Parts, v))
		return nil, true
	case w.dir > 0 && len(after.Parts) == liquids:
		w.end(q.T, "the last solid is molten in "+w.describe(q.Parts, v))
		return nil, true
	}
	return after, false
}

// react runs a reaction until one of its phases is used up. Of the solids that
// it makes the share that is not kept in contact leaves.
func (w *walk) react(q *tangent.Equilibrium, v []float64) (after *tangent.Equilibrium, gone string) {
	run := math.Inf(1)
	for i, p := range q.Parts {
		if v[i] < 0 {
			run = math.Min(run, math.Max(0, p.Mole)/-v[i])
		}
	}
	after = cloned(q)
	kept := after.Parts[:0]
	for i, p := range q.Parts {
		made := run * v[i]
		if made > 0 && p.State.Phase != gibbs.Liquid && w.keep < 1 {
			out := (1 - w.keep) * made
			w.gone.add(&p.State, out, w.enthalpy(&p.State, q.T))
			for k, c := range p.State.C {
				after.Bulk[k] -= out * c
			}
			made -= out
		}
		p.Mole += made
		if v[i] < 0 && p.Mole <= goneTol {
			if gone != "" {
				gone += ", "
			}
			gone += w.symbol(p.State.Phase) + " out"
			continue
		}
		kept = append(kept, p)
	}
	after.Parts = kept
	return after, gone
}

// enthalpy of one formula unit, J/mol.
func (w *walk) enthalpy(s *gibbs.State, T float64) float64 {
	_, _, h := w.phase(s.Phase).Gibbs(s.Y, T)
	return h
}
