package systems

import (
	"crypto/sha256"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

func open(t *testing.T, name string) *File {
	t.Helper()
	f, err := Open(name)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func TestBuiltins(t *testing.T) {
	want := map[string][3]string{
		"di-ab-an": {"Di", "Ab", "An"}, "di-an-fo": {"Di", "An", "Fo"}, "lif-naf-kf": {"LiF", "NaF", "KF"},
		"fo-an-silica": {"Fo", "An", "Silica"}, "ab-or-silica": {"Ab", "Or", "Silica"},
	}
	for name, symbols := range want {
		f := open(t, name)
		for i, c := range f.Components {
			if c.Symbol != symbols[i] {
				t.Errorf("%s: component %d is %s", name, i, c.Symbol)
			}
		}
		if len(f.Cautions) == 0 || len(f.Limits) == 0 || f.About == "" {
			t.Errorf("%s: cautions, limits and about must not be empty", name)
		}
		data, err := os.ReadFile(name + ".toml")
		if err != nil || fmt.Sprintf("%x", sha256.Sum256(data)) != f.SHA256() {
			t.Errorf("%s: SHA256 %s is not that of the file (%v)", name, f.SHA256(), err)
		}
		values := f.Values()
		if len(values) < 6 {
			t.Fatalf("%s: %d values", name, len(values))
		}
		for _, v := range values {
			if (v.Source == "") == (v.FittedTo == "") || v.Unit == "" || v.Where == "" || v.Name == "" {
				t.Errorf("%s: incomplete %+v", name, v)
			}
		}
		if _, err := f.AtReference(nil); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
	for _, name := range Names() {
		open(t, name)
	}
}

func TestFluoridesCaution(t *testing.T) {
	text := strings.Join(open(t, "lif-naf-kf").Cautions, " ")
	for _, want := range []string{"hydrogen fluoride", "toxic", "qualified people", "local codes"} {
		if !strings.Contains(text, want) {
			t.Errorf("the cautions do not speak of %s", want)
		}
	}
}

// Heats of fusion against other laboratories or compilations than the file's own.
func TestHeatsOfFusion(t *testing.T) {
	cases := []struct {
		system, solid string
		member        int
		want, tol     float64 // kJ/mol
		source        string
	}{
		{"lif-naf-kf", "LiF", 0, 27.07, 1.1, "Blander 1962, ORNL-3293, table 1: 6.47 kcal/mol"},
		{"lif-naf-kf", "NaF", 0, 33.60, 1.1, "Blander 1962, ORNL-3293, table 1: 8.03 kcal/mol"},
		{"lif-naf-kf", "KF", 0, 28.24, 1.2, "Blander 1962, ORNL-3293, table 1: 6.75 kcal/mol"},
		{"di-ab-an", "Di", 0, 137.7, 2.4, "Richet & Bottinga 1984, Earth Planet. Sci. Lett. 67 (from memory)"},
		{"di-ab-an", "Pl", 0, 64.5, 3.0, "Richet & Bottinga 1986, Rev. Geophys. 24 (from memory)"},
		{"di-ab-an", "Pl", 1, 133, 4, "Richet & Bottinga 1984, Earth Planet. Sci. Lett. 67 (from memory)"},
	}
	for _, c := range cases {
		s, err := open(t, c.system).AtReference(nil)
		if err != nil {
			t.Fatal(err)
		}
		m := solid(t, s, c.solid).Members[c.member]
		tm := meltingPoint(m.G)
		// The enthalpy of the solid below its liquid is −(A − C·T).
		near(t, c.solid+" "+c.source, -(m.G.A-m.G.C*tm)/1e3, c.want, c.tol)
	}
}

// meltingPoint is where a standard Gibbs energy counted from the liquid is zero, K.
func meltingPoint(g gibbs.TFunc) float64 {
	return bisect(func(T float64) float64 { return g.At(T) }, 300, 3000)
}

func bisect(f func(float64) float64, lo, hi float64) float64 {
	flo := f(lo)
	for range 200 {
		mid := (lo + hi) / 2
		if (f(mid) > 0) == (flo > 0) {
			lo = mid
		} else {
			hi = mid
		}
	}
	return (lo + hi) / 2
}

// The plagioclase loop, ideal in liquid and solid, against Bowen's quenching
// experiments. Compositions in wt% An; only standard states enter.
func TestPlagioclaseLoop(t *testing.T) {
	f := open(t, "di-ab-an")
	f.Liquid = Mixing{Sites: 1, Extension: "muggianu"} // ideal, whatever is fitted later
	s, err := f.AtReference(nil)
	if err != nil {
		t.Fatal(err)
	}
	ab, an := solid(t, s, "Pl").Members[0].G, solid(t, s, "Pl").Members[1].G
	cases := []struct{ tC, liquid, solid float64 }{ // NaN: not measured
		{1521, 83.3, math.NaN()}, {1490, 66.7, math.NaN()}, {1450, 50, math.NaN()},
		{1394, 33.3, math.NaN()}, {1334, 20, math.NaN()},
		{1465, math.NaN(), 83.3}, {1372, math.NaN(), 66.7}, {1287, math.NaN(), 50},
		{1205, math.NaN(), 33.3}, {1175, math.NaN(), 20},
	} // Bowen 1913, Am. J. Sci. 35, 577–599 (from memory); on it anorthite melts at 1550 °C
	const tol = 4.0 // wt%: ±2 in composition and ±5 K, as the paper's own scatter
	for _, c := range cases {
		T := c.tC + 273.15
		a, b := math.Exp(ab.At(T)/(ternary.R*T)), math.Exp(an.At(T)/(ternary.R*T)) // x(liquid)/x(solid)
		xs := (1 - a) / (b - a)
		for _, v := range [][2]float64{{b * xs, c.liquid}, {xs, c.solid}} {
			if !math.IsNaN(v[1]) {
				w := 100 * s.Components.Fractions(ternary.Composition{0, 1 - v[0], v[0]}, ternary.Mass)[2]
				near(t, fmt.Sprintf("%g °C", c.tC), w, v[1], tol)
			}
		}
	}
}

// Binary eutectics of the fluorides. The temperatures were fitted, so only the
// compositions test anything.
func TestFluorideEutectics(t *testing.T) {
	s, err := open(t, "lif-naf-kf").AtReference(nil)
	if err != nil {
		t.Fatal(err)
	}
	cases := []struct {
		i, j     int
		want     float64 // mol% of i
		tol, tC  float64
		citation string
	}{
		{0, 1, 60.5, 1.5, 649, "Bergman & Dergunov 1941, C. R. Acad. Sci. URSS 31, 753: 60 or 61"},
		{0, 2, 50, 1.5, 492, "Janz & Tomkins 1981, NSRDS-NBS 61 IV, system 77"},
		{1, 2, 40, 5, 710, "Bergman & Dergunov 1941; the solid solution that the model ignores moves it"},
	}
	for _, c := range cases {
		saturation := func(k int, x float64) float64 { // K, of solid k in the liquid with x of i
			var y [3]float64
			y[c.i], y[c.j] = x, 1-x
			return bisect(func(T float64) float64 {
				var q gibbs.Potentials
				s.Liquid.Potentials(&y, T, &q)
				return q.Mu[k] - s.Solids[k].Members[0].G.At(T)
			}, 150, 1500)
		}
		x := bisect(func(x float64) float64 { return saturation(c.i, x) - saturation(c.j, x) }, 0.15, 0.85)
		near(t, "composition, "+c.citation, 100*x, c.want, c.tol)
		near(t, "temperature, fitted", saturation(c.i, x)-273.15, c.tC, 12)
	}
}
