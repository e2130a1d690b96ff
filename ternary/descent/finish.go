package descent

import (
	"strings"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// recordMelt appends a row for a fractionating liquid.
func (w *walk) recordMelt(m *melt, a *active, st *stack, name string) {
	var f flow
	w.liquidAt(m, &f)
	s := Step{T: m.T, Event: name, Liquid: f.x, Heat: m.q / w.total, MeltMass: f.mass / w.total}
	s.MeltMole = m.n[0] + m.n[1] + m.n[2]
	s.Solids = w.removedSolids(st)
	s.Affinity = w.affinities(f.pot.Mu, m.T)
	for p := range w.sys.Solids {
		for j := 0; j < a.count; j++ {
			if a.phase[j] == p {
				s.Crystallising = append(s.Crystallising, p)
				s.Instant = append(s.Instant, gibbs.State{Phase: p, Y: a.y[j], C: w.sys.Solids[p].Contents(a.y[j])})
			}
		}
	}
	w.path.Steps = append(w.path.Steps, s)
}

// removedSolids lists the solids removed so far with their mean composition.
func (w *walk) removedSolids(st *stack) []Amount {
	var out []Amount
	for p, e := range st.total {
		n := e[0] + e[1] + e[2]
		if n <= 0 {
			continue
		}
		var y [3]float64
		for k := range y {
			y[k] = e[k] / n
		}
		c := w.sys.Solids[p].Contents(y)
		out = append(out, Amount{State: gibbs.State{Phase: p, Y: y, C: c}, Mole: n, Mass: n * w.weigh(c) / w.total})
	}
	return out
}

// finishStill crystallises the rest of a liquid that no longer changes.
func (w *walk) finishStill(m *melt, a *active, f *flow, st *stack) {
	left := f.mass
	if left/w.total > 1e-9 {
		w.recordMelt(m, a, st, "rest crystallises without change")
	}
	names := make([]string, 0, 3)
	for j := 0; j < a.count; j++ {
		names = append(names, w.symbol(a.phase[j]))
		n := f.r[j] * left
		m.q += n * w.latent(m, f, j)
		for k := range f.st[j].Y {
			st.total[a.phase[j]][k] += n * f.st[j].Y[k]
		}
	}
	w.finalRow(m, a, st, "L out")
	w.end(m.T, "the last liquid crystallises without change as "+strings.Join(names, " + "))
}

// finalRow records the state without liquid; its Liquid is the last there was.
func (w *walk) finalRow(m *melt, a *active, st *stack, name string) {
	w.recordMelt(m, a, st, name)
	s := &w.path.Steps[len(w.path.Steps)-1]
	s.MeltMole, s.MeltMass = 0, 0
	s.Heat = m.q / w.total
}

// finishAtPoint crystallises the rest of a liquid at a point from which no
// curve leads down: a eutectic, or the composition of a solid itself.
func (w *walk) finishAtPoint(m *melt, saturated []gibbs.State, st *stack) error {
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
	v, dependent := w.nullReaction(parts)
	if !dependent || v[0] >= 0 {
		w.recordMelt(m, &a, st, "")
		w.end(m.T, "no solid can form on further cooling: the model ends here")
		return nil
	}
	w.recordMelt(m, &a, st, w.stageName(saturated, &a, len(w.path.Steps))+", "+w.describe(parts, v)+" begins")
	sum := m.n[0] + m.n[1] + m.n[2]
	for j := range saturated {
		n := sum * v[j+1] / -v[0]
		d := w.sys.Solids[saturated[j].Phase].DriveFrom(&f.pot.Mu, m.T, saturated[j].Y)
		f.st[0] = d
		m.q += n * w.latent(m, &f, 0)
		for k := range saturated[j].Y {
			st.total[saturated[j].Phase][k] += n * saturated[j].Y[k]
		}
	}
	w.finalRow(m, &a, st, "L out")
	w.end(m.T, "the last liquid is used up in "+w.describe(parts, v))
	return nil
}
