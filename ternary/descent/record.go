package descent

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// record appends a row for a state with all phases in contact.
func (w *walk) record(q *tangent.Equilibrium, name string) {
	s := Step{T: q.T, Event: name, Liquid: w.lastLiquid()}
	enthalpy := 0.0
	var pool [3]float64
	for _, p := range q.Parts {
		_, _, h := w.phase(p.State.Phase).Gibbs(p.State.Y, q.T)
		enthalpy += p.Mole * h
		if p.State.Phase == gibbs.Liquid {
			for i, c := range p.State.C {
				pool[i] += p.Mole * c
			}
			s.MeltMole += p.Mole
			continue
		}
		s.Solids = append(s.Solids, Amount{State: p.State, Mole: p.Mole, Mass: p.Mole * w.weigh(p.State.C) / w.total})
	}
	if s.MeltMole > 0 {
		s.MeltMass = w.weigh(pool) / w.total
		if x, err := ternary.Normalize(pool); err == nil {
			s.Liquid = x
		}
	} else {
		for _, p := range q.Parts { // a last drop
			if p.State.Phase == gibbs.Liquid {
				s.Liquid = ternary.Composition(p.State.C)
			}
		}
	}
	s.Affinity = w.affinities(q.Mu, q.T)
	s.Crystallising, s.Instant = w.growing(q)
	s.Heat = w.startHeat(enthalpy, q)
	w.path.Steps = append(w.path.Steps, s)
}

// startHeat is the heat released since the first row, J/g: the fall of the
// enthalpy counted from the pure liquid components at the same temperature.
func (w *walk) startHeat(enthalpy float64, q *tangent.Equilibrium) float64 {
	var x [3]float64 = w.bulk
	_, _, h0 := w.sys.Liquid.Gibbs(x, w.path.LiquidT)
	return (h0 - enthalpy) / w.total
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
	var idx []int
	var states []gibbs.State
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
		d := s.MeltMole*s.Liquid[i] - w.bulk[i]
		for _, a := range s.Solids {
			d += a.Mole * a.State.C[i]
		}
		worst = math.Max(worst, math.Abs(d))
	}
	return worst
}
