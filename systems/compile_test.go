package systems

import (
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// mixed exercises everything a file can say. Its numbers are invented.
const mixed = `title = "Invented"
pressure_GPa = 0.0001
temperature_C = [500, 1800]
[[component]]
symbol = "Ab"
formula = "NaAlSi3O8"
[[component]]
symbol = "Or"
formula = "KAlSi3O8"
[[component]]
symbol = "Qz"
formula = "Si2O4"

[liquid]
sites = 2
extension = "toop"
odd = "Qz"
[[liquid.pair]]
of = ["Or", "Ab"]
source = "invented"
note = "for a test"
term = [{ order = 2, a_kJ = -3, b_J_per_K = 1.5, c_J_per_K = -0.1 }, { order = 0, a_kJ = 1, fitted_to = "nothing", a_standard_error_kJ = 2 }]
[[liquid.ternary]]
on = "Or"
a_kJ = 4
source = "invented"
recalled = true

[[solid]]
symbol = "San"
name = "sanidine"
formula = "KAlSi3O8"
melting = { T_C = 1200, dH_kJ = 57.7, dV_cm3 = 6, source = "invented" }
[[solid]]
symbol = "Crs"
formula = "SiO2"
melting = { T_C = 1726, dH_kJ = 8.9, dV_cm3 = 0.1, source = "invented" }
[[solid]]
symbol = "Trd"
formula = "SiO2"
transition = { from = "Crs", T_C = 1470, dH_kJ = -0.2, dV_cm3 = -0.2, source = "invented" }
[[solid]]
symbol = "Lct"
formula = "KAlSi2O6"
[solid.reaction]
from = [{ phase = "San", nu = 1 }, { phase = "L.Qz", nu = -0.5 }]
dH_kJ = 20
dS_J = 10
dV_cm3 = 1
source = "invented"
[[solid]]
symbol = "Mid"
formula = "NaKAl2Si6O16"
melting = { T_C = 1100, dH_kJ = 120, dCp_J = 20, dV_cm3 = 10, source = "invented" }
[[solid]]
symbol = "Fsp"
[[solid.member]]
symbol = "Ab"
formula = "NaAlSi3O8"
melting = { T_C = 1118, dH_kJ = 62.8, dV_cm3 = 5, source = "invented" }
[[solid.member]]
symbol = "Or"
formula = "KAlSi3O8"
transition = { from = "San", T_C = 0, dH_kJ = 0, dV_cm3 = 0, source = "the same substance" }
[[solid.pair]]
of = ["Ab", "Or"]
source = "invented"
[[solid.pair.term]]
order = 1
a_kJ = 20
`

func compile(t *testing.T, text string, pressurePa float64) *gibbs.System {
	t.Helper()
	f, err := Parse("test.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	sys, err := f.At(pressurePa, nil)
	if err != nil {
		t.Fatal(err)
	}
	return sys
}

func solid(t *testing.T, s *gibbs.System, symbol string) *gibbs.Phase {
	t.Helper()
	i, ok := s.SolidIndex(symbol)
	if !ok {
		t.Fatalf("no solid %s", symbol)
	}
	return s.Solids[i]
}

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s: got %.10g, want %.10g ± %g", what, got, want, tol)
	}
}

func TestCompileStructure(t *testing.T) {
	s := compile(t, mixed, 1e5)
	if s.Name != "test" || s.Liquid.Mixing.Sites != 2 || s.Liquid.Mixing.Extension != gibbs.Toop || s.Liquid.Mixing.Odd != 2 {
		t.Errorf("liquid: %+v", s.Liquid.Mixing)
	}
	near(t, "range in kelvin", s.Range[1], 1800+273.15, 1e-9)
	p := s.Liquid.Mixing.Pairs[0]
	want := []gibbs.TFunc{{A: 1000}, {}, {A: -3000, B: 1.5, C: -0.1}}
	if p.I != 1 || p.J != 0 || !slices.Equal(p.L, want) {
		t.Errorf("pair: %+v", p)
	}
	if s.Liquid.Mixing.Ternary != [3]gibbs.TFunc{1: {A: 4000}} {
		t.Errorf("ternary: %+v", s.Liquid.Mixing.Ternary)
	}
	compositions := map[string][3]float64{ // moles of NaAlSi3O8, KAlSi3O8, Si2O4; by hand
		"San": {0, 1, 0}, "Crs": {0, 0, 0.5}, "Lct": {0, 1, -0.5}, "Mid": {1, 1, 0},
	}
	for symbol, c := range compositions {
		if got := solid(t, s, symbol).Members[0].C; got != c {
			t.Errorf("%s: moles %v, want %v", symbol, got, c)
		}
	}
	if fsp := solid(t, s, "Fsp"); len(fsp.Members) != 2 || fsp.Members[1].C != ternary.Apex(1) || len(fsp.Mixing.Pairs[0].L) != 2 {
		t.Errorf("Fsp: %+v", fsp)
	}
}

