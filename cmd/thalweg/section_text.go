package main

import (
	"fmt"
	"strings"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/section"
	"thalweg/ternary/tangent"
)

func (r *sectionsResult) text() string {
	var b strings.Builder
	complete := true
	for _, s := range r.sections {
		complete = complete && s.Checks.Passed
	}
	what := "Isothermal section of"
	if len(r.sections) > 1 {
		what = "Isothermal sections of"
	}
	r.heading(&b, what, "", complete)
	for i, s := range r.sections {
		r.sectionText(&b, s)
		r.readingsText(&b, r.samples, r.readings[i])
	}
	r.footing(&b)
	return b.String()
}

// anyPhase is the symbol of a phase, the liquid's among them.
func (s *subject) anyPhase(phase int) string {
	if phase == gibbs.Liquid {
		return s.sys.Liquid.Symbol
	}
	return s.sys.Solids[phase].Symbol
}

// assemblage is the symbols of phases that coexist, as "L + Di"; one that is there
// twice gets a prime.
func (s *subject) assemblage(phases []int) string {
	out := make([]string, len(phases))
	for i, p := range phases {
		out[i] = s.anyPhase(p)
		for _, q := range phases[:i] {
			if q == p {
				out[i] += "′"
			}
		}
	}
	return strings.Join(out, " + ")
}

func (r *sectionsResult) sectionText(b *strings.Builder, s *section.Section) {
	fmt.Fprintf(b, "\nAt %s °C\n", r.temperature(s.T))
	t := table{columns: []column{{head: "region", left: true}, {head: "area", unit: "%"}, {head: "corner", left: true}}}
	t.columns = append(append(t.columns, r.percentColumns()...), column{head: "solution", unit: "mol%", left: true}, column{head: "tie lines"})
	for i := range s.Regions {
		g := &s.Regions[i]
		area := fixed(100*r.regionArea(g), 1)
		if len(g.Corners) == 0 {
			ties := ""
			if len(g.Phases) == 2 {
				ties = fmt.Sprint(len(g.TieLines))
			}
			t.row(r.assemblage(g.Phases), area, "", "", "", "", "", ties)
			continue
		}
		for k, c := range g.Corners {
			row := []string{"", "", r.anyPhase(c.Phase)}
			if k == 0 {
				row = []string{r.assemblage(g.Phases), area, r.anyPhase(c.Phase)}
			}
			t.row(append(append(row, r.percents(c.Composition())...), r.solution(c))...)
		}
	}
	t.write(b)
	for _, x := range s.Critical {
		p := r.percents(x)
		cs := r.sys.Components
		fmt.Fprintf(b, "  Two phases become one at %s %s, %s %s, %s %s.\n", cs[0].Symbol, p[0], cs[1].Symbol, p[1], cs[2].Symbol, p[2])
	}
	verdict := "passed"
	if !s.Checks.Passed {
		verdict = "FAILED"
	}
	n := s.Checks.OneTwoThree
	fmt.Fprintf(b, "Checks %s: %d one-, %d two- and %d three-phase regions cover %s of the triangle (mole fractions); %d compositions compared, %d misplaced\n",
		verdict, n[0], n[1], n[2], fixed(s.Checks.Area, 7), s.Checks.Tested, s.Checks.Misplaced)
	for _, p := range s.Checks.Problems {
		wrap(b, "  - ", p)
	}
}

// regionArea is a region's share of the triangle in the basis in force.
func (s *subject) regionArea(g *section.Region) float64 {
	a := s.ring(g.Outline)
	for _, h := range g.Holes {
		a -= s.ring(h)
	}
	return a
}

// readingsText says which phases the samples consist of.
func (s *subject) readingsText(b *strings.Builder, samples []sample, list []reading) {
	if len(list) == 0 {
		return
	}
	b.WriteString("Phases of the samples\n")
	t := table{columns: []column{{head: "sample", left: true}, {head: "phase", left: true}, {head: "amount", unit: "wt%"}, {head: "amount", unit: "mol%"}}}
	t.columns = append(append(t.columns, s.percentColumns()...), column{head: "solution", unit: "mol%", left: true})
	for i, q := range list {
		name := samples[i].Name
		if name == "" {
			name = "bulk"
		}
		if q.err != nil {
			t.row(name, "NOT COMPUTED")
			continue
		}
		for _, p := range q.Parts {
			mass, mole := s.share(q.Equilibrium, &p)
			row := []string{name, s.anyPhase(p.State.Phase), fixed(100*mass, 2), fixed(100*mole, 2)}
			t.row(append(append(row, s.percents(p.State.Composition())...), s.solution(p.State))...)
			name = ""
		}
	}
	t.write(b)
}

// share is the part of an equilibrium's mass, and of its moles of components,
// that a phase makes up.
func (s *subject) share(q *tangent.Equilibrium, p *tangent.Part) (mass, mole float64) {
	m := s.sys.Components.MolarMasses()
	weigh := func(c [3]float64) float64 { return c[0]*m[0] + c[1]*m[1] + c[2]*m[2] }
	sum := func(c [3]float64) float64 { return c[0] + c[1] + c[2] }
	return p.Mole * weigh(p.State.C) / weigh(q.Bulk), p.Mole * sum(p.State.C) / sum(q.Bulk)
}
