package liquidus_test

import (
	"math"
	"slices"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

// published is one measured number against which a built-in system is held.
type published struct {
	system, what string
	want, tol    float64
	unit, source string
	got          func(t *testing.T, p *liquidus.Projection) float64
}

const (
	bowen1915   = "Bowen 1915, Am. J. Sci. 40, 161–185; Osborn 1942, Am. J. Sci. 240, 751–788 (used in the fit)"
	schairer    = "Schairer & Yoder 1960, Am. J. Sci. 258A, 273–283 (from memory)"
	osbornTait  = "Osborn & Tait 1952, Am. J. Sci. Bowen vol., 413–433 (used in the fit)"
	bergman     = "Bergman & Dergunov 1941, in Thoma (ed.) 1959, ORNL-2548"
	bergmanArea = "Bergman & Dergunov 1941, abstract in ORNL-1252"
)

// publishedTable: temperatures in °C, compositions in wt% for silicates and mol%
// for salts. Points used in a fit are marked; the others are predictions.
var publishedTable = []published{
	{"di-ab-an", "Di–An eutectic, T", 1274, 3, "°C", bowen1915, nodeT(ternary.Mass, 1, "eutectic")},
	{"di-ab-an", "Di–An eutectic, An", 42, 1, "wt%", bowen1915, nodeX(ternary.Mass, 1, "eutectic", 2)},
	{"di-ab-an", "Di–Ab end of the cotectic, Di", 9, 1.5, "wt%", schairer, nodeX(ternary.Mass, 2, "eutectic", 0)},
	{"di-an-fo", "piercing point Fo + Di + An, T", 1270, 15, "°C", osbornTait, nodeT(ternary.Mass, -1, "eutectic")},
	{"di-an-fo", "piercing point, Di", 49, 3, "wt%", osbornTait, nodeX(ternary.Mass, -1, "eutectic", 0)},
	{"di-an-fo", "piercing point, An", 43.5, 3, "wt%", osbornTait, nodeX(ternary.Mass, -1, "eutectic", 1)},
	{"di-an-fo", "piercing point, Fo", 7.5, 3, "wt%", osbornTait, nodeX(ternary.Mass, -1, "eutectic", 2)},
	{"lif-naf-kf", "ternary eutectic, T", 458, 16, "°C", bergman + " (454); Janz & Tomkins 1981, NSRDS-NBS 61 Part IV (462)", nodeT(ternary.Mole, -1, "eutectic")},
	{"lif-naf-kf", "ternary eutectic, LiF", 46.5, 3, "mol%", bergman, nodeX(ternary.Mole, -1, "eutectic", 0)},
	{"lif-naf-kf", "ternary eutectic, NaF", 11.5, 3, "mol%", bergman, nodeX(ternary.Mole, -1, "eutectic", 1)},
	{"lif-naf-kf", "ternary eutectic, KF", 42.0, 3, "mol%", bergman, nodeX(ternary.Mole, -1, "eutectic", 2)},
	{"lif-naf-kf", "primary field of LiF", 21.3, 4, "% of the triangle", bergmanArea, area(ternary.Mole, "LiF")},
	{"lif-naf-kf", "primary field of NaF", 55, 4, "% of the triangle", bergmanArea, area(ternary.Mole, "NaF")},
	{"lif-naf-kf", "primary field of KF", 23.7, 4, "% of the triangle", bergmanArea, area(ternary.Mole, "KF")},
}

// node returns the only node of a kind on an edge (−1: inside).
func node(t *testing.T, p *liquidus.Projection, edge int, kind liquidus.Kind) liquidus.Node {
	t.Helper()
	var found []liquidus.Node
	for _, n := range p.Nodes {
		if n.Edge == edge && n.Kind == kind {
			found = append(found, n)
		}
	}
	if len(found) != 1 {
		t.Fatalf("%d points of kind %s on edge %d, want 1", len(found), kind, edge)
	}
	return found[0]
}

func nodeT(_ ternary.Basis, edge int, kind liquidus.Kind) func(*testing.T, *liquidus.Projection) float64 {
	return func(t *testing.T, p *liquidus.Projection) float64 {
		return node(t, p, edge, kind).T - ternary.ZeroCelsius
	}
}

func nodeX(b ternary.Basis, edge int, kind liquidus.Kind, c int) func(*testing.T, *liquidus.Projection) float64 {
	return func(t *testing.T, p *liquidus.Projection) float64 {
		return 100 * p.System.Components.Fractions(node(t, p, edge, kind).Liquid, b)[c]
	}
}

func area(b ternary.Basis, solid string) func(*testing.T, *liquidus.Projection) float64 {
	return func(t *testing.T, p *liquidus.Projection) float64 {
		sum := 0.0
		for i := range p.Fields {
			if p.System.Solids[p.Fields[i].Solid].Symbol == solid {
				sum += 100 * p.Fields[i].AreaFraction(p.System.Components, b)
			}
		}
		return sum
	}
}

func TestPublishedPoints(t *testing.T) {
	done := map[string]*liquidus.Projection{}
	for _, row := range slices.Concat(publishedTable, silicaTable) {
		p := done[row.system]
		if p == nil {
			var err error
			if p, err = liquidus.Compute(trial.Builtin(t, row.system), liquidus.Options{}); err != nil {
				t.Fatal(err)
			}
			if !p.Checks.Passed {
				t.Errorf("%s: %v", row.system, p.Checks.Problems)
			}
			done[row.system] = p
		}
		got := row.got(t, p)
		t.Logf("%-11s %-32s measured %8.1f  computed %8.1f  misfit %+6.1f (allowed %.1f) %s  [%s]",
			row.system, row.what, row.want, got, got-row.want, row.tol, row.unit, row.source)
		if math.Abs(got-row.want) > row.tol {
			t.Errorf("%s, %s: %.2f %s, measured %.2f ± %.2f", row.system, row.what, got, row.unit, row.want, row.tol)
		}
	}
	if len(done) != 5 {
		t.Errorf("%d systems held against measurements, want 5", len(done))
	}
}

// The cotectic of di-ab-an falls steadily from one end to the other: one arc,
// with no extremum to cut it.
func TestCotecticFallsSteadily(t *testing.T) {
	p, err := liquidus.Compute(trial.Builtin(t, "di-ab-an"), liquidus.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(p.Curves) != 1 {
		t.Fatalf("%d arcs, want 1", len(p.Curves))
	}
	c := p.Curves[0]
	for i := 1; i < len(c.Points); i++ {
		if c.Points[i].T >= c.Points[i-1].T || c.Points[i].Kind != liquidus.Cotectic {
			t.Errorf("point %d: %.3f K after %.3f K, %s", i, c.Points[i].T, c.Points[i-1].T, c.Points[i].Kind)
		}
	}
}

// The plagioclase loop of Bowen 1913, Am. J. Sci. 35, 577–599 (from memory), wt%
// anorthite at temperatures in °C; none of it was used in a fit.
func TestPlagioclaseLoop(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	pl, _ := sys.SolidIndex("Pl")
	surf, err := liquidus.NewSurface(sys)
	if err != nil {
		t.Fatal(err)
	}
	rows := []struct {
		T, an  float64
		solid  bool
		allows float64
	}{
		{1521, 83.3, false, 3}, {1490, 66.7, false, 3}, {1450, 50, false, 3}, {1394, 33.3, false, 3}, {1334, 20, false, 3},
		{1465, 83.3, true, 3}, {1372, 66.7, true, 3}, {1287, 50, true, 3}, {1205, 33.3, true, 3}, {1175, 20, true, 3},
	}
	worst := 0.0
	for _, r := range rows {
		lo, hi := 0.0, 1.0 // anorthite in the liquid, mole fraction: T rises with it
		for k := 0; k < 60; k++ {
			m := (lo + hi) / 2
			if T, _ := surf.Liquidus(ternary.Composition{0, 1 - m, m}); T < r.T+ternary.ZeroCelsius {
				lo = m
			} else {
				hi = m
			}
		}
		x := ternary.Composition{0, 1 - lo, lo}
		if r.solid {
			_, s := surf.Liquidus(x)
			x = s.Composition()
			if s.Phase != pl {
				t.Fatalf("%v is primary", s.Phase)
			}
		}
		got := 100 * sys.Components.Fractions(x, ternary.Mass)[2]
		worst = math.Max(worst, math.Abs(got-r.an))
		t.Logf("%.0f °C %-7s measured %.1f computed %.1f wt%% An, misfit %+.1f", r.T, map[bool]string{false: "liquid", true: "solid"}[r.solid], r.an, got, got-r.an)
		if math.Abs(got-r.an) > r.allows {
			t.Errorf("%.0f °C: %.2f wt%% An, measured %.1f", r.T, got, r.an)
		}
	}
	t.Logf("largest misfit %.2f wt%% An", worst)
}
