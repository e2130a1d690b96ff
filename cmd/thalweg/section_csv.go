package main

import (
	"fmt"

	"thalweg/ternary/gibbs"
)

// csv has one record for each end of each tie line and each corner of each
// three-phase triangle.
func (r *sectionsResult) csv() ([]byte, error) {
	t := newCSV(append([]string{"temperature_C", "region", "assemblage", "tie_line", "phase"}, append(r.heads(""), "status")...)...)
	for _, s := range r.sections {
		for i := range s.Regions {
			g := &s.Regions[i]
			row := func(tie string, st gibbs.State) {
				t.row(append(append([]string{exact(celsius(s.T)), fmt.Sprint(i + 1), r.assemblage(g.Phases), tie, r.anyPhase(st.Phase)},
					cells(r.percent(st.Composition()))...), r.statusCSV(s.Checks.Passed))...)
			}
			for k, l := range g.TieLines {
				row(fmt.Sprint(k+1), l.A)
				row(fmt.Sprint(k+1), l.B)
			}
			for _, c := range g.Corners {
				row("", c)
			}
		}
	}
	return t.bytes()
}
