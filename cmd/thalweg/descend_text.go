package main

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"thalweg/ternary/descent"
)

func (r *pathsResult) text() string {
	var b strings.Builder
	complete := true
	for i := range r.courses {
		complete = complete && r.courses[i].complete()
	}
	what := "Line of descent in"
	switch {
	case r.mode.Melts():
		what = "Melting in"
	case r.table:
		what = "Lines of descent in"
	}
	r.heading(&b, what, r.process(), complete)
	if r.table {
		r.summary(&b)
	}
	for i := range r.courses {
		r.courseText(&b, &r.courses[i])
	}
	r.footing(&b)
	return b.String()
}

// summary is one row for each sample.
func (r *pathsResult) summary(b *strings.Builder) {
	b.WriteString("\nSamples\n")
	t := table{columns: append([]column{{head: "name", left: true}}, r.percentColumns()...)}
	from, first := "liquidus", "first solid"
	if r.mode.Melts() {
		from, first = "solidus", "melting first"
	}
	t.columns = append(t.columns, column{head: from, unit: "°C"}, column{head: first, left: true}, column{head: "end", unit: "°C"}, column{head: "how it ends", left: true})
	for _, c := range r.courses {
		row := append([]string{c.Name}, r.percents(c.X)...)
		if c.err != nil {
			t.row(append(row, "", "", "", "NOT FOLLOWED: "+c.err.Error())...)
			continue
		}
		t.row(append(row, r.temperature(c.path.Steps[0].T), r.firstSolid(c.path), r.temperature(c.path.EndT), c.path.Reason)...)
	}
	t.write(b)
}

// firstSolid is what crystallises in the first step.
func (r *pathsResult) firstSolid(p *descent.Path) string {
	if len(p.Steps) == 0 {
		return ""
	}
	return r.solids(p.Steps[0].Crystallising)
}

func (r *pathsResult) solids(phases []int) string {
	out := make([]string, len(phases))
	for i, k := range phases {
		out[i] = r.solid(k)
	}
	return strings.Join(out, " + ")
}

func (r *pathsResult) courseText(b *strings.Builder, c *course) {
	b.WriteString("\n")
	if r.table {
		fmt.Fprintf(b, "%s\n", c.Name)
	}
	if c.err != nil {
		wrap(b, "NOT FOLLOWED: ", c.err.Error())
		return
	}
	x := r.percents(c.X)
	cs := r.sys.Components
	fmt.Fprintf(b, "Bulk: %s %s, %s %s, %s %s; ", cs[0].Symbol, x[0], cs[1].Symbol, x[1], cs[2].Symbol, x[2])
	if r.mode.Melts() {
		fmt.Fprintf(b, "solidus %s °C, ", r.temperature(c.path.Steps[0].T))
	}
	fmt.Fprintf(b, "liquidus %s °C\n", r.temperature(c.path.LiquidT))
	shown := shownSteps(c.path)
	r.liquidTable(b, c.path, shown)
	r.solidTable(b, c.path, shown)
	fmt.Fprintf(b, "End at %s °C: %s.", r.temperature(c.path.EndT), c.path.Reason)
	if n := len(c.path.Steps); len(shown) < n {
		fmt.Fprintf(b, " Shown are %d of %d steps; JSON and CSV hold all.", len(shown), n)
	}
	b.WriteString("\n")
	pathChecksText(b, &c.path.Checks)
}

// shownSteps are the events, the first and last step, and the steps at which
// another tenth of the bulk has crystallised or melted.
func shownSteps(p *descent.Path) []int {
	var out []int
	most := 0
	for i, s := range p.Steps {
		done := 1 - s.MeltMass
		if p.Mode.Melts() {
			done = s.MeltMass
		}
		tenths := int(math.Floor(10*done + 1e-9))
		if s.Event != "" || i == 0 || i == len(p.Steps)-1 || tenths > most {
			out = append(out, i)
		}
		most = max(most, tenths)
	}
	return out
}

