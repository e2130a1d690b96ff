package render

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"thalweg/systems"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/pressure"
)

// incongruent is an invented system whose compound AB begins to melt incongruently
// with pressure and then loses its field.
const incongruent = `title = "Invented"
pressure_GPa = 0
temperature_C = [400, 900]
component = [{ symbol = "A", formula = "NaCl" }, { symbol = "B", formula = "KF" }, { symbol = "C", formula = "LiBr" }]
[[solid]]
symbol = "A"
formula = "NaCl"
melting = { T_C = 826.85, dH_kJ = 22, dV_cm3 = 8, source = "invented" }
[[solid]]
symbol = "B"
formula = "KF"
melting = { T_C = 726.85, dH_kJ = 20, dV_cm3 = 0, source = "invented" }
[[solid]]
symbol = "C"
formula = "LiBr"
melting = { T_C = 626.85, dH_kJ = 18, dV_cm3 = 0, source = "invented" }
[[solid]]
symbol = "AB"
formula = "NaKClF"
melting = { T_C = 726.85, dH_kJ = 45, dV_cm3 = 0.5, source = "invented" }
`

func seriesOf(t *testing.T, f *systems.File, err error, pascals ...float64) *pressure.Series {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
	s, err := pressure.Compute(func(P float64) (*gibbs.System, error) { return f.At(P, nil) }, pascals)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// said is what the words of a scene say, by role.
func said(s *Scene, role string) (out []string) {
	for _, it := range s.Layer("labels").Items {
		if w, ok := it.(*TextItem); ok && w.Role == role {
			out = append(out, w.label())
		}
	}
	slices.Sort(out)
	return out
}

// Changes are named, nothing touches, and the lines of points that come or go together
// meet in one dot.
func TestPressureChanges(t *testing.T) {
	f, err := systems.Parse("invented.toml", []byte(incongruent))
	s := seriesOf(t, f, err, 0, 0.25e9, 0.5e9, 0.75e9, 1e9, 1.25e9, 1.5e9, 1.75e9, 2e9)
	for _, st := range []Style{ColourStyle(), InkStyle()} {
		for _, w := range []float64{SingleColumn, DoubleColumn} {
			t.Run(fmt.Sprintf("%g/ink=%v", w, st.Ink), func(t *testing.T) {
				scene, err := PressureChart{Series: s, Style: st, WidthMM: w}.Scene()
				if err != nil {
					t.Fatal(err)
				}
				counted(t, scene, st)
				want := []string{"AB: field lost", "eutectic → peritectic", "eutectic → reaction point"}
				if got := said(scene, "change"); !slices.Equal(got, want) {
					t.Errorf("changes named %q, want %q", got, want)
				}
				if n := len(said(scene, "point")); n != 8 {
					t.Errorf("%d points are named, of 8", n)
				}
			})
		}
	}
	d := PressureChart{Series: s, WidthMM: SingleColumn}.draw(ColourStyle())
	ends := map[string]Point{}
	for i := range s.Points {
		tr := &s.Points[i]
		p := d.places(tr)
		ends["from "+d.name(tr)], ends["to "+d.name(tr)] = p[0], p[len(p)-1]
	}
	for _, pair := range [][2]string{
		{"to L + A + AB", "to L + B + AB"}, {"to L + A + AB", "from L + A + B"},
		{"to L + A + C + AB", "to L + B + C + AB"}, {"to L + A + C + AB", "from L + A + B + C"},
	} {
		a, there := ends[pair[0]]
		b, also := ends[pair[1]]
		if !there || !also || a.distance(b) > 0.1 {
			t.Errorf("%s at %v and %s at %v do not meet", pair[0], a, pair[1], b)
		}
	}
}

// Points of the same phases on different edges are told apart.
func TestPressureNames(t *testing.T) {
	f, err := systems.Builtin("di-ab-an")
	s := seriesOf(t, f, err, 1e5, 1e9)
	scene, err := PressureChart{Series: s, WidthMM: SingleColumn}.Scene()
	if err != nil {
		t.Fatal(err)
	}
	if got := strings.Join(said(scene, "point"), "; "); got != "L + Di + Pl, Di–Ab; L + Di + Pl, Di–An" {
		t.Errorf("points are named %q", got)
	}
}