// liquidGibbs is the Gibbs energy of c moles of components as one liquid.
func liquidGibbs(s *gibbs.System, c [3]float64, T float64) float64 {
	n := c[0] + c[1] + c[2]
	g, _, _ := s.Liquid.Gibbs([3]float64{c[0] / n, c[1] / n, c[2] / n}, T)
	return n * g
}

func TestStandardStates(t *testing.T) {
	const dP = 1e8
	for _, pressure := range []float64{1e5, 1e5 + dP} {
		s := compile(t, mixed, pressure)
		above := pressure - 1e5
		g := func(symbol string, T float64) float64 { return solid(t, s, symbol).Members[0].G.At(T) }
		// A solid is in equilibrium with its liquid at Tm(1 + ΔV·dP/ΔH), if ΔCp = 0.
		tm := 1473.15 * (1 + 6e-6*above/57.7e3)
		near(t, "San melts", g("San", tm), 0, 1e-6)
		// SiO2 is half of Si2O4: its liquid is half a mole of the component.
		tm = 1999.15 * (1 + 0.1e-6*above/8.9e3)
		near(t, "Crs melts", g("Crs", tm), 0, 1e-6)
		// Tridymite and cristobalite have the same Gibbs energy at the transition.
		tt := 1743.15 * (1 + 0.2e-6*above/0.2e3)
		near(t, "Trd = Crs", g("Trd", tt)-g("Crs", tt), 0, 1e-6)
		if g("Trd", tt-10) > g("Crs", tt-10) {
			t.Error("tridymite must be stable below the transition")
		}
		near(t, "Lct", g("Lct", 1500), g("San", 1500)+20e3-1500*10+1e-6*above, 1e-6)
		if above == 0 {
			near(t, "Mid melts to the liquid of its composition", g("Mid", 1373.15), liquidGibbs(s, [3]float64{1, 1, 0}, 1373.15), 1e-6)
		}
		near(t, "Or in Fsp is San", solid(t, s, "Fsp").Members[1].G.At(1300), g("San", 1300), 1e-6)
	}
}

// What a file may say of melting under pressure, against the melting points that
// follow from it by hand.
func TestUnderPressure(t *testing.T) {
	const Tm, H = 1473.15, 57.7e3 // of San
	for _, c := range []struct {
		says string
		at   func(dP float64) float64 // melting point, K, dP in Pa
	}{
		{"slope_C_per_GPa = 90", func(dP float64) float64 { return Tm + 90*dP/1e9 }},
		{"dV_cm3 = 6, dV_change_cm3_per_GPa = -0.8", func(dP float64) float64 { return Tm * (1 + (6e-6*dP-0.8e-15*dP*dP/2)/H) }},
		{"simon_a_GPa = 4, simon_c = 2.5", func(dP float64) float64 { return Tm * math.Pow(1+dP/4e9, 1/2.5) }},
	} {
		text := strings.Replace(mixed, "dH_kJ = 57.7, dV_cm3 = 6", "dH_kJ = 57.7, "+c.says, 1)
		for _, dP := range []float64{-9e4, 0, 1e8, 1e9, 5e9} {
			s := compile(t, text, 1e5+dP)
			g := solid(t, s, "San").Members[0].G
			near(t, c.says, g.At(c.at(dP)), 0, 1e-7)
			near(t, c.says+": the entropy of fusion stays", g.Slope(1400), H/Tm, 1e-9)
		}
	}
	// a compound melts to the liquid of its composition on its curve, heat capacity
	// and mixing terms or none
	text := strings.Replace(mixed, "dCp_J = 20, dV_cm3 = 10", "dCp_J = 20, simon_a_GPa = 3, simon_c = 4", 1)
	s := compile(t, text, 1e5+2e9)
	tm := 1373.15 * math.Pow(1+2.0/3, 1/4.0)
	near(t, "Mid on its melting curve", solid(t, s, "Mid").Members[0].G.At(tm), liquidGibbs(s, [3]float64{1, 1, 0}, tm), 1e-6)
	// a curve that starts at high pressure has an end below
	f, err := Parse("x", []byte(strings.Replace(text, "pressure_GPa = 0.0001", "pressure_GPa = 5", 1)))
	if err != nil {
		t.Fatal(err)
	}
	var pe *PressureError
	if _, err := f.At(1e9, nil); !errors.As(err, &pe) || !slices.Equal(pe.Ended, []string{"Mid"}) {
		t.Errorf("got %v, want a *PressureError about Mid", err)
	}
	if _, err := f.At(2.5e9, nil); err != nil {
		t.Error(err)
	}
}

