package tangent_test

import (
	"fmt"
	"math/rand"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
)

// subject is a system with the temperatures, K, between which its liquids freeze.
type subject struct {
	name      string
	sys       *gibbs.System
	low, high float64
}

// subjects are the built-in systems, hand-made cases and random systems, among
// them binary and ternary solid solutions.
func subjects(t testing.TB) []subject {
	t.Helper()
	var out []subject
	for _, name := range systems.Names() {
		out = append(out, subject{name: name, sys: trial.Builtin(t, name)})
	}
	for _, name := range []string{"polymorphs", "ring"} {
		out = append(out, subject{name: name, sys: trial.CaseNamed(name)})
	}
	for _, seed := range []int64{3, 6, 14, 25} {
		out = append(out, subject{name: fmt.Sprintf("seed %d", seed), sys: trial.System(seed, trial.Options{})})
	}
	for i := range out {
		s := &out[i]
		for k := 0; k < 3; k++ {
			T, _ := trial.Freezing(s.sys, ternary.Apex(k), 4000, 100, 1e-3)
			if k == 0 || T < s.low {
				s.low = T
			}
			s.high = max(s.high, T)
		}
		s.low *= 0.6 // down into the solid state
	}
	return out
}

// inside draws a composition uniformly over the triangle.
func inside(rng *rand.Rand) ternary.Composition {
	b, err := ternary.Normalize([3]float64{rng.ExpFloat64(), rng.ExpFloat64(), rng.ExpFloat64()})
	if err != nil {
		panic(err)
	}
	return b
}
