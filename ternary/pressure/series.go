package pressure

import (
	"errors"
	"fmt"
	"math"
	"sort"

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
	// Problems says which projections did not pass their own checks: what is said of
	// the points and changes beside them is not sure.
	Problems []string
}

// Track is one invariant point from pressure to pressure: of the same solids, in the
// triangle or on the same edge.
type Track struct {
	Key    string // of its solids and edge; the same for points that are matched
	Solids []int  // indices in System.Solids, gibbs.Liquid for a second liquid
	Edge   int    // component that is absent, or −1
	At     []Sight
}

// Sight is a point at one pressure.
type Sight struct {
	Index int // of the pressure
	Node  liquidus.Node
}

// most bounds a series.
const most = 500

// Compute follows the points over the pressures, Pa, which must rise.
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
			s.Problems = append(s.Problems, fmt.Sprintf("%g GPa: %s", P/1e9, q))
		}
	}
	s.match()
	if err := s.locate(build); err != nil {
		return nil, err
	}
	return s, nil
}

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

// keyOf names a point by its edge and solids, whatever their order.
func keyOf(n *liquidus.Node) string {
	list := solids(n)
	return fmt.Sprint(n.Edge, list)
}

func solids(n *liquidus.Node) []int {
	var out []int
	for _, s := range n.Solids {
		out = append(out, s.Phase)
	}
	sort.Ints(out)
	return out
}

// match sorts the points of all projections into tracks: those of one key, the nearest
// in composition where there are several.
func (s *Series) match() {
	for i, p := range s.Projections {
		taken := map[int]bool{}
		for k := range p.Nodes {
			n := &p.Nodes[k]
			if !followed(n) {
				continue
			}
			key, best, near := keyOf(n), -1, math.Inf(1)
			for t := range s.Points {
				tr := &s.Points[t]
				last := &tr.At[len(tr.At)-1]
				if tr.Key != key || taken[t] || last.Index != i-1 {
					continue
				}
				if d := last.Node.Liquid.Distance(n.Liquid); d < near {
					best, near = t, d
				}
			}
			if best < 0 {
				s.Points = append(s.Points, Track{Key: key, Solids: solids(n), Edge: n.Edge})
				best = len(s.Points) - 1
			}
			taken[best] = true
			s.Points[best].At = append(s.Points[best].At, Sight{i, *n})
		}
	}
	sort.SliceStable(s.Points, func(a, b int) bool {
		x, y := &s.Points[a], &s.Points[b]
		if (x.Edge < 0) != (y.Edge < 0) {
			return x.Edge < 0
		}
		return x.At[0].Index < y.At[0].Index
	})
}
