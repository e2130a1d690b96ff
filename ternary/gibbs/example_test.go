package gibbs_test

import (
	"fmt"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// A liquid of three components that mixes ideally, and a solid of the first that
// melts at 1000 K with a heat of fusion of 30 kJ/mol (invented). In a liquid half
// of which is the first component the solid is not saturated at 950 K, and is
// at 800 K.
func ExamplePhase_Drive() {
	liquid := gibbs.NewLiquid(ternary.Components{}, gibbs.Mixing{})
	solid := &gibbs.Phase{
		Symbol: "A",
		Members: []gibbs.EndMember{{
			C: [3]float64{1, 0, 0},
			G: gibbs.Melting(gibbs.Fusion{T: 1000, H: 30000}, 0),
		}},
	}
	solid.Prepare()
	x := [3]float64{0.5, 0.3, 0.2}
	for _, T := range []float64{950, 800} {
		var p gibbs.Potentials
		liquid.Potentials(&x, T, &p)
		fmt.Printf("%.0f K: %.0f J/mol\n", T, solid.Drive(&p.Mu, T).D)
	}
	// Output:
	// 950 K: -3975 J/mol
	// 800 K: 1389 J/mol
}
