package gibbs

import (
	"fmt"
	"math"

	"thalweg/ternary"
)

// Fusion describes melting at the reference pressure: liquid minus solid.
type Fusion struct {
	T  float64 // melting point, K
	H  float64 // heat of fusion at T, J per mole of formula unit
	Cp float64 // change of heat capacity, J/(mol K), taken constant
	V  float64 // change of volume at the reference pressure, m³/mol
	VP float64 // its change with pressure, m³/(mol Pa)
	// Curve is a measured melting curve that is met exactly at every pressure; V and
	// VP are then without effect.
	Curve *SimonGlatzel
}

// SimonGlatzel is a melting curve, T = T₀·(1 + P/A)^(1/C) with P above the reference
// pressure (Simon & Glatzel 1929, Z. anorg. allg. Chem. 178, 309–316).
type SimonGlatzel struct {
	A float64 // Pa, positive
	C float64 // positive
}

// Clapeyron is the change of volume, m³/mol, that belongs to an initial slope of the
// melting curve, K/Pa: ΔV = (dT/dP)·ΔH/T.
func Clapeyron(f Fusion, slope float64) float64 { return slope * f.H / f.T }

// work is ∫ΔV dP, J/mol, over the pressure dP above the reference. A measured melting
// curve T(P) says what it must be for liquid and solid to be equal on it, where
// ΔG_fus = 0 at every P:
//
//	−{ΔH(1 − T/T₀) + ΔCp[(T − T₀) − T ln(T/T₀)]}
//
// Its derivative at the reference pressure is Clapeyron's ΔV. Taken as the same at all
// temperatures, it leaves ΔS_fus as it is at the reference pressure.
func (f Fusion) work(dP float64) float64 {
	if f.Curve == nil {
		return f.V*dP + f.VP*dP*dP/2
	}
	T := f.T * math.Pow(1+dP/f.Curve.A, 1/f.Curve.C)
	return -f.H*(1-T/f.T) - f.Cp*((T-f.T)-T*math.Log(T/f.T))
}

// Melting is the standard Gibbs energy of a solid counted from its own liquid:
//
//	−ΔG_fus = −{ΔH(1 − T/Tm) + ΔCp[(T − Tm) − T ln(T/Tm)] + ∫ΔV dP}
//
// with dP in Pa above the reference pressure. With ΔCp = 0 and an ideal liquid
// it leads to the freezing-point law of Schröder and van Laar.
func Melting(f Fusion, dP float64) TFunc {
	return TFunc{
		A: -f.H + f.Cp*f.T - f.work(dP),
		B: f.H/f.T - f.Cp*(1+math.Log(f.T)),
		C: f.Cp,
	}
}

// CompoundMelting is Melting counted from the model liquid of the compound's
// own composition c (moles of components per formula unit), so that the
// congruent melting point, real or metastable, is met exactly whatever the
// liquid's mixing terms are. It reports an error when c is outside the
// triangle, where there is no such liquid.
func CompoundMelting(liquid *Phase, c [3]float64, f Fusion, dP float64) (TFunc, error) {
	sum := c[0] + c[1] + c[2]
	var x [3]float64
	for i := range c {
		if c[i] < 0 {
			return TFunc{}, fmt.Errorf("the composition %v is outside the triangle, so it has no liquid of its own", c)
		}
		x[i] = c[i] / sum
	}
	col := liquid.Column(x)
	g := Melting(f, dP)
	for i := range c {
		if c[i] > 0 {
			g = g.Add(col[i], c[i])
		}
	}
	return g, nil
}

// Transition is the standard Gibbs energy of a form that is in equilibrium with
// another, base, at temperature T: the change base → this form takes up H
// (J/mol) and V (m³/mol), so G = G_base + H(1 − t/T) + V·dP.
func Transition(base TFunc, T, H, V, dP float64) TFunc {
	return base.Add(TFunc{A: H + V*dP, B: -H / T}, 1)
}

// Reaction is the standard Gibbs energy Σ ν·G + ΔH − TΔS + ΔV·dP of a phase
// formed from others by a reaction with stoichiometric numbers nu.
func Reaction(from []TFunc, nu []float64, H, S, V, dP float64) TFunc {
	g := TFunc{A: H + V*dP, B: -S}
	for i, f := range from {
		g = g.Add(f, nu[i])
	}
	return g
}

// rGas is the molar gas constant, J/(mol K).
const rGas = ternary.R
