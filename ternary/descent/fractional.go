package descent

import (
	"errors"
	"math"

	"thalweg/ternary/gibbs"
)

const (
	// fracTol is the error aimed at per step of the integration, relative to the
	// liquid's amount: far below what a figure or a table shows. The masses
	// balance to rounding whatever it is (see melt).
	fracTol = 1e-8
	// fracFirst and fracMax are the first and the longest step in
	// u = −ln(mass of liquid), fracLast the longest once the rows are done.
	fracFirst = 0.05
	fracMax   = 0.5
	fracLast  = 2.0
	// fracMin is the shortest.
	fracMin = 1e-15
	// fracShy is the step below which no solid is suspected to come and go within.
	fracShy = 1e-3
	// stillTol: where (change of the liquid's composition per unit u) × (mass of
	// liquid left) is below this, the rest crystallises without change and the
	// masses balance to better than 1e-12.
	stillTol = 2e-14
	// exhausted is the amount, in moles per mole of bulk, at which a component
	// that a solid solution takes up counts as used up in the liquid.
	exhausted = 1e-13
	// restoreTol is the driving force, in RT, to which solids are held saturated.
	restoreTol = 1e-13
)

// fractional follows the path with every solid removed as it forms.
func (w *walk) fractional(primary gibbs.State) error {
	m := melt{n: w.bulk, T: w.path.LiquidT}
	saturated := []gibbs.State{primary}
	for stage := 0; stage < maxStages; stage++ {
		if k := liquidAmong(saturated); k >= 0 {
			w.recordMelt(&m, &active{}, nil, "a second liquid")
			w.end(m.T, "the liquid separates into two, which are not followed further apart from each other")
			return nil
		}
		a, ok := w.choose(&m, saturated)
		if !ok {
			return w.finishAtPoint(&m, saturated)
		}
		w.recordMelt(&m, &a, nil, w.stageName(saturated, &a, stage))
		next, done, err := w.stage(&m, &a)
		if err != nil {
			return w.lost(m.T, err)
		}
		if done {
			return nil
		}
		saturated = next
	}
	return w.lost(m.T, errors.New("the path does not come to an end"))
}

func liquidAmong(states []gibbs.State) int {
	for k, s := range states {
		if s.Phase == gibbs.Liquid {
			return k
		}
	}
	return -1
}

// stage integrates one set of forming solids to its end: another solid comes in,
// one stops forming, or the liquid no longer changes.
func (w *walk) stage(m *melt, a *active) (saturated []gibbs.State, done bool, err error) {
	h, bound := fracFirst, math.Inf(1)
	var f, g flow
	var s arc
	if !w.flowAt(m, a, &f) {
		return nil, false, errors.New("the solids that form do not determine the liquid's course")
	}
	for {
		if w.still(&f) {
			w.finishStill(m, a, &f)
			return nil, true, nil
		}
		longest := fracMax
		if w.row < 1 {
			longest = fracLast
		}
		h = math.Min(h, math.Min(longest, 0.8*bound))
		if h < fracMin {
			return nil, false, errCoarse
		}
		next, b, size, ok := w.advance(m, a, &f, h, &s)
		if !ok || size > fracTol {
			if ok {
				h = math.Min(h/2, grown(h, size, fracTol))
			} else {
				bound = h // a trace that falls fast makes longer steps unstable
				h *= 0.7
			}
			continue
		}
		if !w.flowAt(&next, &b, &g) {
			h /= 4
			continue
		}
		if over, _ := w.excess(&next, &b, &g); over > 0 {
			at, nb, sat, ok := w.stageEvent(m, a, &f, h)
			if !ok {
				return nil, false, errors.New("an event could not be located")
			}
			w.stageRows(m, &b, &s, w.weigh(at.n))
			w.fold(m, &at, &nb)
			*a = nb
			return sat, false, nil
		}
		if h > fracShy && w.shyMelt(m, &next, a, &f, &g, h) {
			h /= 2
			continue
		}
		if next.T < w.low {
			w.recordMelt(m, a, nil, "")
			w.end(m.T, w.atLimit())
			return nil, true, nil
		}
		w.stageRows(m, &b, &s, w.weigh(next.n))
		w.fold(m, &next, &b)
		*a, f = b, g
		if w.exhaust(m, a, &f) {
			return w.activeStates(a), false, nil
		}
		h = grown(h, size, fracTol)
	}
}

// stageRows records the rows due between m and the state with the given mass of
// liquid, from the interpolant of the step, brought back onto the curve.
func (w *walk) stageRows(m *melt, a *active, s *arc, until float64) {
	w0 := w.weigh(m.n)
	for ; w.row > 0; w.row-- {
		due := float64(w.row) / float64(w.steps) * w.total
		if due < until*(1+1e-12) {
			return
		}
		if due > w0*(1-1e-12) {
			continue
		}
		r := s.at(math.Log(w0/due) / s.h)
		b := *a
		if w.restore(&r, &b, due) {
			w.recordMelt(&r, &b, &r, "")
		}
	}
}

