package ternary

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func componentsOf(t *testing.T, formulas ...string) (cs Components) {
	t.Helper()
	for i, f := range formulas {
		cs[i] = Component{Symbol: f, Name: f, Formula: mustParse(t, f)}
	}
	return cs
}

// Published compositions that are given by mass and by mole.
func TestBasisAgainstPublished(t *testing.T) {
	cases := []struct {
		formulas [3]string
		wt, mol  [3]float64 // percent
		tol      float64    // half of the last digit, on both sides
		source   string
	}{
		{[3]string{"Ga", "In", "Sn"}, [3]float64{62.5, 21.5, 16.0}, [3]float64{73.6, 15.3, 11.1}, 0.1,
			"CRC Handbook of Chemistry and Physics, section 15, low-melting alloys: eutectic at 11 °C"},
		{[3]string{"Ga", "Sn", "Zn"}, [3]float64{82.0, 12.0, 6.0}, [3]float64{86.0, 7.3, 6.7}, 0.15,
			"CRC Handbook of Chemistry and Physics, section 15, low-melting alloys: eutectic at 17 °C"},
		{[3]string{"LiF", "NaF", "KF"}, [3]float64{29.1, 11.7, 59.2}, [3]float64{46.5, 11.5, 42.0}, 0.15,
			"Bergman & Dergunov 1941: mol% in Thoma (ed.) 1959, ORNL-2548; wt% in the abstract, ORNL-1252"},
	}
	for _, c := range cases {
		cs := componentsOf(t, c.formulas[:]...)
		x, err := cs.Composition(c.wt, Mass)
		if err != nil {
			t.Fatal(err)
		}
		y, err := Normalize(c.mol)
		if err != nil {
			t.Fatal(err)
		}
		w := cs.Fractions(y, Mass)
		for i := range x {
			if math.Abs(100*x[i]-c.mol[i]) > c.tol || math.Abs(100*w[i]-c.wt[i]) > c.tol {
				t.Errorf("%s: %.2f mol%% for %.1f, %.2f wt%% for %.1f (%s)", c.formulas[i], 100*x[i], c.mol[i], 100*w[i], c.wt[i], c.source)
			}
		}
	}
}

// Composition undoes Fractions, for solids outside the triangle too.
func TestBasisRoundTrip(t *testing.T) {
	cs := componentsOf(t, "CaMgSi2O6", "NaAlSi3O8", "CaAl2Si2O8")
	rapid.Check(t, func(t *rapid.T) {
		lo := rapid.SampledFrom([]float64{0, -0.3}).Draw(t, "lowest")
		a := rapid.Float64Range(lo, 1).Draw(t, "a")
		b := rapid.Float64Range(lo, 1).Draw(t, "b")
		x := Composition{a, b, 1 - a - b}
		if x[2] < lo {
			t.Skip("outside")
		}
		for _, basis := range []Basis{Mass, Mole} {
			y, err := cs.Composition(cs.Fractions(x, basis), basis)
			if err != nil {
				t.Fatal(err)
			}
			for i := range x {
				if math.Abs(x[i]-y[i]) > 1e-13 {
					t.Fatalf("%v came back as %v through %v", x, y, basis)
				}
			}
		}
	})
}

func TestNormalize(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, bad := range [][3]float64{{}, {1, -1, 0}, {-1, 0, 0}, {nan, 1, 1}, {inf, 1, 1}, {inf, -inf, 1}} {
		if x, err := Normalize(bad); err == nil {
			t.Errorf("%v was normalised to %v", bad, x)
		}
	}
	x, err := Normalize([3]float64{2, 1, 1})
	if err != nil || x != (Composition{0.5, 0.25, 0.25}) {
		t.Errorf("got %v %v", x, err)
	}
}

func TestGeometry(t *testing.T) {
	for i := range 3 {
		for j := range i {
			if d := Apex(i).Distance(Apex(j)); math.Abs(d-1) > 1e-15 {
				t.Errorf("side %d–%d has length %g", i, j, d)
			}
		}
	}
	mid := Apex(0).Lerp(Apex(1), 0.5)
	if d := mid.Distance(Apex(2)); math.Abs(d-math.Sqrt(3)/2) > 1e-15 {
		t.Errorf("height %g", d)
	}
	if px, py := Apex(0).XY(); px != 0.5 || py <= 0 {
		t.Errorf("component 0 is at %g, %g, not on top", px, py)
	}
	if (Composition{-0.1, 0.6, 0.5}).Inside(0.05) || !(Composition{-0.01, 0.5, 0.51}).Inside(0.05) {
		t.Error("Inside misjudges the edge")
	}
}

func TestParseBasis(t *testing.T) {
	for _, b := range []Basis{Mass, Mole} {
		if got, err := ParseBasis(b.String()); err != nil || got != b {
			t.Errorf("%v: %v %v", b, got, err)
		}
	}
	if _, err := ParseBasis("vol"); err == nil {
		t.Error("vol is no basis")
	}
}

func TestComponentsIndex(t *testing.T) {
	cs := componentsOf(t, "LiF", "NaF", "KF")
	if i, ok := cs.Index("KF"); i != 2 || !ok {
		t.Errorf("KF: %d %v", i, ok)
	}
	if _, ok := cs.Index("RbF"); ok {
		t.Error("RbF is not a component")
	}
}
