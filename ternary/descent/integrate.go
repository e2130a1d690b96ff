package descent

import "math"

// The pair of formulas of orders 5 and 4 of Dormand & Prince 1980 (J. Comput.
// Appl. Math. 6, 19–26).
var (
	dpA = [7][6]float64{
		{},
		{1.0 / 5},
		{3.0 / 40, 9.0 / 40},
		{44.0 / 45, -56.0 / 15, 32.0 / 9},
		{19372.0 / 6561, -25360.0 / 2187, 64448.0 / 6561, -212.0 / 729},
		{9017.0 / 3168, -355.0 / 33, 46732.0 / 5247, 49.0 / 176, -5103.0 / 18656},
		{35.0 / 384, 0, 500.0 / 1113, 125.0 / 192, -2187.0 / 6784, 11.0 / 84},
	}
	dpE = [7]float64{71.0 / 57600, 0, -71.0 / 16695, 71.0 / 1920, -17253.0 / 339200, 22.0 / 525, -1.0 / 40}
)

// axpy adds s·d to m.
func (m *melt) axpy(s float64, d *melt) {
	for i := range m.n {
		m.n[i] += s * d.n[i]
		for k := range m.removed {
			m.removed[k][i] += s * d.removed[k][i]
		}
	}
	m.T += s * d.T
	m.q += s * d.q
}

// advance makes one step of length h in u from m, whose flow is f0, and brings
// the result back onto its curve. It returns the new melt, the active solids
// with their fractions there, and the estimated error relative to the liquid.
func (w *walk) advance(m *melt, a *active, f0 *flow, h float64) (melt, active, float64, bool) {
	var k [7]melt
	k[0] = f0.d
	b := *a
	var f flow
	var next melt
	for s := 1; s < 7; s++ {
		next = *m
		for j := 0; j < s; j++ {
			if c := dpA[s][j]; c != 0 {
				next.axpy(h*c, &k[j])
			}
		}
		if !positive(&next) || !w.flowAt(&next, &b, &f) {
			return next, b, math.Inf(1), false
		}
		for j := 0; j < b.count; j++ {
			b.y[j] = f.st[j].Y
		}
		k[s] = f.d
	}
	var e melt
	for s := range dpE {
		e.axpy(h*dpE[s], &k[s])
	}
	sum := next.n[0] + next.n[1] + next.n[2]
	size := math.Abs(e.T) / next.T
	for i := range e.n {
		size = math.Max(size, math.Abs(e.n[i])/sum)
	}
	ok := w.restore(&next, &b)
	return next, b, size, ok
}

func positive(m *melt) bool {
	return m.n[0] >= 0 && m.n[1] >= 0 && m.n[2] >= 0 && m.T > 0 && m.n[0]+m.n[1]+m.n[2] > 0
}

// restore brings the melt back onto the surface or curve of its active solids,
// by exchanging small amounts of them at constant mass of liquid and by T.
func (w *walk) restore(m *melt, a *active) bool {
	var f flow
	for round := 0; round < 8; round++ {
		w.liquidAt(m, &f)
		off := 0.0
		for j := 0; j < a.count; j++ {
			f.st[j] = w.sys.Solids[a.phase[j]].DriveFrom(&f.pot.Mu, m.T, a.y[j])
			a.y[j] = f.st[j].Y
			off = math.Max(off, math.Abs(f.st[j].D))
		}
		if off <= 1e-13*8.3*m.T {
			return true
		}
		r, dT, ok := w.rates(m, a, &f, true)
		if !ok {
			return false
		}
		for j := 0; j < a.count; j++ {
			w.remove(m, &f, j, r[j]*f.mass)
		}
		m.T += dT
		if !positive(m) {
			return false
		}
	}
	return true
}
