package pressure

import (
	"fmt"

	"thalweg/ternary/liquidus"
)

// ChangeKind says what changes with pressure.
type ChangeKind string

const (
	FieldGained ChangeKind = "field gained" // a solid comes to crystallise first somewhere
	FieldLost   ChangeKind = "field lost"
	KindChanged ChangeKind = "kind changed" // a eutectic becomes a reaction point, and so on
	PointGained ChangeKind = "point gained"
	PointLost   ChangeKind = "point lost"
)

// Change is something that is different above a pressure from what it is below.
type Change struct {
	Kind     ChangeKind
	Pressure float64       // Pa
	Solid    int           // of a field; −1 for a point
	Solids   []int         // of a point
	Edge     int           // of a point; −1 inside the triangle
	From, To liquidus.Kind // of a point whose kind changes
	Node     liquidus.Node // the point beside the change; zero for a field
}

// locateTol is the pressure, Pa, to which a change is located: 1e-4 GPa, far less
// than what the volumes are worth.
const locateTol = 1e5

// differences are the changes from one projection to another, their pressure left
// open: fields in the order of the solids, then points in the order of the nodes.
func differences(a, b *liquidus.Projection) (out []Change) {
	fa, fb := hasField(a), hasField(b)
	for i := range fa {
		switch {
		case fb[i] && !fa[i]:
			out = append(out, Change{Kind: FieldGained, Solid: i, Edge: -1})
		case fa[i] && !fb[i]:
			out = append(out, Change{Kind: FieldLost, Solid: i, Edge: -1})
		}
	}
	below, above := points(a), points(b)
	partner := pairs(below, above)
	gained := make([]bool, len(above))
	for i := range gained {
		gained[i] = true
	}
	for i, n := range below {
		if k := partner[i]; k < 0 {
			out = append(out, pointChange(PointLost, n))
		} else {
			gained[k] = false
			if m := above[k]; m.Kind != n.Kind {
				c := pointChange(KindChanged, m)
				c.From, c.To = n.Kind, m.Kind
				out = append(out, c)
			}
		}
	}
	for i, n := range above {
		if gained[i] {
			out = append(out, pointChange(PointGained, n))
		}
	}
	return out
}

func pointChange(kind ChangeKind, n *liquidus.Node) Change {
	return Change{Kind: kind, Solid: -1, Solids: solids(n), Edge: n.Edge, Node: *n}
}

// hasField tells for every solid whether it has a primary field.
func hasField(p *liquidus.Projection) []bool {
	out := make([]bool, len(p.System.Solids))
	for i := range p.Fields {
		out[p.Fields[i].Solid] = true
	}
	return out
}

// search locates the changes between two pressures.
type search struct {
	build   Build
	changes []Change
	failed  int    // projections on the way that did not pass their checks
	first   string // what the first of them said
}

// locate finds every change between neighbouring pressures by bisection.
func (s *Series) locate(build Build) error {
	for i := 1; i < len(s.Projections); i++ {
		lo, hi := s.Pressures[i-1], s.Pressures[i]
		q := search{build: build}
		if err := q.between(lo, hi, s.Projections[i-1], s.Projections[i]); err != nil {
			return err
		}
		s.Changes = append(s.Changes, q.changes...)
		if q.failed > 0 {
			s.Problems = append(s.Problems, fmt.Sprintf("%g to %g GPa: %d of the projections by which changes were located did not pass their checks, the first at %s",
				lo/1e9, hi/1e9, q.failed, q.first))
		}
	}
	return nil
}

func (q *search) between(lo, hi float64, a, b *liquidus.Projection) error {
	diff := differences(a, b)
	mid := (lo + hi) / 2
	if len(diff) == 0 || hi-lo <= locateTol {
		for _, c := range diff {
			c.Pressure = mid
			q.changes = append(q.changes, c)
		}
		return nil
	}
	m, err := project(q.build, mid)
	if err != nil {
		return err
	}
	if p := m.Checks.Problems; len(p) > 0 {
		if q.failed == 0 {
			q.first = problem(mid, p[0])
		}
		q.failed++
	}
	if err := q.between(lo, mid, a, m); err != nil {
		return err
	}
	return q.between(mid, hi, m, b)
}
