package section

import (
	"fmt"
	"math"
	"sort"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// rim is a piece of the boundary of a one-phase region, between two joints.
type rim struct {
	phase    int
	from, to joint
	pts      []ternary.Composition
	used     bool
}

// joint is a point where two rims of one phase meet: the corner of a triple, the
// end of a tie line on an edge, a critical point, or an apex.
type joint struct {
	kind string
	a    any
	i    int
}

// buildRegions makes the regions of a section.
func (e *engine) buildRegions(s *Section, spacing float64) {
	for _, t := range e.triples {
		r := Region{Corners: append([]gibbs.State(nil), t.st[:]...)}
		for _, c := range t.st {
			r.Phases = append(r.Phases, c.Phase)
			r.Outline = append(r.Outline, composition(c.C))
		}
		s.Regions = append(s.Regions, r)
	}
	for _, f := range e.families {
		l := f.links[0]
		r := Region{Phases: []int{l.a.Phase, l.b.Phase}, Outline: f.outline()}
		r.TieLines = e.spread(f, spacing)
		for i := range f.links {
			r.sideA = append(r.sideA, composition(f.links[i].a.C))
			r.sideB = append(r.sideB, composition(f.links[i].b.C))
		}
		s.Regions = append(s.Regions, r)
	}
	e.onePhase(s)
	for i := range s.Regions {
		sortPhases(&s.Regions[i])
	}
	sort.SliceStable(s.Regions, func(i, j int) bool {
		a, b := &s.Regions[i], &s.Regions[j]
		if len(a.Phases) != len(b.Phases) {
			return len(a.Phases) < len(b.Phases)
		}
		for k := range a.Phases {
			if a.Phases[k] != b.Phases[k] {
				return a.Phases[k] < b.Phases[k]
			}
		}
		return false
	})
	for i := range s.Regions {
		s.Checks.OneTwoThree[len(s.Regions[i].Phases)-1]++
	}
}

func sortPhases(r *Region) {
	sort.Ints(r.Phases)
	sort.SliceStable(r.Corners, func(i, j int) bool { return r.Corners[i].Phase < r.Corners[j].Phase })
	for i := range r.TieLines {
		if t := &r.TieLines[i]; t.A.Phase > t.B.Phase {
			t.A, t.B = t.B, t.A
			t.Ends[0], t.Ends[1] = t.Ends[1], t.Ends[0]
		}
	}
}

// spread chooses tie lines at even spacing of their middles.
func (e *engine) spread(f *family, spacing float64) []TieLine {
	mid := func(l *link) ternary.Composition { return composition(l.a.C).Lerp(composition(l.b.C), 0.5) }
	out := []TieLine{tieLine(f.links[0].a, f.links[0].b)}
	run := 0.0
	for i := 1; i < len(f.links); i++ {
		p, q := &f.links[i-1], &f.links[i]
		d := math.Max(mid(p).Distance(mid(q)), math.Max(composition(p.a.C).Distance(composition(q.a.C)), composition(p.b.C).Distance(composition(q.b.C)))/2)
		for d > 0 && run+d >= spacing {
			w := (spacing - run) / d
			if t, ok := e.tieBetween(p, q, w); ok {
				out = append(out, t)
			}
			p = &link{u: vec{}.plus(p.u, 1-w).plus(q.u, w), t: q.t, a: out[len(out)-1].A, b: out[len(out)-1].B}
			d -= spacing - run
			run = 0
			if !(d > 1e-9) {
				break
			}
		}
		run += math.Max(d, 0)
	}
	last := &f.links[len(f.links)-1]
	return append(out, tieLine(last.a, last.b))
}

func tieLine(a, b gibbs.State) TieLine {
	return TieLine{A: a, B: b, Ends: [2]ternary.Composition{composition(a.C), composition(b.C)}}
}

// tieBetween solves the tie line a share of the way between two links.
func (e *engine) tieBetween(p, q *link, w float64) (TieLine, bool) {
	var u vec
	for i := range u {
		if math.IsInf(p.u[i], 0) || math.IsInf(q.u[i], 0) || q.a.C == q.b.C {
			return tieLine(p.a, p.b), false
		}
		u[i] = p.u[i] + w*(q.u[i]-p.u[i])
	}
	_, _, a, b, ok := e.touchTwo(u, q.t, p.a, p.b)
	if !ok {
		return tieLine(p.a, p.b), false
	}
	return tieLine(a, b), true
}

// onePhase chains the rims of every solution phase into regions.
func (e *engine) onePhase(s *Section) {
	rims := e.rims()
	for i := range rims {
		if rims[i].used {
			continue
		}
		loop, ok := chain(rims, i)
		if !ok {
			e.problem(fmt.Sprintf("the one-phase region of %s does not close", e.symbol(rims[i].phase)))
			continue
		}
		if loop = dedupe(loop); len(loop) > 2 {
			s.Regions = append(s.Regions, Region{Phases: []int{rims[i].phase}, Outline: loop})
		}
	}
	nest(s)
}

// rims collects the sides of families and the one-phase stretches of edges.
func (e *engine) rims() []rim {
	var out []rim
	add := func(phase int, from, to joint, pts []ternary.Composition) {
		if len(e.phase(phase).Members) > 2 { // others are points or lines
			out = append(out, rim{phase: phase, from: from, to: to, pts: pts})
		}
	}
	for _, f := range e.families {
		n := len(f.links)
		var pa, pb []ternary.Composition
		for i := range f.links {
			pa = append(pa, composition(f.links[i].a.C))
			pb = append(pb, composition(f.links[i].b.C))
		}
		first, last := &f.links[0], &f.links[n-1]
		fa, fb := jointOf(&f.from, first.a, first.b)
		ta, tb := jointOf(&f.to, last.a, last.b)
		if f.to.closed {
			fa, fb = joint{"ring", f, 0}, joint{"ring", f, 1}
			ta, tb = fa, fb
		}
		add(first.a.Phase, fa, ta, pa)
		add(first.b.Phase, fb, tb, pb)
	}
	for _, b := range e.edges {
		e.edgeRims(b, add)
	}
	return out
}

// jointOf names the joints at the two ends of a tie line.
func jointOf(end *ending, a, b gibbs.State) (ja, jb joint) {
	switch {
	case end.triple != nil:
		i := nearest(end.triple, a, -1)
		j := nearest(end.triple, b, i)
		return joint{"triple", end.triple, i}, joint{"triple", end.triple, j}
	case end.tie != nil:
		i := 0
		if matchForm(end.tie.a, a) > matchForm(end.tie.b, a) {
			i = 1
		}
		return joint{"tie", end.tie, i}, joint{"tie", end.tie, 1 - i}
	}
	return joint{"critical", nil, end.critical}, joint{"critical", nil, end.critical}
}

// edgeRims are the one-phase stretches of an edge.
func (e *engine) edgeRims(b *binary, add func(int, joint, joint, []ternary.Composition)) {
	at := func(s float64) (x ternary.Composition) {
		x[(b.k+1)%3], x[(b.k+2)%3] = 1-s, s
		return x
	}
	from, pos := joint{"apex", nil, (b.k + 1) % 3}, 0.0
	for n := 0; n <= len(b.ties) && n < len(b.single); n++ {
		to, end := joint{"apex", nil, (b.k + 2) % 3}, 1.0
		if n < len(b.ties) {
			to, end = joint{"tie", b.ties[n], 0}, b.ties[n].lo
		}
		if b.single[n] != noPhase {
			add(b.single[n], from, to, []ternary.Composition{at(pos), at(end)})
		}
		if n < len(b.ties) {
			from, pos = joint{"tie", b.ties[n], 1}, b.ties[n].hi
		}
	}
}

// chain follows rims of one phase from joint to joint until it comes back.
func chain(rims []rim, start int) ([]ternary.Composition, bool) {
	r := &rims[start]
	r.used = true
	pts := append([]ternary.Composition(nil), r.pts...)
	at := r.to
	for at != r.from {
		found := false
		for i := range rims {
			o := &rims[i]
			if o.used || o.phase != r.phase || o.from != at && o.to != at {
				continue
			}
			o.used, found = true, true
			if o.from == at {
				pts = append(pts, o.pts...)
				at = o.to
			} else {
				for k := len(o.pts) - 1; k >= 0; k-- {
					pts = append(pts, o.pts[k])
				}
				at = o.from
			}
			break
		}
		if !found {
			return nil, false
		}
	}
	return pts, true
}

// nest turns loops of one phase that lie within another into its holes.
func nest(s *Section) {
	var ones []int
	for i := range s.Regions {
		if len(s.Regions[i].Phases) == 1 {
			ones = append(ones, i)
		}
	}
	sort.SliceStable(ones, func(a, b int) bool {
		return math.Abs(ringArea(s.Regions[ones[a]].Outline)) > math.Abs(ringArea(s.Regions[ones[b]].Outline))
	})
	drop := map[int]bool{}
	depth := map[int]int{}
	for n, i := range ones {
		inner := &s.Regions[i]
		best := -1
		for _, j := range ones[:n] {
			outer := &s.Regions[j]
			if outer.Phases[0] == inner.Phases[0] && pointIn(outer.Outline, inner.Outline[0]) && pointIn(outer.Outline, inner.Outline[len(inner.Outline)/2]) {
				best = j
				depth[i] = depth[j] + 1
			}
		}
		if best >= 0 && depth[i]%2 == 1 {
			s.Regions[best].Holes = append(s.Regions[best].Holes, inner.Outline)
			drop[i] = true
		}
	}
	kept := s.Regions[:0]
	for i := range s.Regions {
		if !drop[i] {
			kept = append(kept, s.Regions[i])
		}
	}
	s.Regions = kept
}

// ringArea is the signed area of a ring as a share of the triangle.
func ringArea(ring []ternary.Composition) float64 {
	if len(ring) < 3 {
		return 0
	}
	a := 0.0
	p := ring[len(ring)-1]
	for _, q := range ring {
		a += p[1]*q[2] - q[1]*p[2]
		p = q
	}
	return a
}

// Area is the region's share of the triangle in mole fractions.
func (r *Region) Area() float64 {
	a := math.Abs(ringArea(r.Outline))
	for _, h := range r.Holes {
		a -= math.Abs(ringArea(h))
	}
	return a
}

// Contains reports whether a composition lies in the region.
func (r *Region) Contains(x ternary.Composition) bool {
	if !pointIn(r.Outline, x) {
		return false
	}
	for _, h := range r.Holes {
		if pointIn(h, x) {
			return false
		}
	}
	return true
}
