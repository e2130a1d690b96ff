package liquidus

import (
	"fmt"
	"math"

	"thalweg/ternary"
)

// buildFields turns the graph's faces into primary fields and checks the graph.
func (e *engine) buildFields(p *Projection) {
	g := e.newGraph(p)
	cycles := g.cycles()
	ck := &p.Checks
	ck.Vertices, ck.Pieces = g.pieces()
	ck.Edges = len(g.arcs)
	ck.Faces = 1 // the outside
	outer := 0
	var faces []*cycle
	for i := range cycles {
		c := &cycles[i]
		if c.area > 0 {
			ck.Faces++
			faces = append(faces, c)
		} else if g.left(c.halves[0]) == -1 {
			outer++
		}
	}
	ck.Euler = ck.Vertices - ck.Edges + ck.Faces - 1 - ck.Pieces
	if ck.Euler != 0 {
		e.problem(fmt.Sprintf("the curves do not make a planar graph: V − E + F = %d with %d pieces", ck.Vertices-ck.Edges+ck.Faces, ck.Pieces))
	}
	for _, c := range faces {
		solid, err := g.label(c)
		if err != nil {
			e.problem(err.Error())
			continue
		}
		f := Field{Solid: solid, Outline: toCompositions(c.points)}
		if n := len(e.sys.Solids); solid >= n {
			f.Solid, f.TwoLiquids = solid-n, true
		}
		p.Fields = append(p.Fields, f)
	}
	e.placeHoles(p, g, cycles, faces)
	e.checkFields(p)
	for i := range p.Fields {
		e.findPeak(&p.Fields[i])
	}
}

// placeHoles gives every outer contour of a piece that lies inside a field to
// the smallest field that contains it.
func (e *engine) placeHoles(p *Projection, g *graph, cycles []cycle, faces []*cycle) {
	if len(p.Fields) != len(faces) {
		return // a face without a label: reported already
	}
	for i := range cycles {
		c := &cycles[i]
		if c.area > 0 || g.left(c.halves[0]) == -1 {
			continue
		}
		solid, err := g.label(c)
		if err != nil {
			e.problem(err.Error())
			continue
		}
		best, area := -1, math.Inf(1)
		for f, face := range faces {
			if face.area < area && face.area > -c.area*(1+1e-9) && contains(face.points, c.points[0][0], c.points[0][1]) {
				best, area = f, face.area
			}
		}
		if best < 0 || e.fieldLabel(&p.Fields[best]) != solid {
			e.problem(fmt.Sprintf("an island in the field of %s does not lie in that field", g.name(solid)))
			continue
		}
		p.Fields[best].Holes = append(p.Fields[best].Holes, toCompositions(c.points))
	}
}

func (e *engine) fieldLabel(f *Field) int {
	if f.TwoLiquids {
		return e.twoLiquidLabel(f.Solid)
	}
	return f.Solid
}

func toCompositions(pts []vec) []ternary.Composition {
	out := make([]ternary.Composition, len(pts))
	for i, z := range pts {
		x := compositionAt(z[0], z[1])
		for k := range x {
			if math.Abs(x[k]) < 1e-12 {
				x[k] = 0
			}
		}
		out[i] = x
	}
	return out
}

// areaTol is the share of the triangle by which the areas of the fields may
// miss the whole: rounding of polygons that share their sides exactly.
const areaTol = 1e-9

// checkFields asserts that the fields tile the triangle and that every solid
// that is primary at a node of the mesh has a field there.
func (e *engine) checkFields(p *Projection) {
	sum := 0.0
	for i := range p.Fields {
		sum += p.Fields[i].moleArea()
	}
	if math.Abs(sum-1) > areaTol {
		e.problem(fmt.Sprintf("the fields cover %.9f of the triangle", sum))
	}
	seen := make([]bool, len(e.sys.Solids))
	split := false
	for i := range p.Fields {
		if f := &p.Fields[i]; f.Solid >= 0 && !f.TwoLiquids {
			seen[f.Solid] = true
		} else if f.TwoLiquids {
			split = true
		}
	}
	m := e.mesh
	for i := 0; i <= m.n; i++ {
		for j := 0; i+j <= m.n; j++ {
			s := m.nodes[m.index(i, j)].primary
			if m.nodes[m.index(i, j)].split {
				if !split && !e.nearCritical(m.composition(i, j)) {
					p.Unmixed = append(p.Unmixed, m.composition(i, j))
				}
				continue
			}
			if s < 0 {
				e.problem(fmt.Sprintf("nothing crystallises from the liquid at %s", e.place(m.composition(i, j))))
			} else if !seen[s] {
				e.problem(fmt.Sprintf("%s is primary at %s but has no field", e.symbol(s), e.place(m.composition(i, j))))
				seen[s] = true
			}
		}
	}
	if n := len(p.Unmixed); n > 0 {
		e.problem(fmt.Sprintf("the liquid separates into two at %d nodes of the mesh, first at %s, but no two-liquid field was found", n, e.place(p.Unmixed[0])))
	}
}

