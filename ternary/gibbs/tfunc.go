package gibbs

import "math"

// TFunc is the function A + B·T + C·T·ln T of temperature at one pressure, in
// J/mol with T in kelvin. Standard Gibbs energies and interaction terms all
// have this form, so sums of them are sums of coefficients.
type TFunc struct{ A, B, C float64 }

// At evaluates the function.
func (f TFunc) At(T float64) float64 {
	if f.C == 0 {
		return f.A + f.B*T
	}
	return f.A + T*(f.B+f.C*math.Log(T))
}

// Slope is the derivative with respect to T: minus the entropy.
func (f TFunc) Slope(T float64) float64 {
	if f.C == 0 {
		return f.B
	}
	return f.B + f.C*(1+math.Log(T))
}

// Add returns f + s·g.
func (f TFunc) Add(g TFunc, s float64) TFunc {
	return TFunc{f.A + s*g.A, f.B + s*g.B, f.C + s*g.C}
}

// weights are the multipliers of A, B and C in a sum over TFuncs: a value, a
// slope, or one coefficient alone.
type weights struct{ a, b, c float64 }

func atT(T float64) weights    { return weights{1, T, T * math.Log(T)} }
func slopeT(T float64) weights { return weights{0, 1, 1 + math.Log(T)} }

func (w weights) of(f TFunc) float64 { return w.a*f.A + w.b*f.B + w.c*f.C }
