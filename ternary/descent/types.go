package descent

import (
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Mode is the way in which solids stay with the liquid.
type Mode string

const (
	Equilibrium Mode = "equilibrium" // solids stay in contact and react
	Fractional  Mode = "fractional"  // solids leave as they form (Rayleigh)
)

// Amount is a phase present in a step.
type Amount struct {
	State gibbs.State
	Mole  float64 // formula units per mole of bulk components
	Mass  float64 // fraction of the bulk's mass
}

// Step is one state of the path, in order of falling temperature.
type Step struct {
	T      float64 // K
	Event  string  // empty for a step between events; else what happens here: "Pl in"
	Liquid ternary.Composition
	// MeltMole and MeltMass are the fraction of the bulk that is liquid.
	MeltMole, MeltMass float64
	// Solids are all solids made so far: in contact (equilibrium) or removed,
	// with their mean composition (fractional).
	Solids []Amount
	// Crystallising are the solids that form at this step: indices in
	// System.Solids, rising; Instant are their states.
	Crystallising []int
	Instant       []gibbs.State
	Heat          float64 // J per gram of bulk released since the liquidus
	// Affinity is, for every solid of the system, its driving force against the
	// liquid in J/mol: negative for a solid that is not saturated.
	Affinity []float64
}

// Path is a line of descent.
type Path struct {
	System  *gibbs.System
	Mode    Mode
	Bulk    ternary.Composition
	LiquidT float64 // K, liquidus temperature of the bulk
	Steps   []Step
	EndT    float64 // K
	Reason  string  // why the path ends
	Checks  Checks
}

// Checks is the outcome of the path's examination of itself.
type Checks struct {
	MassBalance   float64 // largest |Σ amounts × compositions − bulk|
	MeltMonotone  bool
	TMonotone     bool
	PhaseRule     bool
	MaxDrive      float64 // largest driving force of any absent solid, in units of RT
	StableAgainst bool    // MaxDrive within tolerance
	Passed        bool
	Problems      []string
}