// moleArea is the field's share of the triangle in mole fractions.
func (f *Field) moleArea() float64 {
	return f.share(func(x ternary.Composition) [3]float64 { return x })
}

// AreaFraction is the field's share of the triangle drawn in basis b.
func (f *Field) AreaFraction(cs ternary.Components, b ternary.Basis) float64 {
	return f.share(func(x ternary.Composition) [3]float64 { return cs.Fractions(x, b) })
}

func (f *Field) share(to func(ternary.Composition) [3]float64) float64 {
	a := math.Abs(ringArea(f.Outline, to))
	for _, h := range f.Holes {
		a -= math.Abs(ringArea(h, to))
	}
	return a
}

// ringArea is the signed area of a ring as a share of the triangle.
func ringArea(ring []ternary.Composition, to func(ternary.Composition) [3]float64) float64 {
	if len(ring) == 0 {
		return 0
	}
	s := 0.0
	p := to(ring[len(ring)-1])
	for _, x := range ring {
		q := to(x)
		s += p[1]*q[2] - q[1]*p[2]
		p = q
	}
	return s
}

// contains reports whether x lies in the field.
func (f *Field) contains(x ternary.Composition) bool {
	px, py := x.XY()
	if !contains(toVecs(f.Outline), px, py) {
		return false
	}
	for _, h := range f.Holes {
		if contains(toVecs(h), px, py) {
			return false
		}
	}
	return true
}

func toVecs(ring []ternary.Composition) []vec {
	out := make([]vec, len(ring))
	for i, x := range ring {
		out[i][0], out[i][1] = x.XY()
	}
	return out
}

// findPeak finds the highest liquidus temperature of a field: on its outline, or
// where its solid melts congruently inside it.
func (e *engine) findPeak(f *Field) {
	f.PeakT = math.Inf(-1)
	if f.Solid < 0 {
		return
	}
	if f.TwoLiquids { // its temperatures are those of its rim
		for _, x := range f.Outline {
			c := e.column(x)
			if s := e.saturation(f.Solid, &c, saturated{}); s.T > f.PeakT {
				f.Peak, f.PeakT = x, s.T
			}
		}
		return
	}
	sol := e.sys.Solids[f.Solid]
	if sol.Stoichiometric() {
		if x, err := ternary.Normalize(sol.Members[0].C); err == nil && x.Inside(0) {
			s := e.surface(x, nil)
			if s.primary == f.Solid && (e.onOutline(f, x) || f.contains(x)) {
				f.Peak, f.PeakT = x, s.T
				return
			}
		}
	}
	var hint saturated
	for _, x := range f.Outline {
		c := e.column(x)
		s := e.saturation(f.Solid, &c, hint)
		if s.T > f.PeakT {
			f.Peak, f.PeakT = x, s.T
		}
		hint = s
	}
	if !sol.Stoichiometric() {
		e.climbPeak(f)
	}
}

// onOutline reports whether x is a corner of the outline.
func (e *engine) onOutline(f *Field, x ternary.Composition) bool {
	for _, y := range f.Outline {
		if x.Distance(y) < 1e-9 {
			return true
		}
	}
	// on a side of the triangle between two corners of the outline
	for k := range x {
		if x[k] == 0 {
			s := e.surface(x, nil)
			return s.primary == f.Solid
		}
	}
	return false
}

// climbPeak looks for a higher point inside the field of a solid solution, from
// the highest node of the mesh in it, by a pattern search.
func (e *engine) climbPeak(f *Field) {
	m := e.mesh
	bestT, bestX := f.PeakT, f.Peak
	for i := 0; i <= m.n; i++ {
		for j := 0; i+j <= m.n; j++ {
			s := &m.nodes[m.index(i, j)]
			if s.primary == f.Solid && s.T > bestT && f.contains(m.composition(i, j)) {
				bestT, bestX = s.T, m.composition(i, j)
			}
		}
	}
	if bestT <= f.PeakT {
		return
	}
	for h := 0.5 / float64(m.n+1); h > 1e-7; h /= 2 {
		for moved := true; moved; {
			moved = false
			for _, d := range hexagon {
				y := ternary.Composition{bestX[0] + h*d[0], bestX[1] + h*d[1], bestX[2] + h*d[2]}
				if !y.Inside(0) {
					continue
				}
				if s := e.surface(y, nil); s.primary == f.Solid && s.T > bestT {
					bestT, bestX, moved = s.T, y, true
				}
			}
		}
	}
	f.Peak, f.PeakT = bestX, bestT
}
