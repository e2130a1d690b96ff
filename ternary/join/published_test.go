package join_test

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/join"
)

// crossing is where a line passes a temperature, by the chord between two points.
func crossing(t *testing.T, d *join.Diagram, role string, T float64) float64 {
	t.Helper()
	for i := range d.Lines {
		l := &d.Lines[i]
		if l.Role() != role {
			continue
		}
		for k := 1; k < len(l.Points); k++ {
			p, q := l.Points[k-1], l.Points[k]
			if (p.T-T)*(q.T-T) <= 0 && p.T != q.T {
				return p.X + (T-p.T)/(q.T-p.T)*(q.X-p.X)
			}
		}
	}
	t.Fatalf("no %s at %.1f K", role, T)
	return 0
}

// The loop of the plagioclases as measured by Bowen 1913, Am. J. Sci. 35, 577–599 (from
// memory), wt% anorthite at temperatures in °C; none of it was used in a fit.
func TestPlagioclaseLoop(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	d := compute(t, sys, ternary.Apex(1), ternary.Apex(2), join.Options{})
	for _, r := range []struct {
		role  string
		T, an float64
	}{
		{"liquidus", 1521, 83.3}, {"liquidus", 1490, 66.7}, {"liquidus", 1450, 50}, {"liquidus", 1394, 33.3}, {"liquidus", 1334, 20},
		{"solidus", 1465, 83.3}, {"solidus", 1372, 66.7}, {"solidus", 1287, 50}, {"solidus", 1205, 33.3}, {"solidus", 1175, 20},
	} {
		got := 100 * d.Share(crossing(t, d, r.role, r.T+ternary.ZeroCelsius), ternary.Mass)
		if math.Abs(got-r.an) > 3 {
			t.Errorf("%s at %.0f °C: %.2f wt%% An, measured %.1f", r.role, r.T, got, r.an)
		}
	}
}
