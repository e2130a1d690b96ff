package descent

import (
	"fmt"
	"math"

	"thalweg/ternary"
)

const (
	balanceTol = 1e-12 // moles of a component per mole of bulk
	meltTol    = 1e-10 // by how much the melt fraction may turn back
	steadyTol  = 1e-7  // K: by how much the temperature may
	driveTol   = 1e-8  // RT: an absent solid may lie this much above the plane
)

// check examines the finished path.
func (w *walk) check() {
	p := w.path
	c := Checks{MeltMonotone: true, TMonotone: true, PhaseRule: true, MaxDrive: math.Inf(-1)}
	fail := func(format string, args ...any) {
		if len(c.Problems) < 10 {
			c.Problems = append(c.Problems, fmt.Sprintf(format, args...))
		}
	}
	for i := range p.Steps {
		s := &p.Steps[i]
		c.MassBalance = math.Max(c.MassBalance, w.massBalance(s))
		if i > 0 {
			if w.dir*(s.MeltMass-p.Steps[i-1].MeltMass) < -meltTol {
				c.MeltMonotone = false
			}
			if w.dir*(s.T-p.Steps[i-1].T) < -steadyTol {
				c.TMonotone = false
			}
		}
		if !w.obeysPhaseRule(s) {
			c.PhaseRule = false
		}
		for k, a := range s.Affinity {
			if !math.IsNaN(a) && !contains(s.Crystallising, k) {
				c.MaxDrive = math.Max(c.MaxDrive, a/(ternary.R*s.T))
			}
		}
	}
	if c.MassBalance > balanceTol {
		fail("the masses miss the bulk by %.1e", c.MassBalance)
	}
	if !c.MeltMonotone && (p.Mode == Fractional && w.keep == 0 || p.Mode == FractionalMelting) {
		fail("the amount of melt turns back") // at equilibrium it may, at a metatectic
	}
	if !c.TMonotone {
		fail("the temperature turns back along the path")
	}
	if !c.PhaseRule {
		fail("more phases coexist than the phase rule allows")
	}
	c.StableAgainst = c.MaxDrive <= driveTol
	if !c.StableAgainst {
		fail("an absent solid lies %.1e RT above the plane", c.MaxDrive)
	}
	c.Passed = len(c.Problems) == 0
	p.Checks = c
}

// obeysPhaseRule reports that no more phases coexist at a row than at constant
// pressure may: as many as there are components, and one more at an event.
func (w *walk) obeysPhaseRule(s *Step) bool {
	components, phases := 0, len(s.Contact)
	for i, b := range w.bulk {
		if b > 0 || s.Liquid[i] > 0 {
			components++
		}
	}
	if w.path.Mode == Fractional && w.keep == 0 {
		phases = len(s.Crystallising)
	}
	if s.MeltMass > 0 {
		phases++
	}
	if s.Event != "" {
		components++
	}
	return phases <= components
}

func contains(list []int, v int) bool {
	for _, x := range list {
		if x == v {
			return true
		}
	}
	return false
}
