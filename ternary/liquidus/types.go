package liquidus

import (
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Kind classifies a node of the projection.
type Kind string

const (
	// Points where three solids meet in the interior, by the signs of the
	// reaction L ↔ aA + bB + cC.
	Eutectic      Kind = "eutectic"       // L → A + B + C
	ReactionPoint Kind = "reaction point" // L + A → B + C
	Peritectic    Kind = "peritectic"     // L + A + B → C
	Transition    Kind = "transition"     // two forms of one composition meet a third solid
	Metatectic    Kind = "metatectic"     // the reaction makes liquid on cooling: it takes up heat from left to right
	// Points on an edge of the triangle reuse Eutectic, Peritectic and
	// Transition for two solids.
	Maximum   Kind = "maximum"    // T has a maximum along a boundary curve
	Minimum   Kind = "minimum"    // T has a minimum along a boundary curve
	LoopStart Kind = "loop start" // artificial node that closes a ring-shaped curve of constant T
	AtApex    Kind = "apex"       // a curve runs into an apex: one solid lies outside the triangle
	Critical  Kind = "critical"   // the two liquids, or the two forms of one solid solution, become identical
	// Monotectic: two liquids coexist with two solids (inside) or one (on an
	// edge). Each of the two liquids has a node; Conjugate joins them.
	Monotectic Kind = "monotectic"
)

// CurveKind says what a falling temperature does along a boundary curve.
type CurveKind string

const (
	Cotectic   CurveKind = "cotectic"   // even: L → A + B
	Reaction   CurveKind = "reaction"   // odd: L + A → B
	Polymorph  CurveKind = "polymorph"  // A and B have one composition; the curve is an isotherm
	Degenerate CurveKind = "degenerate" // the sign cannot be told: at an extremum of T
	TwoLiquids CurveKind = "monotectic" // the liquid coexists with a second liquid and a solid
)

// Node is a vertex of the projection: an invariant point, a point on an edge
// of the triangle, or an extremum of T along a curve.
type Node struct {
	ID     string // E1, R1, P1, T1 inside; e1, p1, t1 on an edge; m1 for extrema
	Kind   Kind
	Edge   int // index of the component that is absent, or -1 inside the triangle
	Liquid ternary.Composition
	T      float64 // K
	// Solids are the phases that coexist with the liquid. A second liquid is
	// listed among them, with State.Phase gibbs.Liquid.
	Solids []gibbs.State
	// Coefficients are moles of formula units of each solid made from one mole
	// of liquid components (negative: the solid is consumed with the liquid).
	// Nil where the reaction is not unique.
	Coefficients []float64
	// Heat is what the reaction, read from the liquid to the solids, releases: J
	// per mole of liquid components. It is negative at a metatectic, and at the
	// liquid of a monotectic that is made of the other.
	Heat float64
	// Conjugate is the index of the node of the second liquid, or -1.
	Conjugate int
	// Residual is the largest |driving force| of the solids, divided by RT.
	Residual float64
}

// Itself stands, among the phases of a node's reaction, for the node's own liquid.
const Itself = -1

// Reaction returns what is used up and what is made at the node when heat is taken
// away: indices in Solids, and Itself first on its side. A phase that takes no part
// is in neither. Both are empty where the reaction is not unique.
func (n *Node) Reaction() (gone, made []int) {
	if len(n.Coefficients) == 0 || len(n.Coefficients) != len(n.Solids) {
		return nil, nil
	}
	gone = append(gone, Itself)
	for i, c := range n.Coefficients {
		switch {
		case c < 0:
			gone = append(gone, i)
		case c > 0:
			made = append(made, i)
		}
	}
	if n.Heat < 0 {
		return made, gone
	}
	return gone, made
}

// Point is one computed point of a boundary curve.
type Point struct {
	Liquid  ternary.Composition
	T       float64
	Kind    CurveKind
	Solids  [2]gibbs.State
	Tangent [3]float64 // unit direction of the liquid's composition towards falling T, Σ = 0
	// Consumed is, on a reaction curve, which of the two solids dissolves: 0 or
	// 1; otherwise -1.
	Consumed int
}

// Curve is an arc of the projection between two nodes, along which two solids
// coexist with the liquid and T does not rise.
type Curve struct {
	// Solids are indices in System.Solids. They are equal where two forms of one
	// solid solution coexist; the second is gibbs.Liquid on a monotectic curve,
	// where the liquid coexists with one solid and a second liquid.
	Solids   [2]int
	From, To int // indices in Projection.Nodes; T(From) ≥ T(To)
	Points   []Point
}

// Field is one connected primary field.
type Field struct {
	Solid int // index in System.Solids
	// TwoLiquids: liquids of this field have separated into two before the solid
	// comes in.
	TwoLiquids bool
	// Outline goes once round the field, counter-clockwise in the drawing of
	// Composition.XY, first point not repeated. A field with holes lists them.
	Outline []ternary.Composition
	Holes   [][]ternary.Composition
	Peak    ternary.Composition // highest liquidus temperature of the field
	PeakT   float64             // K
}

// IsothermLine is one connected piece of an isotherm, within one field.
type IsothermLine struct {
	Solid  int
	Points []ternary.Composition
	Closed bool
	// TieLine: the line joins two conjugate liquids across a two-liquid field.
	TieLine bool
}

// Isotherm is the set of liquids whose liquidus temperature is T.
type Isotherm struct {
	T     float64 // K
	Lines []IsothermLine
}

// Checks is the outcome of the projection's examination of itself.
type Checks struct {
	Vertices, Edges, Faces, Pieces int
	Euler                          int     // V − E + F − 1 − pieces; 0 when the graph is whole
	MaxResidual                    float64 // largest residual of any node, in units of RT
	Passed                         bool
	Problems                       []string // why not, in plain words
}

// Projection is the liquidus projection of a system.
type Projection struct {
	System    *gibbs.System
	Nodes     []Node
	Curves    []Curve
	Fields    []Field
	Isotherms []Isotherm
	Checks    Checks
	// Extrema are points within fields of solid solutions, or on edges, at which
	// the liquidus temperature is stationary: minima, and maxima other than
	// apexes. They are no nodes of the graph.
	Extrema []Node
	// Unmixed lists liquids on the liquidus that separate into two but lie in no
	// two-liquid field that was found: the projection is then not complete.
	Unmixed []ternary.Composition
	// Apexes are the liquidus temperatures, K, and primary solids of the three
	// pure components.
	Apexes [3]ApexPoint
}

// ApexPoint is the liquidus of a pure component.
type ApexPoint struct {
	Solid int     // index in System.Solids, or -1
	T     float64 // K
}
