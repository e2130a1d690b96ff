package descent

import (
	"math"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// event is a state at which the amount of one part vanishes.
type event struct {
	q       *tangent.Equilibrium
	part    int  // index of the part in q.Parts
	arrives bool // the phase comes in; else it goes out
}

// firstEvent looks for the event between a and the colder state b. found says
// that there is one; the event is nil when it could not be pinned down and the
// step must be shorter.
func (w *walk) firstEvent(a, b holding) (ev *event, found bool) {
	try := func(parts []tangent.Part, zero int, arrives bool, share float64) {
		found = true
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
		q, err := tangent.Event(w.sys, w.bulk, T, mu, start, zero)
		if err != nil || q.T > a.q.T+1e-9 || q.T < b.q.T-1e-9 {
			return
		}
		if ev == nil || q.T > ev.q.T {
			ev = &event{q, zero, arrives}
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
		if i != ev.part && p.Mole < -1e-10 {
			return nil, true
		}
	}
	if len(tangent.Above(w.sys, ev.q.Mu, ev.q.T, ev.q.Parts, 1e-9)) > 0 {
		return nil, true
	}
	return ev, true
}

// pass records an event and returns the assemblage after it.
func (w *walk) pass(ev *event) (*tangent.Equilibrium, bool) {
	if ev.arrives {
		return w.enter(ev.q, ev.part)
	}
	out := ev.q.Parts[ev.part]
	w.record(ev.q, w.symbol(out.State.Phase)+" out")
	if out.State.Phase == gibbs.Liquid && !w.moreLiquid(ev.q, ev.part) {
		w.end(ev.q.T, "the last liquid is used up")
		return nil, true
	}
	next := *ev.q
	next.Parts = append(append([]tangent.Part(nil), ev.q.Parts[:ev.part]...), ev.q.Parts[ev.part+1:]...)
	return &next, false
}

// moreLiquid reports that another part than i is liquid.
func (w *walk) moreLiquid(q *tangent.Equilibrium, i int) bool {
	for k, p := range q.Parts {
		if k != i && p.State.Phase == gibbs.Liquid {
			return true
		}
	}
	return false
}

// enter lets the part with no amount into the assemblage. Where its composition
// is a combination of the others' (four phases, or fewer on a join) T stands
// still while a reaction runs.
func (w *walk) enter(q *tangent.Equilibrium, part int) (*tangent.Equilibrium, bool) {
	name := w.symbol(q.Parts[part].State.Phase) + " in"
	v, dependent := w.nullReaction(q.Parts)
	if !dependent {
		w.record(q, name)
		return q, false
	}
	w.record(q, name+", "+w.describe(q.Parts, v)+" begins")
	after := *q
	after.Parts = append([]tangent.Part(nil), q.Parts...)
	run := math.Inf(1)
	for i, p := range q.Parts {
		if v[i] < 0 {
			run = math.Min(run, p.Mole/-v[i])
		}
	}
	var gone string
	kept := after.Parts[:0]
	liquid := false
	for i, p := range q.Parts {
		p.Mole += run * v[i]
		if p.Mole <= goneTol {
			if gone != "" {
				gone += ", "
			}
			gone += w.symbol(p.State.Phase) + " out"
			continue
		}
		liquid = liquid || p.State.Phase == gibbs.Liquid
		kept = append(kept, p)
	}
	after.Parts = kept
	w.record(&after, gone)
	if !liquid {
		w.end(q.T, "the last liquid is used up in "+w.describe(q.Parts, v))
		return nil, true
	}
	return &after, false
}

// goneTol is the amount, in moles per mole of bulk, at which a phase counts as
// used up by a reaction.
const goneTol = 1e-12
