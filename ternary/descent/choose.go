package descent

import "thalweg/ternary/gibbs"

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
			if bits(set) != size {
				continue
			}
			c := active{}
			for i := 0; i < n; i++ {
				if set&(1<<i) != 0 {
					c.phase[c.count], c.y[c.count] = saturated[i].Phase, saturated[i].Y
					c.count++
				}
			}
			if !w.flowAt(m, &c, &f) || f.d.T > steadyT*m.T {
				continue
			}
			if w.feasible(m, &c, &f, saturated, set) {
				return c, true
			}
		}
	}
	return a, false
}

// steadyT is the rise of temperature, relative and per unit u, that is rounding.
const steadyT = 1e-9

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

// branch reports which of the active solids a state is one with, or −1.
func (a *active) branch(phase int, y *[3]float64) int {
	for j := 0; j < a.count; j++ {
		if a.phase[j] == phase && alike(&a.y[j], y) {
			return j
		}
	}
	return -1
}

// alikeTol tells two compositions of a solid that has unmixed apart.
const alikeTol = 1e-4

func alike(a, b *[3]float64) bool {
	for k := range a {
		if d := a[k] - b[k]; d > alikeTol || d < -alikeTol {
			return false
		}
	}
	return true
}

// forms reports whether a phase is among the active solids.
func (a *active) forms(phase int) bool {
	for j := 0; j < a.count; j++ {
		if a.phase[j] == phase {
			return true
		}
	}
	return false
}
