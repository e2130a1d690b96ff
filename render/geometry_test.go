package render

import (
	"math"
	"math/rand"
	"testing"

	"pgregory.net/rapid"
)

// TestBoxesOverlap compares the separating-axis test with a slow one that
// looks for a common point on a fine raster of the first box.
func TestBoxesOverlap(t *testing.T) {
	rng := rand.New(rand.NewSource(1))
	hits := 0
	for range 400 {
		a := box{Point{0, 0}, polar(360 * rng.Float64()), 1 + rng.Float64(), 0.5 + rng.Float64()}
		b := box{Point{7*rng.Float64() - 3.5, 7*rng.Float64() - 3.5}, polar(360 * rng.Float64()), 1 + rng.Float64(), 0.2 + rng.Float64()}
		slow, near := false, false
		const n = 60
		for i := -n; i <= n; i++ {
			for j := -n; j <= n; j++ {
				q := a.c.plus(a.u.times(a.w * float64(i) / n)).plus(a.u.left().times(a.h * float64(j) / n))
				slow = slow || b.contains(q)
				near = near || b.grown(0.06).contains(q)
			}
		}
		got := a.overlaps(b)
		if got != b.overlaps(a) {
			t.Fatalf("the test is not symmetric for %v and %v", a, b)
		}
		if slow && !got || !near && got {
			t.Errorf("%v and %v: overlap %v, a raster finds %v", a, b, got, slow)
		}
		if got {
			hits++
		}
	}
	if hits < 50 || hits > 350 {
		t.Errorf("%d of 400 pairs overlap: the cases do not try both answers", hits)
	}
}

func TestChord(t *testing.T) {
	b := box{Point{1, 1}, polar(45), math.Sqrt2, 0.5}
	for _, c := range []struct {
		name string
		s    segment
		want float64
	}{
		{"along the axis, beyond both ends", segment{Point{-5, -5}, Point{5, 5}}, 2 * math.Sqrt2},
		{"across", segment{Point{0, 2}, Point{2, 0}}, 1},
		{"inside", segment{Point{0.9, 0.9}, Point{1.1, 1.1}}, 0.2 * math.Sqrt2},
		{"past it", segment{Point{3, 0}, Point{3, 2.2}}, 0},
		{"a point", segment{Point{1, 1}, Point{1, 1}}, 0},
	} {
		if got := b.chord(c.s); math.Abs(got-c.want) > 1e-12 {
			t.Errorf("%s: %g, want %g", c.name, got, c.want)
		}
	}
}

// TestPole uses shapes whose largest inscribed circle is known: r = area / half
// the circumference for a triangle, half the width of the ring for a square
// with a square hole, half the short side for a rectangle.
func TestPole(t *testing.T) {
	rect := func(x0, y0, x1, y1 float64) []Point { return []Point{{x0, y0}, {x1, y0}, {x1, y1}, {x0, y1}} }
	for _, c := range []struct {
		name   string
		r      region
		radius float64
	}{
		{"equilateral", region{[][]Point{{{0, 0}, {6, 0}, {3, 3 * math.Sqrt(3)}}}}, math.Sqrt(3)},
		{"3-4-5", region{[][]Point{{{0, 0}, {3, 0}, {0, 4}}}}, 1},
		{"long rectangle", region{[][]Point{rect(0, 0, 40, 3)}}, 1.5},
		// touches the two far sides and the hole's corner (4, 4): (10 − r − 4)√2 = r
		{"square with a corner cut out", region{[][]Point{rect(0, 0, 10, 10), rect(0, 0, 4, 4)}}, 6 * math.Sqrt2 / (1 + math.Sqrt2)},
	} {
		at, got := c.r.pole(0.001)
		if math.Abs(got-c.radius) > 0.002 {
			t.Errorf("%s: radius %.4f at %v, want %.4f", c.name, got, at, c.radius)
		}
		if d := c.r.depth(at); math.Abs(d-got) > 1e-9 {
			t.Errorf("%s: the centre lies %.4f deep, not %.4f", c.name, d, got)
		}
	}
}

func TestClip(t *testing.T) {
	v := convex{{0, 0}, {4, 0}, {0, 4}}
	got := v.clip([]Point{{-1, 1}, {1, 1}, {5, 1}, {5, 5}, {1, -1}, {1, 2}})
	want := [][]Point{{{0, 1}, {1, 1}, {3, 1}}, {{5. / 3, 0}, {5. / 3, 0}}, {{1, 0}, {1, 2}}}
	if len(got) < 2 {
		t.Fatalf("got %v", got)
	}
	for i, p := range want[0] {
		if p.distance(got[0][i]) > 1e-12 {
			t.Errorf("first piece %v, want %v", got[0], want[0])
		}
	}
	last := got[len(got)-1]
	if last[0].distance(Point{1, 0}) > 1e-12 || last[1].distance(Point{1, 2}) > 1e-12 {
		t.Errorf("last piece %v, want from 1,0 to 1,2", last)
	}
	for _, line := range got {
		for _, q := range line {
			if v.excess(q) > 1e-12 {
				t.Errorf("%v lies outside", q)
			}
		}
	}
}

