package pressure

import (
	"cmp"
	"math"
	"slices"

	"thalweg/ternary/liquidus"
)

// Track is one invariant point from pressure to pressure: of the same solids, in the
// triangle or on the same edge.
type Track struct {
	Solids []int // indices in System.Solids, gibbs.Liquid for a second liquid
	Edge   int   // component that is absent, or −1
	At     []Sight
	// From and To are the changes by which the point appears and vanishes; nil at the
	// ends of the list of pressures.
	From, To *Change
}

// Sight is a point at one pressure.
type Sight struct {
	Index int // of the pressure
	Node  liquidus.Node
}

// followed reports that a node is an invariant point.
func followed(n *liquidus.Node) bool {
	switch n.Kind {
	case liquidus.Maximum, liquidus.LoopStart, liquidus.AtApex, liquidus.Critical:
		return false
	}
	return true
}

// points are the invariant points of a projection.
func points(p *liquidus.Projection) (out []*liquidus.Node) {
	for i := range p.Nodes {
		if n := &p.Nodes[i]; followed(n) {
			out = append(out, n)
		}
	}
	return out
}

// solids are the phases beside the liquid, sorted.
func solids(n *liquidus.Node) []int {
	var out []int
	for _, s := range n.Solids {
		out = append(out, s.Phase)
	}
	slices.Sort(out)
	return out
}

// pairs matches the points of two projections and returns, for each of a, the index of
// its partner in b, or −1. Partners have the same solids and edge; where several
// have, those nearest in composition are matched first.
func pairs(a, b []*liquidus.Node) []int {
	type pair struct {
		a, b int
		d    float64
	}
	var all []pair
	for i, n := range a {
		for k, m := range b {
			if n.Edge == m.Edge && slices.Equal(solids(n), solids(m)) {
				all = append(all, pair{i, k, n.Liquid.Distance(m.Liquid)})
			}
		}
	}
	slices.SortStableFunc(all, func(x, y pair) int { return cmp.Compare(x.d, y.d) })
	partner := make([]int, len(a))
	for i := range partner {
		partner[i] = -1
	}
	taken := make([]bool, len(b))
	for _, p := range all {
		if partner[p.a] < 0 && !taken[p.b] {
			partner[p.a], taken[p.b] = p.b, true
		}
	}
	return partner
}

// match sorts the points of all projections into tracks, those inside the triangle
// first, then in the order in which they appear.
func (s *Series) match() {
	var before []*liquidus.Node
	var onTrack []int // of each of them
	for i, p := range s.Projections {
		now := points(p)
		track := make([]int, len(now))
		for k := range track {
			track[k] = -1
		}
		for j, k := range pairs(before, now) {
			if k >= 0 {
				track[k] = onTrack[j]
			}
		}
		for k, n := range now {
			if track[k] < 0 {
				track[k] = len(s.Points)
				s.Points = append(s.Points, Track{Solids: solids(n), Edge: n.Edge})
			}
			t := &s.Points[track[k]]
			t.At = append(t.At, Sight{i, *n})
		}
		before, onTrack = now, track
	}
	slices.SortStableFunc(s.Points, func(a, b Track) int {
		if (a.Edge < 0) != (b.Edge < 0) {
			return cmp.Compare(a.Edge, b.Edge)
		}
		return cmp.Compare(a.At[0].Index, b.At[0].Index)
	})
}

// end gives the tracks the changes at which they begin and end: of those beside the
// first and the last sight the nearest in composition.
func (s *Series) end() {
	last := len(s.Pressures) - 1
	used := map[*Change]bool{}
	beside := func(t *Track, kind ChangeKind, lo, hi int, n *liquidus.Node) *Change {
		var best *Change
		near := math.Inf(1)
		for i := range s.Changes {
			c := &s.Changes[i]
			if used[c] || c.Kind != kind || c.Edge != t.Edge || !slices.Equal(c.Solids, t.Solids) || c.Pressure < s.Pressures[lo] || c.Pressure > s.Pressures[hi] {
				continue
			}
			if d := c.Node.Liquid.Distance(n.Liquid); d < near {
				best, near = c, d
			}
		}
		used[best] = true
		return best
	}
	for i := range s.Points {
		t := &s.Points[i]
		if a := &t.At[0]; a.Index > 0 {
			t.From = beside(t, PointGained, a.Index-1, a.Index, &a.Node)
		}
		if b := &t.At[len(t.At)-1]; b.Index < last {
			t.To = beside(t, PointLost, b.Index, b.Index+1, &b.Node)
		}
	}
}
