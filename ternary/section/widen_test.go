package section_test

import (
	"math/rand"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/tangent"
)

// A solid outside the triangle: at temperatures from below the solidus to above most
// of the liquidus the regions tile the triangle, and bulk compositions lie in the
// region of the assemblage that the cutting planes find for them, which know nothing
// of the larger triangle.
func TestOutsideSolid(t *testing.T) {
	sys := trial.CaseNamed("outside")
	r := rand.New(rand.NewSource(4))
	compared, outside := 0, 0
	for T := 900.0; T <= 1650; T += 75 {
		s := compute(t, sys, T)
		for range 80 {
			x, _ := ternary.Normalize([3]float64{r.ExpFloat64(), r.ExpFloat64(), r.ExpFloat64()})
			q, err := tangent.Solve(sys, x, T)
			if err != nil {
				t.Fatal(err)
			}
			in, near := regionOf(s, x)
			if near || in == nil {
				continue
			}
			compared++
			if phases(partsOf(q)) != phases(in.Phases) {
				t.Errorf("%v, %g K: in a region of %v, equilibrium %v", x, T, in.Phases, partsOf(q))
			}
			for _, p := range q.Parts {
				if p.State.Phase == 3 {
					outside++
				}
			}
		}
		for i := range s.Regions {
			for _, l := range s.Regions[i].TieLines {
				for _, e := range l.Ends {
					if !e.Inside(1e-9) {
						t.Errorf("a tie line ends at %v", e)
					}
				}
			}
		}
	}
	if compared < 500 || outside < 50 {
		t.Errorf("only %d compositions compared, %d with the solid outside", compared, outside)
	}
}

// Between the monotectic of forsterite and silica and the melting point of
// cristobalite a sliver of liquid lies beside pure silica, narrower than the mesh of
// an edge: the tie lines on both sides of it are found.
func TestNarrowLiquid(t *testing.T) {
	sys := trial.Builtin(t, "fo-an-silica")
	for _, celsius := range []float64{1693.5, 1694, 1696, 1700, 1705, 1712, 1713, 1720} {
		compute(t, sys, celsius+ternary.ZeroCelsius)
	}
}
