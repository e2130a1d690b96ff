// Package join cuts a ternary system along a line between two compositions: the
// diagram of temperature against composition.
//
// In: a gibbs.System and the two ends. Out: a [Diagram]: the fields of one, two or
// three phases, the lines between them and the points where lines meet, with the
// checks of the whole. An edge of the triangle gives the binary diagram with its
// liquidus, solidus, solvus and horizontals; on any other line the fields of three
// phases show as such. The order of work, and of reading:
//
//	types.go    what a diagram is
//	column.go   all changes of the assemblage with T at one composition
//	leap.go     a phase that leaps from one of its forms to another
//	station.go  where between two columns the sequence of assemblages changes
//	fold.go     where the two edges of a field turn into one another
//	slab.go     the lines between two stations, followed from X to X
//	field.go    fields out of slabs, vertical lines
//	check.go    what every diagram must satisfy
//
// The assemblages are those of package tangent; lines are followed by Newton's
// method on the exact condition that a phase has no amount.
package join
