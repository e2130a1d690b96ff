package main

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// outsideMark stands behind a temperature for which the system file does not
// vouch.
const outsideMark = "*"

func (r *liquidusResult) text() string {
	var b strings.Builder
	r.heading(&b, "Liquidus projection of", "", r.complete)
	r.nodesText(&b)
	r.curvesText(&b)
	r.fieldsText(&b)
	r.isothermsText(&b)
	r.samplesText(&b)
	r.checksText(&b)
	r.footing(&b)
	return b.String()
}

// heading names the system and carries the marks.
func (s *subject) heading(b *strings.Builder, what, how string, complete bool) {
	fmt.Fprintf(b, "%s %s (%s)\n", what, s.sys.Title, s.sys.Name)
	if how != "" {
		how += "; "
	}
	fmt.Fprintf(b, "%spressure %s GPa; compositions in %s\n", how, short(s.sys.Pressure/pascal), s.basis.Unit())
	if !complete {
		b.WriteString("INCOMPLETE: it could not be completed or failed its own checks\n")
	}
	if m := s.metastable(); m != "" {
		b.WriteString(strings.ToUpper(m[:10]) + m[10:] + "\n")
	}
}

// footing carries what holds for the whole result.
func (s *subject) footing(b *strings.Builder) {
	b.WriteString("\n")
	if s.marked {
		wrap(b, outsideMark+" ", "outside the range for which the system file vouches, "+s.vouched())
	}
	var remarks []string
	for _, p := range s.sys.Solids {
		if p.Remark != "" {
			remarks = append(remarks, p.Symbol+", "+p.Remark)
		}
	}
	if len(remarks) > 0 {
		wrap(b, "Solids: ", strings.Join(remarks, "; "))
	}
	if n := len(s.file.Limits); n > 0 {
		wrap(b, "", fmt.Sprintf("What the model leaves out, and where its numbers come from: %s show %s", program, s.file.Name))
	}
	for _, c := range s.file.Cautions {
		wrap(b, "Caution: ", c)
	}
}

// temperature writes °C with the mark, and remembers that it set one.
func (s *subject) temperature(T float64) string {
	t := fixed(celsius(T), 1)
	if s.outside(T) && !math.IsInf(T, 0) {
		s.marked = true
		return t + outsideMark
	}
	return t
}

// percents are the three cells of a composition.
func (s *subject) percents(x ternary.Composition) []string {
	p := s.percent(x)
	return []string{fixed(p[0], 1), fixed(p[1], 1), fixed(p[2], 1)}
}

// percentColumns head the three cells.
func (s *subject) percentColumns() []column {
	var out []column
	for _, c := range s.sys.Components {
		out = append(out, column{head: c.Symbol, unit: s.basis.Unit()})
	}
	return out
}

// solution describes the composition of a solid solution by its members, in
// mol%, highest first: An 72, Ab 28. It is empty for a stoichiometric solid.
func (s *subject) solution(st gibbs.State) string {
	if st.Phase < 0 || s.sys.Solids[st.Phase].Stoichiometric() {
		return ""
	}
	members := s.sys.Solids[st.Phase].Members
	order := make([]int, len(members))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(i, j int) bool { return st.Y[order[i]] > st.Y[order[j]] })
	var out []string
	for _, k := range order {
		if st.Y[k] >= 0.0005 {
			out = append(out, members[k].Symbol+" "+fixed(100*st.Y[k], 1))
		}
	}
	return strings.Join(out, ", ")
}

// solutions are those of all solids of a list, as "Pl: An 72, Ab 28".
func (s *subject) solutions(states []gibbs.State) string {
	var out []string
	for i, name := range s.names(states) {
		if t := s.solution(states[i]); t != "" {
			out = append(out, name+": "+t)
		}
	}
	return strings.Join(out, "; ")
}

func (r *liquidusResult) nodesText(b *strings.Builder) {
	b.WriteString("\nInvariant points\n")
	nodes := r.projection.Nodes
	if !r.nodesTable(b, nodes, invariant) {
		b.WriteString("  none\n")
	}
	var other strings.Builder
	if r.nodesTable(&other, nodes, func(n *liquidus.Node) bool { return !invariant(n) && n.Kind != liquidus.LoopStart }) {
		b.WriteString("\nMaxima and other ends of boundary curves\n" + other.String())
	}
	other.Reset()
	if r.nodesTable(&other, r.projection.Extrema, func(*liquidus.Node) bool { return true }) {
		b.WriteString("\nMinima and maxima within fields and along edges\n" + other.String())
	}
}

// invariant reports that a node is a point of the phase diagram rather than a
// maximum or a mere end of a curve.
func invariant(n *liquidus.Node) bool {
	switch n.Kind {
	case liquidus.Maximum, liquidus.LoopStart, liquidus.AtApex, liquidus.Critical:
		return false
	}
	return true
}

