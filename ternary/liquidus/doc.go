// Package liquidus computes the liquidus projection of a ternary system: which
// solid a liquid meets first on cooling and at what temperature, the boundary
// curves along which two solids coexist with liquid, the invariant points where
// three do, the primary fields between them and the isotherms over them.
//
// In: a gibbs.System. Out: a [Projection] in kelvin and mole fractions. The
// order of work, and of reading:
//
//	site.go        a liquid in the plane with its chemical potentials
//	saturation.go  T_φ(x) and the liquidus T_L(x) = max T_φ(x)
//	constraint.go  equations D_φ = 0 and their Newton solutions
//	trace.go       continuation along the solutions of two equations
//	edge.go        the three binary systems on the edges
//	grid.go        a mesh of liquids: seeds of what no edge leads to
//	boundary.go    boundary curves between nodes
//	classify.go    cotectic or reaction; eutectic, reaction point, peritectic
//	graph.go       the planar graph, its faces, Euler's formula
//	twoliquids.go  monotectic curves and their conjugate liquids
//	field.go       primary fields
//	extrema.go     azeotropes and congruent melting points
//	isotherm.go    isotherms
//	compute.go     the whole, in this order
//
// Nothing is hinted: curves start at edge points, at invariant points and at
// changes of the primary phase on the mesh that no traced curve explains. A
// result that fails its own checks says so in [Checks] and is not complete.
package liquidus
