package descent

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// record appends a row for a state with phases in contact. lost is what left
// since the removed solids were booked last, or nil.
func (w *walk) record(q *tangent.Equilibrium, lost *drain, name string) {
	s := Step{T: q.T, Event: name, Liquid: w.lastLiquid()}
	h := w.gone.h
	if lost != nil {
		h += lost.h
	}
	var pool [3]float64
	s.Contact = make([]Amount, 0, len(q.Parts))
	for _, p := range q.Parts {
		h += p.Mole * w.enthalpy(&p.State, q.T)
		if p.State.Phase == gibbs.Liquid {
			for i, c := range p.State.C {
				pool[i] += p.Mole * c
			}
			s.MeltMole += p.Mole
			if p.Mole == 0 { // a first or last drop
				s.Liquid = ternary.Composition(p.State.C)
			}
			continue
		}
		s.Contact = append(s.Contact, w.amount(p.State, p.Mole))
	}
	if s.MeltMole > 0 {
		s.MeltMass = w.weigh(pool) / w.total
		if x, err := ternary.Normalize(pool); err == nil {
			s.Liquid = x
		}
	}
	s.Pool = s.Liquid
	s.Solids = w.together(q, s.Contact, lost)
	s.Affinity = w.affinities(q.Mu, q.T)
	s.Crystallising, s.Instant = w.growing(q)
	s.Heat = w.dir * (h - w.h0) / w.total
	w.path.Steps = append(w.path.Steps, s)
}

func (w *walk) amount(s gibbs.State, mole float64) Amount {
	return Amount{State: s, Mole: mole, Mass: mole * w.weigh(s.C) / w.total}
}

// together adds the removed solids to those in contact.
func (w *walk) together(q *tangent.Equilibrium, contact []Amount, lost *drain) []Amount {
	if w.keep >= 1 && !w.gone.used {
		return contact
	}
	out := append([]Amount(nil), contact...)
	for phase, gone := range w.gone.total {
		if lost != nil {
			for j, p := range q.Parts {
				if p.State.Phase == phase {
					for k := range gone {
						gone[k] += lost.take[j][k]
					}
				}
			}
		}
		if gone[0]+gone[1]+gone[2] == 0 {
			continue
		}
		at := -1
		for i := range out {
			if out[i].State.Phase == phase {
				at = i
				break
			}
		}
		if at < 0 {
			out = append(out, Amount{State: gibbs.State{Phase: phase}})
			at = len(out) - 1
		}
		for k := range gone {
			gone[k] += out[at].Mole * out[at].State.Y[k]
		}
		out[at] = w.mean(phase, gone)
	}
	return out
}

// mean is the amount of a solid made of the given moles of end-members.
func (w *walk) mean(phase int, members [3]float64) Amount {
	n := members[0] + members[1] + members[2]
	s := gibbs.State{Phase: phase}
	for k := range members {
		s.Y[k] = members[k] / n
	}
	s.C = w.sys.Solids[phase].Contents(s.Y)
	return w.amount(s, n)
}

func (w *walk) lastLiquid() ternary.Composition {
	if n := len(w.path.Steps); n > 0 {
		return w.path.Steps[n-1].Liquid
	}
	return w.bulk
}

// affinities are the driving forces, J/mol, of all solids against a plane.
func (w *walk) affinities(mu [3]float64, T float64) []float64 {
	out := make([]float64, len(w.sys.Solids))
	for i, p := range w.sys.Solids {
		out[i] = p.Drive(&mu, T).D
	}
	return out
}

// growing lists the solids whose amount rises on cooling.
func (w *walk) growing(q *tangent.Equilibrium) ([]int, []gibbs.State) {
	idx := make([]int, 0, len(q.Parts))
	states := make([]gibbs.State, 0, len(q.Parts))
	_, dn, err := tangent.Slopes(w.sys, q)
	for i, p := range q.Parts {
		if p.State.Phase == gibbs.Liquid {
			continue
		}
		if err == nil && dn[i] >= 0 && p.Mole > 0 {
			continue
		}
		idx = append(idx, p.State.Phase)
		states = append(states, p.State)
	}
	return idx, states
}

// massBalance is the largest |Σ amounts × contents − bulk| of a row, in moles of
// a component per mole of bulk.
func (w *walk) massBalance(s *Step) float64 {
	worst := 0.0
	for i := range w.bulk {
		d := s.MeltMole*s.Pool[i] - w.bulk[i]
		for _, a := range s.Solids {
			d += a.Mole * a.State.C[i]
		}
		worst = math.Max(worst, math.Abs(d))
	}
	return worst
}
