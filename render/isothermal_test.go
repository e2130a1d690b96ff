package render

import (
	"math"
	"testing"

	"thalweg/systems"
	"thalweg/ternary/section"
)

// The ends of the tie lines inside a region are computed apart from the points
// through which its sides are drawn: the drawn curves must pass through them.
func TestTieLinesEndOnDrawnCurves(t *testing.T) {
	const off = 0.03 // mm, a tenth of the stroke of a phase boundary
	for _, c := range []struct {
		name    string
		celsius float64
		ties    int
	}{
		{"di-ab-an", 1220, 5}, {"fo-an-silica", 1500, 5}, {"fo-an-silica", 1600, 5}, {"fo-an-silica", 1750, 5}, {"ab-or-silica", 1000, 5}, {"lif-naf-kf", 550, 3},
	} {
		f, err := systems.Builtin(c.name)
		if err != nil {
			t.Fatal(err)
		}
		sys, err := f.AtReference(nil)
		if err != nil {
			t.Fatal(err)
		}
		s, err := section.Compute(sys, c.celsius+273.15, section.Options{})
		if err != nil {
			t.Fatal(err)
		}
		tri := triangle{components: sys.Components, side: 100}
		p := &panel{board: newBoard(ColourStyle(), tri, 120, 120, isothermalLayers...), s: s}
		n, worst := 0, 0.0
		for i := range s.Regions {
			r := &s.Regions[i]
			if len(r.Phases) != 2 {
				continue
			}
			a, b := r.Sides()
			curves := []arc{p.side(a), p.side(b)}
			for k := 1; k < len(r.TieLines)-1; k++ {
				n++
				for _, end := range p.tri.all(r.TieLines[k].Ends[:]) {
					near := end.distance(p.tri.at(a[0])) // a pure solid's side is a point
					near = min(near, end.distance(p.tri.at(b[0])))
					for _, curve := range curves {
						for _, piece := range curve.chords(0.1) {
							near = min(near, piece.distance(end))
						}
					}
					worst = math.Max(worst, near)
				}
			}
		}
		if n < c.ties || worst > off {
			t.Errorf("%s at %g °C: of %d tie lines one ends %.3f mm off its curve", c.name, c.celsius, n, worst)
		}
		t.Logf("%s at %g °C: %d tie lines, worst %.4f mm", c.name, c.celsius, n, worst)
	}
}
