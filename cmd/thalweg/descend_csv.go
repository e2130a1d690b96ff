package main

import (
	"strings"

	"thalweg/ternary/descent"
)

// csv has one record for each step of each path. The columns of a solid are its
// share of the bulk's mass and its composition.
func (r *pathsResult) csv() ([]byte, error) {
	var paths []*descent.Path
	for _, c := range r.courses {
		if c.err == nil {
			paths = append(paths, c.path)
		}
	}
	keys := r.solidKeys(paths)
	head := append([]string{"sample", "mode", "temperature_C", "event", "melt_fraction_mass"}, r.heads("liquid_")...)
	if r.mode == descent.FractionalMelting {
		head = append(head, r.heads("pool_")...)
	}
	for _, k := range keys {
		head = append(append(head, k.name+"_fraction_mass"), r.heads(k.name+"_")...)
	}
	head = append(head, "crystallising", "heat_J_per_g")
	for _, p := range r.sys.Solids {
		head = append(head, "affinity_"+p.Symbol+"_J_per_mol")
	}
	t := newCSV(append(head, "status")...)
	for i := range r.courses {
		c := &r.courses[i]
		if c.err != nil {
			row := make([]string, len(head)+1)
			row[0], row[1], row[3], row[len(head)] = c.Name, string(r.mode), "not followed: "+c.err.Error(), r.statusCSV(false)
			t.row(row...)
			continue
		}
		for k := range c.path.Steps {
			t.row(append(r.stepCSV(c, &c.path.Steps[k], keys), r.statusCSV(c.complete()))...)
		}
	}
	return t.bytes()
}

func (r *pathsResult) stepCSV(c *course, s *descent.Step, keys []solidKey) []string {
	row := append([]string{c.Name, string(r.mode), exact(celsius(s.T)), s.Event, exact(part(s.MeltMass))}, cells(r.percent(s.Liquid))...)
	if r.mode == descent.FractionalMelting {
		row = append(row, cells(r.percent(s.Pool))...)
	}
	for _, k := range keys {
		a, ok := k.find(s)
		if !ok {
			row = append(row, "0", "", "", "")
			continue
		}
		row = append(append(row, exact(part(a.Mass))), cells(r.percent(a.State.Composition()))...)
	}
	forming := make([]string, len(s.Crystallising))
	for i, p := range s.Crystallising {
		forming[i] = r.solid(p)
	}
	row = append(row, strings.Join(forming, " "), exact(part(s.Heat)))
	for _, a := range s.Affinity {
		row = append(row, exact(drive(a)))
	}
	return row
}
