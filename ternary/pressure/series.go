package pressure

import (
	"errors"
	"fmt"

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
	s.end()
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
