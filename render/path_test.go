package render

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestPathBoundsByHand(t *testing.T) {
	var arch Path // y(t) = 3 t (1-t): 0.75 at the middle
	arch.MoveTo(0, 0)
	arch.CubeTo(0, 1, 1, 1, 1, 0)
	cases := []struct {
		name           string
		p              Path
		x0, y0, x1, y1 float64
		tol            float64
	}{
		{"empty", Path{}, 0, 0, 0, 0, 0},
		{"triangle", Polyline([]Point{{1, 2}, {5, 3}, {2, 9}}, true), 1, 2, 5, 9, 0},
		{"arch", arch, 0, 0, 1, 0.75, 1e-15},
	}
	for _, c := range cases {
		lo, hi := c.p.Bounds()
		got := []float64{lo.X, lo.Y, hi.X, hi.Y}
		for i, want := range []float64{c.x0, c.y0, c.x1, c.y1} {
			if math.Abs(got[i]-want) > c.tol {
				t.Errorf("%s: bounds %v, want %v %v %v %v", c.name, got, c.x0, c.y0, c.x1, c.y1)
				break
			}
		}
	}
}

// A dense sampling of the curve must fill its bounds and never leave them,
// and the flattened path must pass within the tolerance of every sample.
func TestCurveAgainstSampling(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		coord := rapid.Float64Range(-50, 50)
		draw := func() Point { return Point{coord.Draw(t, "x"), coord.Draw(t, "y")} }
		p0, c := draw(), []Point{draw(), draw(), draw()}
		tol := rapid.Float64Range(0.005, 1).Draw(t, "tol")
		var p Path
		p.MoveTo(p0.X, p0.Y)
		p.CubeTo(c[0].X, c[0].Y, c[1].X, c[1].Y, c[2].X, c[2].Y)
		lo, hi := p.Bounds()
		chords := p.Flatten(tol)[0]
		inf := math.Inf(1)
		slo, shi := Point{inf, inf}, Point{-inf, -inf}
		const n = 2000
		for i := 0; i <= n; i++ {
			q := cubeAt(p0, c, float64(i)/n)
			slo = Point{math.Min(slo.X, q.X), math.Min(slo.Y, q.Y)}
			shi = Point{math.Max(shi.X, q.X), math.Max(shi.Y, q.Y)}
			if i%50 == 0 {
				if d := distance(chords, q); d > tol*(1+1e-9)+1e-12 {
					t.Fatalf("chord %g mm from the curve at %g, tolerance %g", d, float64(i)/n, tol)
				}
			}
		}
		for _, v := range [][2]float64{{lo.X, slo.X}, {lo.Y, slo.Y}, {shi.X, hi.X}, {shi.Y, hi.Y}} {
			if d := v[1] - v[0]; d < -1e-9 || d > 1e-3 {
				t.Fatalf("bounds %v %v, sampled %v %v", lo, hi, slo, shi)
			}
		}
	})
}

// distance is from q to the nearest of the chords.
func distance(chords []Point, q Point) float64 {
	best := math.Inf(1)
	for i := 1; i < len(chords); i++ {
		a, b := chords[i-1], chords[i]
		dx, dy := b.X-a.X, b.Y-a.Y
		t := 0.0
		if l := dx*dx + dy*dy; l > 0 {
			t = math.Max(0, math.Min(1, ((q.X-a.X)*dx+(q.Y-a.Y)*dy)/l))
		}
		best = math.Min(best, math.Hypot(q.X-a.X-t*dx, q.Y-a.Y-t*dy))
	}
	return best
}

func TestFlattenSubpaths(t *testing.T) {
	p := Polyline([]Point{{0, 0}, {2, 0}, {2, 2}}, true)
	p.LineTo(5, 5) // goes on from the start of the closed subpath
	p.MoveTo(7, 7)
	p.LineTo(8, 8)
	p.MoveTo(9, 9) // draws nothing
	got := p.Flatten(0.1)
	want := [][]Point{{{0, 0}, {2, 0}, {2, 2}, {0, 0}}, {{0, 0}, {5, 5}}, {{7, 7}, {8, 8}}}
	if len(got) != len(want) {
		t.Fatalf("got %v, want %v", got, want)
	}
	for i := range want {
		if len(got[i]) != len(want[i]) {
			t.Fatalf("subpath %d: got %v, want %v", i, got[i], want[i])
		}
		for j := range want[i] {
			if got[i][j] != want[i][j] {
				t.Errorf("subpath %d: got %v, want %v", i, got[i], want[i])
			}
		}
	}
}

func TestEmptyPaths(t *testing.T) {
	var closed, moved Path
	closed.Close()
	moved.MoveTo(1, 1)
	for name, p := range map[string]Path{
		"zero": {}, "only closed": closed, "only moved": moved,
		"one point": Polyline([]Point{{1, 1}}, true), "no points": Polyline(nil, false),
	} {
		if !p.Empty() || len(p.Flatten(0.1)) != 0 {
			t.Errorf("%s: %v is not empty", name, p)
		}
	}
}
