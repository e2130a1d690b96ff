package main

import (
	"fmt"
	"math"
	"strings"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/join"
)

func (r *joinResult) text() string {
	var b strings.Builder
	r.heading(&b, "Join in", fmt.Sprintf("from %s to %s, %s to %s °C", r.from, r.to, r.temperature(r.TMin), r.temperature(r.TMax)), len(r.reasons()) == 0)
	r.levelsText(&b)
	r.linesText(&b)
	r.joinFieldsText(&b)
	if len(r.readings) > 0 {
		b.WriteString("\n")
		r.readingsText(&b, r.samples, r.readings)
	}
	r.joinChecksText(&b)
	r.footing(&b)
	return b.String()
}

// shareColumn heads the places along the join.
func (r *joinResult) shareColumn(head string) column {
	return column{head: head, unit: r.basis.Unit()}
}

// percentTo is a place along the join in percent of the end To.
func (r *joinResult) percentTo(x float64) float64 { return part(100 * r.Share(x, r.basis)) }

// placeOf is the place of a phase along the join; it is empty where the phase does not
// lie on it.
func (r *joinResult) placeOf(st gibbs.State) string {
	if x, off := r.Along(st.Composition()); off < 1e-6 {
		return fixed(r.percentTo(x), 1)
	}
	return ""
}

func (r *joinResult) levelsText(b *strings.Builder) {
	if len(r.Levels) == 0 {
		return
	}
	fmt.Fprintf(b, "\nReactions at one temperature, on cooling; places in %s of %s\n", r.basis.Unit(), r.to)
	t := table{columns: []column{{head: "T", unit: "°C"}, {head: "kind", left: true}, r.shareColumn("from"), r.shareColumn("to"), {head: "phase", left: true}, r.shareColumn("place")}}
	t.columns = append(append(t.columns, r.percentColumns()...), column{head: "solution", unit: "mol%", left: true})
	for i := range r.Levels {
		l := &r.Levels[i]
		q := l.Reaction(r.sys)
		first := true
		for side, list := range [2][]gibbs.State{q.High, q.Low} {
			for _, st := range list {
				row := []string{"", "", "", ""}
				if first {
					row = []string{r.temperature(l.T), q.Kind, fixed(r.percentTo(l.From), 1), fixed(r.percentTo(l.To), 1)}
				}
				first = false
				row = append(row, [2]string{"− ", "+ "}[side]+r.anyPhase(st.Phase), r.placeOf(st))
				t.row(append(append(row, r.percents(st.Composition())...), r.solution(st))...)
			}
		}
	}
	t.write(b)
}

// role names a line: a level by its reaction.
func (r *joinResult) role(l *join.Line) string {
	if !l.Horizontal {
		return l.Role()
	}
	plain := *l // a horizontal need not be a reaction: a pure solid fixes the melt beside it
	plain.Horizontal = false
	for i := range r.Levels {
		v := &r.Levels[i]
		if p := l.Points[0]; math.Abs(v.T-p.T) < 1e-5 && p.X < v.To && l.Points[len(l.Points)-1].X > v.From {
			return v.Reaction(r.sys).Kind
		}
	}
	return plain.Role()
}

func (r *joinResult) linesText(b *strings.Builder) {
	fmt.Fprintf(b, "\nLines; places in %s of %s\n", r.basis.Unit(), r.to)
	t := table{columns: []column{{head: "line", left: true}, {head: "above or left", left: true}, {head: "below or right", left: true},
		r.shareColumn("from"), {head: "T", unit: "°C"}, r.shareColumn("to"), {head: "T", unit: "°C"}}}
	for i := range r.Lines {
		l := &r.Lines[i]
		p, q := l.Points[0], l.Points[len(l.Points)-1]
		t.row(r.role(l), r.assemblage(l.Above), r.assemblage(l.Below), fixed(r.percentTo(p.X), 1), r.temperature(p.T), fixed(r.percentTo(q.X), 1), r.temperature(q.T))
	}
	t.write(b)
}

func (r *joinResult) joinFieldsText(b *strings.Builder) {
	fmt.Fprintf(b, "\nFields; places in %s of %s\n", r.basis.Unit(), r.to)
	t := table{columns: []column{{head: "field", left: true}, r.shareColumn("from"), r.shareColumn("to"), {head: "lowest", unit: "°C"}, {head: "highest", unit: "°C"}}}
	for i := range r.Fields {
		f := &r.Fields[i]
		lo, hi := join.Point{X: 1, T: math.Inf(1)}, join.Point{X: 0, T: math.Inf(-1)}
		for _, p := range f.Outline {
			lo.X, hi.X = min(lo.X, p.X), max(hi.X, p.X)
			lo.T, hi.T = min(lo.T, p.T), max(hi.T, p.T)
		}
		t.row(r.assemblage(f.Phases), fixed(r.percentTo(lo.X), 1), fixed(r.percentTo(hi.X), 1), r.temperature(lo.T), r.temperature(hi.T))
	}
	t.write(b)
}

func (r *joinResult) joinChecksText(b *strings.Builder) {
	verdict := "passed"
	if !r.Checks.Passed {
		verdict = "FAILED"
	}
	fmt.Fprintf(b, "\nChecks %s: %d points compared with the equilibrium at each, %d misplaced\n", verdict, r.Checks.Tested, r.Checks.Misplaced)
	for _, p := range r.Checks.Problems {
		wrap(b, "  - ", p)
	}
}
