package render

import (
	"fmt"
	"math"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	joins "thalweg/ternary/join"
	"thalweg/ternary/section"
)

// looks are all styles that a preset has.
func looks(p Preset, t testing.TB) map[string]Style {
	st, err := StyleNamed(p.Name)
	if err != nil {
		t.Fatal(err)
	}
	return map[string]Style{"colour": st, "ink": st.Inked(), "shaded": st.Shaded()}
}

// eachPreset runs a test on the finished pages of the built-in systems, without
// and with paths, in every preset and look.
func eachPreset(t *testing.T, test func(t *testing.T, st Style, s *Scene)) {
	figs := figures(t)
	if len(Presets()) < 8 || len(systems.Names()) < 3 {
		t.Fatal("presets or systems are missing")
	}
	for _, p := range Presets() {
		for look, st := range looks(p, t) {
			for _, name := range systems.Names() {
				for _, what := range []string{"projection", "path"} {
					f := figs[name]
					f.Style = st
					if what == "projection" {
						f.Paths, f.Samples = nil, nil
					} else if len(f.Paths) == 0 {
						t.Fatalf("%s: no path", name)
					}
					t.Run(fmt.Sprintf("%s/%s/%s/%s", p.Name, look, name, what), func(t *testing.T) {
						s, err := f.Scene()
						if err != nil {
							t.Fatal(err)
						}
						test(t, st, s)
					})
				}
			}
		}
	}
}

// leastOf are the smallest stroke and type that a preset promises, pt at printed
// size, repeated here from the rules it is made for.
func leastOf(preset string) (line, text float64) {
	switch preset {
	case "heavy-89", "heavy-185":
		return 1, 6
	case "small-89", "small-183":
		return 0.3, 5
	case "slides":
		return 1, 12
	}
	return 0.3, 6
}

// keepsRules examines a finished page of a preset.
func keepsRules(t *testing.T, st Style, s *Scene) {
	t.Helper()
	if math.Abs(s.Width-st.Width) > 1e-9 {
		t.Errorf("the page is %g mm wide, want %g", s.Width, st.Width)
	}
	if highest := max(240, st.Width*st.zoom()/2); s.Height > highest { // no publisher of the presets takes more than 240
		t.Errorf("the page is %g mm high", s.Height)
	}
	line, text := leastOf(st.Name)
	report(t, tooSmall(s, line, text))
	report(t, touching(s))
	report(t, beyondPage(s))
	report(t, faintItems(s, st))
	if n := len(texts(s)); n < 20 {
		t.Errorf("only %d texts", n)
	}
}

func TestPresetsKeepTheirRules(t *testing.T) { eachPreset(t, keepsRules) }

func TestSectionsKeepTheRulesOfPresets(t *testing.T) {
	for name, at := range map[string][]float64{"di-ab-an": {1250, 1150}, "di-an-fo": {1300}, "lif-naf-kf": {550}} {
		f := Isothermal{Samples: figures(t)[name].Samples}
		for _, celsius := range at {
			s, err := section.Compute(figures(t)[name].Projection.System, celsius+ternary.ZeroCelsius, section.Options{})
			if err != nil {
				t.Fatal(err)
			}
			f.Sections = append(f.Sections, s)
		}
		for _, p := range Presets() {
			for look, st := range looks(p, t) {
				f.Style = st
				t.Run(fmt.Sprintf("%s/%s/%s", p.Name, look, name), func(t *testing.T) {
					s, err := f.Scene()
					if err != nil {
						t.Fatal(err)
					}
					keepsRules(t, st, s)
				})
			}
		}
	}
}

func TestJoinsKeepTheRulesOfPresets(t *testing.T) {
	for name, ends := range map[string][2]ternary.Composition{
		"di-ab-an": {ternary.Apex(1), ternary.Apex(2)}, "di-an-fo": {{0.5, 0.5, 0}, ternary.Apex(2)}, "lif-naf-kf": {ternary.Apex(0), ternary.Apex(1)},
	} {
		d, err := joins.Compute(figures(t)[name].Projection.System, ends[0], ends[1], joins.Options{Count: 100})
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range Presets() {
			for look, st := range looks(p, t) {
				t.Run(fmt.Sprintf("%s/%s/%s", p.Name, look, name), func(t *testing.T) {
					s, err := Join{Diagram: d, Style: st}.Scene()
					if err != nil {
						t.Fatal(err)
					}
					keepsRules(t, st, s)
				})
			}
		}
	}
}

// The promise in the name of a preset is kept by its numbers.
func TestPresetNames(t *testing.T) {
	for _, p := range Presets() {
		st, err := StyleNamed(p.Name)
		if err != nil {
			t.Fatal(err)
		}
		line, text := leastOf(p.Name)
		if z := st.zoom(); st.MinLine*z < line || st.MinText*z < text || st.Base*subscriptScale < st.MinText {
			t.Errorf("%s: lines from %g pt, text from %g pt, subscripts of %g pt", p.Name, st.MinLine*z, st.MinText*z, st.Base*subscriptScale*z)
		}
		var width float64
		if n, err := fmt.Sscanf(p.Name[len(p.Name)-3:], "%f", &width); err == nil && n == 1 && math.Abs(width) != st.Width {
			t.Errorf("%s is %g mm wide", p.Name, st.Width)
		}
		if p.About == "" {
			t.Errorf("%s is not described", p.Name)
		}
	}
}

// Enlarging a scene enlarges everything in it: the outlines of the words too.
func TestEnlarged(t *testing.T) {
	const k = 2.25
	a := sampleScene()
	b := a.enlarged(k)
	for i, x := range texts(a) {
		lo, hi := x.Outline().Bounds()
		lo2, hi2 := texts(b)[i].Outline().Bounds()
		if lo.times(k).distance(lo2) > 1e-9 || hi.times(k).distance(hi2) > 1e-9 {
			t.Fatalf("%q: %v to %v, enlarged %v to %v", x.label(), lo, hi, lo2, hi2)
		}
	}
	for i, x := range paths(a) {
		y := paths(b)[i]
		if x.Stroke != nil && (math.Abs(y.Stroke.Width-k*x.Stroke.Width) > 1e-12 || len(x.Stroke.Dash) > 0 && y.Stroke.Dash[0] != k*x.Stroke.Dash[0]) {
			t.Fatalf("stroke %+v, enlarged %+v", x.Stroke, y.Stroke)
		}
	}
	if a.Width*k != b.Width || a.Title != b.Title {
		t.Error("page or title")
	}
}
