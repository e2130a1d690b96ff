package ternary

import (
	"errors"
	"fmt"
	"math"
	"sort"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func mustParse(t *testing.T, s string) Formula {
	t.Helper()
	f, err := ParseFormula(s)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func TestMolarMass(t *testing.T) {
	const (
		usgs = "Robie & Hemingway 1995, USGS Bull. 2131 (from memory)"
		crc  = "CRC Handbook of Chemistry and Physics (from memory)"
	)
	cases := []struct {
		formula string
		want    float64 // g/mol
		tol     float64
		source  string
	}{
		{"CaMgSi2O6", 216.550, 0.01, usgs},
		{"NaAlSi3O8", 262.223, 0.01, usgs},
		{"CaAl2Si2O8", 278.207, 0.01, usgs},
		{"Mg2SiO4", 140.693, 0.01, usgs},
		{"SiO2", 60.084, 0.005, usgs},
		{"Al2O3", 101.961, 0.005, usgs},
		{"3Al2O3.2SiO2", 426.05, 0.02, crc},
		{"Al6Si2O13", 426.05, 0.02, crc},
		{"LiF", 25.94, 0.01, crc},
		{"NaF", 41.988, 0.005, crc},
		{"KF", 58.097, 0.005, crc},
		{"H2O", 18.015, 0.002, crc},
		{"CuSO4.5H2O", 249.685, 0.02, crc},
		{"CaSO4·0.5H2O", 145.15, 0.02, crc},
		{"Ca5(PO4)3F", 504.30, 0.02, crc},
		{"K4(Fe(CN)6)", 368.35, 0.02, crc},
		{"C10H8", 128.17, 0.01, crc},
		{"Pb", 207.2, 1e-9, "Prohaska et al. 2022, Pure Appl. Chem. 94, 573: exact entry"},
	}
	for _, c := range cases {
		if got := mustParse(t, c.formula).MolarMass(); !(math.Abs(got-c.want) <= c.tol) {
			t.Errorf("%s: %.4f g/mol, want %.4f ± %g (%s)", c.formula, got, c.want, c.tol, c.source)
		}
	}
}

// Atomic weights rise with atomic number but for the known inversions; the table
// must hold them all and no slip of a digit.
func TestAtomicWeightsOrder(t *testing.T) {
	order := strings.Fields("H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As Se Br Kr " +
		"Rb Sr Y Zr Nb Mo Ru Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Sm Eu Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Th Pa U")
	if len(order) != len(atomicWeights) {
		t.Errorf("%d elements in the table, want %d", len(atomicWeights), len(order))
	}
	inverted := map[string]bool{"K": true, "Ni": true, "I": true, "Pa": true} // lighter than the element before
	for i := 1; i < len(order); i++ {
		a, oka := AtomicWeight(order[i-1])
		b, okb := AtomicWeight(order[i])
		if !oka || !okb || (b < a) != inverted[order[i]] || b > a+8 && order[i] != "Th" { // Po to Ac have no weight
			t.Errorf("%s %g, %s %g", order[i-1], a, order[i], b)
		}
	}
}

func TestFormulaElements(t *testing.T) {
	cases := []struct{ formula, want string }{
		{"CaMgSi2O6", "Ca1 Mg1 O6 Si2"},
		{"3Al2O3.2SiO2", "Al6 O13 Si2"},
		{"3Al2O3·2SiO2", "Al6 O13 Si2"},
		{"CaO.SiO2", "Ca1 O3 Si1"},
		{"K2O.Al2O3.6SiO2", "Al2 K2 O16 Si6"},
		{"2CaO.MgO.2SiO2", "Ca2 Mg1 O7 Si2"},
		{"Fe0.95O", "Fe0.95 O1"},
		{"Mg1.8Fe0.2SiO4", "Fe0.2 Mg1.8 O4 Si1"},
		{"(Mg0.9Fe0.1)2SiO4", "Fe0.2 Mg1.8 O4 Si1"},
		{"YBa2Cu3O6.5F0.5", "Ba2 Cu3 F0.5 O6.5 Y1"},
		{"WO2.9", "O2.9 W1"},
		{"Ca(OH)2.5H2O", "Ca1 H12 O7"},
		{"((Na))2Cl2", "Cl2 Na2"},
		{"NaNa", "Na2"},
		{"2H2O", "H4 O2"},
		{"Co", "Co1"},
		{"CO", "C1 O1"},
	}
	for _, c := range cases {
		var got []string
		for _, e := range mustParse(t, c.formula).Elements() {
			got = append(got, fmt.Sprintf("%s%.10g", e.Symbol, e.Count))
		}
		if s := strings.Join(got, " "); s != c.want {
			t.Errorf("%s: %s, want %s", c.formula, s, c.want)
		}
	}
}

func TestFormulaErrors(t *testing.T) {
	cases := []struct {
		formula string
		column  int
		want    string
	}{
		{"", 1, "empty"},
		{"  ", 1, "empty"},
		{"CaMgXx2O6", 5, `"Xx"`},
		{"CaTcO4", 3, `"Tc"`},
		{"Ca(OH", 3, "never closed"},
		{"CaOH)2", 5, "not opened"},
		{"Ca()2", 3, "hold nothing"},
		{"NaCl0", 5, "positive"},
		{"naCl", 1, "capital"},
		{"Na+", 3, "no meaning"},
		{"Na Cl", 3, "no meaning"},
		{"Al₂O3", 3, "no meaning"},
		{"CaO.", 5, "missing"},
		{".CaO", 1, "missing"},
		{"CaO··SiO2", 5, "missing"},
		{"3", 1, "missing"},
		{"Na1.2.3", 3, "not a count"},
		{"Na" + strings.Repeat("9", 200), 3, "more than"},
		{strings.Repeat("Na", 200), 1, "longer"},
		{"Na\xff", 1, "UTF-8"},
		{"((Na1000)1000)1000", 1, "more than"},
	}
	for _, c := range cases {
		_, err := ParseFormula(c.formula)
		var fe *FormulaError
		if !errors.As(err, &fe) {
			t.Errorf("%q: got %v, want a *FormulaError", c.formula, err)
			continue
		}
		if fe.Column != c.column || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: %v (column %d), want column %d and %q", c.formula, err, fe.Column, c.column, c.want)
		}
	}
}

func TestFormulaEqual(t *testing.T) {
	cases := []struct {
		a, b string
		want bool
	}{
		{"3Al2O3.2SiO2", "Al6Si2O13", true},
		{"(Mg0.9Fe0.1)2SiO4", "Mg1.8Fe0.2SiO4", true},
		{"SiO2", "Si2O4", false},
		{"SiO2", "Si", false},
		{"CO", "Co", false},
	}
	for _, c := range cases {
		a, b := mustParse(t, c.a), mustParse(t, c.b)
		if a.Equal(b) != c.want || b.Equal(a) != c.want {
			t.Errorf("%s = %s: got %v", c.a, c.b, !c.want)
		}
	}
	var zero Formula
	if zero.MolarMass() != 0 || zero.String() != "" || len(zero.Elements()) != 0 || !zero.Equal(Formula{}) {
		t.Errorf("the zero Formula is %+v", zero)
	}
}

// TestFormulaMass compares the reader with a sum over randomly chosen elements.
func TestFormulaMass(t *testing.T) {
	var symbols []string
	for s := range atomicWeights {
		symbols = append(symbols, s)
	}
	sort.Strings(symbols)
	rapid.Check(t, func(t *rapid.T) {
		text, mass := "", 0.0
		for range rapid.IntRange(1, 6).Draw(t, "elements") {
			s := rapid.SampledFrom(symbols).Draw(t, "symbol")
			n := rapid.IntRange(1, 20).Draw(t, "count")
			text += fmt.Sprintf("%s%d", s, n)
			mass += float64(n) * atomicWeights[s]
		}
		k := rapid.IntRange(1, 9).Draw(t, "multiplier")
		for _, form := range []string{"%d%s", "%d(%s)", "(%[2]s)%[1]d"} {
			f, err := ParseFormula(fmt.Sprintf(form, k, text))
			if err != nil {
				t.Fatal(err)
			}
			if want := float64(k) * mass; math.Abs(f.MolarMass()-want) > 1e-12*want {
				t.Fatalf("%s: %g, want %g", f, f.MolarMass(), want)
			}
			if g, err := ParseFormula(f.String()); err != nil || !g.Equal(f) {
				t.Fatalf("%s read again is %s (%v)", f, g, err)
			}
		}
	})
}

// TestParseFormulaNeverPanics also checks property 1 of Formula.
func TestParseFormulaNeverPanics(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		checkFormula(t, rapid.OneOf(rapid.String(), rapid.StringMatching(`([A-Z][a-z]?|[0-9.]|[()]|·){0,12}`)).Draw(t, "text"))
	})
}

func FuzzParseFormula(f *testing.F) {
	for _, s := range []string{"CaMgSi2O6", "3Al2O3.2SiO2", "(", "Fe0.95O", "·", ".."} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) { checkFormula(t, s) })
}

func checkFormula(t interface {
	Fatalf(string, ...any)
}, s string) {
	f, err := ParseFormula(s)
	if err != nil {
		var fe *FormulaError
		if !errors.As(err, &fe) || fe.Column < 1 || fe.Reason == "" {
			t.Fatalf("%q: %v", s, err)
		}
		return
	}
	if len(f.Elements()) == 0 || !(f.MolarMass() > 0) || math.IsInf(f.MolarMass(), 0) {
		t.Fatalf("%q: accepted with mass %g", s, f.MolarMass())
	}
	for _, e := range f.Elements() {
		if !(e.Count > 0) || math.IsInf(e.Count, 0) {
			t.Fatalf("%q: %g atoms of %s", s, e.Count, e.Symbol)
		}
	}
}
