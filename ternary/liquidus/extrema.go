package liquidus

import (
	"fmt"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Extrema of the liquidus that are no nodes of the graph: minima and maxima of
// solid solutions, where liquid and solid have one composition (azeotropes), on
// edges and inside; and the congruent melting points of compounds.

// hexagon are the six directions of the mesh.
var hexagon = [6][3]float64{{1, -1, 0}, {-1, 1, 0}, {0, 1, -1}, {0, -1, 1}, {1, 0, -1}, {-1, 0, 1}}

// findExtrema collects the extrema of the projection.
func (e *engine) findExtrema(p *Projection) {
	for _, ed := range e.edges {
		x0, dx := edgeLine((ed.k+1)%3, (ed.k+2)%3)
		for _, x := range ed.extrema {
			e.addExtremum(p, x.kind, ed.k, onLine(x0, dx, x.at))
		}
	}
	for i := range p.Fields {
		f := &p.Fields[i]
		if f.Solid >= 0 && !f.TwoLiquids && e.sys.Solids[f.Solid].Stoichiometric() && f.Peak.Inside(-1e-12) && !math.IsInf(f.PeakT, 0) {
			if f.contains(f.Peak) {
				e.addExtremum(p, Maximum, -1, f.Peak)
			}
		}
	}
	m := e.mesh
	for i := 0; i <= m.n; i++ {
		for j := 0; i+j <= m.n; j++ {
			for _, k := range [2]Kind{Minimum, Maximum} {
				if e.meshExtremum(i, j, k) {
					if x, ok := e.refineExtremum(m.composition(i, j), m.nodes[m.index(i, j)].primary, k); ok {
						e.addExtremum(p, k, -1, x)
					}
				}
			}
		}
	}
	p.nameExtrema()
}

// nameExtrema numbers them: minima n1, n2, … after those among the nodes, domes
// d1, d2, …
func (p *Projection) nameExtrema() {
	count := map[Kind]int{}
	for i := range p.Nodes {
		count[p.Nodes[i].Kind]++
	}
	count[Maximum] = 0
	for i := range p.Extrema {
		n := &p.Extrema[i]
		count[n.Kind]++
		prefix := "d"
		if n.Kind == Minimum {
			prefix = "n"
		}
		n.ID = fmt.Sprintf("%s%d", prefix, count[n.Kind])
	}
}

// meshExtremum reports whether a node is lower (or higher) than its six
// neighbours, all in the field of one solid solution.
func (e *engine) meshExtremum(i, j int, k Kind) bool {
	m := e.mesh
	s := &m.nodes[m.index(i, j)]
	if s.split || s.primary < 0 || e.sys.Solids[s.primary].Stoichiometric() {
		return false
	}
	for _, l := range [6][2]int{{0, 1}, {1, 0}, {1, -1}, {0, -1}, {-1, 0}, {-1, 1}} {
		if !m.has(i+l[0], j+l[1]) {
			return false
		}
		o := &m.nodes[m.index(i+l[0], j+l[1])]
		if o.split || o.primary != s.primary || (o.T < s.T) == (k == Minimum) {
			return false
		}
	}
	return true
}

// refineExtremum follows an extremum by a pattern search with shrinking
// hexagons; it fails where the search leaves the field or the triangle.
func (e *engine) refineExtremum(x ternary.Composition, solid int, k Kind) (ternary.Composition, bool) {
	best := e.surface(x, nil)
	for h := 0.5 / float64(e.mesh.n+1); h > 1e-8; h /= 2 {
		for moved := true; moved; {
			moved = false
			for _, d := range hexagon {
				y := ternary.Composition{x[0] + h*d[0], x[1] + h*d[1], x[2] + h*d[2]}
				if !y.Inside(-1e-9) {
					return x, false
				}
				s := e.surface(y, nil)
				if s.primary != solid || s.split {
					return x, false
				}
				if (s.T < best.T) == (k == Minimum) && s.T != best.T {
					best, x, moved = s, y, true
				}
			}
		}
	}
	return x, true
}

func (e *engine) addExtremum(p *Projection, k Kind, edge int, x ternary.Composition) {
	s := e.surface(x, nil)
	if s.primary < 0 || s.split || math.IsInf(s.T, 0) {
		return
	}
	for i := range p.Extrema {
		if p.Extrema[i].Liquid.Distance(x) < 1e-6 {
			return
		}
	}
	y := s.all[s.primary].Y
	st := gibbs.State{Phase: s.primary, Y: y, C: e.sys.Solids[s.primary].Contents(y)}
	p.Extrema = append(p.Extrema, Node{Kind: k, Edge: edge, Liquid: x, T: s.T, Solids: []gibbs.State{st}, Coefficients: []float64{1}, Conjugate: -1})
}
