package section

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

const (
	moveAim   = 0.03 // aimed change of a composition per step
	moveMax   = 0.08 // a step that moves a composition further is repeated shorter
	stepMax   = 3.0  // longest step, in RT
	stepMin   = 1e-9 // below it a family is given up
	stepsMax  = 3000
	traceTol  = 1e-7 // fraction of a component at which a family has reached the edge without it
	deepPlane = -90  // potential, in RT, at which a component that no phase holds is absent
	// tieCritical is the distance of two forms, in end-member fractions, at which a
	// family is taken to its critical point by extrapolation.
	tieCritical = 0.02
	// shyShare: a third phase whose driving force comes this close to zero within a
	// step, as a share of its slope times the step, makes the step shorter.
	shyShare = 0.05
	shyStep  = 0.02
)

// ending says where a family ends.
type ending struct {
	triple   *triple
	edge     int // component that is absent; with tie, or −1
	tie      *edgeTie
	critical int  // index in engine.critical, or −1
	closed   bool // the family came back to its start
	lost     bool
}

// link is one plane of a family: the two phases on it.
type link struct {
	u    vec
	t    vec
	a, b gibbs.State
}

// family is a sequence of tie lines between two phases.
type family struct {
	links    []link
	from, to ending
}

// triple is a plane that touches three phases.
type triple struct {
	u    vec
	st   [3]gibbs.State
	done [3]bool // side opposite corner i has been followed
}

// follow traces a family from a solved link in direction t until it ends.
func (e *engine) follow(u, t vec, a, b gibbs.State) ([]link, ending) {
	links := []link{{u, t, a, b}}
	start, travelled := links[0], 0.0
	h := 0.05
	old := e.watch(u, t, a, b)
	for n := 0; n < stepsMax; n++ {
		if h < stepMin {
			return links, ending{edge: -1, critical: -1, lost: true}
		}
		un, tn, an, bn, ok := e.touchTwo(u.plus(t, h), t, a, b)
		moved := math.Max(composition(a.C).Distance(composition(an.C)), composition(b.C).Distance(composition(bn.C)))
		if !ok || moved > moveMax || tn.dot(t) < 0.7 || merged(an, bn) < tieCritical/4 {
			h /= 2
			continue
		}
		now := e.watch(un, tn, an, bn)
		length := un.plus(u, -1).norm()
		hit, shy := e.events(old, now, length)
		if shy && h > shyStep {
			h /= 2
			continue
		}
		if hit {
			if tr, ok := e.meet(u, un, a, b, old, now); ok {
				links = append(links, e.linkAt(tr, t, an, bn))
				return links, ending{triple: tr, edge: -1, critical: -1}
			}
			h /= 2
			continue
		}
		if travelled > 2*length && passes(&start, u, un, length) && sameForm2(start.a, an) && sameForm2(start.b, bn) {
			links = append(links, start)
			return links, ending{edge: -1, critical: -1, closed: true}
		}
		travelled += length
		u, t, a, b, old = un, tn, an, bn, now
		links = append(links, link{u, t, a, b})
		if k := e.atEdge(u, t, a, b); k >= 0 {
			return links, ending{edge: k, critical: -1}
		}
		if merged(a, b) < tieCritical {
			return e.closeCritical(links)
		}
		h = math.Min(stepMax, h*math.Max(0.5, math.Min(2, moveAim/math.Max(moved, 1e-4))))
		if a.Phase == b.Phase {
			h = math.Min(h, merged(a, b))
		}
	}
	return links, ending{edge: -1, critical: -1, lost: true}
}

// passes reports whether the start of a family lies on the step from u to un.
func passes(start *link, u, un vec, length float64) bool {
	d := vec{}.plus(un.plus(u, -1), 1/length)
	s := start.u.plus(u, -1)
	along := s.dot(d)
	return along >= 0 && along <= length*1.0001 && s.plus(d, -along).norm() < 0.1*length && start.t.dot(d) > 0.7
}

func sameForm2(a, b gibbs.State) bool { return a.Phase == b.Phase && matchForm(a, b) < 4*moveMax }

// merged is the distance of two forms of one phase; +Inf for two phases.
func merged(a, b gibbs.State) float64 {
	if a.Phase != b.Phase {
		return math.Inf(1)
	}
	return math.Abs(a.Y[0]-b.Y[0]) + math.Abs(a.Y[1]-b.Y[1]) + math.Abs(a.Y[2]-b.Y[2])
}

// atEdge returns the component that has all but vanished from both phases and is
// still falling.
func (e *engine) atEdge(u, t vec, a, b gibbs.State) int {
	x, y := composition(a.C), composition(b.C)
	for k := range x {
		if t[k] < 0 && math.Abs(x[k]) < traceTol && math.Abs(y[k]) < traceTol {
			held := e.holds(a.Phase, k) || e.holds(b.Phase, k)
			if held || u[k] < deepPlane {
				return k
			}
		}
	}
	return -1
}

// holds reports whether a phase can hold component k.
func (e *engine) holds(phase, k int) bool {
	for _, m := range e.phase(phase).Members {
		if m.C[k] != 0 {
			return true
		}
	}
	return false
}

