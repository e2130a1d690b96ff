// Package ternary holds the vocabulary that every other room speaks: what a
// component is, how a composition is written, and how mole and mass fractions
// turn into one another.
//
// A [Composition] is a point of the triangle in mole fractions of the three
// components, in the order of the system file: index 0, 1, 2 and Σx = 1.
// A [Basis] says in which measure a composition is shown or read; [Components]
// carries the molar masses that the conversion needs. Formulas are parsed by
// [ParseFormula], which knows the standard atomic weights.
//
// Data flow: systems (files) → gibbs (phases) → liquidus, tangent, descent
// (results) → render (figures). All of them pass Compositions.
package ternary
