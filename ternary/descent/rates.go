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
	q       float64       // J released per mole of bulk
	removed [3][3]float64 // by active solid: moles of end-members removed in this stage
}

// active are the solids that form in a stage, with warm fractions.
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
	drv  [3]float64 // driving forces of the active solids, in RT
	pot  gibbs.Potentials
	x    [3]float64
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
	sum := m.n[0] + m.n[1] + m.n[2]
	for i := range f.x {
		f.x[i] = m.n[i] / sum
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
func moves(f *flow, m *melt, c *[3]float64) (dx [3]float64) {
	sum := m.n[0] + m.n[1] + m.n[2]
	sigma := c[0] + c[1] + c[2]
	for i := range dx {
		dx[i] = -f.mass / sum * (c[i] - sigma*f.x[i])
	}
	return dx
}

func along(g, dx *[3]float64) float64 {
	s := 0.0
	for i := range dx {
		if dx[i] != 0 {
			s += g[i] * dx[i]
		}
	}
	return s
}

// rates solves for the amounts r of the active solids and dT/du that keep them
// all saturated while the liquid loses mass at unit rate:
//
//	Σ_ψ (∂D_φ/∂x)·(∂x/∂r_ψ) r_ψ + (∂D_φ/∂T) dT/du = −rest_φ,   Σ W_ψ r_ψ = lost
//
// With rest = 0 and lost = 1 these are the rates of a stage; with rest = D and
// lost = 0 the correction that brings a point back onto its curve.
func (w *walk) rates(m *melt, a *active, f *flow, rest bool) (r [3]float64, dT float64, ok bool) {
	rt := ternary.R * m.T
	k := a.count
	var mat [4][5]float64
	var dx [3][3]float64
	for j := 0; j < k; j++ {
		dx[j] = moves(f, m, &f.st[j].C)
		mat[k][j] = w.weigh(f.st[j].C) / w.total
	}
	for i := 0; i < k; i++ {
		p := pullOf(f, &f.st[i])
		for j := 0; j < k; j++ {
			mat[i][j] = along(&p.g, &dx[j]) / rt
		}
		mat[i][k] = p.h * m.T / rt
		if rest {
			mat[i][k+1] = -f.st[i].D / rt
		}
	}
	if !rest {
		mat[k][k+1] = 1 / w.total
	}
	x, ok := eliminate(&mat, k+1)
	if !ok {
		return r, 0, false
	}
	copy(r[:], x[:k])
	return r, x[k] * m.T, true
}

// eliminate solves a small system by elimination with partial pivoting. It
// reports failure where a pivot is lost in rounding.
func eliminate(a *[4][5]float64, n int) (x [4]float64, ok bool) {
	var size float64
	for r := 0; r < n; r++ {
		for c := 0; c < n; c++ {
			size = math.Max(size, math.Abs(a[r][c]))
		}
	}
	for c := 0; c < n; c++ {
		p := c
		for r := c + 1; r < n; r++ {
			if math.Abs(a[r][c]) > math.Abs(a[p][c]) {
				p = r
			}
		}
		if !(math.Abs(a[p][c]) > 1e-13*size) {
			return x, false
		}
		a[c], a[p] = a[p], a[c]
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
	rt := ternary.R * m.T
	for j := 0; j < a.count; j++ {
		f.st[j] = w.sys.Solids[a.phase[j]].DriveFrom(&f.pot.Mu, m.T, a.y[j])
		f.drv[j] = f.st[j].D / rt
	}
	r, dT, ok := w.rates(m, a, f, false)
	if !ok {
		return false
	}
	f.r = r
	f.d = melt{T: dT}
	f.dx = [3]float64{}
	for j := 0; j < a.count; j++ {
		w.remove(&f.d, f, j, r[j]*f.mass)
		dx := moves(f, m, &f.st[j].C)
		for i := range dx {
			f.dx[i] += r[j] * dx[i]
		}
		f.d.q += r[j] * f.mass * w.latent(m, f, j)
	}
	return true
}

// remove takes n formula units of active solid j out of the liquid.
func (w *walk) remove(m *melt, f *flow, j int, n float64) {
	for i := range m.n {
		m.n[i] -= n * f.st[j].C[i]
		m.removed[j][i] += n * f.st[j].Y[i]
	}
}

// latent is the heat that one formula unit of active solid j releases as it
// forms, T·(S of its contents in the liquid − S of the solid), J/mol.
func (w *walk) latent(m *melt, f *flow, j int) float64 {
	s := -f.st[j].S
	for i, c := range f.st[j].C {
		if c != 0 {
			s -= c * f.pot.DT[i]
		}
	}
	return m.T * s
}

// choose finds which of the saturated solids form on further cooling: the set
// with positive rates and falling temperature under which no other saturated
// solid becomes oversaturated. It is a linear complementarity problem of at
// most three unknowns, solved by looking at every set. ok is false where no set
// will do: the liquid is at a point where it crystallises without change.
func (w *walk) choose(m *melt, saturated []gibbs.State) (a active, ok bool) {
	n := len(saturated)
	var f flow
	w.liquidAt(m, &f)
	for size := 1; size <= n && size <= 3; size++ {
		for set := 1; set < 1<<n; set++ {
			c := active{}
			for i := 0; i < n; i++ {
				if set&(1<<i) != 0 && c.count < 3 {
					c.phase[c.count], c.y[c.count] = saturated[i].Phase, saturated[i].Y
					c.count++
				}
			}
			if bits(set) != size || !w.flowAt(m, &c, &f) || f.d.T > 1e-9*m.T {
				continue
			}
			if w.feasible(m, &c, &f, saturated, set) {
				return c, true
			}
		}
	}
	return a, false
}

func bits(v int) (n int) {
	for ; v != 0; v &= v - 1 {
		n++
	}
	return n
}

// feasible reports that all rates are positive and that the saturated solids
// left out do not become oversaturated.
func (w *walk) feasible(m *melt, c *active, f *flow, saturated []gibbs.State, set int) bool {
	for j := 0; j < c.count; j++ {
		if f.r[j] <= 0 {
			return false
		}
	}
	for i, s := range saturated {
		if set&(1<<i) != 0 {
			continue
		}
		d := w.sys.Solids[s.Phase].DriveFrom(&f.pot.Mu, m.T, s.Y)
		p := pullOf(f, &d)
		if along(&p.g, &f.dx)+p.h*f.d.T > 0 {
			return false
		}
	}
	return true
}
