package descent

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// fracOver is the driving force, in RT, at which an absent solid has come in.
const fracOver = 1e-11

// excess is how far a point lies beyond the nearest event: the largest driving
// force of a phase that does not form, or the largest negative rate. The phase
// concerned is returned with it. f is the flow at the point.
func (w *walk) excess(m *melt, a *active, f *flow) (float64, gibbs.State) {
	over, who := math.Inf(-1), gibbs.State{}
	for j := 0; j < a.count; j++ {
		if v := -f.r[j] * w.size(f.st[j].C); v > over {
			over, who = v, gibbs.State{Phase: a.phase[j], Y: f.st[j].Y, C: f.st[j].C}
		}
	}
	rt := ternary.R * m.T
	w.others(m, a, f, func(phase int, d *gibbs.Drive) {
		if v := d.D/rt - fracOver; v > over {
			over, who = v, gibbs.State{Phase: phase, Y: d.Y, C: d.C}
		}
	})
	return over, who
}

// others calls visit with the driving force of every phase that does not form,
// among them other compositions of a solid that does, and of the liquid.
func (w *walk) others(m *melt, a *active, f *flow, visit func(int, *gibbs.Drive)) {
	for i := gibbs.Liquid; i < len(w.sys.Solids); i++ {
		p := w.phase(i)
		self := i == gibbs.Liquid || a.forms(i)
		if !p.CanUnmix(m.T) {
			if !self {
				d := p.Drive(&f.pot.Mu, m.T)
				visit(i, &d)
			}
			continue
		}
		for _, d := range p.Maxima(&f.pot.Mu, m.T) {
			if i == gibbs.Liquid && alike(&f.x, &d.Y) || a.branch(i, &d.Y) >= 0 {
				continue
			}
			visit(i, &d)
		}
	}
}

// shyMelt reports that a solid that does not form may have come and gone within
// a step of length h between two melts.
func (w *walk) shyMelt(m, next *melt, a *active, f, g *flow, h float64) bool {
	for i, p := range w.sys.Solids {
		if a.forms(i) {
			continue
		}
		d, e := p.Drive(&f.pot.Mu, m.T), p.Drive(&g.pot.Mu, next.T)
		if math.IsInf(d.D, -1) || math.IsInf(e.D, -1) {
			continue
		}
		pd, pe := pullOf(f, &d), pullOf(g, &e)
		md := (along(&pd.g, &f.dx) + pd.h*f.d.T) * h
		me := (along(&pe.g, &g.dx) + pe.h*g.d.T) * h
		if hump(d.D, e.D, md, me) {
			return true
		}
	}
	return false
}

// stageEvent finds the point within a step at which the excess vanishes, and the
// phases saturated there, by false position in the step's length.
func (w *walk) stageEvent(m *melt, a *active, f *flow, step float64) (at melt, b active, saturated []gibbs.State, ok bool) {
	lo, hi := 0.0, step
	flo, _ := w.excess(m, a, f)
	if !(flo < 0) {
		flo = -1e-300
	}
	var g flow
	var s arc
	fhi := math.Inf(1)
	var who gibbs.State
	side := 0
	h := step
	for round := 0; round < 100; round++ {
		next, nb, _, good := w.advance(m, a, f, h, &s)
		if !good || !w.flowAt(&next, &nb, &g) {
			return at, b, nil, false
		}
		v, phase := w.excess(&next, &nb, &g)
		if v > 0 {
			hi, fhi, who = h, v, phase
			at, b = next, nb
			if side == 1 {
				flo /= 2
			}
			side = 1
		} else {
			lo, flo = h, v
			if side == 2 {
				fhi /= 2
			}
			side = 2
		}
		if v > 0 && v < fracOver/10 || hi-lo < 1e-14 {
			break
		}
		h = hi - fhi*(hi-lo)/(fhi-flo)
		if !(h > lo && h < hi) || round%4 == 3 {
			h = (lo + hi) / 2
		}
	}
	saturated = w.activeStates(&b)
	if who.Phase == gibbs.Liquid || b.branch(who.Phase, &who.Y) < 0 {
		saturated = append(saturated, who)
	}
	return at, b, saturated, true
}

func (w *walk) activeState(a *active, j int) gibbs.State {
	return gibbs.State{Phase: a.phase[j], Y: a.y[j], C: w.sys.Solids[a.phase[j]].Contents(a.y[j])}
}

func (w *walk) activeStates(a *active) []gibbs.State {
	out := make([]gibbs.State, 0, 4)
	for j := 0; j < a.count; j++ {
		out = append(out, w.activeState(a, j))
	}
	return out
}
