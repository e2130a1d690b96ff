package descent

import "math"

// The pair of formulas of orders 5 and 4 of Dormand & Prince 1980 (J. Comput.
// Appl. Math. 6, 19–26), with the interpolant of order 4 of Shampine as given by
// Hairer, Nørsett & Wanner 1993 (Solving Ordinary Differential Equations I,
// §II.6), from memory; the tests check the orders of all three.
var (
	dpC = [7]float64{0, 1.0 / 5, 3.0 / 10, 4.0 / 5, 8.0 / 9, 1, 1}
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
	dpD = [7]float64{-12715105075.0 / 11282082432, 0, 87487479700.0 / 32700410799, -10690763975.0 / 1880347072,
		701980252875.0 / 199316789632, -1453857185.0 / 822651844, 69997945.0 / 29380423}
)

// axpy adds s·d to m.
func (m *melt) axpy(s float64, d *melt) {
	for i := range m.n {
		m.n[i] += s * d.n[i]
	}
	for k := range m.removed {
		for i := range m.removed[k] {
			m.removed[k][i] += s * d.removed[k][i]
		}
	}
	m.T += s * d.T
	m.q += s * d.q
}

// arc is one step of the integration, kept so that points within it can be had.
type arc struct {
	h    float64
	from melt
	to   melt // by the formula of order 5, before it is brought back onto its curve
	k    [7]melt
	rest [3]melt // of the interpolant, once it is wanted
	bent bool
}

// dopri makes the step from a.from, whose rates are a.k[0], of length a.h. Rates
// are had from f, which reports failure for a state that has none. The estimated
// error is left in e.
func (a *arc) dopri(f func(m, rate *melt) bool, e *melt) bool {
	for s := 1; s < 7; s++ {
		a.to = a.from
		for j := 0; j < s; j++ {
			if c := dpA[s][j]; c != 0 {
				a.to.axpy(a.h*c, &a.k[j])
			}
		}
		if !f(&a.to, &a.k[s]) {
			return false
		}
	}
	*e = melt{}
	for s := range dpE {
		if dpE[s] != 0 {
			e.axpy(a.h*dpE[s], &a.k[s])
		}
	}
	return true
}

// at is the interpolant at the share u of the step. Being linear in the rates it
// keeps linear invariants to rounding.
func (a *arc) at(u float64) melt {
	if !a.bent {
		a.bend()
	}
	m := a.from
	v := 1 - u
	m.axpy(u, &a.rest[0])
	m.axpy(u*v*a.h, &a.k[0])
	m.axpy(-u*v, &a.rest[0])
	m.axpy(u*u*v, &a.rest[1])
	m.axpy(u*u*v*v, &a.rest[2])
	return m
}

func (a *arc) bend() {
	a.bent = true
	a.rest = [3]melt{a.to}
	a.rest[0].axpy(-1, &a.from)
	// rest[1] = rest[0] − h·k7 − (h·k1 − rest[0])
	a.rest[1].axpy(2, &a.rest[0])
	a.rest[1].axpy(-a.h, &a.k[6])
	a.rest[1].axpy(-a.h, &a.k[0])
	for s := range dpD {
		if dpD[s] != 0 {
			a.rest[2].axpy(a.h*dpD[s], &a.k[s])
		}
	}
}

// grown is the length of step that an error of the given size asks for next.
func grown(step, size, tol float64) float64 {
	return step * math.Max(0.2, math.Min(4, 0.9*math.Pow(tol/math.Max(size, tol*1e-4), 0.2)))
}
