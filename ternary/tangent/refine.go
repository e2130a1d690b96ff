package tangent

import (
	"errors"
	"fmt"
	"math"
	"sort"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

const (
	refineRounds = 60
	// refineTol is the residual at which Newton's iteration stops: moles of bulk
	// and driving forces in RT.
	refineTol = 1e-13
)

var errSingular = errors.New("the phases of the assemblage do not determine the plane")

// Refine solves for the plane and the amounts of a given set of phases at T by
// Newton's method on
//
//	Σ n_φ ∂D_φ/∂μ = b    (mass balance)
//	D_φ(μ, T) = 0        (every phase on the plane)
//
// from a plane and parts that are close. A part whose amount becomes negative is
// dropped. The result's Margin says whether another phase lies above the plane.
func Refine(sys *gibbs.System, b ternary.Composition, T float64, mu [3]float64, parts []Part) (*Equilibrium, error) {
	parts = append([]Part(nil), parts...)
	for len(parts) > 0 {
		q, err := newton(sys, b, T, mu, parts)
		if err != nil && twice(parts) {
			q, err = coexist(sys, b, T, mu, parts)
		}
		if err != nil {
			return nil, err
		}
		low := -1
		for i, p := range q.Parts {
			if p.Mole < -amountTol && (low < 0 || p.Mole < q.Parts[low].Mole) {
				low = i
			}
		}
		if low < 0 {
			for i := range q.Parts {
				q.Parts[i].Mole = math.Max(0, q.Parts[i].Mole)
			}
			sort.SliceStable(q.Parts, func(i, j int) bool { return q.Parts[i].State.Phase < q.Parts[j].State.Phase })
			q.Margin = margin(sys, &q.Mu, T, q.Parts)
			return q, nil
		}
		parts = append(parts[:low], parts[low+1:]...)
	}
	return nil, errors.New("every phase of the assemblage was used up")
}

// newton is Refine without dropping.
func newton(sys *gibbs.System, b ternary.Composition, T float64, mu [3]float64, parts []Part) (*Equilibrium, error) {
	k := &kkt{sys: sys, b: b, T: T, mu: mu, parts: append([]Part(nil), parts...)}
	k.findLive()
	best := math.Inf(1)
	for round := 0; round < refineRounds; round++ {
		if err := k.evaluate(); err != nil {
			return nil, err
		}
		r := k.residual()
		if r <= refineTol || r <= 1e-11 && r > best/2 {
			return &Equilibrium{T: T, Bulk: b, Mu: k.mu, Parts: k.parts, Residual: r}, nil
		}
		best = math.Min(best, r)
		if err := k.step(); err != nil {
			return nil, err
		}
	}
	return nil, fmt.Errorf("the iteration stopped at a residual of %.1e", best)
}

// kkt is the state of the iteration.
type kkt struct {
	sys   *gibbs.System
	b     ternary.Composition
	T     float64
	mu    [3]float64
	live  []int
	parts []Part
	drive [4]gibbs.Drive
	hess  [4][3][3]float64
	ct    [4][3]float64
	f     [8]float64
}

// evaluate computes driving forces, contents and curvatures at μ.
func (k *kkt) evaluate() error {
	rt := ternary.R * k.T
	if len(k.parts) > len(k.drive) {
		return errSingular
	}
	n := len(k.live)
	for r, i := range k.live {
		k.f[r] = -k.b[i]
	}
	for j := range k.parts {
		p := &k.parts[j]
		ph := phaseOf(k.sys, p.State.Phase)
		d := ph.DriveFrom(&k.mu, k.T, p.State.Y)
		if math.IsNaN(d.D) || math.IsInf(d.D, 0) {
			return errSingular
		}
		h, ct, ok := ph.Curvature(d.Y, k.T)
		if !ok {
			return errors.New("a phase of the assemblage is not stable against unmixing")
		}
		k.drive[j], k.hess[j], k.ct[j] = d, h, ct
		p.State.Y, p.State.C = d.Y, d.C
		for r, i := range k.live {
			k.f[r] += p.Mole * d.C[i]
		}
		k.f[n+j] = d.D / rt
	}
	return nil
}

func (k *kkt) residual() float64 {
	r := 0.0
	for i := 0; i < len(k.live)+len(k.parts); i++ {
		r = math.Max(r, math.Abs(k.f[i]))
	}
	return r
}

// findLive lists the components that are present.
func (k *kkt) findLive() {
	for i := range k.mu {
		if !math.IsInf(k.mu[i], -1) {
			k.live = append(k.live, i)
		}
	}
}

// matrix is the Jacobian of the residuals with respect to the potentials (in RT)
// and the amounts, and the negative residuals as right-hand side. A vanishing
// multiple of the unit matrix keeps the step defined where the phases leave the
// plane free to turn (a bulk on a join of two stoichiometric solids).
func (k *kkt) matrix() (m linear) {
	rt := ternary.R * k.T
	n, p := len(k.live), len(k.parts)
	m.n = n + p
	for r, i := range k.live {
		for c, l := range k.live {
			for j := range k.parts {
				m.a[r][c] += k.parts[j].Mole * k.hess[j][i][l] * rt
			}
		}
		m.a[r][r] += 1e-13
		for j := range k.parts {
			m.a[r][n+j] = k.drive[j].C[i]
			m.a[n+j][r] = k.drive[j].C[i]
		}
	}
	for i := 0; i < n+p; i++ {
		m.a[i][n+p] = -k.f[i]
	}
	return m
}

// slope is the derivative of the residuals with respect to T, on the plane.
func (k *kkt) slope() (f [8]float64) {
	n := len(k.live)
	for j := range k.parts {
		for r, i := range k.live {
			f[r] += k.parts[j].Mole * k.ct[j][i]
		}
		f[n+j] = k.drive[j].S / (ternary.R * k.T)
	}
	return f
}

// step makes one Newton step in the potentials and the amounts.
func (k *kkt) step() error {
	m := k.matrix()
	if !m.solve() {
		return errSingular
	}
	k.advance(&m, -1)
	return nil
}

// advance applies a solved step, shortened where a potential would move by more
// than 2 RT; the amount of part skip is left alone.
func (k *kkt) advance(m *linear, skip int) {
	rt := ternary.R * k.T
	scale := 1.0
	for r := range k.live {
		if s := math.Abs(m.x[r]); s*scale > 2 {
			scale = 2 / s
		}
	}
	for r, i := range k.live {
		k.mu[i] += scale * m.x[r] * rt
	}
	for j := range k.parts {
		if j != skip {
			k.parts[j].Mole += scale * m.x[len(k.live)+j]
		}
	}
}
