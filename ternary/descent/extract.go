package descent

import (
	"errors"
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// residue is what fractional melting has left, with what has been molten.
type residue struct {
	q    *tangent.Equilibrium // the solids, and last a liquid of amount zero; q.Bulk is what they hold
	pool [3]float64           // contents of the melt removed
	h    float64              // J: its enthalpy when it left
}

const (
	// extractTol is the error aimed at per step, relative to what is left.
	extractTol = 1e-10
	// extractMax and extractMin bound steps in v = −ln(mass of solids left).
	extractMax = 0.3
	extractMin = 1e-14
	// extractSteps bounds the steps of one assemblage.
	extractSteps = 20000
	// leftTol is the mass, relative to the bulk, at which solids count as molten.
	leftTol = 1e-12
)

// MeltingGoesOn begins the event at which fractional melting starts anew, at a
// higher temperature and from another liquid.
const MeltingGoesOn = "melting goes on"

// extract follows fractional melting from the solidus. Each stage is one
// assemblage: at an invariant point a reaction at constant T, else a
// differential equation for what is left. When a solid is used up the rest melts
// on at its own solidus.
func (w *walk) extract(first *tangent.Equilibrium) error {
	r := residue{q: first}
	name := "L in"
	for stage := 0; stage < maxStages; stage++ {
		gone, err := w.extractStage(&r, name)
		if err != nil {
			return w.lost(r.q.T, err)
		}
		if gone == "" {
			return nil
		}
		if w.weigh(r.q.Bulk)/w.total < leftTol {
			w.endExtract(&r, gone)
			return nil
		}
		T := r.q.T
		q, err := w.nextSolidus(&r)
		if err != nil {
			return w.lost(T, err)
		}
		name = gone
		if q.T > T+1e-7 {
			w.recordResidue(&r, gone)
			name = MeltingGoesOn
		}
		r.q = q
	}
	return w.lost(r.q.T, errors.New("the path does not come to an end"))
}

// endExtract records the last row.
func (w *walk) endExtract(r *residue, gone string) {
	r.q = cloned(r.q)
	for i := range r.q.Parts {
		r.q.Parts[i].Mole = 0
	}
	w.recordResidue(r, gone)
	w.end(r.q.T, "the last solid is molten")
}

// nextSolidus is the solidus of what is left: at the temperature reached where
// its solids still hold the plane on which the liquid lies, else above.
func (w *walk) nextSolidus(r *residue) (*tangent.Equilibrium, error) {
	if _, dependent := w.reactionAmong(r.q.Parts); dependent || w.determined(onlySolids(r.q)) {
		return r.q, nil
	}
	mass := w.weigh(r.q.Bulk)
	sum := r.q.Bulk[0] + r.q.Bulk[1] + r.q.Bulk[2]
	if sum <= 0 || mass <= 0 {
		return nil, errors.New("the solids left hold nothing")
	}
	b := r.q.Bulk
	for i := range b {
		b[i] /= sum
		if math.Abs(b[i]) < leftTol && !holdsComponent(r.q.Parts, i) {
			b[i] = 0
		}
	}
	q, err := w.solidus(b, r.q.T, math.NaN())
	if err != nil {
		return nil, err
	}
	q.Bulk = r.q.Bulk
	for i := range q.Parts {
		q.Parts[i].Mole *= sum
	}
	return q, nil
}

func holdsComponent(parts []tangent.Part, i int) bool {
	for _, p := range parts {
		if p.State.Phase != gibbs.Liquid && p.State.C[i] != 0 && p.Mole > 0 {
			return true
		}
	}
	return false
}

// extractStage melts one assemblage until a solid is used up, and says which.
// An empty name means that the path has ended.
func (w *walk) extractStage(r *residue, name string) (gone string, err error) {
	v, dependent := w.nullReaction(r.q.Parts, r.q.T)
	if !dependent {
		return w.extractFlow(r, name)
	}
	liquid := len(r.q.Parts) - 1
	if v[liquid] < 0 {
		return "", fmt.Errorf("the reaction %s makes no liquid", w.describe(r.q.Parts, v))
	}
	w.recordResidue(r, name+", "+w.describe(r.q.Parts, v)+" begins")
	after, gone := w.react(r.q, v)
	out := after.Parts[len(after.Parts)-1]
	r.drawOff(&out.State, out.Mole, w.enthalpy(&out.State, r.q.T)) // nothing, where one solid turns into another
	after.Parts[len(after.Parts)-1].Mole = 0
	for i, c := range out.State.C {
		after.Bulk[i] -= out.Mole * c
	}
	r.q = after
	w.skipRows(w.weigh(r.pool) / w.total)
	return gone, nil
}

// drawOff moves n moles of liquid of molar enthalpy h into the pool.
func (r *residue) drawOff(s *gibbs.State, n, h float64) {
	for i, c := range s.C {
		r.pool[i] += n * c
	}
	r.h += n * h
}

// recordResidue appends a row of fractional melting.
func (w *walk) recordResidue(r *residue, name string) {
	q := r.q
	liquid := q.Parts[len(q.Parts)-1].State
	s := Step{T: q.T, Event: name, Liquid: ternary.Composition(liquid.C), Pool: ternary.Composition(liquid.C)}
	s.MeltMole = r.pool[0] + r.pool[1] + r.pool[2]
	s.MeltMass = w.weigh(r.pool) / w.total
	if x, err := ternary.Normalize(r.pool); err == nil {
		s.Pool = x
	}
	h := r.h
	for _, p := range q.Parts[:len(q.Parts)-1] {
		h += p.Mole * w.enthalpy(&p.State, q.T)
		if p.Mole > 0 {
			s.Solids = append(s.Solids, w.amount(p.State, p.Mole))
		}
		s.Crystallising = append(s.Crystallising, p.State.Phase)
		s.Instant = append(s.Instant, p.State)
	}
	s.Contact = s.Solids
	s.Heat = (h - w.h0) / w.total
	s.Affinity = w.affinities(q.Mu, q.T)
	w.path.Steps = append(w.path.Steps, s)
}
