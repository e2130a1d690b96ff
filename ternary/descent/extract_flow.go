package descent

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// extractFlow melts an assemblage of solid solutions: what is left loses liquid
// of the composition that is in equilibrium with it,
//
//	db/dv = −m·c_L/W_L,   v = −ln m, m the mass left,
//
// and T and c_L follow from b at every stage.
func (w *walk) extractFlow(r *residue, name string) (gone string, err error) {
	w.recordResidue(r, name)
	h := 0.02
	for n := 0; ; n++ {
		mass := w.weigh(r.q.Bulk)
		due := math.Inf(1)
		if w.row < w.steps {
			due = math.Log(mass / (w.total * (1 - float64(w.row)/float64(w.steps))))
		}
		step, hit := math.Min(h, extractMax), false
		if due <= step*(1+1e-9) {
			step, hit = math.Max(due, 0), true
		}
		if h < extractMin || n > extractSteps {
			return "", errCoarse
		}
		next, size, ok := w.extractStep(r, step)
		if !ok || size > extractTol {
			h = step / 3
			continue
		}
		if part := w.spent(next.q); part >= 0 || w.newcomer(next.q) != nil {
			at, name, ok := w.extractEvent(r, step)
			if !ok {
				if gone := w.crumble(r, part); gone != "" {
					return gone, nil
				}
				h = step / 3
				continue
			}
			*r = at
			w.skipRows(w.weigh(r.pool) / w.total)
			return name, nil
		}
		*r = next
		if hit {
			w.recordResidue(r, "")
			w.row++
			h = math.Max(h, grown(step, size, extractTol))
		} else {
			h = grown(step, size, extractTol)
		}
		r.exhaust()
		if w.steadyResidue(r) {
			w.meltRest(r)
			return "", nil
		}
	}
}

// crumble gives the last of a solid solution, where it is that little, to the
// melt and names it. On the way to nothing its composition changes as a power of
// its amount, so that the event of its end cannot always be solved for.
func (w *walk) crumble(r *residue, part int) string {
	if part < 0 || r.q.Parts[part].Mole > crumb {
		return ""
	}
	q := cloned(r.q)
	out := q.Parts[part]
	for i, c := range out.State.C {
		q.Bulk[i] -= out.Mole * c
	}
	q.Parts = append(q.Parts[:part], q.Parts[part+1:]...)
	r.q = q
	r.drawOff(&out.State, out.Mole, w.enthalpy(&out.State, q.T))
	w.skipRows(w.weigh(r.pool) / w.total)
	return w.symbol(out.State.Phase) + " out"
}

// crumb is an amount, in moles per mole of bulk, that may be given up as a whole.
const crumb = 1e-9

// exhaust gives the last trace of a component to the melt: what is left of it
// falls as a power, at times enormous, of what is left of the whole.
func (r *residue) exhaust() {
	for i, b := range r.q.Bulk {
		if b > 0 && b < exhausted {
			r.q = cloned(r.q)
			r.q.Bulk[i], r.q.Mu[i] = 0, math.Inf(-1)
			r.pool[i] += b
		}
	}
}

// extractStep makes one step of length h.
func (w *walk) extractStep(r *residue, h float64) (next residue, size float64, ok bool) {
	last := r.q
	rate := func(m, d *melt) bool {
		b := ternary.Composition(m.n)
		if b[0]+b[1]+b[2] <= 0 {
			return false
		}
		q, err := tangent.Event(w.sys, b, last.T, last.Mu, last.Parts, len(last.Parts)-1)
		if err != nil {
			return false
		}
		last = q
		s := &q.Parts[len(q.Parts)-1].State
		n := w.weigh(b) / w.weigh(s.C)
		*d = melt{}
		for i, c := range s.C {
			d.n[i] = -n * c
			d.removed[0][i] = n * c
		}
		d.q = n * w.enthalpy(s, q.T)
		return true
	}
	var a arc
	a.h, a.from = h, melt{n: r.q.Bulk}
	var e melt
	if !rate(&a.from, &a.k[0]) || !a.dopri(rate, &e) {
		return next, 0, false
	}
	mass := w.weigh(a.to.n)
	for i := range e.n {
		size = math.Max(size, math.Abs(e.n[i])*w.mass[i]/mass)
	}
	next = residue{q: last, pool: r.pool, h: r.h + a.to.q}
	for i, c := range a.to.removed[0] {
		next.pool[i] += c
	}
	return next, size, true
}