func (e *engine) events(old, now []watcher, length float64) (hit, shy bool) {
	for i := range now {
		if now[i].d > aboveTol {
			hit = true
			continue
		}
		m0, m1 := old[i].m*length, now[i].m*length
		if m0 > 0 && m1 < 0 && !math.IsInf(old[i].d, 0) && !math.IsInf(now[i].d, 0) {
			// the cubic's top lies below the meeting of the two tangents
			x := (now[i].d - m1 - old[i].d) / (m0 - m1)
			if top := old[i].d + m0*math.Max(0, math.Min(1, x)); top > -shyShare*m0 {
				shy = true
			}
		}
	}
	return hit, shy
}

// meet finds the first plane between u and un that touches a third phase.
func (e *engine) meet(u, un vec, a, b gibbs.State, old, now []watcher) (*triple, bool) {
	dir := un.plus(u, -1)
	length := dir.norm()
	dir = vec{}.plus(dir, 1/length)
	var plane vec
	var corners [3]gibbs.State
	best := math.Inf(1)
	for i := range now {
		if now[i].d <= aboveTol {
			continue
		}
		s := 0.5
		if d := math.Min(old[i].d, 0); !math.IsInf(d, 0) {
			s = d / (d - now[i].d)
		}
		third := gibbs.State{Phase: now[i].phase, Y: now[i].y}
		v, st, ok := e.touchThree(u.plus(un.plus(u, -1), s), [3]gibbs.State{a, b, third})
		if !ok {
			return nil, false
		}
		for k := 0; k < 2; k++ {
			if st[k].Phase == st[2].Phase && sameForm(st[k].Y, st[2].Y) {
				return nil, false
			}
		}
		along := v.plus(u, -1).dot(dir)
		if along < -1e-9 || along > 1.1*length+1e-9 || v.plus(u, -1).plus(dir, -along).norm() > 0.5*length+1e-6 {
			return nil, false
		}
		if along < best {
			best, plane, corners = along, v, st
		}
	}
	if math.IsInf(best, 1) {
		return nil, false
	}
	for _, w := range e.watch(plane, dir, corners[:]...) {
		if w.d > aboveTol {
			return nil, false // another phase comes first: a shorter step will tell
		}
	}
	return e.addTriple(plane, corners), true
}

// addTriple files a three-phase plane, or finds it among those known.
func (e *engine) addTriple(u vec, st [3]gibbs.State) *triple {
	for _, t := range e.triples {
		if sameSet(t.st[:], st[:], 1e-5) {
			return t
		}
	}
	t := &triple{u: u, st: st}
	e.triples = append(e.triples, t)
	return t
}

// sameSet reports that two lists of states are one set.
func sameSet(a, b []gibbs.State, tol float64) bool {
	if len(a) != len(b) {
		return false
	}
	used := [4]bool{}
	for _, s := range a {
		found := false
		for j, o := range b {
			if used[j] || s.Phase != o.Phase {
				continue
			}
			if math.Abs(s.Y[0]-o.Y[0])+math.Abs(s.Y[1]-o.Y[1])+math.Abs(s.Y[2]-o.Y[2]) < tol {
				used[j], found = true, true
				break
			}
		}
		if !found {
			return false
		}
	}
	return true
}

// linkAt is the side of a triple that continues a family of a and b.
func (e *engine) linkAt(tr *triple, t vec, a, b gibbs.State) link {
	l := link{u: tr.u, t: t}
	i := nearest(tr, a, -1)
	j := nearest(tr, b, i)
	l.a, l.b = tr.st[i], tr.st[j]
	return l
}

// nearest is the corner of a triple of a's phase that is closest to it.
func nearest(tr *triple, a gibbs.State, not int) int {
	best, dist := 0, math.Inf(1)
	for i, s := range tr.st {
		if i == not || s.Phase != a.Phase {
			continue
		}
		d := math.Abs(s.Y[0]-a.Y[0]) + math.Abs(s.Y[1]-a.Y[1]) + math.Abs(s.Y[2]-a.Y[2])
		if d < dist {
			best, dist = i, d
		}
	}
	return best
}

// closeCritical ends a family at the point where its two forms become one: the
// middle of the tie line, extended in the square of its length to zero.
func (e *engine) closeCritical(links []link) ([]link, ending) {
	n := len(links)
	p, q := links[max(n-3, 0)], links[n-1]
	dp, dq := math.Pow(merged(p.a, p.b), 2), math.Pow(merged(q.a, q.b), 2)
	w := 0.0
	if dp != dq {
		w = -dq / (dp - dq)
	}
	var y [3]float64
	for k := range y {
		mp, mq := (p.a.Y[k]+p.b.Y[k])/2, (q.a.Y[k]+q.b.Y[k])/2
		y[k] = mq + w*(mp-mq)
	}
	s := gibbs.State{Phase: q.a.Phase, Y: y, C: e.phase(q.a.Phase).Contents(y)}
	x := composition(s.C)
	index := -1
	for i, c := range e.critical {
		if c.Distance(x) < 1e-4 {
			index = i
		}
	}
	if index < 0 {
		index = len(e.critical)
		e.critical = append(e.critical, x)
	}
	end := ternary.Composition(e.critical[index])
	s.C = end
	links = append(links, link{u: q.u, t: q.t, a: s, b: s})
	return links, ending{edge: -1, critical: index}
}
