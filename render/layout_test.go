package render

import (
	"fmt"
	"math"
	"sort"
	"strings"
	"testing"

	"thalweg/ternary"
)

// eachFigure runs a test over every fixture in both widths and both styles.
func eachFigure(t *testing.T, test func(t *testing.T, d *drawing)) {
	figs := figures(t)
	names := make([]string, 0, len(figs))
	for n := range figs {
		names = append(names, n)
	}
	sort.Strings(names)
	if len(names) < 2 {
		t.Fatal("no figures to look at")
	}
	for _, n := range names {
		for _, st := range []Style{ColourStyle(), InkStyle()} {
			for _, w := range []float64{SingleColumn, DoubleColumn} {
				for _, basis := range []ternary.Basis{ternary.Mass, ternary.Mole} {
					f := figs[n]
					f.Style, f.WidthMM, f.Basis = st, w, basis
					t.Run(fmt.Sprintf("%s/%s/%g/%s", n, st.Name, w, basis), func(t *testing.T) {
						d, err := f.draw()
						if err != nil {
							t.Fatal(err)
						}
						test(t, d)
					})
				}
			}
		}
	}
}

func texts(s *Scene) (out []*TextItem) {
	for _, l := range s.Layers {
		for _, i := range l.Items {
			if t, ok := i.(*TextItem); ok {
				out = append(out, t)
			}
		}
	}
	return out
}

func paths(s *Scene, roles ...string) (out []*PathItem) {
	for _, l := range s.Layers {
		for _, i := range l.Items {
			p, ok := i.(*PathItem)
			if !ok {
				continue
			}
			for _, r := range roles {
				if p.Role == r {
					out = append(out, p)
				}
			}
			if len(roles) == 0 {
				out = append(out, p)
			}
		}
	}
	return out
}

// inkBox is the box of a text's own outlines, in its own axes: it does not use
// the measure that the placer works with.
func inkBox(t *TextItem) box {
	level := *t
	level.Angle = 0
	lo, hi := level.Outline().Bounds()
	u := polar(t.Angle)
	mid := Point{(lo.X+hi.X)/2 - t.X, (lo.Y+hi.Y)/2 - t.Y}
	c := Point{t.X, t.Y}.plus(u.times(mid.X)).plus(u.left().times(mid.Y))
	return box{c, u, (hi.X - lo.X) / 2, (hi.Y - lo.Y) / 2}
}

// touching lists the pairs of texts of a scene that touch.
func touching(s *Scene) (out []string) {
	all := texts(s)
	ink := make([]box, len(all))
	for i, a := range all {
		ink[i] = inkBox(a)
		for j, b := range all[:i] {
			if ink[i].overlaps(ink[j]) {
				out = append(out, fmt.Sprintf("%s %q touches %s %q", a.Role, a.label(), b.Role, b.label()))
			}
		}
	}
	return out
}

// beyondPage lists the texts and shapes that leave the page of a scene.
func beyondPage(s *Scene) (out []string) {
	for _, x := range texts(s) {
		for _, c := range inkBox(x).corners() {
			if c.X < 0 || c.Y < 0 || c.X > s.Width || c.Y > s.Height {
				out = append(out, fmt.Sprintf("%s %q reaches %.2f, %.2f on a page of %.2f × %.2f mm", x.Role, x.label(), c.X, c.Y, s.Width, s.Height))
			}
		}
	}
	for _, p := range paths(s) {
		lo, hi := p.Path.Bounds()
		if lo.X < 0 || lo.Y < 0 || hi.X > s.Width || hi.Y > s.Height {
			out = append(out, fmt.Sprintf("%s leaves the page: %v to %v", p.Role, lo, hi))
		}
	}
	return out
}

// tooSmall lists the strokes and runs of a scene below the least, pt.
func tooSmall(s *Scene, line, text float64) (out []string) {
	for _, p := range paths(s) {
		if p.Stroke != nil && p.Stroke.Width < line*mmPerPoint-1e-9 {
			out = append(out, fmt.Sprintf("%s is drawn with %.3f pt, less than %.2f", p.Role, p.Stroke.Width*pointPerMM, line))
		}
	}
	for _, x := range texts(s) {
		for _, r := range x.Runs {
			if r.Size < text-1e-9 {
				out = append(out, fmt.Sprintf("%q is set in %.2f pt, less than %.2f", r.Text, r.Size, text))
			}
		}
	}
	return out
}

func report(t *testing.T, faults []string) {
	t.Helper()
	for _, f := range faults {
		t.Error(f)
	}
}

func TestWordsDoNotTouch(t *testing.T) {
	eachFigure(t, func(t *testing.T, d *drawing) {
		if n := len(texts(d.scene)); n < 20 {
			t.Fatalf("only %d texts on the figure", n)
		}
		report(t, touching(d.scene))
	})
}

