package tangent

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

const (
	// coexistRounds bounds the iteration.
	coexistRounds = 80
	// coexistStep is the longest step in the logarithm of an amount.
	coexistStep = 1.0
	// coexistLeast is the amount of a part, in moles per mole of bulk, below which
	// it is given up.
	coexistLeast = 1e-13
	// mergedTol is the distance of two forms of a phase that have become one.
	mergedTol = 1e-6
)

// coexist is newton in other unknowns, for two forms of one phase: the amounts N
// of the end-members in every part, and the plane,
//
//	g_k(y_φ) = μ·c_k          (every end-member k of every part)
//	Σ N_φk c_k = b            (mass balance).
//
// In a shallow gap a small error of the plane moves the compositions a long way,
// so that the driving forces as functions of the plane are no basis for Newton's
// method; as functions of the amounts they are smooth. The amounts are carried as
// logarithms.
func coexist(sys *gibbs.System, b ternary.Composition, T float64, mu [3]float64, parts []Part) (*Equilibrium, error) {
	c := &coexistence{sys: sys, b: b, T: T, mu: mu}
	for i := range mu {
		if !math.IsInf(mu[i], -1) {
			c.live = append(c.live, i)
		}
	}
	for _, p := range parts {
		c.take(p)
	}
	best := math.Inf(1)
	for round := 0; round < coexistRounds; round++ {
		r := c.evaluate()
		if r <= refineTol || r <= 1e-11 && r > best/2 {
			return c.result(r)
		}
		best = math.Min(best, r)
		if err := c.step(); err != nil {
			return nil, err
		}
		if c.drop() && len(c.parts) == 0 {
			return nil, errors.New("every phase of the assemblage was used up")
		}
	}
	return nil, fmt.Errorf("the iteration stopped at a residual of %.1e", best)
}

// coexistence is the state of the iteration.
type coexistence struct {
	sys   *gibbs.System
	b     ternary.Composition
	T     float64
	mu    [3]float64
	live  []int
	parts []mixture
	f     []float64 // residuals
	pot   []gibbs.Potentials
	rows  []memberRow // end-members in order of their equations
}

// mixture is a part as moles of end-members.
type mixture struct {
	phase int
	n     [3]float64
}

// memberRow names an end-member of a part.
type memberRow struct{ part, member int }

// take adds a part; end-members that cannot be there are left out.
func (c *coexistence) take(p Part) {
	m := mixture{phase: p.State.Phase}
	mole := math.Max(p.Mole, 1e-6)
	for k, e := range phaseOf(c.sys, m.phase).Members {
		possible := true
		for i, v := range e.C {
			possible = possible && !(v != 0 && math.IsInf(c.mu[i], -1))
		}
		if possible {
			m.n[k] = mole * math.Max(p.State.Y[k], 1e-12)
		}
	}
	c.parts = append(c.parts, m)
}

func (m *mixture) total() float64 { return m.n[0] + m.n[1] + m.n[2] }

func (m *mixture) fractions() (y [3]float64) {
	t := m.total()
	for k := range y {
		y[k] = m.n[k] / t
	}
	return y
}

// evaluate fills the residuals, in RT and in moles, and returns the largest.
func (c *coexistence) evaluate() float64 {
	rt := ternary.R * c.T
	c.rows, c.f, c.pot = c.rows[:0], c.f[:0], c.pot[:0]
	var sum [3]float64
	for j := range c.parts {
		m := &c.parts[j]
		ph := phaseOf(c.sys, m.phase)
		y := m.fractions()
		var pot gibbs.Potentials
		ph.Potentials(&y, c.T, &pot)
		c.pot = append(c.pot, pot)
		for k := range ph.Members {
			if m.n[k] == 0 {
				continue
			}
			d := pot.Mu[k]
			for i, v := range ph.Members[k].C {
				if v != 0 {
					d -= v * c.mu[i]
				}
				sum[i] += m.n[k] * v
			}
			c.rows = append(c.rows, memberRow{j, k})
			c.f = append(c.f, d/rt)
		}
	}
	for _, i := range c.live {
		c.f = append(c.f, sum[i]-c.b[i])
	}
	r := 0.0
	for _, v := range c.f {
		r = math.Max(r, math.Abs(v))
	}
	return r
}

// step makes one Newton step.
func (c *coexistence) step() error {
	rt := ternary.R * c.T
	nm, size := len(c.rows), len(c.f)
	a := mat.NewDense(size, size, nil)
	for r, row := range c.rows {
		m := &c.parts[row.part]
		ph := phaseOf(c.sys, m.phase)
		y, total := m.fractions(), m.total()
		pot := &c.pot[row.part]
		along := 0.0
		for l := range ph.Members {
			if m.n[l] != 0 {
				along += pot.DY[row.member][l] * y[l]
			}
		}
		for s, col := range c.rows {
			if col.part == row.part { // with respect to ln N
				a.Set(r, s, (pot.DY[row.member][col.member]-along)/total*m.n[col.member]/rt)
			}
		}
		for q, i := range c.live {
			v := ph.Members[row.member].C[i]
			a.Set(r, nm+q, -v) // with respect to μ/RT
			a.Set(nm+q, r, v*m.n[row.member])
		}
	}
	b := mat.NewVecDense(size, nil)
	for i, v := range c.f {
		b.SetVec(i, -v)
	}
	var x mat.VecDense
	if err := x.SolveVec(a, b); err != nil {
		var bad mat.Condition
		if !errors.As(err, &bad) || math.IsInf(float64(bad), 1) {
			return errSingular
		}
	}
	scale := 1.0
	for r := 0; r < nm; r++ {
		if s := math.Abs(x.AtVec(r)); s*scale > coexistStep {
			scale = coexistStep / s
		}
	}
	for r, row := range c.rows {
		c.parts[row.part].n[row.member] *= math.Exp(scale * x.AtVec(r))
	}
	for q, i := range c.live {
		c.mu[i] += scale * x.AtVec(nm+q) * rt
	}
	return nil
}

// drop gives up parts that have vanished.
func (c *coexistence) drop() (dropped bool) {
	kept := c.parts[:0]
	for _, m := range c.parts {
		if m.total() < coexistLeast {
			dropped = true
			continue
		}
		kept = append(kept, m)
	}
	c.parts = kept
	return dropped
}

// result is the assemblage, if it is one of distinct stable phases.
func (c *coexistence) result(residual float64) (*Equilibrium, error) {
	q := &Equilibrium{T: c.T, Bulk: c.b, Mu: c.mu, Residual: residual}
	for i := range c.parts {
		m := &c.parts[i]
		ph := phaseOf(c.sys, m.phase)
		y := m.fractions()
		for _, o := range q.Parts {
			if o.State.Phase == m.phase && near(o.State.Y, y, mergedTol) {
				return nil, errSingular
			}
		}
		if _, _, ok := ph.Curvature(y, c.T); !ok {
			return nil, errors.New("a phase of the assemblage is not stable against unmixing")
		}
		q.Parts = append(q.Parts, Part{State: gibbs.State{Phase: m.phase, Y: y, C: ph.Contents(y)}, Mole: m.total()})
	}
	return q, nil
}

// twice reports that a phase is there in two forms.
func twice(parts []Part) bool {
	for i := range parts {
		for k := range parts[:i] {
			if parts[i].State.Phase == parts[k].State.Phase {
				return true
			}
		}
	}
	return false
}
