package main

import (
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/liquidus"
)

// csv has one record for each point: of the nodes, the boundary curves, the
// isotherms, the peaks of the fields, and the samples. The column id holds the
// node's, those of the curve's ends, the number of the piece of an isotherm
// (from 1), or the sample's name.
func (r *liquidusResult) csv() ([]byte, error) {
	head := append([]string{"record", "id", "kind", "solids", "temperature_C"}, r.heads("")...)
	t := newCSV(append(head, "reaction", "area_fraction", "status")...)
	state := r.statusCSV(r.complete)
	row := func(record, id, kind, solids string, T float64, x ternary.Composition, reaction, area string) {
		start := append([]string{record, id, kind, solids, exact(celsius(T))}, cells(r.percent(x))...)
		t.row(append(start, reaction, area, state)...)
	}
	p := r.projection
	for i := range p.Nodes {
		n := &p.Nodes[i]
		if n.Kind != liquidus.LoopStart {
			row("point", n.ID, string(n.Kind), strings.Join(r.names(n.Solids), " "), n.T, n.Liquid, r.reaction(n), "")
		}
	}
	for i := range p.Extrema {
		n := &p.Extrema[i]
		row("extremum", n.ID, string(n.Kind), strings.Join(r.names(n.Solids), " "), n.T, n.Liquid, r.reaction(n), "")
	}
	for i := range p.Curves {
		c := &p.Curves[i]
		id := p.Nodes[c.From].ID + "-" + p.Nodes[c.To].ID
		solids := r.solid(c.Solids[0]) + " " + r.solid(c.Solids[1])
		for _, q := range c.Points {
			row("curve", id, string(q.Kind), solids, q.T, q.Liquid, "", "")
		}
	}
	for i := range p.Fields {
		f := &p.Fields[i]
		kind := "peak"
		if f.TwoLiquids {
			kind = "peak, two liquids"
		}
		row("field", "", kind, r.solid(f.Solid), f.PeakT, f.Peak, "", exact(r.area(f)))
	}
	for _, iso := range p.Isotherms {
		for k, l := range iso.Lines {
			for _, x := range l.Points {
				row("isotherm", short(float64(k+1)), closed(l.Closed), r.solid(l.Solid), iso.T, x, "", "")
			}
		}
	}
	for _, q := range r.samples {
		row("sample", q.Name, "liquidus", r.first(q), q.T, q.X, "", "")
	}
	return t.bytes()
}

func closed(yes bool) string {
	if yes {
		return "closed"
	}
	return "open"
}
