// Package descent follows the line of descent of a sample: what a liquid does on
// cooling, which solids it makes, how much, and where it ends.
//
// In: a gibbs.System, a bulk composition in mole fractions. Out: a [Path] of
// [Step]s by falling temperature, with a [Checks] on itself. Start reading at
// [Follow]:
//
//	equilibrium.go  solids stay in contact: tangent planes along falling T
//	event.go        temperatures at which a phase comes or goes, solved exactly
//	reaction.go     what happens while T stands still
//	fractional.go   solids leave as they form: a differential equation
//	rates.go        which saturated solids form, and in what proportion
//	record.go       rows, amounts, heats and affinities
//	check.go        what every path must satisfy
//
// Amounts are per mole of bulk components and, as mass fractions, per mass of
// bulk. Heats are J per gram of bulk.
package descent
