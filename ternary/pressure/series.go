package pressure

import (
	"cmp"
	"errors"
	"fmt"
	"slices"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// Build makes the system at a pressure, Pa. It must be safe to call again.
type Build func(pascal float64) (*gibbs.System, error)

// Series is the projections of a system at rising pressures.
type Series struct {
	Pressures   []float64 // Pa
	Projections []*liquidus.Projection
	Points      []Track
	Changes     []Change
	// Problems says which projections did not pass their own checks, those computed to
	// locate a change among them: what is said of the points and changes beside them is
	// not sure.
	Problems []string
}

// Track is one invariant point from pressure to pressure: of the same solids, in the
// triangle or on the same edge.
type Track struct {
	Solids []int // indices in System.Solids, gibbs.Liquid for a second liquid
	Edge   int   // component that is absent, or −1
	At     []Sight
}

// Sight is a point at one pressure.
type Sight struct {
	Index int // of the pressure
	Node  liquidus.Node
}

// most bounds a series.
const most = 500

// Compute follows the points over the pressures, Pa, which must rise. An error says
// that they do not, or that a system cannot be built; projections that fail their
// checks are no error but are named in Problems.
func Compute(build Build, pressures []float64) (*Series, error) {
	switch {
	case len(pressures) == 0:
		return nil, errors.New("there is no pressure to compute at")
	case len(pressures) > most:
		return nil, fmt.Errorf("%d pressures are too many: up to %d", len(pressures), most)
	}
	for i := 1; i < len(pressures); i++ {
		if !(pressures[i] > pressures[i-1]) {
			return nil, fmt.Errorf("the pressures do not rise: %g Pa comes after %g", pressures[i], pressures[i-1])
		}
	}
	s := &Series{Pressures: pressures}
	for _, P := range pressures {
		p, err := project(build, P)
		if err != nil {
			return nil, err
		}
		s.Projections = append(s.Projections, p)
		for _, q := range p.Checks.Problems {
			s.Problems = append(s.Problems, problem(P, q))
		}
	}
	s.match()
	if err := s.locate(build); err != nil {
		return nil, err
	}
	return s, nil
}

// problem says at which pressure a projection did not pass its checks.
func problem(pascal float64, text string) string { return fmt.Sprintf("%g GPa: %s", pascal/1e9, text) }

func project(build Build, P float64) (*liquidus.Projection, error) {
	sys, err := build(P)
	if err != nil {
		return nil, err
	}
	p, err := liquidus.Compute(sys, liquidus.Options{})
	if err != nil {
		return nil, fmt.Errorf("%g GPa: %w", P/1e9, err)
	}
	return p, nil
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
