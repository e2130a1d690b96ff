package section

import (
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

const (
	areaTol = 1e-6 // of the triangle: the regions tile it
	// rimTol is the distance from a region's outline within which a bulk
	// composition may be judged to lie on either side: outlines are drawn with
	// chords.
	rimTol = 2e-3
)

// check examines a section.
func (e *engine) check(s *Section, lattice []sample) {
	c := &s.Checks
	for i := range s.Regions {
		c.Area += s.Regions[i].Area()
	}
	if math.Abs(c.Area-1) > areaTol {
		e.problem(fmt.Sprintf("the regions cover %.8f of the triangle", c.Area))
	}
	for _, t := range e.triples {
		for _, st := range t.st {
			d := e.drive(st.Phase, t.u, st.Y)
			c.MaxResidual = math.Max(c.MaxResidual, math.Abs(d.D))
		}
		for k, done := range t.done {
			if !done {
				e.problem(fmt.Sprintf("a side of a three-phase triangle (opposite %s) has no neighbour", e.symbol(t.st[k].Phase)))
			}
		}
		have := []gibbs.State{t.st[0], t.st[1], t.st[2]}
		for _, w := range e.watch(t.u, vec{}, have...) {
			if w.d > 1e-8 {
				e.problem(fmt.Sprintf("%s lies above a three-phase plane", e.symbol(w.phase)))
			}
		}
	}
	if c.MaxResidual > 1e-9 {
		e.problem(fmt.Sprintf("a three-phase plane is solved only to %.1e RT", c.MaxResidual))
	}
	for i := range lattice {
		c.Tested++
		if !e.placed(s, &lattice[i]) {
			c.Misplaced++
		}
	}
	if c.Misplaced > 0 {
		e.problem(fmt.Sprintf("%d of %d bulk compositions lie in a region of another assemblage than their own", c.Misplaced, c.Tested))
	}
	c.Problems = e.problems
	c.Passed = len(e.problems) == 0
}

// placed reports whether a bulk composition lies in a region of its assemblage, or
// as near to one as chords may stray.
func (e *engine) placed(s *Section, m *sample) bool {
	var have []int
	for _, p := range m.q.Parts {
		have = append(have, p.State.Phase)
	}
	for i := range s.Regions {
		r := &s.Regions[i]
		if len(r.Phases) != len(have) || !samePhases(r.Phases, have) {
			continue
		}
		if r.Contains(m.x) || nearRing(r.Outline, m.x) {
			return true
		}
	}
	return false
}

func samePhases(a, b []int) bool {
	count := map[int]int{}
	for _, p := range a {
		count[p]++
	}
	for _, p := range b {
		count[p]--
	}
	for _, n := range count {
		if n != 0 {
			return false
		}
	}
	return true
}

// nearRing reports whether x is within rimTol of a ring.
func nearRing(ring []ternary.Composition, x ternary.Composition) bool {
	px, py := x.XY()
	for i := range ring {
		ax, ay := ring[i].XY()
		bx, by := ring[(i+1)%len(ring)].XY()
		dx, dy := bx-ax, by-ay
		u := 0.0
		if l := dx*dx + dy*dy; l > 0 {
			u = math.Max(0, math.Min(1, ((px-ax)*dx+(py-ay)*dy)/l))
		}
		if math.Hypot(px-ax-u*dx, py-ay-u*dy) < rimTol {
			return true
		}
	}
	return false
}
