package liquidus

import (
	"errors"
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Options of Compute. The zero value asks for everything but isotherms.
type Options struct {
	// Isotherms are temperatures, K, at which isotherms are traced, in the order of
	// the result.
	Isotherms []float64
	// Mesh is the number of intervals per side of the mesh that seeds and
	// checks the search; 0 means DefaultMesh.
	Mesh int
}

// DefaultMesh is fine enough that 97 % of random systems of up to eight solids
// need none of the refinement behind it; see the tests.
const DefaultMesh = 22

// engine is one computation.
type engine struct {
	sys      *gibbs.System
	tRef     float64 // K, scale of temperature: the highest melting point
	rtRef    float64 // J/mol, R·tRef: scale of energies
	tLow     float64 // K, lower limit of the search for saturation
	tCap     float64 // K, upper limit
	nodes    []Node
	ports    [][]port // by node: curves that start or end there
	raw      []rawCurve
	edges    [3]*edge
	mesh     *mesh
	problems []string
	pending  []departure
	buffer   []tracePoint // reused by isotherms
}

// Limits of the temperatures at which saturation is sought, as multiples of
// the highest melting point of any end-member.
const (
	capFactor = 1.6
	lowFactor = 0.02
)

// Compute returns the liquidus projection of the system. An error means that
// the question makes no sense (no solid, a system without a liquid); a
// computation that could not be completed, or that fails its own examination,
// is returned with Checks.Passed false and the reasons in Checks.Problems.
func Compute(sys *gibbs.System, o Options) (*Projection, error) {
	e, err := newEngine(sys)
	if err != nil {
		return nil, err
	}
	if o.Mesh <= 0 {
		o.Mesh = DefaultMesh
	}
	for k := range e.edges {
		e.edges[k] = e.scanEdge(k)
	}
	e.mesh = e.newMesh(o.Mesh)
	e.spreadSplits()
	e.followEdges()
	e.followPending()
	e.explainMesh()
	e.findIslands()
	p := e.assemble()
	for _, T := range o.Isotherms {
		p.Isotherms = append(p.Isotherms, e.isotherm(p, T))
	}
	e.finish(p)
	return p, nil
}

// newEngine sets the scales of a computation.
func newEngine(sys *gibbs.System) (*engine, error) {
	if sys.Liquid == nil || len(sys.Liquid.Members) != 3 {
		return nil, errors.New("liquidus: the system has no liquid of three components")
	}
	if len(sys.Solids) == 0 {
		return nil, errors.New("liquidus: the system has no solid, so nothing freezes")
	}
	e := &engine{sys: sys}
	e.tRef, e.rtRef, e.tCap, e.tLow = 1000, ternary.R*1000, 1e5, 1
	top := 0.0
	for i, p := range sys.Solids {
		for k := range p.Members {
			T, ok := e.meltingPoint(i, k)
			if ok {
				top = math.Max(top, T)
			}
		}
	}
	if top <= 0 {
		return nil, errors.New("liquidus: no solid melts at any temperature; check the standard states")
	}
	e.tRef, e.rtRef = top, ternary.R*top
	e.tCap, e.tLow = capFactor*top, lowFactor*top
	return e, nil
}

// meltingPoint is the temperature at which an end-member alone coexists with
// the liquid of its composition; none for one outside the triangle.
func (e *engine) meltingPoint(phase, member int) (float64, bool) {
	p := e.sys.Solids[phase]
	c := p.Members[member].C
	x, err := ternary.Normalize(c)
	if err != nil || !x.Inside(0) {
		return 0, false
	}
	f := gibbs.TFunc{}.Add(p.Members[member].G, -1)
	for i, col := range e.sys.Liquid.Column(x) {
		if c[i] > 0 {
			f = f.Add(col, c[i])
		}
	}
	// f is positive below the melting point; scan down from far above.
	for hi := 2e4; hi > 1; hi *= 0.97 {
		if f.At(hi*0.97) > 0 && f.At(hi) <= 0 {
			return hi, true
		}
	}
	return 0, false
}

func (e *engine) problem(text string) {
	for _, p := range e.problems {
		if p == text {
			return
		}
	}
	e.problems = append(e.problems, text)
}

func (e *engine) symbol(phase int) string {
	if phase == gibbs.Liquid {
		return "a second liquid"
	}
	return e.sys.Solids[phase].Symbol
}

// place writes a composition for a message.
func (e *engine) place(x ternary.Composition) string {
	c := e.sys.Components
	return fmt.Sprintf("%s %.4f, %s %.4f, %s %.4f (mole fractions)", c[0].Symbol, x[0], c[1].Symbol, x[1], c[2].Symbol, x[2])
}

// samePlace reports that two solids have one fixed composition: two forms of
// one substance, whose boundary is an isotherm.
func (e *engine) samePlace(a, b int) bool {
	if a < 0 || b < 0 {
		return false
	}
	p, q := e.sys.Solids[a], e.sys.Solids[b]
	if !p.Stoichiometric() || !q.Stoichiometric() {
		return false
	}
	return parallel(p.Members[0].C, q.Members[0].C)
}

// parallel reports that two compositions are multiples of each other.
func parallel(c, d [3]float64) bool {
	n := math.Sqrt(c[0]*c[0]+c[1]*c[1]+c[2]*c[2]) * math.Sqrt(d[0]*d[0]+d[1]*d[1]+d[2]*d[2])
	v := vec(c).cross(vec(d))
	return v.norm() <= 1e-9*n
}
