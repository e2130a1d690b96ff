package render

import (
	"math"
	"math/rand/v2"
	"testing"

	"thalweg/systems"
	"thalweg/ternary/liquidus"
)

// signedArea is the area that a path encloses.
func signedArea(p Path) float64 {
	sum := 0.0
	for _, ring := range p.Flatten(0.01) {
		sum += area(ring)
	}
	return sum
}

// On a net whose temperature is linear the areas above a level are known: above
// height h of a triangle lies (1−h)² of it.
func TestShadedAreas(t *testing.T) {
	tri := triangle{side: 100}
	s := &shading{}
	s.put(tri)
	for i := 0; i <= shadeCells; i++ {
		for j := 0; j <= shadeCells-i; j++ {
			s.t = append(s.t, float64(i)/shadeCells)
		}
	}
	whole := math.Sqrt(3) / 4 * 100 * 100
	for _, h := range []float64{0, 0.1, 1.0 / 3, 0.5, 0.77, 0.999} {
		p := s.above(h)
		if got, want := signedArea(p)/whole, (1-h)*(1-h); math.Abs(got-want) > 1e-9 {
			t.Errorf("above %g lies %.10f of the triangle, want %.10f", h, got, want)
		}
	}
	if !s.above(1.1).Empty() {
		t.Error("there is an area above the highest temperature")
	}
}

// Every outline is closed and lies in the triangle, whatever the temperatures are;
// the areas of two levels differ by what lies between them.
func TestShadingOfRoughNets(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 11))
	tri := triangle{side: 100}
	for range 5 {
		s := &shading{}
		s.put(tri)
		inside := 0
		for i := 0; i <= shadeCells; i++ {
			for j := 0; j <= shadeCells-i; j++ {
				v := r.Float64()
				if r.IntN(20) == 0 {
					v = math.Inf(-1)
				}
				if v >= 0.5 {
					inside++
				}
				s.t = append(s.t, v)
			}
		}
		last := math.Inf(1)
		for _, h := range []float64{0, 0.25, 0.5, 0.75, 0.99} {
			p := s.above(h)
			lo, hi := p.Bounds()
			if lo.X < -1e-9 || lo.Y < -1e-9 || hi.X > 100+1e-9 || hi.Y > tri.height()+1e-9 {
				t.Errorf("level %g reaches %v to %v", h, lo, hi)
			}
			a := signedArea(p)
			if !(a > 0 && a < last) {
				t.Errorf("level %g covers %g, the level below %g", h, a, last)
			}
			last = a
		}
		if inside == 0 {
			t.Fatal("nothing is above half")
		}
	}
}

// The shade under a liquid is that of its liquidus temperature, found here by
// asking each drawn area whether it holds the liquid.
func TestShadeTellsTheTemperature(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 5))
	for _, name := range systems.Names() {
		f := figures(t)[name]
		f.Style = ColourStyle().Shaded()
		d, err := f.draw()
		if err != nil {
			t.Fatal(err)
		}
		surface, err := liquidus.NewSurface(f.Projection.System)
		if err != nil {
			t.Fatal(err)
		}
		sh := d.fig.shade
		drawn := paths(d.scene, "shade")
		if len(drawn) != rampSteps {
			t.Fatalf("%s: %d areas, want %d", name, len(drawn), rampSteps)
		}
		areas := make([]region, len(drawn))
		for k, p := range drawn {
			areas[k] = region{p.Path.Flatten(0.01)}
		}
		wrong := 0
		for range 300 {
			a, b := r.Float64(), r.Float64()
			if a+b > 1 {
				a, b = 1-a, 1-b
			}
			x, err := f.Projection.System.Components.Composition([3]float64{a, b, 1 - a - b}, f.Basis)
			if err != nil {
				t.Fatal(err)
			}
			T, _ := surface.Liquidus(x)
			want := int(float64(rampSteps) * (T - sh.low) / (sh.high - sh.low))
			got := -1
			for k := range areas {
				if areas[k].contains(d.tri.at(x)) {
					got = k
				}
			}
			if got < want-1 || got > want+1 {
				wrong++
			}
		}
		if wrong > 3 { // beside a boundary curve a cell straddles the crease
			t.Errorf("%s: %d of 300 liquids stand on the shade of another temperature", name, wrong)
		}
	}
}
