package tangent

import (
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Part is one phase of an equilibrium.
type Part struct {
	State gibbs.State
	Mole  float64 // formula units per mole of bulk components
}

// Equilibrium is the stable assemblage at one bulk composition and temperature.
type Equilibrium struct {
	T        float64
	Bulk     ternary.Composition
	Mu       [3]float64 // J/mol; −Inf for a component that is absent
	Parts    []Part     // liquid first, then solids by index
	Residual float64    // largest |driving force| of a part, in RT
	Margin   float64    // largest driving force of any absent phase, in RT: ≤ 0
	Rounds   int        // cutting planes used
}

// Liquid returns the part that is liquid (the first, if the liquid is split).
func (q *Equilibrium) Liquid() (Part, bool) {
	for _, p := range q.Parts {
		if p.State.Phase == gibbs.Liquid {
			return p, true
		}
	}
	return Part{}, false
}

const (
	// cutTol is the driving force, in RT, at which the plane counts as touching
	// after Newton's method.
	cutTol = 1e-10
	// cutNear is the driving force, in RT, from which Newton's method is tried.
	cutNear = 0.05
	// criticalDepth is the violation, in RT, below which an attempt that fails may
	// fail for the closeness of a critical point.
	criticalDepth = 1e-4
	// cutRounds bounds the cutting planes.
	cutRounds = 400
	// amountTol is an amount, in moles per mole of bulk, that counts as none.
	amountTol = 1e-13
)

// NotFoundError says that no equilibrium was found.
type NotFoundError struct {
	T    float64
	Bulk ternary.Composition
	Why  string
}

func (e *NotFoundError) Error() string {
	return fmt.Sprintf("no equilibrium found at %.2f K for the bulk composition %.6g: %s", e.T, [3]float64(e.Bulk), e.Why)
}

// phaseOf returns the phase of a state.
func phaseOf(sys *gibbs.System, i int) *gibbs.Phase {
	if i == gibbs.Liquid {
		return sys.Liquid
	}
	return sys.Solids[i]
}

// Solve returns the equilibrium of bulk composition b at T. Components absent
// from b are dropped unless a phase holds them with a negative coefficient. The
// error is a *NotFoundError.
func Solve(sys *gibbs.System, b ternary.Composition, T float64) (*Equilibrium, error) {
	if q := liquidAlone(sys, b, T); q != nil {
		return q, nil
	}
	s := newSimplex(sys, b, T)
	// patience is the violation below which Newton's method is tried next: it
	// falls when an attempt fails, so that cutting planes go on in between.
	patience := cutNear
	for s.rounds < cutRounds {
		worst := s.cut()
		if worst > patience {
			continue
		}
		q, err := Refine(sys, b, T, s.mu, s.parts())
		if err == nil && q.Margin <= cutTol {
			q.Rounds = s.rounds
			return q, nil
		}
		if err == nil {
			s.addAt(q.Mu)
		}
		if err != nil && worst < criticalDepth {
			if parts, ok := s.criticalStart(); ok {
				if c, err := coexist(sys, b, T, s.mu, parts); err == nil {
					if c.Margin = margin(sys, &c.Mu, T, c.Parts); c.Margin <= cutTol {
						c.Rounds = s.rounds
						return c, nil
					}
				}
			}
		}
		if worst < 1e-13 {
			// within rounding of an event: a phase that the programme holds without any
			// amount may be one that Newton's plane gives a trace of, or the reverse
			if r, err2 := Refine(sys, b, T, s.mu, s.held()); err2 == nil && r.Margin <= cutTol {
				r.Rounds = s.rounds
				return r, nil
			}
			if err == nil {
				err = fmt.Errorf("a phase lies %.1e RT above the plane", q.Margin)
			}
			return nil, &NotFoundError{T, b, err.Error()}
		}
		patience = worst / 3
	}
	return nil, &NotFoundError{T, b, fmt.Sprintf("the cutting planes had not closed after %d rounds", s.rounds)}
}

// liquidAlone is the equilibrium of a bulk that is all liquid: the plane is that
// of the liquid itself. nil where another phase, or another liquid, lies above it.
func liquidAlone(sys *gibbs.System, b ternary.Composition, T float64) *Equilibrium {
	y := [3]float64(b)
	for i := range b {
		if !(b[i] >= 0) || b[i] == 0 && negative(sys, i) {
			return nil
		}
	}
	var p gibbs.Potentials
	sys.Liquid.Potentials(&y, T, &p)
	parts := []Part{{State: gibbs.State{Phase: gibbs.Liquid, Y: y, C: y}, Mole: 1}}
	m := margin(sys, &p.Mu, T, parts)
	if _, _, convex := sys.Liquid.Curvature(y, T); !(m <= 0) || !convex {
		return nil
	}
	return &Equilibrium{T: T, Bulk: b, Mu: p.Mu, Parts: parts, Margin: m}
}

// drives calls f with every local maximum of the driving force of every phase.
func drives(sys *gibbs.System, mu *[3]float64, T float64, f func(phase int, d gibbs.Drive)) {
	for i := gibbs.Liquid; i < len(sys.Solids); i++ {
		p := phaseOf(sys, i)
		if !p.CanUnmix(T) {
			f(i, p.Drive(mu, T))
			continue
		}
		for _, d := range p.Maxima(mu, T) {
			f(i, d)
		}
	}
}

// margin is the largest driving force, in RT, of the phases against a plane,
// those excepted that are parts of the assemblage already.
func margin(sys *gibbs.System, mu *[3]float64, T float64, parts []Part) float64 {
	worst := math.Inf(-1)
	drives(sys, mu, T, func(i int, d gibbs.Drive) {
		for _, p := range parts {
			if p.State.Phase == i && near(p.State.Y, d.Y, 1e-5) {
				return
			}
		}
		worst = math.Max(worst, d.D/(ternary.R*T))
	})
	return worst
}

func near(a, b [3]float64, tol float64) bool {
	return math.Abs(a[0]-b[0]) <= tol && math.Abs(a[1]-b[1]) <= tol && math.Abs(a[2]-b[2]) <= tol
}
