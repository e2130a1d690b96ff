package main

import (
	"fmt"
	"strings"
)

// mostRows is about the longest table of a point that is printed as text.
const mostRows = 12

func (r *pressureResult) text() string {
	var b strings.Builder
	s := r.series
	fmt.Fprintf(&b, "Invariant points against pressure in %s (%s)\n", r.sys.Title, r.sys.Name)
	fmt.Fprintf(&b, "%s; compositions in %s\n", r.span(), r.basis.Unit())
	if len(s.Problems) > 0 {
		b.WriteString("INCOMPLETE: it could not be completed or failed its own checks\n")
	}
	if m := r.metastable(); m != "" {
		b.WriteString(strings.ToUpper(m[:10]) + m[10:] + "\n")
	}
	b.WriteString("\nChanges\n")
	if len(s.Changes) == 0 {
		b.WriteString("  none\n")
	}
	for i := range s.Changes {
		c := &s.Changes[i]
		fmt.Fprintf(&b, "  %8.4f GPa  %s\n", c.Pressure/pascal, r.said(c))
	}
	every := (len(s.Pressures) + mostRows - 1) / mostRows
	if every > 1 {
		fmt.Fprintf(&b, "\nThe tables show one pressure in %d and the last; --format csv has all.\n", every)
	}
	for i := range s.Points {
		t := &s.Points[i]
		fmt.Fprintf(&b, "\n%s\n", r.pointName(t.Solids, t.Edge))
		tab := table{columns: append(append([]column{{head: "P", unit: "GPa"}, {head: "T", unit: "°C"}}, r.percentColumns()...), column{head: "kind", left: true})}
		for k, a := range t.At {
			if k%every != 0 && k != len(t.At)-1 {
				continue
			}
			row := append([]string{fixed(s.Pressures[a.Index]/pascal, 4), r.temperature(a.Node.T)}, r.percents(a.Node.Liquid)...)
			tab.row(append(row, string(a.Node.Kind))...)
		}
		tab.write(&b)
	}
	r.footing(&b)
	return b.String()
}