func TestAtErrors(t *testing.T) {
	f, err := Parse("mixed.toml", []byte(mixed))
	if err != nil {
		t.Fatal(err)
	}
	var we *WithoutError
	if _, err := f.At(1e5, []string{"Sna"}); !errors.As(err, &we) || !slices.Equal(we.Known, f.SolidSymbols()) {
		t.Errorf("got %v, want a *WithoutError with the known solids", err)
	}
	if _, err := f.At(1e5, []string{"L"}); err == nil || !strings.Contains(err.Error(), "liquid cannot be left out") {
		t.Errorf("got %v", err)
	}
	if _, err := f.At(1e5, f.SolidSymbols()); err == nil {
		t.Error("leaving out all solids must be refused")
	}
	s, err := f.At(1e5, []string{"Trd", "San", "Trd"})
	if err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(s.Withheld, []string{"San", "Trd"}) || len(s.Solids) != 4 {
		t.Errorf("withheld %v, %d solids left", s.Withheld, len(s.Solids))
	}
	full := compile(t, mixed, 1e5)
	near(t, "a withheld base changes nothing", solid(t, s, "Lct").Members[0].G.At(1500), solid(t, full, "Lct").Members[0].G.At(1500), 0)
	for _, p := range []float64{-1, math.NaN(), math.Inf(1), 1e12} {
		var pe *PressureError
		if _, err := f.At(p, nil); !errors.As(err, &pe) || len(pe.Missing) != 0 {
			t.Errorf("pressure %g: got %v, want a *PressureError", p, err)
		}
	}
	g, err := Parse("x", []byte(strings.Replace(mixed, "dCp_J = 20, dV_cm3 = 10,", "", 1)))
	if err != nil {
		t.Fatal(err)
	}
	var pe *PressureError
	if _, err := g.At(2e8, nil); !errors.As(err, &pe) || !slices.Equal(pe.Missing, []string{"Mid"}) {
		t.Errorf("got %v, want a *PressureError about Mid", err)
	}
	if _, err := g.At(1e5, nil); err != nil {
		t.Errorf("at the reference pressure no volume is needed: %v", err)
	}
}

// Substances that share their elements cannot be told apart by balance.
func TestCompositionWithoutBalance(t *testing.T) {
	text := strings.NewReplacer("NaCl", "C10H8", "KCl", "C12H10", "LiCl", "C14H14").Replace(good)
	if s := compile(t, text, 1e5); s.Solids[0].Members[0].C != ternary.Apex(0) {
		t.Errorf("a solid with a component's symbol and formula is that component: %v", s.Solids[0].Members[0].C)
	}
	other := strings.Replace(text, "[[solid]]\nsymbol = \"A\"", "[[solid]]\nsymbol = \"S\"", 1)
	if _, err := Parse("x", []byte(other)); err == nil || !strings.Contains(err.Error(), "cannot be balanced") {
		t.Errorf("got %v", err)
	}
	explicit := strings.Replace(other, "melting =", "composition = [1, 0, 0]\nmelting =", 1)
	if s := compile(t, explicit, 1e5); s.Solids[0].Members[0].C != ternary.Apex(0) {
		t.Errorf("explicit composition: %v", s.Solids[0].Members[0].C)
	}
}

func TestCloneIsDeep(t *testing.T) {
	f, err := Parse("mixed.toml", []byte(mixed))
	if err != nil {
		t.Fatal(err)
	}
	before := f.Values()
	g := f.Clone()
	g.Liquid.Pairs[0].Terms[0].A.Value = 99
	g.Solids[0].Members[0].State.H.Value = 99
	g.Solids[3].Members[0].State.From[0].Nu = 99
	g.Solids[5].Mixing.Pairs[0].Terms[0].A.Value = 99
	if !slices.Equal(f.Values(), before) || f.Solids[3].Members[0].State.From[0].Nu != 1 {
		t.Error("changing a clone changed the original")
	}
	if slices.Equal(g.Values(), before) {
		t.Error("the clone did not change")
	}
}

// A system must not depend on the order in which its components are listed.
func TestComponentOrder(t *testing.T) {
	rotated := strings.Replace(mixed, "[[component]]\nsymbol = \"Ab\"\nformula = \"NaAlSi3O8\"\n", "", 1)
	rotated = strings.Replace(rotated, "formula = \"Si2O4\"\n", "formula = \"Si2O4\"\n[[component]]\nsymbol = \"Ab\"\nformula = \"NaAlSi3O8\"\n", 1)
	a, b := compile(t, mixed, 1e5), compile(t, rotated, 1e5)
	const T = 1400.0
	y := [3]float64{0.2, 0.3, 0.5}
	ga, _, _ := a.Liquid.Gibbs(y, T)
	gb, _, _ := b.Liquid.Gibbs([3]float64{y[1], y[2], y[0]}, T)
	near(t, "liquid", gb, ga, 1e-9)
	for _, symbol := range []string{"San", "Crs", "Trd", "Lct", "Mid", "Fsp"} {
		p, q := solid(t, a, symbol).Members[0], solid(t, b, symbol).Members[0]
		near(t, symbol, q.G.At(T), p.G.At(T), 1e-8)
		if q.C != [3]float64{p.C[1], p.C[2], p.C[0]} {
			t.Errorf("%s: moles %v and %v", symbol, p.C, q.C)
		}
	}
}
