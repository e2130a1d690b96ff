package systems

import (
	"testing"

	"thalweg/ternary"
)

// Enstatite is counted from the other solids, so that the point at which it would
// melt to a liquid of its own composition, and the heat that this takes, are
// predictions.
func TestEnstatiteMelting(t *testing.T) {
	sys, err := open(t, "fo-an-silica").AtReference(nil)
	if err != nil {
		t.Fatal(err)
	}
	en := solid(t, sys, "En").Members[0]
	x, err := ternary.Normalize(en.C)
	if err != nil {
		t.Fatal(err)
	}
	col := sys.Liquid.Column(x)
	melting := func(T float64) (g float64) { // liquid minus solid, J/mol
		g = -en.G.At(T)
		for i, n := range en.C {
			if n != 0 {
				g += n * col[i].At(T)
			}
		}
		return g
	}
	Tm := bisect(melting, 1500, 2200)
	const h = 0.5
	// The heat takes up the uncertainties of half of forsterite's (7 kJ/mol) and of the
	// mixing terms, which fix the excess potential and hardly its slope in T.
	heat := -Tm * (melting(Tm+h) - melting(Tm-h)) / (2 * h)
	near(t, "metastable melting point, °C: Richet & Bottinga 1986, Rev. Geophys. 24 (from memory)", Tm-ternary.ZeroCelsius, 1561, 8)
	near(t, "heat of fusion, kJ/mol: Richet & Bottinga 1986, Rev. Geophys. 24 (from memory), ± 6", heat/1e3, 73.2, 20)
	t.Logf("%.1f °C, %.1f kJ/mol", Tm-ternary.ZeroCelsius, heat/1e3)
}

// The solvus of the alkali feldspars is a prediction of their mixing terms, which
// are calorimetric and have uncertainties of about a kilojoule: some 50 K. Its top
// is at 660 ± 10 °C and 45 wt% orthoclase in Bowen & Tuttle 1950, J. Geol. 58,
// 489–511, at about 1 kbar of water vapour (from memory); a kilobar raises it by
// some 15 °C.
func TestFeldsparSolvus(t *testing.T) {
	sys, err := open(t, "ab-or-silica").AtReference(nil)
	if err != nil {
		t.Fatal(err)
	}
	afs := solid(t, sys, "Afs")
	slope := func(y, T float64) float64 { // of the difference of potentials: zero on the spinodal
		const h = 1e-5
		a, b := afs.Column([3]float64{1 - y - h, y + h}), afs.Column([3]float64{1 - y + h, y - h})
		return a[1].At(T) - a[0].At(T) - b[1].At(T) + b[0].At(T)
	}
	top, at := 0.0, 0.0
	for y := 0.1; y < 0.9; y += 0.001 {
		if slope(y, 700) > 0 {
			continue // mixes down to 700 K
		}
		if T := bisect(func(T float64) float64 { return slope(y, T) }, 700, 2000); T > top {
			top, at = T, y
		}
	}
	ab, or := afs.Members[0].Formula.MolarMass(), afs.Members[1].Formula.MolarMass()
	wt := 100 * at * or / (at*or + (1-at)*ab)
	t.Logf("top of the solvus %.1f °C, %.1f wt%% Or", top-ternary.ZeroCelsius, wt)
	near(t, "top of the solvus, °C", top-ternary.ZeroCelsius, 645, 40)
	near(t, "top of the solvus, wt% Or", wt, 45, 12)
	if afs.ConvexAbove() < top-1 || !afs.CanUnmix(top-1) {
		t.Errorf("taken for convex above %.1f K, the solvus ends at %.1f", afs.ConvexAbove(), top)
	}
}
