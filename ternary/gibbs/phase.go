package gibbs

import (
	"math"

	"thalweg/ternary"
)

// EndMember is one end-member of a phase.
type EndMember struct {
	Symbol  string
	Formula ternary.Formula
	C       [3]float64 // moles of the components in one formula unit; may be negative
	G       TFunc      // standard Gibbs energy at the system's pressure
}

// Phase is a liquid or a solid: one to three end-members that mix.
type Phase struct {
	Symbol  string // short symbol: An, Pl
	Name    string // anorthite, plagioclase
	Members []EndMember
	Mixing  Mixing
	// Uncertain marks a solid that stands for a field of a phase outside the
	// plane, or is otherwise not to be trusted: a remark for tables and figures.
	Remark string

	convexAbove float64 // K: above this temperature G(y) is convex; set by Prepare
	hasSlope    bool    // some excess term depends on temperature
}

// NewLiquid builds the liquid phase of three components with a mixing model.
func NewLiquid(cs ternary.Components, m Mixing) *Phase {
	p := &Phase{Symbol: "L", Name: "liquid", Mixing: m}
	for i, c := range cs {
		p.Members = append(p.Members, EndMember{Symbol: c.Symbol, Formula: c.Formula, C: ternary.Apex(i)})
	}
	return p.Prepare()
}

// Prepare completes a Phase whose fields have been filled in: it must be called
// once before the phase is used. It finds the temperature above which the phase
// cannot unmix.
func (p *Phase) Prepare() *Phase {
	if p.Mixing.Sites == 0 {
		p.Mixing.Sites = 1
	}
	p.hasSlope = false
	for _, q := range p.Mixing.Pairs {
		for _, l := range q.L {
			p.hasSlope = p.hasSlope || l.B != 0 || l.C != 0
		}
	}
	for _, l := range p.Mixing.Ternary {
		p.hasSlope = p.hasSlope || l.B != 0 || l.C != 0
	}
	p.convexAbove = p.findConvex()
	return p
}

// Stoichiometric reports that the phase has one end-member.
func (p *Phase) Stoichiometric() bool { return len(p.Members) == 1 }

// CanUnmix reports that the Gibbs energy of mixing may have more than one
// minimum against a plane at temperature T.
func (p *Phase) CanUnmix(T float64) bool { return T <= p.convexAbove }

// ConvexAbove is the temperature above which the phase cannot unmix: 0 for an
// ideal phase, +Inf when no such temperature was found.
func (p *Phase) ConvexAbove() float64 { return p.convexAbove }

// Gibbs is the Gibbs energy in J per mole of formula unit at end-member
// fractions y; S its entropy and H its enthalpy, counted like G from the pure
// liquid components.
func (p *Phase) Gibbs(y [3]float64, T float64) (G, S, H float64) {
	rt := p.Mixing.Sites * rGas
	for k := range p.Members {
		if y[k] <= 0 {
			continue
		}
		e := &p.Members[k]
		G += y[k] * e.G.At(T)
		S -= y[k] * e.G.Slope(T)
		if y[k] < 1 {
			G += rt * T * y[k] * math.Log(y[k])
			S -= rt * y[k] * math.Log(y[k])
		}
	}
	if !p.Mixing.ideal() {
		var ex excess
		p.Mixing.excess(&y, atT(T), &ex)
		G += ex.g
		if p.hasSlope {
			p.Mixing.excess(&y, slopeT(T), &ex)
			S -= ex.g
		}
	}
	return G, S, G + T*S
}

// Contents returns the moles of the components in one formula unit at y.
func (p *Phase) Contents(y [3]float64) (c [3]float64) {
	for k := range p.Members {
		m := &p.Members[k]
		for i := range c {
			c[i] += y[k] * m.C[i]
		}
	}
	return c
}

// Column returns, for a composition y of the phase, the chemical potentials of
// its end-members as functions of temperature. For an end-member with y = 0 the
// logarithm of its fraction is left out of the function: its potential is −Inf.
func (p *Phase) Column(y [3]float64) (mu [3]TFunc) {
	rs := p.Mixing.Sites * rGas
	for k := range p.Members {
		mu[k] = p.Members[k].G
		if y[k] > 0 {
			mu[k].B += rs * math.Log(y[k])
		}
	}
	if p.Mixing.ideal() {
		return mu
	}
	var ex excess
	p.Mixing.excess(&y, weights{1, 0, 0}, &ex)
	for k, v := range ex.partial(&y) {
		mu[k].A += v
	}
	if p.hasSlope {
		p.Mixing.excess(&y, weights{0, 1, 0}, &ex)
		for k, v := range ex.partial(&y) {
			mu[k].B += v
		}
		p.Mixing.excess(&y, weights{0, 0, 1}, &ex)
		for k, v := range ex.partial(&y) {
			mu[k].C += v
		}
	}
	return mu
}

// partial turns g and its derivatives into partial molar values:
// g + ∂g/∂y_k − Σ y ∂g/∂y, whatever g is off the plane Σy = 1.
func (e *excess) partial(y *[3]float64) [3]float64 {
	b := e.g - y[0]*e.d[0] - y[1]*e.d[1] - y[2]*e.d[2]
	return [3]float64{b + e.d[0], b + e.d[1], b + e.d[2]}
}

// Potentials are the chemical potentials of a phase's end-members with their
// derivatives.
type Potentials struct {
	Mu [3]float64    // J/mol
	DT [3]float64    // ∂μ/∂T at constant y
	DY [3][3]float64 // ∂μ_k/∂y_l; meaningful along directions with Σ dy = 0
}

// Potentials evaluates the chemical potentials at y and T without allocating.
// Entries of absent end-members (y = 0) are −Inf, and so are their derivatives
// with respect to T; their own derivative is +Inf.
func (p *Phase) Potentials(y *[3]float64, T float64, out *Potentials) {
	rs := p.Mixing.Sites * rGas
	*out = Potentials{}
	if !p.Mixing.ideal() {
		var ex excess
		p.Mixing.excess(y, atT(T), &ex)
		out.Mu = ex.partial(y)
		for l := 0; l < 3; l++ {
			r := y[0]*ex.h[0][l] + y[1]*ex.h[1][l] + y[2]*ex.h[2][l]
			for k := 0; k < 3; k++ {
				out.DY[k][l] = ex.h[k][l] - r
			}
		}
		if p.hasSlope {
			p.Mixing.excess(y, slopeT(T), &ex)
			out.DT = ex.partial(y)
		}
	}
	for k := range p.Members {
		e := &p.Members[k]
		if e.G != (TFunc{}) {
			out.Mu[k] += e.G.At(T)
			out.DT[k] += e.G.Slope(T)
		}
		ln := math.Log(y[k])
		out.Mu[k] += rs * T * ln
		out.DT[k] += rs * ln
		out.DY[k][k] += rs * T / y[k]
	}
}
