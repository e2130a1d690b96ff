package descent

import (
	"fmt"
	"math"

	"thalweg/ternary"
)

const (
	balanceTol = 1e-12 // moles of a component per mole of bulk
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
		if i > 0 && s.MeltMass > p.Steps[i-1].MeltMass+1e-10 {
			c.MeltMonotone = false
		}
		if i > 0 && s.T > p.Steps[i-1].T+1e-7 {
			c.TMonotone = false
		}
		if p.Mode == Equilibrium && len(s.Solids) > 3 {
			c.PhaseRule = false
		}
		if len(s.Crystallising) > 3 {
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
	if !c.MeltMonotone && p.Mode == Fractional {
		fail("the amount of melt rises on cooling")
	}
	if !c.TMonotone {
		fail("the temperature rises along the path")
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

func contains(list []int, v int) bool {
	for _, x := range list {
		if x == v {
			return true
		}
	}
	return false
}
