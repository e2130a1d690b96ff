package main

import (
	"errors"
	"fmt"
	"slices"

	"thalweg/render"
	"thalweg/ternary/section"
)

// sectionOf is short for a section, of which a panel shows one.
type sectionOf = section.Section

// mostGroups bounds the values of a column that tell samples apart: there are no more
// symbols and colours that are told apart at a glance.
const mostGroups = 4

// samples are those of the plan and of its table, with symbol and colour by columns.
func (d *drawn) samples(s *subject, names bool) (out []render.Sample, groups []render.SampleGroup, err error) {
	for i, q := range d.plan.Sample {
		x, _, err := parseBulk("", q.Composition, s.sys.Components, s.basis)
		if err != nil {
			d.doc.Add(fmt.Sprintf("sample[%d].composition", i), usageWords(err), "write it like "+exampleBulk(s.sys.Components))
			return nil, nil, badInput(d.doc.Err())
		}
		out = append(out, render.Sample{Name: q.Name, Composition: x})
	}
	if d.plan.Samples == "" {
		return out, nil, nil
	}
	var more []string
	for _, c := range []string{d.plan.SymbolBy, d.plan.ColourBy} {
		if c != "" && !slices.Contains(more, c) {
			more = append(more, c)
		}
	}
	list, err := d.e.loadSamples(beside(d.o.Plan, d.plan.Samples), s, d.o.Quiet, more...)
	if err != nil {
		return nil, nil, err
	}
	symbols, err := d.kinds("symbol_by", d.plan.SymbolBy, more, list)
	if err != nil {
		return nil, nil, err
	}
	colours, err := d.kinds("colour_by", d.plan.ColourBy, more, list)
	if err != nil {
		return nil, nil, err
	}
	for _, q := range list {
		r := render.Sample{Name: q.Name, Composition: q.X}
		if !names {
			r.Name = ""
		}
		g := render.SampleGroup{}
		if k := slices.Index(more, d.plan.SymbolBy); k >= 0 {
			r.Symbol, g.Name = 1+slices.Index(symbols, q.More[k]), q.More[k]
		}
		if k := slices.Index(more, d.plan.ColourBy); k >= 0 {
			r.Colour = 1 + slices.Index(colours, q.More[k])
			switch {
			case g.Name == "":
				g.Name = q.More[k]
			case d.plan.SymbolBy != d.plan.ColourBy:
				g.Name += ", " + q.More[k]
			}
		}
		g.Symbol, g.Colour = r.Symbol, r.Colour
		if len(more) > 0 && !slices.Contains(groups, g) {
			groups = append(groups, g)
		}
		out = append(out, r)
	}
	return out, groups, nil
}

// kinds are the different values of a column, in the order of the table.
func (d *drawn) kinds(key, column string, more []string, list []sample) (out []string, err error) {
	k := slices.Index(more, column)
	if k < 0 {
		return nil, nil
	}
	for _, q := range list {
		if !slices.Contains(out, q.More[k]) {
			out = append(out, q.More[k])
		}
	}
	if len(out) > mostGroups {
		d.doc.Add(key, fmt.Sprintf("the column %s holds %d different values", column, len(out)), fmt.Sprintf("only %d symbols and colours are told apart at a glance: choose a column with fewer", mostGroups))
		return nil, badInput(d.doc.Err())
	}
	return out, nil
}

// usageWords is what an error of a flag says, without the flag.
func usageWords(err error) string {
	var u *usageError
	if errors.As(err, &u) && u.What != "" {
		return u.What
	}
	return err.Error()
}
