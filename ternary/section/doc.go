// Package section cuts a ternary system at one temperature.
//
// In: a gibbs.System and T in kelvin. Out: a [Section]: every one-, two- and
// three-phase region of the triangle in mole fractions, tie lines at even spacing,
// and the checks of the whole. The order of work, and of reading:
//
//	plane.go    planes of chemical potentials and the phases that touch them
//	family.go   tie lines of two phases, followed as one family of planes
//	binary.go   the three edges
//	find.go     the search for every three-phase triangle
//	region.go   regions out of triangles, families and edges
//	check.go    what every section must satisfy
//	widen.go    solids outside the triangle: a larger triangle, and back
//
// A three-phase triangle is a plane that touches three phases; a two-phase region a
// family of planes with one degree of freedom, followed by continuation in the
// potentials until a third phase touches, an edge is reached, or the two phases
// become one. What the two leave over are the one-phase regions.
package section