func onCircle(n int, r, share float64) []Point {
	out := make([]Point, n)
	for i := range out {
		out[i] = polar(360 * share * float64(i) / float64(n-1)).times(r)
	}
	return out
}

// TestSmoothFollowsCircle: points every 10° on a circle of 20 mm; the smooth
// line must stay on it, and its length must be right.
func TestSmoothFollowsCircle(t *testing.T) {
	a := smooth(onCircle(19, 20, 0.5), false, nil)
	if want := math.Pi * 20; math.Abs(a.length()-want) > 0.01 {
		t.Errorf("length %.4f, want %.4f", a.length(), want)
	}
	for s := 0.0; s < a.length(); s += 0.1 {
		if r := a.at(s).length(); math.Abs(r-20) > 0.02 {
			t.Fatalf("at %.1f mm the line is %.4f mm from the centre, want 20", s, r)
		}
	}
	ring := smooth(onCircle(37, 20, 1), true, nil)
	if got := ring.at(0).distance(ring.at(ring.length())); got > 1e-9 {
		t.Errorf("the closed line is open by %g mm", got)
	}
	if want := 2 * math.Pi * 20; math.Abs(ring.length()-want) > 0.02 {
		t.Errorf("closed length %.4f, want %.4f", ring.length(), want)
	}
}

func TestSmoothKeepsCorners(t *testing.T) {
	a := smooth([]Point{{0, 0}, {5, 0}, {10, 0}, {10, 5}, {10, 10}}, false, nil)
	if math.Abs(a.length()-20) > 1e-9 {
		t.Errorf("length round the corner %.4f, want 20", a.length())
	}
	for s := 0.0; s <= 20; s += 0.05 {
		q := a.at(s)
		if q.X > 10+1e-9 || q.Y < -1e-9 {
			t.Fatalf("the corner is overshot at %v", q)
		}
	}
}

// TestCutting: what is cut out and what is left add up, and the pieces lie
// outside the boxes.
func TestCutting(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a := smooth(onCircle(25, 15, 0.7), false, nil)
		var boxes []box
		for range rapid.IntRange(0, 5).Draw(t, "boxes") {
			boxes = append(boxes, box{Point{rapid.Float64Range(-16, 16).Draw(t, "x"), rapid.Float64Range(-16, 16).Draw(t, "y")},
				polar(rapid.Float64Range(0, 180).Draw(t, "turn")), rapid.Float64Range(0.5, 6).Draw(t, "w"), rapid.Float64Range(0.5, 3).Draw(t, "h")})
		}
		cut := a.inside(boxes)
		removed, left := 0.0, 0.0
		for _, s := range cut {
			removed += s.to - s.from
		}
		for _, p := range a.without(cut, 0) {
			left += p.length()
			for s := 0.0; s < p.length(); s += 0.2 {
				for _, b := range boxes {
					if b.grown(-0.12).contains(p.at(s)) {
						t.Fatalf("a piece still runs through a box at %v", p.at(s))
					}
				}
			}
		}
		if math.Abs(removed+left-a.length()) > 0.02 {
			t.Fatalf("%.3f removed and %.3f left of %.3f mm", removed, left, a.length())
		}
	})
}

func TestPartAndReverse(t *testing.T) {
	a := smooth(onCircle(13, 10, 0.4), false, nil)
	p := a.part(3, 11)
	if math.Abs(p.length()-8) > 0.01 || p.at(0).distance(a.at(3)) > 0.01 || p.at(p.length()).distance(a.at(11)) > 0.01 {
		t.Errorf("part from 3 to 11 mm is %.4f mm long", p.length())
	}
	r := a.reversed()
	if r.at(0).distance(a.at(a.length())) > 1e-12 || math.Abs(r.length()-a.length()) > 1e-9 {
		t.Error("the reversed line does not start where the line ends")
	}
}

func TestPlacerGivesWay(t *testing.T) {
	word := measure(PlainRuns("word", 8, Regular))
	for _, c := range []struct {
		name string
		room float64 // page width in words
		want int     // labels that can stand
	}{
		{"room for two", 2.6, 2},
		{"room for one", 1.4, 1},
		{"room for none", 0.8, 0},
	} {
		p := newPlacer(c.room*word.w, 4)
		for i := range 2 {
			l := label{role: "label", wordings: []wording{word}, rank: i}
			for x := word.w / 2; x < c.room*word.w; x += 0.5 {
				// both like the left side best
				l.spots = append(l.spots, spot{c: Point{x + 0.3, 2}, cost: x})
			}
			p.ask(l)
		}
		p.solve()
		n := 0
		for _, l := range p.labels {
			if l.chosen >= 0 {
				n++
			}
		}
		if n != c.want {
			t.Errorf("%s: %d labels stand, want %d", c.name, n, c.want)
		}
		if c.want == 2 && clash(&p.labels[0].spots[p.labels[0].chosen], &p.labels[1].spots[p.labels[1].chosen]) {
			t.Errorf("%s: the labels touch", c.name)
		}
	}
}