func TestWordsStayOnThePage(t *testing.T) {
	eachFigure(t, func(t *testing.T, d *drawing) { report(t, beyondPage(d.scene)) })
}

// covered reports whether a box meets the area of a closed shape, or its
// outline.
func covered(b box, p Path) bool {
	for _, line := range p.Flatten(0.02) {
		for i := 1; i < len(line); i++ {
			if b.chord(segment{line[i-1], line[i]}) > 0 {
				return true
			}
		}
		if (region{[][]Point{line}}).contains(b.c) {
			return true
		}
	}
	return false
}

func TestWordsCoverNoSymbol(t *testing.T) {
	eachFigure(t, func(t *testing.T, d *drawing) {
		marks := paths(d.scene, "marker", "arrowhead")
		if len(marks) < 5 {
			t.Fatalf("only %d symbols", len(marks))
		}
		report(t, covering(d.scene))
		for _, x := range texts(d.scene) {
			ink := inkBox(x)
			for _, m := range paths(d.scene, "leader") {
				if covered(ink, m.Path) {
					t.Errorf("%s %q lies on a leader line", x.Role, x.label())
				}
			}
		}
	})
}

func TestWordsKeepOffLines(t *testing.T) {
	eachFigure(t, func(t *testing.T, d *drawing) {
		rows := paths(d.scene, "boundary", "frame", "path", "isotherm")
		flat := make([][][]Point, len(rows))
		for k, m := range rows {
			flat[k] = m.Path.Flatten(0.02)
		}
		for _, x := range texts(d.scene) {
			ink := inkBox(x)
			for k, lines := range flat {
				for _, line := range lines {
					for i := 1; i < len(line); i++ {
						if c := ink.chord(segment{line[i-1], line[i]}); c > 0 {
							t.Errorf("%s %q lies on a line: %s", x.Role, x.label(), rows[k].Role)
							return
						}
					}
				}
			}
		}
	})
}

func TestEveryFieldWithRoomIsNamed(t *testing.T) {
	eachFigure(t, func(t *testing.T, d *drawing) {
		named := map[string]int{}
		for _, x := range texts(d.scene) {
			if x.Role == "field" {
				named[x.Label]++
			}
		}
		want := map[string]int{}
		for i, f := range d.pr.Fields {
			if 2*d.poles[i] < 3 {
				continue
			}
			if f.TwoLiquids {
				want["two liquids"]++
			} else {
				want[d.pr.System.Solids[f.Solid].Name]++
			}
		}
		if len(want) == 0 {
			t.Fatal("no field has room")
		}
		for n, k := range want {
			if named[n] < k {
				t.Errorf("%d fields of %s have room for a name, %d have one", k, n, named[n])
			}
		}
	})
}

func TestFrameIsComplete(t *testing.T) {
	eachFigure(t, func(t *testing.T, d *drawing) {
		count := map[string]int{}
		for _, x := range texts(d.scene) {
			count[x.Role]++
			for _, c := range d.pr.System.Components {
				if x.Role == "apex" && plainText(x) == c.Symbol {
					count[c.Symbol]++
				}
			}
			if x.Role == "point label" {
				count["points"]++
			}
		}
		for _, c := range d.pr.System.Components {
			if count[c.Symbol] != 1 {
				t.Errorf("the apex %s is named %d times", c.Symbol, count[c.Symbol])
			}
		}
		if count["tick label"] != 12 || count["basis"] != 1 {
			t.Errorf("%d numbers on ticks, want 12; basis given %d times", count["tick label"], count["basis"])
		}
		if n := len(shownNodes(d.pr)); count["points"] != n {
			t.Errorf("%d of %d points are numbered", count["points"], n)
		}
		if n := len(d.fig.Samples); count["sample label"] != n {
			t.Errorf("%d of %d samples are named", count["sample label"], n)
		}
	})
}

func TestTypeOnTheBaselineIsNotReduced(t *testing.T) {
	eachFigure(t, func(t *testing.T, d *drawing) {
		for _, x := range texts(d.scene) {
			for _, r := range x.Runs {
				if r.Rise == 0 && r.Size < d.style.Base {
					t.Errorf("%q is set in %.2f pt, less than %.2f", r.Text, r.Size, d.style.Base)
				}
			}
		}
	})
}

func TestCurvesStayInTheTriangle(t *testing.T) {
	eachFigure(t, func(t *testing.T, d *drawing) {
		lines := paths(d.scene, "boundary", "isotherm", "path")
		if len(lines) < 5 {
			t.Fatalf("only %d lines", len(lines))
		}
		for _, p := range lines {
			for _, line := range p.Path.Flatten(0.002) {
				for _, q := range line {
					if e := d.tri.rim().excess(q); e > 0.01 {
						t.Errorf("%s runs %.3f mm outside the triangle", p.Role, e)
						return
					}
				}
			}
		}
	})
}

