package descent

import (
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Mode is the way in which solids stay with the liquid.
type Mode string

const (
	Equilibrium Mode = "equilibrium" // cooling: solids stay in contact and react
	Fractional  Mode = "fractional"  // cooling: solids leave as they form (Rayleigh), or in part

	BatchMelting      Mode = "batch melting"      // heating: the melt stays with the solids
	FractionalMelting Mode = "fractional melting" // heating: the melt leaves as it forms
)

// Melts reports that a mode is followed by rising temperature.
func (m Mode) Melts() bool { return m == BatchMelting || m == FractionalMelting }

// Amount is a phase present in a step.
type Amount struct {
	State gibbs.State
	Mole  float64 // formula units per mole of bulk components
	Mass  float64 // fraction of the bulk's mass
}

// Step is one state of the path, in order of falling temperature for
// crystallisation and of rising temperature for melting.
type Step struct {
	T      float64 // K
	Event  string  // empty for a step between events; else what happens here: "Pl in"
	Liquid ternary.Composition
	// MeltMole and MeltMass are the fraction of the bulk that is liquid; in
	// fractional melting all that has been melted so far.
	MeltMole, MeltMass float64
	// Solids are all solids made so far, in contact or removed, a solid of
	// which part was removed with its mean composition. On melting they are the
	// solids that are left.
	Solids []Amount
	// Contact are those solids, or that part of them, that are in contact with
	// the liquid: all of them at equilibrium, none in fractional
	// crystallisation without retention.
	Contact []Amount
	// Crystallising are the solids that form from the liquid at this step, and
	// on heating those that melt: indices in System.Solids; Instant are their
	// states. A solid that unmixes may stand there twice.
	Crystallising []int
	Instant       []gibbs.State
	// Heat is in J per gram of bulk, released since the liquidus or, on heating,
	// taken up since the solidus. It counts from the pure liquid components at
	// the temperature of the step: the heat that these give off on cooling is
	// not in it, for the model does not hold their heat capacities.
	Heat float64
	// Affinity is, for every solid of the system, its driving force against the
	// liquid in J/mol: negative for a solid that is not saturated.
	Affinity []float64
	// Pool is, in fractional melting, the mean composition of all the liquid
	// removed so far; otherwise it is Liquid.
	Pool ternary.Composition
}

// Path is a line of descent or of melting.
type Path struct {
	System  *gibbs.System
	Mode    Mode
	Bulk    ternary.Composition
	Retain  float64 // fraction of newly formed solids kept in contact: 1 at equilibrium
	LiquidT float64 // K, liquidus temperature of the bulk
	Steps   []Step
	EndT    float64 // K
	Reason  string  // why the path ends
	Checks  Checks
}

// Checks is the outcome of the path's examination of itself.
type Checks struct {
	MassBalance   float64 // largest |Σ amounts × compositions − bulk|
	MeltMonotone  bool    // the amount of melt never turns back
	TMonotone     bool    // nor does the temperature
	PhaseRule     bool
	MaxDrive      float64 // largest driving force of any absent solid, in units of RT
	StableAgainst bool    // MaxDrive within tolerance
	Passed        bool
	Problems      []string
}
