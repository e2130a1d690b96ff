package tangent

import (
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Hold is Refine without judgement: the given phases are kept even where an
// amount comes out negative, and Margin is not evaluated. It is the step of a
// continuation that looks for the events itself.
func Hold(sys *gibbs.System, b ternary.Composition, T float64, mu [3]float64, parts []Part) (*Equilibrium, error) {
	return newton(sys, b, T, mu, parts)
}

// Event solves for the temperature at which the amount of parts[zero] vanishes
// while it still lies on the plane with the others: where a phase comes in or
// goes out. Start values are T, mu and the amounts of the other parts.
func Event(sys *gibbs.System, b ternary.Composition, T float64, mu [3]float64, parts []Part, zero int) (*Equilibrium, error) {
	k := &kkt{sys: sys, b: b, T: T, mu: mu, parts: append([]Part(nil), parts...)}
	k.parts[zero].Mole = 0
	k.findLive()
	best := math.Inf(1)
	for round := 0; round < refineRounds; round++ {
		if err := k.evaluate(); err != nil {
			return nil, err
		}
		r := k.residual()
		if r <= refineTol || r <= 1e-11 && r > best/2 {
			return &Equilibrium{T: k.T, Bulk: b, Mu: k.mu, Parts: k.parts, Residual: r}, nil
		}
		best = math.Min(best, r)
		m := k.matrix()
		n, p := len(k.live), len(k.parts)
		ft := k.slope()
		for i := 0; i < n+p; i++ {
			m.a[i][n+zero] = ft[i] * k.T // the unknown is ln T
		}
		if !m.solve() {
			return nil, errSingular
		}
		k.advance(&m, zero)
		k.T *= math.Exp(math.Max(-0.3, math.Min(0.3, m.x[n+zero])))
	}
	return nil, fmt.Errorf("the event's temperature was solved only to a residual of %.1e", best)
}

// Slopes returns the derivatives of the plane and of the amounts with respect
// to T along the assemblage.
func Slopes(sys *gibbs.System, q *Equilibrium) (dmu [3]float64, dn []float64, err error) {
	k := &kkt{sys: sys, b: q.Bulk, T: q.T, mu: q.Mu, parts: append([]Part(nil), q.Parts...)}
	k.findLive()
	if err := k.evaluate(); err != nil {
		return dmu, nil, err
	}
	m := k.matrix()
	n, p := len(k.live), len(k.parts)
	for i, f := range k.slope() {
		if i < n+p {
			m.a[i][n+p] = -f
		}
	}
	if !m.solve() {
		return dmu, nil, errSingular
	}
	rt := ternary.R * k.T
	for r, i := range k.live {
		dmu[i] = m.x[r] * rt
	}
	return dmu, append([]float64(nil), m.x[n:n+p]...), nil
}

// Above returns the phases, not among the parts, whose driving force against
// the plane exceeds tol (in RT), highest first.
func Above(sys *gibbs.System, mu [3]float64, T float64, parts []Part, tol float64) []gibbs.State {
	type found struct {
		s gibbs.State
		d float64
	}
	var out []found
	drives(sys, &mu, T, func(i int, d gibbs.Drive) {
		if d.D <= tol*ternary.R*T {
			return
		}
		for _, p := range parts {
			if p.State.Phase == i && near(p.State.Y, d.Y, 1e-5) {
				return
			}
		}
		k := len(out)
		out = append(out, found{gibbs.State{Phase: i, Y: d.Y, C: d.C}, d.D})
		for ; k > 0 && out[k].d > out[k-1].d; k-- {
			out[k], out[k-1] = out[k-1], out[k]
		}
	})
	states := make([]gibbs.State, len(out))
	for i := range out {
		states[i] = out[i].s
	}
	return states
}
