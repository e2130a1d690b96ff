package render

import (
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// marked writes subscripts between underscores.
func marked(s string) string {
	var b strings.Builder
	for _, p := range splitFormulas(s) {
		if p.sub {
			b.WriteString("_" + p.text + "_")
		} else {
			b.WriteString(p.text)
		}
	}
	return b.String()
}

func TestFormulas(t *testing.T) {
	cases := []struct{ in, want string }{
		{"", ""},
		{"SiO2", "SiO_2_"},
		{"CaAl2Si2O8", "CaAl_2_Si_2_O_8_"},
		{"3Al2O3.2SiO2", "3Al_2_O_3_·2SiO_2_"},
		{"3Al2O3·2SiO2", "3Al_2_O_3_·2SiO_2_"},
		{"(Mg,Fe)2SiO4", "(Mg,Fe)_2_SiO_4_"},
		{"Ca5(PO4)3(OH), see", "Ca_5_(PO_4_)_3_(OH), see"},
		{"[Fe(CN)6]", "[Fe(CN)_6_]"},
		{"Fe0.95O", "Fe_0.95_O"},
		{"Sr1.5Ti2O4", "Sr_1.5_Ti_2_O_4_"},
		{"CaSO4.2H2O", "CaSO_4_·2H_2_O"},
		{"C12H22O11", "C_12_H_22_O_11_"},
		{"α-Ca2SiO4 + β′", "α-Ca_2_SiO_4_ + β′"},
		{"Al2O3-SiO2", "Al_2_O_3_-SiO_2_"},
		{"Mg2SiO4,Fe2SiO4", "Mg_2_SiO_4_,Fe_2_SiO_4_"},
		{"melt of Na2O, K2O.", "melt of Na_2_O, K_2_O."},
		{"(see Al2O3)", "(see Al_2_O_3_)"},
		{"Li2BeF4 at 459.1 °C", "Li_2_BeF_4_ at 459.1 °C"},
		{"Na2O/SiO2", "Na_2_O/SiO_2_"},
		{"Quartz", "Quartz"},
		{"Fo90", "Fo90"},
		{"E1", "E1"},
		{"P1", "P1"},
		{"C1", "C1"},
		{"1553 K", "1553 K"},
		{"100 mol% NaCl", "100 mol% NaCl"},
		{"V2.1", "V2.1"},
		{"Fig. 3a", "Fig. 3a"},
		{"10.5", "10.5"},
		{"(((", "((("},
		{"Al2(", "Al_2_("},
	}
	for _, c := range cases {
		if got := marked(c.in); got != c.want {
			t.Errorf("%q: got %s, want %s", c.in, got, c.want)
		}
	}
}

// Whatever the label, its characters stay in order; only a joining full stop
// may become a raised dot, and only digits and decimal points go down.
func TestFormulasKeepTheText(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.StringOfN(rapid.RuneFrom([]rune("AlSiOCaMgPN()[]., ·0123459abα-")), 0, 24, -1).Draw(t, "label")
		var b strings.Builder
		for _, p := range splitFormulas(s) {
			b.WriteString(p.text)
			if p.sub && strings.Trim(p.text, "0123456789.") != "" {
				t.Fatalf("%q: %q set as a subscript", s, p.text)
			}
		}
		if dots(b.String()) != dots(s) {
			t.Fatalf("%q became %q", s, b.String())
		}
	})
}

func dots(s string) string { return strings.ReplaceAll(s, "·", ".") }
