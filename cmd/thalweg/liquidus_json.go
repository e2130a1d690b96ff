package main

import (
	"thalweg/ternary"
	"thalweg/ternary/liquidus"
)

// liquidusJSON is the result of the verb liquidus. Its keys are a promise to
// programs that read them.
type liquidusJSON struct {
	headJSON
	Invariants []nodeJSON           `json:"invariants"`
	Maxima     []nodeJSON           `json:"maxima"`
	Extrema    []nodeJSON           `json:"extrema"`     // minima and domes within fields and along edges
	OtherNodes []nodeJSON           `json:"other_nodes"` // ends of curves that are no points of state
	Curves     []curveJSON          `json:"curves"`
	Fields     []fieldJSON          `json:"fields"`
	Isotherms  []isothermJSON       `json:"isotherms"`
	Samples    []placedJSON         `json:"samples"`
	Unmixed    []amounts            `json:"two_liquids"` // liquids on the liquidus that separate into two
	Checks     projectionChecksJSON `json:"checks"`
	Provenance provenanceJSON       `json:"provenance"`
}

type nodeJSON struct {
	ID                string      `json:"id"`
	Kind              string      `json:"kind"`
	Edge              []string    `json:"edge"` // the two components of a point on the triangle's edge
	TemperatureC      number      `json:"temperature_C"`
	Liquid            amounts     `json:"liquid"`
	Solids            []string    `json:"solids"`
	Reaction          string      `json:"reaction"`     // empty where it is not unique
	Coefficients      amounts     `json:"coefficients"` // moles of each solid from one mole of liquid
	SolidCompositions []phaseJSON `json:"solid_compositions"`
}

type curveJSON struct {
	Solids []string    `json:"solids"`
	From   string      `json:"from"`
	To     string      `json:"to"`
	Points []pointJSON `json:"points"`
}

type pointJSON struct {
	TemperatureC      number      `json:"temperature_C"`
	Liquid            amounts     `json:"liquid"`
	Kind              string      `json:"kind"`
	Consumed          string      `json:"consumed"` // the solid that dissolves along a reaction curve
	SolidCompositions []phaseJSON `json:"solid_compositions"`
}

type fieldJSON struct {
	Solid        string    `json:"solid"`
	FromTwo      bool      `json:"two_liquids,omitempty"`
	AreaFraction number    `json:"area_fraction"` // of the triangle in the basis in force
	Peak         peakJSON  `json:"peak"`
	Outline      []amounts `json:"outline"`
}

type peakJSON struct {
	TemperatureC number  `json:"temperature_C"`
	Liquid       amounts `json:"liquid"`
}

type isothermJSON struct {
	TemperatureC number             `json:"temperature_C"`
	Lines        []isothermLineJSON `json:"lines"`
}

type isothermLineJSON struct {
	Solid  string    `json:"solid"`
	Closed bool      `json:"closed"`
	Points []amounts `json:"points"`
}

type placedJSON struct {
	Name         string  `json:"name"`
	Composition  amounts `json:"composition"`
	TemperatureC number  `json:"liquidus_temperature_C"`
	First        string  `json:"first_solid"`
	Split        bool    `json:"two_liquids_before"`
}

type projectionChecksJSON struct {
	Euler       int      `json:"euler"` // V − E + F − 1 − pieces: 0 when the graph is whole
	Vertices    int      `json:"vertices"`
	Edges       int      `json:"edges"`
	Faces       int      `json:"faces"`
	Pieces      int      `json:"pieces"`
	MaxResidual number   `json:"max_residual_RT"`
	Passed      bool     `json:"passed"`
	Problems    []string `json:"problems"`
}

type liquidusOptionsJSON struct {
	Basis       string   `json:"basis"`
	PressureGPa number   `json:"pressure_GPa"`
	Without     []string `json:"without"`
	IsothermsC  []number `json:"isotherms_C"`
}

