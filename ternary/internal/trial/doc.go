// Package trial makes systems for tests: random ones from a seed, ideal ones,
// and a few built by hand to hold one awkward feature each.
//
// In: a seed and [Options]. Out: a gibbs.System, the same for the same seed.
// Every number in it is invented. [System] draws the random ones, [Ideal] makes
// the textbook case, [Cases] lists the hand-made ones, and [Permute] renames
// the components of any system.
//
// Nothing but tests imports this package.
package trial
