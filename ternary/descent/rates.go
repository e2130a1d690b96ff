package descent

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// melt is the state of a fractionating liquid. The moles of components in liquid
// and removed solids are the variables, not compositions: their sum is a linear
// invariant that every Runge–Kutta step keeps to rounding.
type melt struct {
	n       [3]float64    // moles of components in the liquid
	T       float64       // K
	q       float64       // J per mole of bulk: enthalpy of the solids removed in this stage
	removed [3][3]float64 // by active solid: moles of end-members removed in this stage
}

// active are the solids that form in a stage, with warm fractions. A solid that
// unmixes may be there twice.
type active struct {
	count int
	phase [3]int
	y     [3][3]float64
}

// flow is the rate of change of a melt with u = −ln(mass of liquid), with what
// the stage's events look at.
type flow struct {
	d    melt
	r    [3]float64 // formula units of each active solid per gram of liquid and unit u
	dx   [3]float64 // change of the liquid's composition
	pot  gibbs.Potentials
	x    [3]float64
	sum  float64 // moles of components in the liquid
	mass float64
	st   [3]gibbs.Drive
}

// pull is the change of one solid's driving force with the liquid's composition
// and temperature.
type pull struct {
	g [3]float64 // ∂D/∂x
	h float64    // ∂D/∂T
}

// liquidAt evaluates the liquid of a melt.
func (w *walk) liquidAt(m *melt, f *flow) {
	f.sum = m.n[0] + m.n[1] + m.n[2]
	for i := range f.x {
		f.x[i] = m.n[i] / f.sum
	}
	f.mass = w.weigh(m.n)
	w.sys.Liquid.Potentials(&f.x, m.T, &f.pot)
}

// pullOf is the gradient of a phase's driving force at the melt's liquid.
func pullOf(f *flow, d *gibbs.Drive) (p pull) {
	p.h = d.S
	for i, c := range d.C {
		if c == 0 {
			continue
		}
		p.h += c * f.pot.DT[i]
		for j := range p.g {
			p.g[j] += c * f.pot.DY[i][j]
		}
	}
	return p
}

// moves is how removing one formula unit of contents c per gram of liquid and
// unit u changes the liquid's composition.
func (f *flow) moves(c *[3]float64) (dx [3]float64) {
	k := f.mass / f.sum
	sigma := c[0] + c[1] + c[2]
	for i := range dx {
		dx[i] = -k * (c[i] - sigma*f.x[i])
	}
	return dx
}

// along is g·dx without 0·∞: a component that is absent stays absent.
func along(g, dx *[3]float64) float64 {
	s := 0.0
	for i := range dx {
		if dx[i] != 0 {
			s += g[i] * dx[i]
		}
	}
	return s
}

// goal says what rates must achieve: the changes of the driving forces of the
// active solids, and the mass that leaves as a fraction of the liquid.
type goal struct {
	restore bool // D_φ changes by −D_φ; else it stays
	lost    float64
}

// rates solves for the amounts r of the active solids and dT that do that:
//
//	Σ_ψ (∂D_φ/∂x)·(∂x/∂r_ψ) r_ψ + (∂D_φ/∂T) dT = −rest_φ,   Σ W_ψ r_ψ = lost
//
// With rest = 0 and lost = 1 these are the rates of a stage per unit u; with
// rest = D and lost near 0 the correction that brings a point back onto its
// curve.
func (w *walk) rates(m *melt, a *active, f *flow, want goal) (r [3]float64, dT float64, ok bool) {
	rt := ternary.R * m.T
	k := a.count
	var mat [4][5]float64
	var dx [3][3]float64
	var size [3]float64 // the unknowns are masses, so that they are of one size
	for j := 0; j < k; j++ {
		dx[j] = f.moves(&f.st[j].C)
		size[j] = w.size(f.st[j].C)
		mat[k][j] = w.weigh(f.st[j].C) / size[j]
	}
	for i := 0; i < k; i++ {
		p := pullOf(f, &f.st[i])
		for j := 0; j < k; j++ {
			mat[i][j] = along(&p.g, &dx[j]) / (rt * size[j])
		}
		mat[i][k] = p.h / ternary.R
		if want.restore {
			mat[i][k+1] = -f.st[i].D / rt
		}
		top := 0.0
		for _, v := range mat[i][:k+1] {
			if v := math.Abs(v); v > top {
				top = v
			}
		}
		for c := range mat[i] {
			mat[i][c] /= top
		}
	}
	mat[k][k+1] = want.lost
	x, ok := eliminate(&mat, k+1)
	if !ok {
		return r, 0, false
	}
	for j := 0; j < k; j++ {
		r[j] = x[j] / size[j]
	}
	return r, x[k] * m.T, true
}

// eliminate solves a small system with rows of unit size by elimination with
// partial pivoting. It reports failure where a pivot is lost in rounding.
func eliminate(a *[4][5]float64, n int) (x [4]float64, ok bool) {
	for c := 0; c < n; c++ {
		p := c
		for r := c + 1; r < n; r++ {
			if math.Abs(a[r][c]) > math.Abs(a[p][c]) {
				p = r
			}
		}
		if !(math.Abs(a[p][c]) > 1e-14) {
			return x, false
		}
		if p != c {
			a[c], a[p] = a[p], a[c]
		}
		for r := c + 1; r < n; r++ {
			q := a[r][c] / a[c][c]
			for k := c; k <= n; k++ {
				a[r][k] -= q * a[c][k]
			}
		}
	}
	for c := n - 1; c >= 0; c-- {
		v := a[c][n]
		for k := c + 1; k < n; k++ {
			v -= a[c][k] * x[k]
		}
		x[c] = v / a[c][c]
	}
	return x, true
}

// flowAt is the right-hand side of the differential equation.
func (w *walk) flowAt(m *melt, a *active, f *flow) bool {
	w.liquidAt(m, f)
	for j := 0; j < a.count; j++ {
		f.st[j] = w.sys.Solids[a.phase[j]].DriveFrom(&f.pot.Mu, m.T, a.y[j])
	}
	r, dT, ok := w.rates(m, a, f, goal{lost: 1})
	if !ok {
		return false
	}
	f.r = r
	f.d = melt{T: dT}
	f.dx = [3]float64{}
	for j := 0; j < a.count; j++ {
		w.remove(&f.d, m.T, f, j, r[j]*f.mass)
		dx := f.moves(&f.st[j].C)
		for i := range dx {
			f.dx[i] += r[j] * dx[i]
		}
	}
	return true
}

// remove takes n formula units of active solid j out of the liquid at T.
func (w *walk) remove(m *melt, T float64, f *flow, j int, n float64) {
	d := &f.st[j]
	for i := range m.n {
		m.n[i] -= n * d.C[i]
		m.removed[j][i] += n * d.Y[i]
	}
	m.q += n * solidEnthalpy(f, d, T)
}

// solidEnthalpy is H of a solid from its driving force, J/mol: G = μ·c − D.
func solidEnthalpy(f *flow, d *gibbs.Drive, T float64) float64 {
	h := T*d.S - d.D
	for i, c := range d.C {
		if c != 0 {
			h += c * f.pot.Mu[i]
		}
	}
	return h
}