// advance makes one step of length h in u from m, whose flow is f0, and brings
// the result back onto its curve. It returns the new melt, the active solids
// with their fractions there, and the estimated error relative to the liquid.
func (w *walk) advance(m *melt, a *active, f0 *flow, h float64, s *arc) (melt, active, float64, bool) {
	b := *a
	var f flow
	s.h, s.from, s.bent = h, *m, false
	s.k[0] = f0.d
	var e melt
	ok := s.dopri(func(m, rate *melt) bool {
		if !positive(m) || !w.flowAt(m, &b, &f) {
			return false
		}
		for j := 0; j < b.count; j++ {
			b.y[j] = f.st[j].Y
		}
		*rate = f.d
		return true
	}, &e)
	if !ok {
		return s.to, b, math.Inf(1), false
	}
	next := s.to
	sum := next.n[0] + next.n[1] + next.n[2]
	size := math.Abs(e.T) / next.T
	for i := range e.n {
		size = math.Max(size, math.Abs(e.n[i])/sum)
	}
	ok = w.restore(&next, &b, w.weigh(m.n)*math.Exp(-h))
	return next, b, size, ok
}

func positive(m *melt) bool {
	return m.n[0] >= 0 && m.n[1] >= 0 && m.n[2] >= 0 && m.T > 0 && m.n[0]+m.n[1]+m.n[2] > 0
}

// restore brings the melt back onto the surface or curve of its active solids
// and to the given mass of liquid, by removing small amounts of them and by T.
func (w *walk) restore(m *melt, a *active, mass float64) bool {
	var f flow
	for round := 0; round < 8; round++ {
		w.liquidAt(m, &f)
		off := 0.0
		for j := 0; j < a.count; j++ {
			f.st[j] = w.sys.Solids[a.phase[j]].DriveFrom(&f.pot.Mu, m.T, a.y[j])
			a.y[j] = f.st[j].Y
			off = math.Max(off, math.Abs(f.st[j].D))
		}
		lost := (f.mass - mass) / f.mass
		if off <= restoreTol*8.3*m.T && math.Abs(lost) <= 1e-14 {
			return true
		}
		r, dT, ok := w.rates(m, a, &f, goal{restore: true, lost: lost})
		if !ok {
			return false
		}
		T := m.T
		for j := 0; j < a.count; j++ {
			w.remove(m, T, &f, j, r[j]*f.mass)
		}
		m.T += dT
		if !positive(m) {
			return false
		}
	}
	return true
}

// exhaust takes the last trace of a component out of the liquid, with the solid
// solution that drew it down: its fraction falls as F^(K−1), with K beyond all
// bounds at times, and would stop the integration. Solids that cannot do without
// the component keep it.
func (w *walk) exhaust(m *melt, a *active, f *flow) (done bool) {
	for i := range m.n {
		if !(m.n[i] > 0 && m.n[i] < exhausted && f.d.n[i] < 0) {
			continue
		}
		solid, member := -1, -1
		spared := true
		for j := 0; j < a.count; j++ {
			without := false
			for k, e := range w.sys.Solids[a.phase[j]].Members {
				switch {
				case e.C[i] == 0:
					without = without || a.y[j][k] > 0
				case e.C[i] > 0 && (solid < 0 || a.y[j][k]*e.C[i] > a.y[solid][member]*w.sys.Solids[a.phase[solid]].Members[member].C[i]):
					solid, member = j, k
				}
			}
			spared = spared && without
		}
		if solid < 0 || !spared {
			continue
		}
		e := &w.sys.Solids[a.phase[solid]].Members[member]
		n := m.n[i] / e.C[i]
		for l, c := range e.C {
			m.n[l] -= n * c
		}
		m.n[i] = 0
		w.gone.total[a.phase[solid]][member] += n
		for j := 0; j < a.count; j++ {
			for k, e := range w.sys.Solids[a.phase[j]].Members {
				if e.C[i] != 0 {
					a.y[j][k] = 0
				}
			}
			sum := a.y[j][0] + a.y[j][1] + a.y[j][2]
			for k := range a.y[j] {
				a.y[j][k] /= sum
			}
		}
		done = true
	}
	return done
}

// fold replaces m by next and books what was removed.
func (w *walk) fold(m, next *melt, a *active) {
	for j := 0; j < a.count; j++ {
		for k := range next.removed[j] {
			w.gone.total[a.phase[j]][k] += next.removed[j][k]
		}
	}
	w.gone.h += next.q
	*m = *next
	m.removed, m.q = [3][3]float64{}, 0
}

// still reports that what is left will crystallise without changing.
func (w *walk) still(f *flow) bool {
	d := math.Max(math.Abs(f.dx[0]), math.Max(math.Abs(f.dx[1]), math.Abs(f.dx[2])))
	return d*f.mass/w.total < stillTol
}
