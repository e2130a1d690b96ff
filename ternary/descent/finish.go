package descent

import (
	"strings"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// recordMelt appends a row for a fractionating liquid. part is a melt whose
// removed solids are not booked yet, or nil.
func (w *walk) recordMelt(m *melt, a *active, part *melt, name string) {
	var f flow
	w.liquidAt(m, &f)
	s := Step{T: m.T, Event: name, Liquid: f.x, Pool: f.x, MeltMass: f.mass / w.total, MeltMole: f.sum}
	_, _, h := w.sys.Liquid.Gibbs(f.x, m.T)
	h = f.sum*h + w.gone.h
	if part != nil {
		h += part.q
	}
	s.Heat = (w.h0 - h) / w.total
	s.Solids = w.removedSolids(a, part)
	s.Affinity = w.affinities(f.pot.Mu, m.T)
	s.Crystallising = make([]int, 0, a.count)
	s.Instant = make([]gibbs.State, 0, a.count)
	for p := range w.sys.Solids {
		for j := 0; j < a.count; j++ {
			if a.phase[j] == p {
				s.Crystallising = append(s.Crystallising, p)
				s.Instant = append(s.Instant, w.activeState(a, j))
			}
		}
	}
	w.path.Steps = append(w.path.Steps, s)
}

// removedSolids lists the solids removed so far with their mean composition.
func (w *walk) removedSolids(a *active, part *melt) []Amount {
	out := make([]Amount, 0, len(w.gone.total))
	for p, e := range w.gone.total {
		if part != nil {
			for j := 0; j < a.count; j++ {
				if a.phase[j] == p {
					for k := range e {
						e[k] += part.removed[j][k]
					}
				}
			}
		}
		if e[0]+e[1]+e[2] > 0 {
			out = append(out, w.mean(p, e))
		}
	}
	return out
}

// stageName names what happens as a stage begins.
func (w *walk) stageName(saturated []gibbs.State, a *active, stage int) string {
	var last Step
	if n := len(w.path.Steps); n > 0 {
		last = w.path.Steps[n-1]
	}
	var names []string
	for j := 0; j < a.count; j++ {
		before := times(last.Crystallising, a.phase[j])
		now := times(a.phase[:a.count], a.phase[j])
		first := j == 0 || !contains(a.phase[:j], a.phase[j])
		if stage == 0 || first && now > before {
			names = append(names, w.symbol(a.phase[j])+" in")
		}
	}
	for i, p := range last.Crystallising {
		if !contains(last.Crystallising[:i], p) && times(a.phase[:a.count], p) < times(last.Crystallising, p) {
			names = append(names, w.symbol(p)+" stops")
		}
	}
	if len(names) == 0 {
		for _, s := range saturated {
			if !a.forms(s.Phase) {
				names = append(names, w.symbol(s.Phase)+" touched")
			}
		}
	}
	return strings.Join(names, ", ")
}

func times(list []int, v int) (n int) {
	for _, x := range list {
		if x == v {
			n++
		}
	}
	return n
}

// notable is the melt fraction below which a rest needs no row of its own.
const notable = 1e-9

// finishStill crystallises the rest of a liquid that no longer changes.
func (w *walk) finishStill(m *melt, a *active, f *flow) {
	if f.mass/w.total > notable {
		const name = "the rest crystallises without change"
		if s := &w.path.Steps[len(w.path.Steps)-1]; s.Event != "" && s.T == m.T && s.MeltMass == f.mass/w.total {
			s.Event += ", " + name
		} else {
			w.recordMelt(m, a, nil, name)
		}
	}
	names := make([]string, 0, 3)
	for j := 0; j < a.count; j++ {
		names = append(names, w.symbol(a.phase[j]))
		s := gibbs.State{Phase: a.phase[j], Y: f.st[j].Y, C: f.st[j].C}
		w.gone.add(&s, f.r[j]*f.mass, solidEnthalpy(f, &f.st[j], m.T))
	}
	w.finalRow(m, a)
	w.end(m.T, "the last liquid crystallises without change as "+strings.Join(names, " + "))
}

// finalRow records the state without liquid; its Liquid is the last there was.
func (w *walk) finalRow(m *melt, a *active) {
	w.recordMelt(m, a, nil, "L out")
	s := &w.path.Steps[len(w.path.Steps)-1]
	s.MeltMole, s.MeltMass = 0, 0
	s.Heat = (w.h0 - w.gone.h) / w.total
}

// finishAtPoint crystallises the rest of a liquid at a point from which no
// curve leads down: a eutectic, or the composition of a solid itself.
func (w *walk) finishAtPoint(m *melt, saturated []gibbs.State) error {
	var f flow
	w.liquidAt(m, &f)
	parts := []tangent.Part{{State: gibbs.State{Phase: gibbs.Liquid, Y: f.x, C: f.x}, Mole: 1}}
	a := active{}
	for _, s := range saturated {
		parts = append(parts, tangent.Part{State: s})
		if a.count < 3 {
			a.phase[a.count], a.y[a.count] = s.Phase, s.Y
			a.count++
		}
	}
	v, dependent := w.nullReaction(parts, m.T)
	name := w.stageName(saturated, &a, len(w.path.Steps))
	if !dependent || v[0] >= 0 {
		w.recordMelt(m, &a, nil, name)
		w.end(m.T, "no solid can form on further cooling: the model ends here")
		return nil
	}
	w.recordMelt(m, &a, nil, name+", "+w.describe(parts, v)+" begins")
	for j := range saturated {
		s := &saturated[j]
		w.gone.add(s, f.sum*v[j+1]/-v[0], w.enthalpy(s, m.T))
	}
	w.finalRow(m, &a)
	w.end(m.T, "the last liquid is used up in "+w.describe(parts, v))
	return nil
}
