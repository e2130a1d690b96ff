package section

import (
	"fmt"
	"math"
	"sort"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// edgeMesh is the number of intervals in which an edge is searched.
const edgeMesh = 40

// edgeTie is a tie line on an edge: a at the lower, b at the higher position.
type edgeTie struct {
	u      vec
	a, b   gibbs.State
	lo, hi float64
	done   bool
}

// binary is the section of one edge, without component k: its tie lines in order.
// Between them lie one-phase stretches.
type binary struct {
	k    int
	ties []*edgeTie
	// single are the phases of the one-phase stretches: before the first tie line,
	// between each two, after the last.
	single []int
}

// scanEdge finds the tie lines of an edge.
func (e *engine) scanEdge(k int) *binary {
	b := &binary{k: k}
	at := func(s float64) (x ternary.Composition) {
		x[(k+1)%3], x[(k+2)%3] = 1-s, s
		return x
	}
	solve := func(s float64) *tangent.Equilibrium {
		q, err := tangent.Solve(e.sys, at(s), e.T)
		if err != nil {
			e.problem(fmt.Sprintf("the edge without %s: %v", e.sys.Components[k].Symbol, err))
			return nil
		}
		return q
	}
	var last *tangent.Equilibrium
	lastAt := 0.0
	for n := 0; n <= edgeMesh; n++ {
		s := float64(n) / edgeMesh
		q := solve(s)
		if q == nil {
			return b
		}
		e.noteTie(b, q)
		if last != nil {
			e.between(b, solve, lastAt, s, last, q, 0)
		}
		last, lastAt = q, s
	}
	for round := 0; round < 10; round++ {
		sort.Slice(b.ties, func(i, j int) bool { return b.ties[i].lo < b.ties[j].lo })
		if !e.missedTie(b, solve) {
			break
		}
	}
	e.fillSingles(b, solve)
	return b
}

// missedTie looks for a tie line beside one that is known, where the mesh has no
// point: the two ends of a one-phase stretch are of the same phase, so that where they
// differ there is one between them. It reports whether it found one.
func (e *engine) missedTie(b *binary, solve func(float64) *tangent.Equilibrium) bool {
	ends := func(s float64) (int, bool) { // the phase at an apex
		q := solve(s)
		if q == nil || len(q.Parts) != 1 {
			return 0, false
		}
		return q.Parts[0].State.Phase, true
	}
	for n := 0; n <= len(b.ties); n++ {
		lo, hi := 0.0, 1.0
		var left, right int
		ok1, ok2 := true, true
		if n == 0 {
			left, ok1 = ends(0)
		} else {
			lo, left = b.ties[n-1].hi, b.ties[n-1].b.Phase
		}
		if n == len(b.ties) {
			right, ok2 = ends(1)
		} else {
			hi, right = b.ties[n].lo, b.ties[n].a.Phase
		}
		if !ok1 || !ok2 || left == right || !(hi-lo > 1e-12) {
			continue
		}
		for range 60 {
			q := solve((lo + hi) / 2)
			if q == nil {
				break
			}
			if len(q.Parts) == 2 {
				known := len(b.ties)
				e.noteTie(b, q)
				return len(b.ties) > known
			}
			if q.Parts[0].State.Phase == left {
				lo = (lo + hi) / 2
			} else {
				hi = (lo + hi) / 2
			}
		}
	}
	return false
}

// noteTie files the tie line of an equilibrium on the edge.
func (e *engine) noteTie(b *binary, q *tangent.Equilibrium) {
	if len(q.Parts) != 2 {
		return
	}
	j := (b.k + 2) % 3
	t := &edgeTie{a: q.Parts[0].State, b: q.Parts[1].State}
	for i := range t.u {
		t.u[i] = q.Mu[i] / e.rt
	}
	t.lo, t.hi = composition(t.a.C)[j], composition(t.b.C)[j]
	if t.lo > t.hi {
		t.lo, t.hi, t.a, t.b = t.hi, t.lo, t.b, t.a
	}
	for _, o := range b.ties {
		if sameSet([]gibbs.State{o.a, o.b}, []gibbs.State{t.a, t.b}, 1e-6) {
			return
		}
	}
	b.ties = append(b.ties, t)
}

// between looks for tie lines narrower than the mesh: two neighbours of different
// single phases have one between them.
func (e *engine) between(b *binary, solve func(float64) *tangent.Equilibrium, lo, hi float64, p, q *tangent.Equilibrium, depth int) {
	if len(p.Parts) != 1 || len(q.Parts) != 1 || p.Parts[0].State.Phase == q.Parts[0].State.Phase || depth > 40 {
		return
	}
	mid := (lo + hi) / 2
	m := solve(mid)
	if m == nil {
		return
	}
	if len(m.Parts) == 2 {
		e.noteTie(b, m)
		return
	}
	e.between(b, solve, lo, mid, p, m, depth+1)
	e.between(b, solve, mid, hi, m, q, depth+1)
}

// fillSingles asks for the phase of every one-phase stretch.
func (e *engine) fillSingles(b *binary, solve func(float64) *tangent.Equilibrium) {
	pos := 0.0
	for n := 0; n <= len(b.ties); n++ {
		end := 1.0
		if n < len(b.ties) {
			end = b.ties[n].lo
		}
		phase := noPhase
		switch {
		case len(b.ties) > 0 && n == 0 && end <= 1e-12: // a solution of which the edge holds one member alone
			phase = b.ties[0].a.Phase
		case len(b.ties) > 0 && n == len(b.ties) && end-pos <= 1e-12:
			phase = b.ties[n-1].b.Phase
		case end-pos > 1e-12:
			if q := solve((pos + end) / 2); q != nil && len(q.Parts) == 1 {
				phase = q.Parts[0].State.Phase
			} else {
				e.problem(fmt.Sprintf("the edge without %s has an unexpected assemblage at %.6f", e.sys.Components[b.k].Symbol, (pos+end)/2))
			}
		}
		b.single = append(b.single, phase)
		if n < len(b.ties) {
			pos = b.ties[n].hi
		}
	}
}

// noPhase marks a stretch of no length.
const noPhase = -1000

// startOnEdge finds a plane just inside the edge that touches the two phases of a
// tie line.
func (e *engine) startOnEdge(b *binary, t *edgeTie) (u, dir vec, p, q gibbs.State, ok bool) {
	k := b.k
	var up vec
	up[k] = 1
	u = t.u
	u[k] = -40
	held := e.holds(t.a.Phase, k) || e.holds(t.b.Phase, k)
	if !held {
		u[k] = deepPlane + 5
	}
	for n := 0; n < 30; n++ {
		v, d, a, c, solved := e.touchTwo(u, up, t.a, t.b)
		if !solved {
			return u, d, a, c, false
		}
		f := math.Max(composition(a.C)[k], composition(c.C)[k])
		if held && n < 8 && (f < traceTol/20 || f > traceTol/5) {
			u = v
			u[k] += math.Max(-20, math.Min(20, math.Log(traceTol/10/math.Max(f, 1e-300))))
			continue
		}
		above := false
		for _, w := range e.watch(v, up, a, c) {
			above = above || w.d > aboveTol
		}
		if !above {
			return v, d, a, c, true
		}
		u = v
		u[k] -= 5 // a third phase comes very close to the edge
	}
	return u, dir, p, q, false
}
