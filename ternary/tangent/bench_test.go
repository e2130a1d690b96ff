package tangent_test

import (
	"math/rand"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/tangent"
)

// One equilibrium each of a thousand bulks and temperatures, in turn.
func BenchmarkSolve(b *testing.B) {
	for _, s := range subjects(b) {
		b.Run(s.name, func(b *testing.B) {
			rng := rand.New(rand.NewSource(1))
			var x [1000]ternary.Composition
			var T [1000]float64
			for i := range x {
				x[i], T[i] = inside(rng), s.low+(s.high-s.low)*rng.Float64()
			}
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				if _, err := tangent.Solve(s.sys, x[i%1000], T[i%1000]); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// Newton's method alone, from the plane of a temperature 1 K away: one step of a
// path.
func BenchmarkHold(b *testing.B) {
	s := subjects(b)[0]
	x := ternary.Composition{0.3, 0.35, 0.35}
	q, err := tangent.Solve(s.sys, x, s.low+0.6*(s.high-s.low))
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	for b.Loop() {
		if _, err := tangent.Hold(s.sys, x, q.T-1, q.Mu, q.Parts); err != nil {
			b.Fatal(err)
		}
	}
}
