// Package tangent finds the stable assemblage of a bulk composition at one
// temperature: the common tangent plane of all phases.
//
// In: a gibbs.System, a bulk composition in mole fractions, T in kelvin. Out: an
// [Equilibrium]: the plane of chemical potentials, the phases that lie on it,
// their compositions and amounts.
//
// The dual form is used: maximise μ·b subject to D_φ(μ, T) ≤ 0 for every phase.
// It is convex with three unknowns however many phases there are. Cutting planes
// (Kelley 1960, J. SIAM 8, 703–712) bring the plane close, a revised simplex
// carrying three phase points; Newton's method on the phases then touching the
// plane finishes to machine precision, and every phase is asked again whether
// it lies above (see [Solve] and refine.go).
package tangent
