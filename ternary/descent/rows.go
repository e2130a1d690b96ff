package descent

import (
	"math"

	"thalweg/ternary/gibbs"
)

const (
	// rowTol is the melt fraction by which a row may miss its round value.
	rowTol = 1e-12
	// rowRounds bounds the search for it: the cubic's estimate and one or two
	// corrections, more only where the melt fraction bends sharply.
	rowRounds = 30
)

// rows records the states due between h and next, at even spacing of the melt's
// mass. Rows are counted, so that one that falls on the end of a step is
// neither lost nor given twice.
func (w *walk) rows(h, next holding) {
	f0, f1 := w.meltMass(h.q), w.meltMass(next.q)
	n := float64(w.steps)
	slope0, slope1 := w.meltSlope(&h), w.meltSlope(&next)
	for w.row > 0 && w.row < w.steps {
		f := float64(w.row) / n
		if w.dir < 0 && f < f1 || w.dir > 0 && f > f1 {
			return
		}
		if w.dir < 0 && f < f0 || w.dir > 0 && f > f0 {
			dT := next.q.T - h.q.T
			u := bowed(f0-f, f1-f, slope0*dT, slope1*dT)
			if m, ok := w.meltAt(&h, &next, f, u); ok {
				w.record(m.q, &m.lost, "")
			}
		}
		w.row += int(w.dir)
	}
}

// skipRows passes over the rows within a jump to melt fraction f.
func (w *walk) skipRows(f float64) {
	for w.row > 0 && w.row < w.steps {
		at := float64(w.row) / float64(w.steps)
		if w.dir < 0 && at < f || w.dir > 0 && at > f {
			return
		}
		w.row += int(w.dir)
	}
}

// meltSlope is d(melt mass fraction)/dT of the closed system.
func (w *walk) meltSlope(h *holding) float64 {
	s := 0.0
	for i, p := range h.q.Parts {
		if p.State.Phase != gibbs.Liquid || i >= len(h.dn) {
			continue
		}
		s += h.dn[i] * w.weigh(p.State.C)
		curve, dc, ok := w.sys.Liquid.Curvature(p.State.Y, h.q.T)
		if !ok {
			continue
		}
		for k := range dc {
			for l := range dc {
				if curve[k][l] != 0 {
					dc[k] += curve[k][l] * h.dmu[l]
				}
			}
		}
		s += p.Mole * w.weigh(dc)
	}
	return s / w.total
}

// bowed is the root in 0..1 of the cubic with values a, b of opposite sign and
// slopes ma, mb at its ends.
func bowed(a, b, ma, mb float64) float64 {
	lo, hi := 0.0, 1.0
	u := a / (a - b)
	for round := 0; round < 40; round++ {
		v := hermite(a, b, ma, mb, u)
		if v*a > 0 {
			lo = u
		} else {
			hi = u
		}
		d := (hermite(a, b, ma, mb, u+1e-6) - v) / 1e-6
		next := u - v/d
		if !(next > lo && next < hi) {
			next = (lo + hi) / 2
		}
		if math.Abs(next-u) < 1e-12 {
			return next
		}
		u = next
	}
	return u
}

// hermite is the cubic with values a, b and slopes ma, mb at 0 and 1.
func hermite(a, b, ma, mb, u float64) float64 {
	v := 1 - u
	return v*v*((1+2*u)*a+u*ma) + u*u*((1+2*v)*b-v*mb)
}

// meltAt finds the state with melt fraction f between two states, from the
// share u of the way between them: secant steps kept within the bracket.
func (w *walk) meltAt(h, next *holding, f, u float64) (m holding, ok bool) {
	a, b := h.q.T, next.q.T
	fa, fb := w.meltMass(h.q)-f, w.meltMass(next.q)-f
	slope := w.meltSlope(next)
	if u < 0.5 {
		slope = w.meltSlope(h)
	}
	T := a + u*(b-a)
	lastT, lastF := math.NaN(), math.NaN()
	for round := 0; round < rowRounds; round++ {
		q, err := w.between(h, next, T)
		if err != nil {
			return m, ok
		}
		m, ok = q, true
		fm := w.meltMass(m.q) - f
		if math.Abs(fm) <= rowTol || math.Abs(b-a) <= 1e-13*a {
			break
		}
		if fm*fa > 0 {
			a, fa = T, fm
		} else {
			b, fb = T, fm
		}
		if !math.IsNaN(lastT) && fm != lastF {
			slope = (fm - lastF) / (T - lastT)
		}
		lastT, lastF = T, fm
		T -= fm / slope
		if !(T > math.Min(a, b) && T < math.Max(a, b)) {
			T = (a*fb - b*fa) / (fb - fa)
			if round > 6 || !(T > math.Min(a, b) && T < math.Max(a, b)) {
				T = (a + b) / 2
			}
		}
	}
	return m, ok
}

// between is the state at T between two states of one assemblage, started from
// the cubics through both.
func (w *walk) between(h, next *holding, T float64) (holding, error) {
	if w.keep < 1 {
		return w.drainTo(*h, T)
	}
	dT := next.q.T - h.q.T
	u := (T - h.q.T) / dT
	guess := holding{q: cloned(h.q)}
	guess.q.T = T
	guess.dn = make([]float64, len(h.dn))
	for i := range guess.q.Mu {
		if !math.IsInf(guess.q.Mu[i], 0) {
			guess.q.Mu[i] = hermite(h.q.Mu[i], next.q.Mu[i], h.dmu[i]*dT, next.dmu[i]*dT, u)
		}
	}
	for i := range guess.q.Parts {
		p, a, b := &guess.q.Parts[i], &h.q.Parts[i], &next.q.Parts[i]
		p.Mole = hermite(a.Mole, b.Mole, h.dn[i]*dT, next.dn[i]*dT, u)
		sum := 0.0
		for k := range p.State.Y {
			p.State.Y[k] = a.State.Y[k] + u*(b.State.Y[k]-a.State.Y[k])
			sum += p.State.Y[k]
		}
		for k := range p.State.Y {
			p.State.Y[k] /= sum
		}
	}
	q, err := w.hold(&guess, h.q.Bulk, T)
	return holding{q: q}, err
}
