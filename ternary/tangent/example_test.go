package tangent_test

import (
	"fmt"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/tangent"
)

// What a mixture of three salts (invented data) is made of on the way down.
func ExampleSolve() {
	sys := trial.Ideal([3]float64{900, 1000, 1100}, [3]float64{18000, 20000, 22000}) // K, J/mol
	b := ternary.Composition{0.2, 0.3, 0.5}
	for _, T := range []float64{950, 850, 700, 650} {
		q, err := tangent.Solve(sys, b, T)
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Printf("%.0f K:", T)
		for _, p := range q.Parts {
			name := "liquid"
			if p.State.Phase != gibbs.Liquid {
				name = sys.Solids[p.State.Phase].Symbol
			}
			fmt.Printf(" %.3f %s", p.Mole, name)
		}
		fmt.Println()
	}
	// Output:
	// 950 K: 1.000 liquid
	// 850 K: 0.986 liquid 0.014 C
	// 700 K: 0.512 liquid 0.117 B 0.370 C
	// 650 K: 0.200 A 0.300 B 0.500 C
}

// How far a phase that is kept out is from forming: its driving force over the
// plane of the assemblage.
func ExampleAbove() {
	sys := trial.Ideal([3]float64{900, 1000, 1100}, [3]float64{18000, 20000, 22000})
	x := ternary.Composition{0.2, 0.3, 0.5}
	undercooled := 800.0 // K
	mu := trial.Potentials(sys.Liquid, x, undercooled)
	for _, s := range tangent.Above(sys, mu, undercooled, nil, 1e-6) {
		fmt.Println(sys.Solids[s.Phase].Symbol, "would form")
	}
	// Output:
	// C would form
}
