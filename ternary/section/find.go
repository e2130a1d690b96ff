package section

import (
	"fmt"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/tangent"
)

// Options of Compute.
type Options struct {
	// TieLines is the spacing of tie lines, as a share of the triangle's side; 0
	// means 0.05.
	TieLines float64
	// Mesh is the number of intervals per side of the lattice of bulk compositions
	// that seeds and checks the search; 0 means 16.
	Mesh int
}

// Compute returns the isothermal section at T (K). An error means that the
// question makes no sense; a section that is not complete, or fails its own
// examination, is returned with Checks.Passed false and the reasons.
func Compute(sys *gibbs.System, T float64, o Options) (*Section, error) {
	if !(T > 0) {
		return nil, fmt.Errorf("section: %g K is no temperature", T)
	}
	if sys.Liquid == nil {
		return nil, fmt.Errorf("section: the system has no liquid")
	}
	if p, outside := outsider(sys); outside {
		w, ok := widen(sys, T)
		if !ok {
			return nil, fmt.Errorf("section: the composition of %s lies outside the triangle, and no triangle with its composition in the place of a component holds all the others", p)
		}
		s, err := Compute(w.sys, T, o)
		if err != nil {
			return nil, err
		}
		return w.narrow(s), nil
	}
	if o.TieLines <= 0 {
		o.TieLines = 0.05
	}
	if o.Mesh <= 0 {
		o.Mesh = 16
	}
	e := &engine{sys: sys, T: T, rt: ternary.R * T}
	for k := range e.edges {
		e.edges[k] = e.scanEdge(k)
	}
	for _, b := range e.edges {
		for _, t := range b.ties {
			e.followTie(b, t)
		}
	}
	e.followTriples()
	lattice := e.lattice(o.Mesh)
	for i := range lattice {
		e.seed(&lattice[i])
	}
	s := &Section{System: sys, T: T}
	e.buildRegions(s, o.TieLines)
	s.Critical = e.critical
	e.check(s, lattice)
	return s, nil
}

// sample is a bulk composition with its equilibrium.
type sample struct {
	x ternary.Composition
	q *tangent.Equilibrium
}

// lattice solves the equilibrium on a lattice strictly inside the triangle.
func (e *engine) lattice(n int) []sample {
	var out []sample
	for i := 0; i <= n; i++ {
		for j := 0; i+j <= n; j++ {
			s := float64(n + 1)
			x := ternary.Composition{(float64(i) + 0.31) / s, (float64(j) + 0.33) / s, (float64(n-i-j) + 0.36) / s}
			q, err := tangent.Solve(e.sys, x, e.T)
			if err != nil {
				e.problem(err.Error())
				continue
			}
			out = append(out, sample{x, q})
		}
	}
	return out
}

// followTie follows the family of a tie line on an edge.
func (e *engine) followTie(b *binary, t *edgeTie) {
	if t.done {
		return
	}
	t.done = true
	u, dir, p, q, ok := e.startOnEdge(b, t)
	if !ok {
		e.problem(fmt.Sprintf("the tie lines of %s and %s could not be followed from the edge without %s", e.symbol(t.a.Phase), e.symbol(t.b.Phase), e.sys.Components[b.k].Symbol))
		return
	}
	links, end := e.follow(u, dir, p, q)
	head := link{u: t.u, t: dir, a: t.a, b: t.b}
	e.file(append([]link{head}, links...), ending{edge: b.k, tie: t, critical: -1}, end)
}

// file adds a followed family and marks its ends.
func (e *engine) file(links []link, from, to ending) {
	last := &links[len(links)-1]
	e.settle(&to, links)
	if to.lost {
		e.problem(fmt.Sprintf("the tie lines of %s and %s were lost after %d steps", e.symbol(last.a.Phase), e.symbol(last.b.Phase), len(links)))
		return
	}
	if to.tie != nil { // end exactly on the edge
		a, b := to.tie.a, to.tie.b
		if matchForm(a, last.a) > matchForm(b, last.a) {
			a, b = b, a
		}
		links = append(links, link{u: to.tie.u, t: last.t, a: a, b: b})
	}
	f := &family{links: links, from: from, to: to}
	if !e.known(f) {
		e.families = append(e.families, f)
	}
}

// known reports whether a family has been followed already: one between the same
// ends with the same two phases.
func (e *engine) known(f *family) bool {
	ends := func(f *family) (j [4]joint) {
		first, last := &f.links[0], &f.links[len(f.links)-1]
		j[0], j[1] = jointOf(&f.from, first.a, first.b)
		j[2], j[3] = jointOf(&f.to, last.a, last.b)
		return j
	}
	a := ends(f)
	for _, o := range e.families {
		if o.to.closed || f.to.closed {
			continue
		}
		b := ends(o)
		if a == b || a == [4]joint{b[1], b[0], b[3], b[2]} || a == [4]joint{b[2], b[3], b[0], b[1]} || a == [4]joint{b[3], b[2], b[1], b[0]} {
			return true
		}
	}
	return false
}

