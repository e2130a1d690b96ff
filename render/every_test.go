package render

import (
	"fmt"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
	joins "thalweg/ternary/join"
	"thalweg/ternary/liquidus"
	"thalweg/ternary/pressure"
	"thalweg/ternary/section"
)

// Every kind of figure of every built-in system, in one and two columns, colour and
// ink, counted on the finished page: no two words touch, none leaves it, nothing is
// drawn finer or set smaller than the style allows.
func TestEveryFigure(t *testing.T) {
	n := 0
	for _, name := range systems.Names() {
		f, err := systems.Builtin(name)
		if err != nil {
			t.Fatal(err)
		}
		sys, err := f.AtReference(nil)
		if err != nil {
			t.Fatal(err)
		}
		var iso []float64
		for k := sys.Range[0]; k < sys.Range[1]; k += 50 {
			iso = append(iso, k)
		}
		pr, err := liquidus.Compute(sys, liquidus.Options{Isotherms: iso})
		if err != nil {
			t.Fatal(err)
		}
		bulk := ternary.Composition{0.4, 0.35, 0.25}
		fr, err := descent.Follow(sys, bulk, descent.Options{Mode: descent.Fractional})
		if err != nil {
			t.Fatal(err)
		}
		eq, err := descent.Follow(sys, bulk, descent.Options{})
		if err != nil {
			t.Fatal(err)
		}
		cut, err := section.Compute(sys, eq.EndT+0.4*(eq.LiquidT-eq.EndT), section.Options{})
		if err != nil {
			t.Fatal(err)
		}
		line, err := joins.Compute(sys, ternary.Apex(0), ternary.Apex(2), joins.Options{Count: 60})
		if err != nil {
			t.Fatal(err)
		}
		var series *pressure.Series
		if _, err := f.At(0.5e9, nil); err == nil { // the file says what pressure does
			series, err = pressure.Compute(func(P float64) (*gibbs.System, error) { return f.At(P, nil) }, []float64{1e5, 0.3e9, 0.6e9, 1e9})
			if err != nil {
				t.Fatal(err)
			}
		}
		window := &View{ternary.Composition{0.6, 0.2, 0.2}, ternary.Composition{0.2, 0.6, 0.2}, ternary.Composition{0.2, 0.2, 0.6}}
		for _, ink := range []bool{false, true} {
			st := ColourStyle()
			if ink {
				st = InkStyle()
			}
			for _, w := range []float64{SingleColumn, DoubleColumn} {
				projection := Figure{Projection: pr, Style: st, WidthMM: w}
				path := projection
				path.Paths = []*descent.Path{fr}
				seen := path
				seen.View = window
				turned := path
				turned.View = &View{ternary.Apex(2), ternary.Apex(0), ternary.Apex(1)}
				scenes := map[string]func() (*Scene, error){
					"projection": projection.Scene, "path": path.Scene, "window": seen.Scene, "turned": turned.Scene,
					"section": Isothermal{Sections: []*section.Section{cut}, Style: st, WidthMM: w}.Scene,
					"join":    Join{Diagram: line, Style: st, WidthMM: w}.Scene,
					"phases":  Chart{Path: eq, Kind: PhaseAmounts, Style: st, WidthMM: w}.Scene,
					"liquid":  Chart{Path: fr, Kind: LiquidChart, Against: AgainstMelt, Style: st, WidthMM: w}.Scene,
					"heat":    Chart{Path: fr, Kind: HeatChart, Style: st, WidthMM: w}.Scene,
				}
				if series != nil {
					scenes["pressure"] = PressureChart{Series: series, Style: st, WidthMM: w}.Scene
				}
				for kind, draw := range scenes {
					t.Run(fmt.Sprintf("%s/%s/%g/ink=%v", name, kind, w, ink), func(t *testing.T) {
						s, err := draw()
						if err != nil {
							t.Fatal(err)
						}
						n++
						counted(t, s, st)
					})
				}
			}
		}
	}
	if n < 100 {
		t.Errorf("only %d figures were counted", n)
	}
}

// counted fails for everything that a finished page must not have.
func counted(t *testing.T, s *Scene, st Style) {
	t.Helper()
	report(t, touching(s))
	report(t, beyondPage(s))
	report(t, tooSmall(s, st.MinLine, st.MinText))
	report(t, covering(s))
	if len(texts(s)) < 4 || s.Title == "" || s.Description == "" {
		t.Errorf("the page holds %d words, title %q, description %q", len(texts(s)), s.Title, s.Description)
	}
}

// covering lists the words of a scene that lie on a marker or an arrowhead.
func covering(s *Scene) (out []string) {
	marks := paths(s, "marker", "arrowhead")
	for _, x := range texts(s) {
		ink := inkBox(x)
		for _, m := range marks {
			if covered(ink, m.Path) {
				out = append(out, fmt.Sprintf("%s %q covers a %s", x.Role, x.label(), m.Role))
			}
		}
	}
	return out
}

// A plate holds what its panels hold, in its grid, and passes the same counts.
func TestPlate(t *testing.T) {
	f := figures(t)["di-ab-an"]
	g := withPath(t, f)
	draw := func(f Figure) func(float64) (*Scene, error) {
		return func(w float64) (*Scene, error) { f.WidthMM = w; return f.Scene() }
	}
	chart := Chart{Path: g.Paths[0], Kind: PhaseAmounts}
	p := Plate{Columns: 2, Letters: true, Title: "plate", Style: ColourStyle(), WidthMM: DoubleColumn, Legend: []Figure{g}, Panels: []Panel{
		{Draw: draw(g), Title: "first"}, {Draw: draw(f)},
		{Span: 2, Draw: func(w float64) (*Scene, error) { chart.WidthMM = w; return chart.Scene() }},
	}}
	s, err := p.Scene()
	if err != nil {
		t.Fatal(err)
	}
	counted(t, s, ColourStyle())
	letters := 0
	for _, x := range texts(s) {
		if x.Role == "panel letter" {
			letters++
		}
	}
	if letters != 3 {
		t.Errorf("%d letters", letters)
	}
	a, err := draw(g)(p.CellWidth(1))
	if err != nil {
		t.Fatal(err)
	}
	if len(paths(s, "isotherm")) < 2*len(paths(a, "isotherm")) || len(paths(s, "area")) == 0 {
		t.Error("a panel is missing")
	}
	for _, bad := range []Plate{{}, {Panels: p.Panels, Columns: 4, WidthMM: 174}, {Panels: p.Panels, Columns: 1, WidthMM: 174}, {Panels: p.Panels, Columns: 2, WidthMM: 4000}} {
		if _, err := bad.Scene(); err == nil {
			t.Errorf("no error for %d columns on %g mm", bad.Columns, bad.WidthMM)
		}
	}
}
