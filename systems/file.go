package systems

import (
	"crypto/sha256"
	"encoding/hex"
	"slices"

	"thalweg/ternary"
)

// File is a system file that has been read and checked. Its numbers keep the
// units of the file (°C, kJ/mol, cm³/mol, GPa); [File.At] turns them into the
// kelvin, J/mol and pascal of the computation.
type File struct {
	Name             string // built-in name, or the path as given
	Title            string
	About            string // what the system stands for
	Basis            string // note on the mixing unit: why these formula units
	Calibration      string // note on how well it reproduces measurements
	TemperatureScale string
	PressureGPa      float64    // reference pressure of the standard states
	TemperatureC     [2]float64 // range for which the file vouches
	Cautions         []string
	Limits           []string // what the model leaves out
	Components       ternary.Components
	Liquid           Mixing
	Solids           []Solid

	raw []byte
}

// SHA256 is the hash of the file's bytes as read, in hexadecimal.
func (f *File) SHA256() string {
	sum := sha256.Sum256(f.raw)
	return hex.EncodeToString(sum[:])
}

// Raw returns a copy of the file's bytes as read.
func (f *File) Raw() []byte { return slices.Clone(f.raw) }

// Provenance says where a number comes from.
type Provenance struct {
	Source   string // citation; empty for a fitted value
	Recalled bool   // taken from memory of the source, not read in it
	FittedTo string // the measurements that a fitted value was fitted to
	Note     string
}

// Quantity is one number of a system file.
type Quantity struct {
	Given       bool // false: the file does not give it, and Value is 0
	Value       float64
	Unit        string  // "°C", "kJ/mol", "J/(mol K)", "cm³/mol"
	Uncertainty float64 // as published, or the standard error of a fitted value; 0: not given
	Provenance
}

// Mixing is the mixing model of the liquid or of a solid solution.
type Mixing struct {
	Sites     float64 // sites of mixing per formula unit
	Extension string  // "muggianu", "kohler" or "toop"
	Odd       string  // symbol of the odd member of Toop's extension
	Pairs     []Pair
	Ternary   []TernaryTerm
}

// Pair is the Redlich–Kister series of two members, y_i·y_j·Σ L_k·(y_i − y_j)^k,
// where i is Of[0] and j is Of[1].
type Pair struct {
	Of    [2]string
	Terms []Term
}

// Term is L_k = A + B·T + C·T·ln T; A in kJ/mol, B and C in J/(mol K).
type Term struct {
	Order   int // k
	A, B, C Quantity
}

// TernaryTerm is the coefficient of y_0·y_1·y_2·y_On.
type TernaryTerm struct {
	On      string
	A, B, C Quantity
}

// Solid is a solid with one to three members.
type Solid struct {
	Symbol  string
	Name    string
	Remark  string
	Members []Member
	Mixing  Mixing
}

// Member is one end-member of a solid. The member of a stoichiometric solid has
// the solid's symbol.
type Member struct {
	Symbol      string
	Formula     ternary.Formula
	Composition [3]float64 // moles of the components in one formula unit
	State       State
}

// StateKind is the way in which a standard state is given.
type StateKind string

const (
	Melting    StateKind = "melting"    // against its own liquid
	Transition StateKind = "transition" // against another form
	Reaction   StateKind = "reaction"   // against other solids
)

// State is a member's standard state. Melting uses T, H, Cp and V (liquid minus
// solid); Transition uses From (one reactant with ν = 1), T, H and V (this form
// minus the other); Reaction uses From, H, S and V (this member minus Σ ν·others).
type State struct {
	Kind           StateKind
	From           []Reactant
	T, H, S, Cp, V Quantity
	VP             Quantity // change of V with pressure
	Slope          Quantity // of the melting curve, in place of V
	CurveA, CurveC Quantity // of Simon and Glatzel's melting curve, in place of both
}

// Compressible reports that the file says what a change of pressure does.
func (s *State) Compressible() bool {
	return s.V.Given || s.Slope.Given || s.CurveA.Given && s.CurveC.Given
}

// Reactant is a member that a standard state is counted from. Solid is an index
// into File.Solids and Member one into its members; when Solid is -1 the reactant
// is the pure liquid component Member.
type Reactant struct {
	Phase  string // as written: symbol, SOLID.MEMBER or L.COMPONENT
	Solid  int
	Member int
	Nu     float64
}

// Clone returns a deep copy, for varying numbers without touching the original.
func (f *File) Clone() *File {
	g := *f
	g.Cautions, g.Limits = slices.Clone(f.Cautions), slices.Clone(f.Limits)
	g.Liquid = f.Liquid.clone()
	g.Solids = slices.Clone(f.Solids)
	for i := range g.Solids {
		s := &g.Solids[i]
		s.Mixing = s.Mixing.clone()
		s.Members = slices.Clone(s.Members)
		for k := range s.Members {
			s.Members[k].State.From = slices.Clone(s.Members[k].State.From)
		}
	}
	return &g
}

func (m Mixing) clone() Mixing {
	m.Pairs = slices.Clone(m.Pairs)
	for i := range m.Pairs {
		m.Pairs[i].Terms = slices.Clone(m.Pairs[i].Terms)
	}
	m.Ternary = slices.Clone(m.Ternary)
	return m
}
