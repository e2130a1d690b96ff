package render

import (
	"math"
	"math/rand"
	"testing"

	"thalweg/ternary"
)

// A view maps its corners to the corners of the page, and any composition to the
// place that its distances from the sides demand.
func TestViewIsAffine(t *testing.T) {
	cs := newIdeal(t).sys.Components
	r := rand.New(rand.NewSource(8))
	for range 20 {
		var v View
		for _, x := range []*ternary.Composition{&v.Top, &v.Left, &v.Right} {
			*x, _ = ternary.Normalize([3]float64{r.Float64(), r.Float64(), r.Float64()})
		}
		for _, basis := range []ternary.Basis{ternary.Mass, ternary.Mole} {
			tri, err := triangle{components: cs, basis: basis, origin: Point{3, 5}, side: 60}.look(&v)
			if err != nil {
				continue // almost a line
			}
			for k, x := range []ternary.Composition{v.Top, v.Left, v.Right} {
				if d := tri.at(x).distance(tri.corner(k)); d > 1e-6 {
					t.Errorf("corner %d lies %g mm off", k, d)
				}
			}
			// the middle of a side in the figure's basis is the middle on the page
			mid := tri.between(v.Top, v.Left, 0.5)
			if d := tri.at(mid).distance(tri.corner(0).lerp(tri.corner(1), 0.5)); d > 1e-6 {
				t.Errorf("the middle of a side lies %g mm off", d)
			}
			f := cs.Fractions(mid, basis)
			back := tri.view.fractions(tri.view.shares(f))
			for i := range f {
				if math.Abs(f[i]-back[i]) > 1e-12 {
					t.Errorf("fraction %d comes back as %g for %g", i, back[i], f[i])
				}
			}
		}
	}
}

// What a view cuts out lies in it, and all that lies in it is kept: the areas of the
// fields are those of the window.
func TestViewCuts(t *testing.T) {
	s := newIdeal(t)
	p := s.projection(20)
	for _, v := range []*View{
		{ternary.Apex(1), ternary.Apex(2), ternary.Apex(0)}, // turned
		{ternary.Apex(0), ternary.Apex(2), ternary.Apex(1)}, // mirrored
		{ternary.Composition{0.6, 0.2, 0.2}, ternary.Composition{0.2, 0.6, 0.2}, ternary.Composition{0.2, 0.2, 0.6}},
		{ternary.Composition{1, 0, 0}, ternary.Composition{0.5, 0.5, 0}, ternary.Composition{0.5, 0, 0.5}},
		{ternary.Composition{0.7, 0.2, 0.1}, ternary.Composition{0.1, 0.8, 0.1}, ternary.Composition{0.2, 0.1, 0.7}},
	} {
		tri, err := triangle{components: s.sys.Components, basis: ternary.Mole, side: 100}.look(v)
		if err != nil {
			t.Fatal(err)
		}
		cut := tri.cutProjection(p)
		rim := tri.rim()
		inside := func(what string, x ternary.Composition) {
			if d := rim.excess(tri.at(x)); d > 1e-4 {
				t.Errorf("%s lies %g mm outside", what, d)
			}
		}
		sum := 0.0
		for _, f := range cut.Fields {
			for _, x := range f.Outline {
				inside("an outline", x)
			}
			sum += math.Abs(area(tri.all(f.Outline)))
			for _, h := range f.Holes {
				sum -= math.Abs(area(tri.all(h)))
			}
		}
		if whole := math.Abs(area(rim)); math.Abs(sum-whole) > 2e-3*whole {
			t.Errorf("the fields cover %.5f of the view", sum/whole)
		}
		for _, c := range cut.Curves {
			for i, pt := range c.Points {
				inside("a curve", pt.Liquid)
				if i > 0 && pt.T > c.Points[i-1].T+1e-6 && c.Points[0].T > c.Points[len(c.Points)-1].T+1e-6 {
					t.Errorf("a cut curve rises from %g to %g K", c.Points[i-1].T, pt.T)
				}
			}
		}
		for _, iso := range cut.Isotherms {
			for _, l := range iso.Lines {
				for _, x := range l.Points {
					inside("an isotherm", x)
				}
			}
		}
		n := 0
		for _, node := range p.Nodes {
			if tri.shows(node.Liquid) {
				n++
			}
		}
		if n != len(cut.Nodes) {
			t.Errorf("%d nodes are kept, %d lie in the view", len(cut.Nodes), n)
		}
	}
}

