package liquidus

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

const (
	// newtonTol is the residual, in units of R·tRef per formula unit, at which a
	// point counts as solved. Rounding leaves about 1e-14.
	newtonTol = 3e-13
	// newtonRounds bounds the iteration: from a good predictor it takes 2 to 4.
	newtonRounds = 12
	// newtonReach bounds one step of the iteration, in triangle sides.
	newtonReach = 0.3
)

// constraint is one equation along a curve: the driving force of a solid, or of a
// second liquid, is zero, or T is constant. For a phase that can unmix, y
// says which of its compositions is meant.
type constraint struct {
	phase int // index in System.Solids, gibbs.Liquid, or isothermal for T = t
	y     [3]float64
	t     float64
	last  gibbs.Drive
}

const isothermal = -2

// eval returns the residual in units of R·tRef and its gradient with respect to z.
func (c *constraint) eval(e *engine, s *site) (float64, vec) {
	if c.phase == isothermal {
		return s.z[2] - c.t/e.tRef, vec{0, 0, 1}
	}
	p := e.phaseOf(c.phase)
	c.last = p.DriveFrom(&s.pot.Mu, s.T, c.y)
	c.y = c.last.Y
	k := 1 / e.rtRef
	return c.last.D * k, s.gradient(e, &c.last.C, c.last.S).scaled(k)
}

// phaseOf is the phase of an index in System.Solids or gibbs.Liquid.
func (e *engine) phaseOf(i int) *gibbs.Phase {
	if i == gibbs.Liquid {
		return e.sys.Liquid
	}
	return e.sys.Solids[i]
}

// state is the solid of the constraint at the last evaluation.
func (c *constraint) state() gibbs.State {
	return gibbs.State{Phase: c.phase, Y: c.last.Y, C: c.last.C}
}

// solve3 solves the 3×3 system with rows a, b, c by Cramer's rule.
func solve3(a, b, c vec, f vec) (vec, bool) {
	bc := b.cross(c)
	det := a.dot(bc)
	scale := a.norm() * b.norm() * c.norm()
	if math.Abs(det) <= 1e-14*scale || math.IsNaN(det) {
		return vec{}, false
	}
	ca, ab := c.cross(a), a.cross(b)
	return vec{
		(f[0]*bc[0] + f[1]*ca[0] + f[2]*ab[0]) / det,
		(f[0]*bc[1] + f[1]*ca[1] + f[2]*ab[1]) / det,
		(f[0]*bc[2] + f[1]*ca[2] + f[2]*ab[2]) / det,
	}, true
}

// intoInside shortens the step so that no fraction loses more than nine tenths of
// itself and none of the numbers moves too far at once.
func intoInside(p place, step vec) vec {
	s := 1.0
	for i, x := range p.x {
		d := dxdp[i][0]*step[0] + dxdp[i][1]*step[1]
		if d < 0 && x+s*d < 0.1*x {
			s = 0.9 * x / -d
		}
	}
	if r := step.flat() * s; r > newtonReach {
		s *= newtonReach / r
	}
	if t := math.Abs(step[2]) * s; t > 0.5*p.t {
		s *= 0.5 * p.t / t
	}
	return step.scaled(s)
}

// solvePoint solves three constraints for a point, from s.z; it leaves the
// site and the constraints at the solution.
func (e *engine) solvePoint(s *site, a, b, c *constraint) bool {
	best := math.Inf(1)
	for round := 0; round < 4*newtonRounds; round++ {
		fa, ga := a.eval(e, s)
		fb, gb := b.eval(e, s)
		fc, gc := c.eval(e, s)
		r := math.Max(math.Abs(fa), math.Max(math.Abs(fb), math.Abs(fc)))
		if math.IsNaN(r) || math.IsInf(r, 0) {
			return false
		}
		if r <= newtonTol && r >= best/2 || r <= 1e-15 {
			return true
		}
		best = math.Min(best, r)
		step, ok := solve3(ga, gb, gc, vec{-fa, -fb, -fc})
		if !ok {
			return r <= newtonTol
		}
		step = intoInside(s.place(), step)
		next := s.place().moved(step, 1)
		if next == s.place() {
			return r <= newtonTol
		}
		s.set(e, next)
	}
	return best <= newtonTol
}

