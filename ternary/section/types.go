package section

import (
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Region is one region of a section.
type Region struct {
	// Phases are indices in System.Solids, gibbs.Liquid for the liquid, one to
	// three of them; a phase that coexists with itself is listed twice.
	Phases []int
	// Outline goes once round the region, first point not repeated; mole
	// fractions. A region between two stoichiometric phases has no area: its
	// outline is the tie line.
	Outline []ternary.Composition
	Holes   [][]ternary.Composition
	// TieLines of a two-phase region, at even spacing; the first and last bound it.
	TieLines []TieLine
	// Corners are the three phases of a three-phase region. The outline has as many
	// points, or others where a phase lies outside the triangle.
	Corners []gibbs.State

	sideA, sideB []ternary.Composition
}

// Sides are the courses of the two phases of a two-phase region, in the order of
// its tie lines; nil for other regions.
func (r *Region) Sides() (a, b []ternary.Composition) { return r.sideA, r.sideB }

// TieLine joins two phases that coexist.
type TieLine struct {
	A, B gibbs.State
	// Ends are where the line begins, at A, and ends within the triangle: the
	// compositions of the two phases, unless one lies outside.
	Ends [2]ternary.Composition
}

// Section is an isothermal section.
type Section struct {
	System   *gibbs.System
	T        float64 // K
	Regions  []Region
	Critical []ternary.Composition // compositions at which two coexisting phases become one
	Checks   Checks
}

// Checks is the outcome of the section's examination of itself.
type Checks struct {
	Area         float64 // sum of the regions' areas, as a share of the triangle
	Tested       int     // bulk compositions compared with the equilibrium at each
	Misplaced    int     // of these, in a region of another assemblage
	MaxResidual  float64 // largest driving force of a corner or tie line's end, RT
	Passed       bool
	Problems     []string
	OneTwoThree  [3]int // numbers of regions by number of phases
	TieLineError float64
}