// The numbers of a view's scales are true: the tick's place holds that percentage.
func TestViewTicks(t *testing.T) {
	s := newIdeal(t)
	v := &View{ternary.Composition{0.7, 0.2, 0.1}, ternary.Composition{0.1, 0.8, 0.1}, ternary.Composition{0.2, 0.1, 0.7}}
	tri, err := triangle{components: s.sys.Components, basis: ternary.Mole, side: 100}.look(v)
	if err != nil {
		t.Fatal(err)
	}
	for _, sc := range tri.scales() {
		if sc.component < 0 || sc.high <= sc.low {
			t.Fatalf("a side has no scale: %+v", sc)
		}
		ends := [3]ternary.Composition{v.Top, v.Left, v.Right}
		for k := range 11 {
			u := float64(k) / 10
			x := tri.between(ends[sc.from], ends[sc.to], u)
			if want := sc.low + u*(sc.high-sc.low); math.Abs(100*x[sc.component]-want) > 1e-9 {
				t.Errorf("%.3f %% where the scale says %.3f", 100*x[sc.component], want)
			}
		}
		// along the tick the percentage stays the same
		at := tri.corner(sc.from).lerp(tri.corner(sc.to), 0.5)
		inward := at.minus(sc.tick.times(10))
		want := 50 * (tri.cornerFraction(sc.component, sc.from) + tri.cornerFraction(sc.component, sc.to))
		if got := fractionAt(tri, inward, sc.component); math.Abs(100*got-want) > 1e-6 {
			t.Errorf("a tick of component %d leads from %g to %g %%", sc.component, want, 100*got)
		}
	}
}

// fractionAt is a component's fraction at a place on the page.
func fractionAt(tri triangle, q Point, component int) float64 {
	a, b, c := tri.corner(0), tri.corner(1), tri.corner(2)
	det := b.minus(a).cross(c.minus(a))
	u := q.minus(a).cross(c.minus(a)) / det
	w := b.minus(a).cross(q.minus(a)) / det
	return tri.view.fractions([3]float64{1 - u - w, u, w})[component]
}

func TestViewRefusals(t *testing.T) {
	p := newIdeal(t).projection(20)
	for name, v := range map[string]*View{
		"a line":  {ternary.Apex(0), ternary.Composition{0.5, 0.5, 0}, ternary.Apex(1)},
		"outside": {ternary.Composition{1.5, -0.5, 0}, ternary.Apex(1), ternary.Apex(2)},
	} {
		if _, err := (Figure{Projection: p, View: v}).Scene(); err == nil {
			t.Errorf("no error for %s", name)
		}
	}
	if _, err := (Figure{Projection: p, Hide: []string{"contours"}}).Scene(); err == nil {
		t.Error("no error for a layer that does not exist")
	}
	if _, err := ColourStyle().WithStroke("labels", 1); err == nil {
		t.Error("no error for lines of a layer that has none")
	}
	if _, err := ColourStyle().WithStroke("frame", 0.01); err == nil {
		t.Error("no error for a line below the least")
	}
}

// Layers that are left out are not there.
func TestHide(t *testing.T) {
	f := figures(t)["di-ab-an"]
	roles := map[string]string{"isotherms": "isotherm", "fields": "field", "paths": "path", "bulk solid": "bulk solid"}
	for layer, role := range roles {
		g := withPath(t, f)
		whole, err := g.Scene()
		if err != nil {
			t.Fatal(err)
		}
		g.Hide = []string{layer}
		less, err := g.Scene()
		if err != nil {
			t.Fatal(err)
		}
		if len(paths(whole, role)) == 0 || len(paths(less, role)) != 0 {
			t.Errorf("%s: %d shapes, %d when left out", layer, len(paths(whole, role)), len(paths(less, role)))
		}
	}
}
