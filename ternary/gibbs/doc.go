// Package gibbs describes phases and their Gibbs energy.
//
// Every phase, liquid or solid, is the same thing: a [Phase] made of one to
// three [EndMember]s and a [Mixing] model. Energies are J per mole of formula
// unit, temperatures kelvin, and everything is counted from the three pure
// liquid components, whose Gibbs energy is zero at every T and P.
//
// At a fixed pressure every standard state and every interaction term is a
// function A + B·T + C·T ln T, a [TFunc]; the standard states of a system file
// (melting, compound of the liquid, transition, reaction) are the functions of
// standard.go that produce one.
//
// A [System] is the liquid with its solids at one pressure: the input of the
// rooms tangent, liquidus and descent. The central question asked of a phase is
// its driving force against a plane of chemical potentials ([Phase.Drive]),
// D = max over y of μ·c(y) − G(y).
package gibbs