// TestArrowheadsPointDownhill looks up the temperatures of the computed points
// nearest to an arrowhead's tip and tail.
func TestArrowheadsPointDownhill(t *testing.T) {
	eachFigure(t, func(t *testing.T, d *drawing) {
		n := 0
		for _, p := range paths(d.scene, "arrowhead") {
			if *p.Fill != d.style.Line && !d.style.Ink {
				continue
			}
			pts := p.Path.Flatten(0.01)[0]
			tip, tail := pts[0], pts[1].lerp(pts[3], 0.5)
			best, fall := math.Inf(1), 0.0
			for _, c := range d.pr.Curves {
				for i := 1; i < len(c.Points); i++ {
					a, b := d.tri.at(c.Points[i-1].Liquid), d.tri.at(c.Points[i].Liquid)
					s := segment{a, b}
					if off := s.distance(tip) + s.distance(tail); off < best {
						best = off
						fall = (c.Points[i-1].T - c.Points[i].T) * b.minus(a).dot(tip.minus(tail))
					}
				}
			}
			if best > arrowLength {
				continue // a path's head, beside a curve or across it
			}
			n++
			if fall <= 0 {
				t.Errorf("an arrowhead at %.1f, %.1f points towards rising T", tip.X, tip.Y)
			}
		}
		if n < 1 {
			t.Errorf("only %d arrowheads on boundary curves", n)
		}
	})
}

// TestOtherWidths checks widths for which there is no preset.
func TestOtherWidths(t *testing.T) {
	for name, f := range figures(t) {
		for _, w := range []float64{120, 150, 230} {
			f.WidthMM = w
			s, err := f.Scene()
			if err != nil {
				t.Fatal(err)
			}
			if s.Width != w {
				t.Errorf("%s: the page is %g mm wide, want %g", name, s.Width, w)
			}
			report(t, append(touching(s), beyondPage(s)...))
		}
	}
}

func TestDrawingIsDeterministic(t *testing.T) {
	for name, f := range figures(t) {
		a, err := f.Scene()
		if err != nil {
			t.Fatal(err)
		}
		b, _ := f.Scene()
		if fmt.Sprint(dumpScene(a)) != fmt.Sprint(dumpScene(b)) {
			t.Errorf("%s: two drawings of one figure differ", name)
		}
	}
}

func dumpScene(s *Scene) (out []string) {
	for _, l := range s.Layers {
		for _, i := range l.Items {
			switch v := i.(type) {
			case *PathItem:
				out = append(out, fmt.Sprint(l.Name, v.Role, v.Path))
			case *TextItem:
				out = append(out, fmt.Sprint(l.Name, v.Role, *v))
			}
		}
	}
	return out
}

func TestFlags(t *testing.T) {
	plain := newIdeal(t).projection(50)
	withheld := newIdeal(t).projection(50)
	withheld.System.Withheld = []string{"Trd"}
	failed := newIdeal(t).projection(50)
	failed.Checks.Passed = false
	remarked := newIdeal(t).projection(50)
	remarked.System.Solids[1].Remark = "lies outside the plane"
	for _, c := range []struct {
		name string
		f    Figure
		want string
		has  bool
	}{
		{"whole", Figure{Projection: plain}, "metastable", false},
		{"whole", Figure{Projection: plain}, "incomplete", false},
		{"withheld", Figure{Projection: withheld}, "metastable: without Trd", true},
		{"failed", Figure{Projection: failed}, "incomplete", true},
		{"remarked", Figure{Projection: remarked}, "lies outside the plane", true},
	} {
		for _, w := range []float64{SingleColumn, DoubleColumn} {
			c.f.WidthMM = w
			s, err := c.f.Scene()
			if err != nil {
				t.Fatal(err)
			}
			var all []string
			for _, x := range texts(s) {
				all = append(all, plainText(x))
			}
			if got := strings.Contains(strings.Join(all, " "), c.want); got != c.has {
				t.Errorf("%s, %g mm: %q on the figure: %v, want %v", c.name, w, c.want, got, c.has)
			}
		}
	}
}

func plainText(t *TextItem) string { return plain(t.Runs) }

func TestFigureErrors(t *testing.T) {
	p := newIdeal(t).projection(100)
	for _, c := range []struct {
		name string
		f    Figure
	}{
		{"no projection", Figure{}},
		{"too narrow", Figure{Projection: p, WidthMM: 20}},
		{"not a number", Figure{Projection: p, WidthMM: math.NaN()}},
		{"sample outside", Figure{Projection: p, Samples: []Sample{{Name: "X", Composition: ternary.Composition{1.5, -0.5, 0}}}}},
	} {
		if _, err := c.f.Scene(); err == nil {
			t.Errorf("%s: no error", c.name)
		}
	}
}

func BenchmarkScene(b *testing.B) {
	for name, f := range figures(b) {
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := f.Scene(); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