// spent is the solid whose amount has become negative, or −1.
func (w *walk) spent(q *tangent.Equilibrium) int {
	for i, p := range q.Parts[:len(q.Parts)-1] {
		if p.Mole < 0 {
			return i
		}
	}
	return -1
}

// newcomer is a phase that has come to lie above the plane, or nil.
func (w *walk) newcomer(q *tangent.Equilibrium) *gibbs.State {
	if s := tangent.Above(w.sys, q.Mu, q.T, q.Parts, aboveTol); len(s) > 0 {
		return &s[0]
	}
	return nil
}

// extractEvent finds, by bisection and false position in the step's length,
// where a solid is used up or a new one appears.
func (w *walk) extractEvent(r *residue, step float64) (at residue, gone string, ok bool) {
	value := func(q *tangent.Equilibrium) float64 {
		v := math.Inf(-1)
		for _, p := range q.Parts[:len(q.Parts)-1] {
			v = math.Max(v, -p.Mole)
		}
		if s := w.newcomer(q); s != nil {
			v = math.Max(v, w.phase(s.Phase).DriveFrom(&q.Mu, q.T, s.Y).D/(ternary.R*q.T))
		}
		return v
	}
	lo, hi := 0.0, step
	flo, fhi := math.Min(value(r.q), -1e-300), math.Inf(1)
	h, side := step, 0
	for round := 0; round < 100; round++ {
		next, _, good := w.extractStep(r, h)
		if !good {
			return at, "", false
		}
		if v := value(next.q); v >= 0 {
			hi, fhi, at, ok = h, v, next, true
			if side == 1 {
				flo /= 2
			}
			side = 1
			if v < 1e-14 {
				break
			}
		} else {
			lo, flo = h, v
			if side == 2 {
				fhi /= 2
			}
			side = 2
		}
		if hi-lo < 1e-15 {
			break
		}
		h = hi - fhi*(hi-lo)/(fhi-flo)
		if !(h > lo && h < hi) || round%4 == 3 {
			h = (lo + hi) / 2
		}
	}
	if !ok {
		return at, "", false
	}
	at.q = cloned(at.q)
	last := len(at.q.Parts) - 1
	parts := append(make([]tangent.Part, 0, 5), at.q.Parts[:last]...)
	if s := w.newcomer(at.q); s != nil {
		gone = w.symbol(s.Phase) + " in"
		parts = append(parts, tangent.Part{State: *s})
	}
	parts = append(parts, at.q.Parts[len(at.q.Parts)-1])
	kept := at.q.Parts[:0]
	for i, p := range parts {
		if i < len(at.q.Parts)-1 && p.Mole < leftTol {
			if gone != "" {
				gone += ", "
			}
			gone += w.symbol(p.State.Phase) + " out"
			continue
		}
		kept = append(kept, p)
	}
	at.q.Parts = kept
	return at, gone, gone != ""
}

// steadyResidue reports that what is left will melt without changing.
func (w *walk) steadyResidue(r *residue) bool {
	l := &r.q.Parts[len(r.q.Parts)-1].State
	mass, off := w.weigh(r.q.Bulk), 0.0
	for i := range l.C {
		off = math.Max(off, math.Abs(r.q.Bulk[i]-mass/w.weigh(l.C)*l.C[i]))
	}
	return off < stillTol
}

// meltRest melts what is left at constant composition.
func (w *walk) meltRest(r *residue) {
	l := &r.q.Parts[len(r.q.Parts)-1].State
	n := w.weigh(r.q.Bulk) / w.weigh(l.C)
	gone := ""
	for _, p := range r.q.Parts[:len(r.q.Parts)-1] {
		if gone != "" {
			gone += ", "
		}
		gone += w.symbol(p.State.Phase) + " out"
	}
	r.drawOff(l, n, w.enthalpy(l, r.q.T))
	w.endExtract(r, gone)
}