// correct brings s onto the curve of the two constraints within the plane
// through s.z normal to t, and returns the curve's unit tangent there, turned
// to agree with t.
func (e *engine) correct(s *site, a, b *constraint, t vec) (vec, bool) {
	origin := s.z
	for round := 0; round < newtonRounds; round++ {
		fa, ga := a.eval(e, s)
		fb, gb := b.eval(e, s)
		r := math.Max(math.Abs(fa), math.Abs(fb))
		if math.IsNaN(r) || math.IsInf(r, 0) {
			return vec{}, false
		}
		if r <= newtonTol {
			return tangent(ga, gb, t)
		}
		step, ok := solve3(ga, gb, t, vec{-fa, -fb, 0})
		if !ok || step.norm() > newtonReach {
			return vec{}, false
		}
		next := s.place().moved(step, 1)
		if !next.inside() {
			next = s.place().moved(intoInside(s.place(), step), 1)
		}
		s.set(e, next)
		if s.z.minus(origin).norm() > newtonReach {
			return vec{}, false
		}
	}
	return vec{}, false
}

// tangent is the unit vector along the curve whose two gradients are given,
// turned to agree with t.
func tangent(ga, gb, t vec) (vec, bool) {
	n := ga.cross(gb)
	l := n.norm()
	if l <= 1e-13*ga.norm()*gb.norm() || math.IsNaN(l) {
		return vec{}, false
	}
	if n.dot(t) < 0 {
		l = -l
	}
	return n.scaled(1 / l), true
}

// solveOnLine solves two constraints with the liquid on the line x = x0 + s·dx,
// for s and T, from the given start. It is the tool for the triangle's edges
// and for points a fixed small distance inside one.
func (e *engine) solveOnLine(s *site, a, b *constraint, x0, dx ternary.Composition, at, T float64) (float64, bool) {
	best := math.Inf(1)
	x := onLine(x0, dx, at) // moved step by step, to keep small fractions precise
	for round := 0; round < 4*newtonRounds; round++ {
		s.setOn(e, x, T)
		fa, ua, va := a.along(e, s, dx)
		fb, ub, vb := b.along(e, s, dx)
		r := math.Max(math.Abs(fa), math.Abs(fb))
		if math.IsNaN(r) || math.IsInf(r, 0) {
			return at, false
		}
		if r <= newtonTol && r >= best/2 || r <= 1e-15 {
			return at, true
		}
		best = math.Min(best, r)
		det := ua*vb - ub*va
		if det == 0 || math.IsNaN(det) {
			return at, r <= newtonTol
		}
		ds := (-fa*vb + fb*va) / det
		dT := (-ua*fb + ub*fa) / det
		k := 1.0
		for i := range x {
			if d := ds * dx[i]; d < 0 && x[i]+k*d < 0.1*x[i] {
				k = 0.9 * x[i] / -d
			}
		}
		if math.Abs(dT)*k > 0.3*T {
			k = 0.3 * T / math.Abs(dT)
		}
		at += k * ds
		T += k * dT
		for i := range x {
			x[i] += k * ds * dx[i]
		}
	}
	return at, best <= newtonTol
}

// onLine is x0 + s·dx with fractions that are zero on the whole line kept zero.
func onLine(x0, dx ternary.Composition, s float64) ternary.Composition {
	return ternary.Composition{x0[0] + s*dx[0], x0[1] + s*dx[1], x0[2] + s*dx[2]}
}

// along returns the residual and its derivatives along dx and with T (kelvin).
func (c *constraint) along(e *engine, s *site, dx ternary.Composition) (f, fs, fT float64) {
	if c.phase == isothermal {
		return (s.T - c.t) / e.tRef, 0, 1 / e.tRef
	}
	p := e.phaseOf(c.phase)
	c.last = p.DriveFrom(&s.pot.Mu, s.T, c.y)
	c.y = c.last.Y
	k := 1 / e.rtRef
	fT = c.last.S
	for i, n := range c.last.C {
		if n == 0 {
			continue
		}
		fT += n * s.pot.DT[i]
		for j := range dx {
			if dx[j] != 0 {
				fs += n * s.pot.DY[i][j] * dx[j]
			}
		}
	}
	return c.last.D * k, fs * k, fT * k
}