func (r *pathsResult) liquidTable(b *strings.Builder, p *descent.Path, shown []int) {
	t := table{columns: []column{{head: "T", unit: "°C"}, {head: "melt", unit: "wt%"}}}
	for _, c := range r.percentColumns() {
		t.columns = append(t.columns, column{head: "liq " + c.head, unit: c.unit})
	}
	doing := "forming"
	if p.Mode.Melts() {
		doing = "melting"
	}
	if p.Mode == descent.FractionalMelting {
		for _, c := range r.percentColumns() {
			t.columns = append(t.columns, column{head: "all " + c.head, unit: c.unit})
		}
	}
	t.columns = append(t.columns, column{head: "heat", unit: "J/g"}, column{head: doing, left: true}, column{head: "solutions " + doing, unit: "mol%", left: true}, column{head: "event", left: true})
	for _, i := range shown {
		s := &p.Steps[i]
		row := append([]string{r.temperature(s.T), fixed(100*s.MeltMass, 1)}, r.percents(s.Liquid)...)
		if p.Mode == descent.FractionalMelting {
			row = append(row, r.percents(s.Pool)...)
		}
		t.row(append(row, fixed(s.Heat, 1), r.solids(s.Crystallising), r.solutions(s.Instant), s.Event)...)
	}
	t.write(b)
}

// solidTable gives what has crystallised: in fractional mode the solids removed
// so far, with their mean composition.
func (r *pathsResult) solidTable(b *strings.Builder, p *descent.Path, shown []int) {
	keys := r.solidKeys([]*descent.Path{p})
	if len(keys) == 0 {
		return
	}
	what := "Solids in contact with the liquid"
	switch {
	case p.Mode == descent.FractionalMelting:
		what = "Solids left"
	case p.Mode == descent.Fractional && r.retain == 0:
		what = "Solids removed so far, mean composition"
	case r.retain > 0 || len(r.removals) > 0:
		what = "Solids made so far, in contact or removed, mean composition"
	}
	fmt.Fprintf(b, "%s\n", what)
	t := table{columns: []column{{head: "T", unit: "°C"}}}
	for _, k := range keys {
		t.columns = append(t.columns, column{head: k.name, unit: "wt% of bulk"}, column{head: k.name + " members", unit: "mol%", left: true})
	}
	for _, i := range shown {
		s := &p.Steps[i]
		row := []string{r.temperature(s.T)}
		for _, k := range keys {
			a, ok := k.find(s)
			if !ok {
				row = append(row, "", "")
				continue
			}
			row = append(row, fixed(100*a.Mass, 1), r.solution(a.State))
		}
		t.row(row...)
	}
	t.write(b)
}

// solidKey is a solid of a path: its phase and, for a phase that is there with
// several compositions at once, which of them.
type solidKey struct {
	phase, nth int
	name       string
}

// find returns the amount of the solid in a step.
func (k solidKey) find(s *descent.Step) (descent.Amount, bool) {
	n := 0
	for _, a := range s.Solids {
		if a.State.Phase != k.phase {
			continue
		}
		if n == k.nth {
			return a, true
		}
		n++
	}
	return descent.Amount{}, false
}

// solidKeys are the solids that appear in the paths, in the order of the system.
func (r *pathsResult) solidKeys(paths []*descent.Path) []solidKey {
	most := make([]int, len(r.sys.Solids))
	for _, p := range paths {
		for _, s := range p.Steps {
			count := make([]int, len(most))
			for _, a := range s.Solids {
				count[a.State.Phase]++
			}
			for i, n := range count {
				most[i] = max(most[i], n)
			}
		}
	}
	var out []solidKey
	for phase, n := range most {
		for k := range n {
			out = append(out, solidKey{phase, k, r.solid(phase) + strings.Repeat("′", k)})
		}
	}
	return out
}

func pathChecksText(b *strings.Builder, c *descent.Checks) {
	verdict := "passed"
	if !c.Passed {
		verdict = "FAILED"
	}
	fmt.Fprintf(b, "Checks %s: masses within %.1e of the bulk", verdict, c.MassBalance)
	switch {
	case math.IsInf(c.MaxDrive, 0) || math.IsNaN(c.MaxDrive):
	case c.MaxDrive <= 0:
		fmt.Fprintf(b, "; absent solids at least %.1e RT short of saturation", -c.MaxDrive)
	default:
		fmt.Fprintf(b, "; absent solids up to %.1e RT past saturation", c.MaxDrive)
	}
	b.WriteString("\n")
	for _, p := range slices.Compact(slices.Clone(c.Problems)) {
		wrap(b, "  - ", p)
	}
}
