package liquidus_test

import (
	"fmt"
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/liquidus"
)

const (
	// solvedT is how closely, in kelvin, a computed point of an isotherm meets it.
	solvedT = 1e-4
	// betweenT is how closely, in sides of the triangle, the points of the cubic
	// between two computed ones meet the isotherm: their error in kelvin over the
	// local slope. In the interior a cubic through two points a chord h apart with
	// tangents that turn by θ strays by some h·θ³/96, 1e-5 for h = 0.07 and
	// θ = 0.25. Where a line comes to a side of the triangle its curvature grows
	// as the inverse of the distance, and up to 2.5e-4 was measured.
	betweenT = 5e-4
	// inwardT is the same for points farther than inward from all sides.
	inwardT = 5e-5
	inward  = 0.05
)

// slopeAt is the steepness of T_φ at x, K per side of the triangle.
func slopeAt(s *liquidus.Surface, solid int, x ternary.Composition) float64 {
	h := 1e-4 * math.Max(1e-6, math.Min(x[0], math.Min(x[1], x[2])))
	var g [2]float64
	for j := range g {
		up, down := x, x
		up[j], up[j+1] = up[j]+h, up[j+1]-h
		down[j], down[j+1] = down[j]-h, down[j+1]+h
		g[j] = (s.Saturation(solid, up) - s.Saturation(solid, down)) / (2 * h)
	}
	// the two directions are sides at 120° of each other
	return math.Sqrt((g[0]*g[0] + g[1]*g[1] + g[0]*g[1]) * 4 / 3)
}

// Points of an isotherm lie at its temperature, most of them as solved points.
func TestIsothermPoints(t *testing.T) {
	lines := 0
	for _, s := range subjects(t) {
		base := whole(t, s.sys, liquidus.Options{})
		p := whole(t, s.sys, liquidus.Options{Isotherms: spread(base, 12)})
		surf := surface(t, s.sys)
		for _, iso := range p.Isotherms {
			for _, l := range iso.Lines {
				lines++
				solved := 0
				for _, x := range l.Points {
					d := math.Abs(surf.Saturation(l.Solid, x) - iso.T)
					if d <= solvedT {
						solved++
						continue
					}
					near, tol := math.Min(x[0], math.Min(x[1], x[2])), betweenT
					if near > inward {
						tol = inwardT
					}
					if near <= 0 || d > tol*slopeAt(surf, l.Solid, x) {
						t.Errorf("%s, %.2f K, solid %d: off by %.2e K at %v, slope %.0f", s.name, iso.T, l.Solid, d, x, slopeAt(surf, l.Solid, x))
					}
				}
				if 2*solved < len(l.Points) {
					t.Errorf("%s, %.2f K, solid %d: only %d of %d points are solved", s.name, iso.T, l.Solid, solved, len(l.Points))
				}
			}
		}
	}
	if lines < 100 {
		t.Errorf("only %d lines checked", lines)
	}
}

// Every line closes, or ends on an edge or where a second solid is saturated; and
// ends on a boundary curve come in pairs, one from either field.
func TestIsothermEnds(t *testing.T) {
	closed := 0
	for _, s := range oneLiquid(t) {
		base := whole(t, s.sys, liquidus.Options{})
		p := whole(t, s.sys, liquidus.Options{Isotherms: spread(base, 12)})
		surf := surface(t, s.sys)
		for _, iso := range p.Isotherms {
			ends := map[string]int{}
			for _, l := range iso.Lines {
				if l.Closed {
					closed++
					continue
				}
				for _, x := range []ternary.Composition{l.Points[0], l.Points[len(l.Points)-1]} {
					if x[0] == 0 || x[1] == 0 || x[2] == 0 {
						continue
					}
					second := math.Inf(1)
					for i := range s.sys.Solids {
						if i != l.Solid {
							second = math.Min(second, math.Abs(surf.Saturation(i, x)-iso.T))
						}
					}
					if second > solvedT {
						t.Errorf("%s, %.2f K: the line of solid %d ends in mid-field at %v", s.name, iso.T, l.Solid, x)
					}
					ends[fmt.Sprintf("%.4f %.4f", x[0], x[1])]++
				}
			}
			for at, n := range ends {
				if n != 2 {
					t.Errorf("%s, %.2f K: %d lines end at the boundary at %s", s.name, iso.T, n, at)
				}
			}
		}
	}
	if closed == 0 {
		t.Error("no closed line among the subjects")
	}
}

// No piece of an isotherm is missing: wherever two neighbours of a dense lattice
// lie on either side of T, the crossing between them is on a line.
func TestIsothermsComplete(t *testing.T) {
	const near = 6e-4 // chords against the curve: half of h = 0.07, turning by half of θ = 0.25, strays by hθ/32
	for _, s := range oneLiquid(t) {
		t.Run(s.name, func(t *testing.T) {
			t.Parallel()
			base := whole(t, s.sys, liquidus.Options{})
			p := whole(t, s.sys, liquidus.Options{Isotherms: spread(base, 5)})
			surf := surface(t, s.sys)
			nodes := map[ternary.Composition]float64{}
			at := func(i, j, n int) ternary.Composition {
				return ternary.Composition{(float64(i) + 0.1) / (float64(n) + 0.3), (float64(j) + 0.1) / (float64(n) + 0.3), (float64(n-i-j) + 0.1) / (float64(n) + 0.3)}
			}
			T := func(x ternary.Composition) float64 {
				if v, ok := nodes[x]; ok {
					return v
				}
				v, _ := surf.Liquidus(x)
				nodes[x] = v
				return v
			}
			const n = 40
			for i := 0; i <= n; i++ {
				for j := 0; i+j < n; j++ {
					for _, d := range [2][2]int{{1, 0}, {0, 1}} {
						x, y := at(i, j, n), at(i+d[0], j+d[1], n)
						for k := range p.Isotherms {
							checkCrossing(t, surf, &p.Isotherms[k], x, y, T(x), T(y), near)
						}
					}
				}
			}
		})
	}
}

// checkCrossing bisects a link for T_L = T and looks for a line there.
func checkCrossing(t *testing.T, surf *liquidus.Surface, iso *liquidus.Isotherm, x, y ternary.Composition, a, b, near float64) {
	t.Helper()
	if (a > iso.T) == (b > iso.T) {
		return
	}
	lo, hi := 0.0, 1.0
	for hi-lo > 1e-9 {
		mid := (lo + hi) / 2
		if v, _ := surf.Liquidus(x.Lerp(y, mid)); (v > iso.T) == (a > iso.T) {
			lo = mid
		} else {
			hi = mid
		}
	}
	z := x.Lerp(y, lo)
	best := math.Inf(1)
	for _, l := range iso.Lines {
		best = math.Min(best, toLine(z, l.Points, l.Closed))
	}
	if best > near {
		t.Errorf("%.2f K: no line at %v, nearest is %.1e away", iso.T, z, best)
	}
}
