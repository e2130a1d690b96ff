package join

import (
	"slices"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

const (
	// leapLeast is a change of end-member fractions that needs no looking into.
	leapLeast = 0.01
	// leapSteps is the number of intervals in which the way between two
	// compositions is searched for one at which the phase would unmix.
	leapSteps = 24
)

// same reports that two equilibria of one bulk have one assemblage: the same phases,
// none of which has leapt from one of its forms to another on the way.
func (e *engine) same(hi, lo *tangent.Equilibrium) bool {
	return slices.Equal(phasesOf(hi), phasesOf(lo)) && e.leapt(hi, lo) < 0
}

// leapt is the index of the part whose phase is there once in both equilibria, with
// compositions that are forms of their own: between them the phase is not stable
// against unmixing. Below a monotectic the liquid that a solid is with is another one
// than above. −1 stands for none; that a phase goes round its critical point shows
// when the two temperatures are brought closer.
func (e *engine) leapt(hi, lo *tangent.Equilibrium) int {
	if !slices.Equal(phasesOf(hi), phasesOf(lo)) {
		return -1
	}
	T := (hi.T + lo.T) / 2
	for i := range hi.Parts {
		a, b := &hi.Parts[i].State, &lo.Parts[i].State
		if i > 0 && hi.Parts[i-1].State.Phase == a.Phase || i+1 < len(hi.Parts) && hi.Parts[i+1].State.Phase == a.Phase {
			continue
		}
		p := e.sys.Liquid
		if a.Phase != gibbs.Liquid {
			p = e.sys.Solids[a.Phase]
		}
		if p.Stoichiometric() || !p.CanUnmix(T) || spread(a.Y, b.Y) < leapLeast {
			continue
		}
		for n := 1; n < leapSteps; n++ {
			var y [3]float64
			for k := range y {
				y[k] = a.Y[k] + float64(n)/leapSteps*(b.Y[k]-a.Y[k])
			}
			if _, _, stable := p.Curvature(y, T); !stable {
				return i
			}
		}
	}
	return -1
}