// settle completes an ending: marks the side of a triple, finds the tie line of an
// edge.
func (e *engine) settle(end *ending, links []link) {
	last := &links[len(links)-1]
	if end.triple != nil {
		i := nearest(end.triple, last.a, -1)
		j := nearest(end.triple, last.b, i)
		end.triple.done[3-i-j] = true
		return
	}
	if end.edge < 0 || end.tie != nil || end.closed {
		return
	}
	for _, t := range e.edges[end.edge].ties {
		if sameSet([]gibbs.State{t.a, t.b}, []gibbs.State{last.a, last.b}, 1e-4) {
			t.done, end.tie = true, t
			return
		}
	}
	end.lost = true
}

// matchForm is how far two states are apart; large for different phases.
func matchForm(a, b gibbs.State) float64 {
	if a.Phase != b.Phase {
		return 100
	}
	return merged(a, b)
}

// followTriples follows the families of all sides of the three-phase triangles,
// as long as that finds new ones.
func (e *engine) followTriples() {
	for n := 0; n < len(e.triples); n++ {
		tr := e.triples[n]
		for c := 0; c < 3; c++ {
			if tr.done[c] {
				continue
			}
			tr.done[c] = true
			a, b := tr.st[(c+1)%3], tr.st[(c+2)%3]
			dir := vec(a.C).cross(vec(b.C))
			l := dir.norm()
			if vec(tr.st[c].C).dot(dir) > 0 {
				l = -l
			}
			dir = vec{}.plus(dir, 1/l)
			links, end := e.follow(tr.u, dir, a, b)
			e.file(links, ending{triple: tr, edge: -1, critical: -1}, end)
		}
	}
}

// seed follows what a bulk composition belongs to, if that is not known yet.
func (e *engine) seed(s *sample) {
	var u vec
	for i := range u {
		u[i] = s.q.Mu[i] / e.rt
	}
	switch len(s.q.Parts) {
	case 3:
		before := len(e.triples)
		st := [3]gibbs.State{s.q.Parts[0].State, s.q.Parts[1].State, s.q.Parts[2].State}
		if v, st, ok := e.touchThree(u, st); ok {
			e.addTriple(v, st)
		}
		if len(e.triples) > before {
			e.followTriples()
		}
	case 2:
		a, b := s.q.Parts[0].State, s.q.Parts[1].State
		if e.covered(s.x, a.Phase, b.Phase) {
			return
		}
		dir := vec(a.C).cross(vec(b.C))
		dir = vec{}.plus(dir, 1/dir.norm())
		ahead, to := e.follow(u, dir, a, b)
		if to.closed {
			e.families = append(e.families, &family{links: ahead, from: to, to: to})
			return
		}
		back, from := e.follow(u, vec{}.plus(dir, -1), a, b)
		e.settle(&from, back)
		if from.lost {
			e.problem(fmt.Sprintf("the tie lines of %s and %s were lost", e.symbol(a.Phase), e.symbol(b.Phase)))
			return
		}
		var links []link
		if from.tie != nil {
			last := back[len(back)-1]
			p, q := from.tie.a, from.tie.b
			if matchForm(p, last.a) > matchForm(q, last.a) {
				p, q = q, p
			}
			links = append(links, link{u: from.tie.u, t: last.t, a: p, b: q})
		}
		for i := len(back) - 1; i > 0; i-- {
			links = append(links, back[i])
		}
		e.file(append(links, ahead...), from, to)
		e.followTriples()
	}
}

// covered reports whether a family of two phases has a tie line through x.
func (e *engine) covered(x ternary.Composition, a, b int) bool {
	for _, f := range e.families {
		l := f.links[0]
		if (l.a.Phase != a || l.b.Phase != b) && (l.a.Phase != b || l.b.Phase != a) {
			continue
		}
		if pointIn(f.outline(), x) {
			return true
		}
	}
	return false
}

// outline goes round the tie lines of a family.
func (f *family) outline() []ternary.Composition {
	out := make([]ternary.Composition, 0, 2*len(f.links))
	for i := range f.links {
		out = append(out, composition(f.links[i].a.C))
	}
	for i := len(f.links) - 1; i >= 0; i-- {
		out = append(out, composition(f.links[i].b.C))
	}
	return dedupe(out)
}

// dedupe drops repeated points.
func dedupe(pts []ternary.Composition) []ternary.Composition {
	out := pts[:0]
	for i, x := range pts {
		if i == 0 || x != out[len(out)-1] {
			out = append(out, x)
		}
	}
	for len(out) > 1 && out[0] == out[len(out)-1] {
		out = out[:len(out)-1]
	}
	return out
}

// pointIn reports whether x lies in a closed polygon.
func pointIn(poly []ternary.Composition, x ternary.Composition) bool {
	px, py := x.XY()
	in := false
	for i, j := 0, len(poly)-1; i < len(poly); j, i = i, i+1 {
		ax, ay := poly[i].XY()
		bx, by := poly[j].XY()
		if (ay > py) != (by > py) && px < (bx-ax)*(py-ay)/(by-ay)+ax {
			in = !in
		}
	}
	return in
}