func (r *liquidusResult) json() *liquidusJSON {
	p := r.projection
	j := &liquidusJSON{
		headJSON:   r.headJSON(r.complete),
		Invariants: []nodeJSON{}, Maxima: []nodeJSON{}, Extrema: []nodeJSON{}, OtherNodes: []nodeJSON{}, Curves: []curveJSON{}, Fields: []fieldJSON{},
		Isotherms: []isothermJSON{}, Samples: []placedJSON{}, Unmixed: r.compositions(p.Unmixed),
		Checks: newProjectionChecksJSON(&p.Checks),
	}
	for i := range p.Nodes {
		n := &p.Nodes[i]
		switch {
		case invariant(n):
			j.Invariants = append(j.Invariants, r.nodeJSON(n))
		case n.Kind == liquidus.Maximum:
			j.Maxima = append(j.Maxima, r.nodeJSON(n))
		default:
			j.OtherNodes = append(j.OtherNodes, r.nodeJSON(n))
		}
	}
	for i := range p.Extrema {
		j.Extrema = append(j.Extrema, r.nodeJSON(&p.Extrema[i]))
	}
	for i := range p.Curves {
		j.Curves = append(j.Curves, r.curveJSON(&p.Curves[i]))
	}
	for i := range p.Fields {
		f := &p.Fields[i]
		j.Fields = append(j.Fields, fieldJSON{r.solid(f.Solid), f.TwoLiquids, number(r.area(f)), peakJSON{number(celsius(f.PeakT)), r.composition(f.Peak)}, r.compositions(f.Outline)})
	}
	options := liquidusOptionsJSON{r.basis.String(), number(r.sys.Pressure / pascal), list(r.sys.Withheld), []number{}}
	for _, iso := range p.Isotherms {
		j.Isotherms = append(j.Isotherms, r.isothermJSON(iso))
		options.IsothermsC = append(options.IsothermsC, number(celsius(iso.T)))
	}
	for _, q := range r.samples {
		j.Samples = append(j.Samples, placedJSON{q.Name, r.composition(q.X), number(celsius(q.T)), r.first(q), q.split})
	}
	j.Provenance = r.provenanceJSON(options)
	return j
}

func (r *liquidusResult) nodeJSON(n *liquidus.Node) nodeJSON {
	names := r.names(n.Solids)
	j := nodeJSON{n.ID, string(n.Kind), r.edge(n), number(celsius(n.T)), r.composition(n.Liquid), names, r.reaction(n), amounts{}, r.phases(n.Solids)}
	for i, c := range n.Coefficients {
		if i < len(names) {
			j.Coefficients = append(j.Coefficients, amount{names[i], number(c)})
		}
	}
	return j
}

func (r *liquidusResult) curveJSON(c *liquidus.Curve) curveJSON {
	p := r.projection
	j := curveJSON{Solids: []string{r.solid(c.Solids[0]), r.solid(c.Solids[1])}, From: p.Nodes[c.From].ID, To: p.Nodes[c.To].ID}
	for i := range c.Points {
		q := &c.Points[i]
		j.Points = append(j.Points, pointJSON{number(celsius(q.T)), r.composition(q.Liquid), string(q.Kind), r.consumed(c, q), r.phases(q.Solids[:])})
	}
	return j
}

// consumed is the solid that dissolves at a point of a reaction curve; empty
// elsewhere.
func (r *liquidusResult) consumed(c *liquidus.Curve, q *liquidus.Point) string {
	if q.Kind != liquidus.Reaction || q.Consumed < 0 || q.Consumed > 1 {
		return ""
	}
	return r.solid(c.Solids[q.Consumed])
}

func (r *liquidusResult) isothermJSON(iso liquidus.Isotherm) isothermJSON {
	j := isothermJSON{number(celsius(iso.T)), []isothermLineJSON{}}
	for _, l := range iso.Lines {
		j.Lines = append(j.Lines, isothermLineJSON{r.solid(l.Solid), l.Closed, r.compositions(l.Points)})
	}
	return j
}

func (s *subject) compositions(list []ternary.Composition) []amounts {
	out := make([]amounts, len(list))
	for i, x := range list {
		out[i] = s.composition(x)
	}
	return out
}

func newProjectionChecksJSON(c *liquidus.Checks) projectionChecksJSON {
	return projectionChecksJSON{c.Euler, c.Vertices, c.Edges, c.Faces, c.Pieces, number(c.MaxResidual), c.Passed, list(c.Problems)}
}
