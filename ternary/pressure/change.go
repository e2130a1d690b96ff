package pressure

import (
	"fmt"
	"slices"
	"sort"

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

// locateTol is the pressure, Pa, to which a change is located.
const locateTol = 1e5

// signature is what is compared from pressure to pressure: sorted names of fields and
// of points with their kinds.
type signature map[string]item

type item struct {
	solid int
	node  *liquidus.Node
}

func signatureOf(p *liquidus.Projection) signature {
	s := signature{}
	for i := range p.Fields {
		f := &p.Fields[i]
		s[fmt.Sprintf("field %d", f.Solid)] = item{solid: f.Solid}
	}
	count := map[string]int{}
	for i := range p.Nodes {
		n := &p.Nodes[i]
		if followed(n) {
			count[keyOf(n)]++
			s[fmt.Sprintf("point %s #%d", keyOf(n), count[keyOf(n)])] = item{solid: -1, node: n}
		}
	}
	return s
}

// differences of two signatures, in a fixed order.
func differences(a, b signature) (out []string) {
	for k, v := range a {
		w, ok := b[k]
		if !ok || v.node != nil && v.node.Kind != w.node.Kind {
			out = append(out, k)
		}
	}
	for k := range b {
		if _, ok := a[k]; !ok {
			out = append(out, k)
		}
	}
	sort.Strings(out)
	return out
}

// locate finds every change between neighbouring pressures by bisection.
func (s *Series) locate(build Build) error {
	for i := 1; i < len(s.Projections); i++ {
		if err := s.between(build, s.Pressures[i-1], s.Pressures[i], s.Projections[i-1], s.Projections[i]); err != nil {
			return err
		}
	}
	return nil
}

func (s *Series) between(build Build, lo, hi float64, a, b *liquidus.Projection) error {
	sa, sb := signatureOf(a), signatureOf(b)
	diff := differences(sa, sb)
	if len(diff) == 0 {
		return nil
	}
	if hi-lo <= locateTol {
		for _, k := range diff {
			s.Changes = append(s.Changes, change(k, sa, sb, (lo+hi)/2))
		}
		return nil
	}
	mid := (lo + hi) / 2
	m, err := project(build, mid)
	if err != nil {
		return err
	}
	if err := s.between(build, lo, mid, a, m); err != nil {
		return err
	}
	return s.between(build, mid, hi, m, b)
}

func change(key string, a, b signature, P float64) Change {
	v, below := a[key]
	w, above := b[key]
	c := Change{Pressure: P, Solid: -1, Edge: -1}
	point := func(n *liquidus.Node) {
		c.Solids, c.Edge, c.Node = solids(n), n.Edge, *n
	}
	switch {
	case below && above:
		c.Kind, c.From, c.To = KindChanged, v.node.Kind, w.node.Kind
		point(w.node)
	case above && w.node != nil:
		c.Kind = PointGained
		point(w.node)
	case below && v.node != nil:
		c.Kind = PointLost
		point(v.node)
	case above:
		c.Kind, c.Solid = FieldGained, w.solid
	default:
		c.Kind, c.Solid = FieldLost, v.solid
	}
	return c
}

// Same reports that a change concerns the point of a track.
func (c *Change) Same(t *Track) bool {
	return c.Solid < 0 && c.Edge == t.Edge && slices.Equal(c.Solids, t.Solids)
}
