package render

import (
	"fmt"
	"strings"

	"thalweg/ternary/gibbs"
)

// nameRegion asks for a name inside a region, level or along it, else beside it with
// a leader line; beside says what a place there costs, and whether it will do.
func (b *board) nameRegion(out region, name string, beside func(box) (cost float64, ok bool)) {
	c, radius := out.pole(0.1)
	t := measure(FormulaRuns(name, b.style.Base, Regular))
	l := label{role: "region", name: name, colour: b.style.Text, wordings: []wording{t}, rank: 2}
	l.spots = room(out, c, radius, 0, t, 0, 0)
	if radius < max(6, 0.6*t.w) {
		l.spots = append(l.spots, room(out, c, radius, 0, t, out.axis(), 13)...)
		if tight := strings.ReplaceAll(name, " + ", "+"); tight != name {
			s := measure(FormulaRuns(tight, b.style.Base, Regular))
			l.wordings = append(l.wordings, s)
			l.spots = append(l.spots, room(out, c, radius, 1, s, 0, 6)...)
			l.spots = append(l.spots, room(out, c, radius, 1, s, out.axis(), 15)...)
		}
		for _, q := range leaders(c, 0, 0, t, 3, 5, 7, 9, 12, 15, 19, 24, 30) {
			if extra, ok := beside(t.around(q.c, 0)); ok {
				q.cost += 16 + extra
				l.spots = append(l.spots, q)
			}
		}
	}
	b.words.ask(l)
}

// assemblage writes phases that coexist: "L + Di"; a phase that is there twice gets
// a number.
func assemblage(sys *gibbs.System, list []int) string {
	count := map[int]int{}
	for _, i := range list {
		count[i]++
	}
	var out []string
	done := map[int]bool{}
	for _, i := range list {
		if done[i] {
			continue
		}
		done[i] = true
		name := phaseSymbol(sys, i)
		if count[i] > 1 {
			name = fmt.Sprintf("%d %s", count[i], name)
		}
		out = append(out, name)
	}
	return strings.Join(out, " + ")
}

// phaseSymbol is a solid's symbol, or L.
func phaseSymbol(sys *gibbs.System, i int) string {
	if i == gibbs.Liquid {
		return "L"
	}
	return sys.Solids[i].Symbol
}