// nodesTable lists the nodes that are wanted and reports whether there are any.
func (r *liquidusResult) nodesTable(b *strings.Builder, nodes []liquidus.Node, wanted func(*liquidus.Node) bool) bool {
	t := table{columns: []column{{head: "id", left: true}, {head: "kind", left: true}, {head: "edge", left: true}, {head: "T", unit: "°C"}}}
	t.columns = append(t.columns, r.percentColumns()...)
	t.columns = append(t.columns, column{head: "on cooling", left: true}, column{head: "solutions", unit: "mol%", left: true})
	for i := range nodes {
		n := &nodes[i]
		if !wanted(n) {
			continue
		}
		what := r.reaction(n)
		if what == "" {
			what = strings.Join(r.names(n.Solids), " + ")
		}
		row := append([]string{n.ID, string(n.Kind), strings.Join(r.edge(n), "–"), r.temperature(n.T)}, r.percents(n.Liquid)...)
		t.row(append(row, what, r.solutions(n.Solids))...)
	}
	t.write(b)
	return len(t.rows) > 0
}

func (r *liquidusResult) curvesText(b *strings.Builder) {
	p := r.projection
	b.WriteString("\nBoundary curves, towards falling temperature\n")
	if len(p.Curves) == 0 {
		b.WriteString("  none\n")
		return
	}
	t := table{columns: []column{{head: "from", left: true}, {head: "to", left: true}, {head: "solids", left: true}, {head: "T from", unit: "°C"}, {head: "T to", unit: "°C"}, {head: "kind", left: true}}}
	for i := range p.Curves {
		c := &p.Curves[i]
		t.row(p.Nodes[c.From].ID, p.Nodes[c.To].ID, r.solid(c.Solids[0])+" + "+r.solid(c.Solids[1]),
			r.temperature(p.Nodes[c.From].T), r.temperature(p.Nodes[c.To].T), r.course(c))
	}
	t.write(b)
}

// course is the succession of kinds along a curve: cotectic, then reaction
// (L + Fo → En).
func (r *liquidusResult) course(c *liquidus.Curve) string {
	var out []string
	for _, q := range c.Points {
		kind := string(q.Kind)
		switch {
		case q.Kind == liquidus.Degenerate:
			continue // an end at which the sign cannot be told
		case q.Kind == liquidus.Reaction && (q.Consumed == 0 || q.Consumed == 1):
			kind += fmt.Sprintf(" (L + %s → %s)", r.solid(c.Solids[q.Consumed]), r.solid(c.Solids[1-q.Consumed]))
		}
		if len(out) == 0 || out[len(out)-1] != kind {
			out = append(out, kind)
		}
	}
	return strings.Join(out, ", then ")
}

func (r *liquidusResult) fieldsText(b *strings.Builder) {
	fmt.Fprintf(b, "\nPrimary fields, share of the triangle in %s\n", r.basis.Unit())
	t := table{columns: []column{{head: "solid", left: true}, {head: "name", left: true}, {head: "area", unit: "%"}, {head: "highest T", unit: "°C"}}}
	t.columns = append(t.columns, r.percentColumns()...)
	for i := range r.projection.Fields {
		f := &r.projection.Fields[i]
		name := r.sys.Solids[f.Solid].Name
		if f.TwoLiquids {
			name += " from two liquids"
		}
		row := []string{r.solid(f.Solid), name, fixed(100*r.area(f), 1), r.temperature(f.PeakT)}
		t.row(append(row, r.percents(f.Peak)...)...)
	}
	t.write(b)
}

func (r *liquidusResult) isothermsText(b *strings.Builder) {
	var drawn []string
	for _, iso := range r.projection.Isotherms {
		if len(iso.Lines) > 0 {
			drawn = append(drawn, short(math.Round(celsius(iso.T)*1e6)/1e6))
		}
	}
	if len(drawn) == 0 {
		return
	}
	b.WriteString("\n")
	head := "Isotherms, °C: "
	if r.interval > 0 {
		head = fmt.Sprintf("Isotherms, every %s °C: ", short(r.interval))
	}
	wrap(b, head, strings.Join(drawn, ", "))
}

func (r *liquidusResult) samplesText(b *strings.Builder) {
	if len(r.samples) == 0 {
		return
	}
	b.WriteString("\nSamples\n")
	t := table{columns: []column{{head: "name", left: true}}}
	t.columns = append(t.columns, r.percentColumns()...)
	t.columns = append(t.columns, column{head: "liquidus", unit: "°C"}, column{head: "first solid", left: true}, column{head: "solution", unit: "mol%", left: true})
	for _, q := range r.samples {
		row := append([]string{q.Name}, r.percents(q.X)...)
		first := r.first(q)
		if q.split {
			first += ", from two liquids"
		}
		t.row(append(row, r.temperature(q.T), first, r.solution(q.primary))...)
	}
	t.write(b)
}

// first is the solid that appears first, if there is one.
func (r *liquidusResult) first(q placed) string {
	if math.IsInf(q.T, -1) {
		return "none"
	}
	return r.solid(q.primary.Phase)
}

func (r *liquidusResult) checksText(b *strings.Builder) {
	c := &r.projection.Checks
	verdict := "passed"
	if !c.Passed {
		verdict = "FAILED"
	}
	fmt.Fprintf(b, "\nChecks %s: V − E + F − 1 − pieces = %d − %d + %d − 1 − %d = %d; largest residual %.1e RT\n",
		verdict, c.Vertices, c.Edges, c.Faces, c.Pieces, c.Euler, c.MaxResidual)
	for _, p := range projectionReasons(r.projection) {
		wrap(b, "  - ", p)
	}
}
