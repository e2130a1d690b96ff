package pressure_test

import (
	"fmt"
	"math"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
	"thalweg/ternary/pressure"
)

// invented is a system of A, B, C and the compound AB in an ideal liquid. A melts the
// higher the greater the pressure, AB hardly, so that AB ends by melting incongruently.
func invented(P float64) (*gibbs.System, error) {
	var cs ternary.Components
	liquid := gibbs.NewLiquid(cs, gibbs.Mixing{})
	solid := func(symbol string, c [3]float64, g gibbs.TFunc) *gibbs.Phase {
		return (&gibbs.Phase{Symbol: symbol, Members: []gibbs.EndMember{{Symbol: symbol, C: c, G: g}}}).Prepare()
	}
	ab, err := gibbs.CompoundMelting(liquid, [3]float64{1, 1, 0}, compound, P)
	if err != nil {
		return nil, err
	}
	return &gibbs.System{Name: "invented", Components: cs, Liquid: liquid, Pressure: P, Solids: []*gibbs.Phase{
		solid("A", ternary.Apex(0), gibbs.Melting(pureA, P)),
		solid("B", ternary.Apex(1), gibbs.Melting(gibbs.Fusion{T: 1000, H: 20000}, P)),
		solid("C", ternary.Apex(2), gibbs.Melting(gibbs.Fusion{T: 900, H: 18000}, P)),
		solid("AB", [3]float64{1, 1, 0}, ab),
	}}, nil
}

var (
	pureA    = gibbs.Fusion{T: 1100, H: 22000, V: 8e-6}
	compound = gibbs.Fusion{T: 1000, H: 45000, V: 0.5e-6}
)

// The pressure at which AB begins to melt incongruently, in closed form: that at which
// A saturates in the liquid of its composition at its own melting point.
func TestEutecticBecomesPeritectic(t *testing.T) {
	over := func(P float64) float64 {
		T := compound.T * (1 + compound.V*P/compound.H)
		return ternary.R*T*math.Log(0.5) - gibbs.Melting(pureA, P).At(T) // driving force of A there
	}
	want := root(over, 0, 5e9)
	s, err := pressure.Compute(invented, []float64{0, 0.7e9, 1.4e9, 2.1e9})
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Problems) > 0 {
		t.Error(s.Problems)
	}
	found := false
	for _, c := range s.Changes {
		if c.Kind == pressure.KindChanged && c.From == liquidus.Eutectic && c.To == liquidus.Peritectic && c.Edge == 2 {
			found = true
			if math.Abs(c.Pressure-want) > 1e5 {
				t.Errorf("the eutectic of A and AB becomes a peritectic at %.6f GPa, in closed form %.6f", c.Pressure/1e9, want/1e9)
			}
		}
	}
	if !found {
		t.Errorf("no eutectic becomes a peritectic below 2.1 GPa; changes: %+v, expected at %.4f GPa", s.Changes, want/1e9)
	}
}

// Points keep their track: the eutectic inside is one point at all pressures, and its
// temperature lies on a smooth curve through its neighbours.
func TestTracks(t *testing.T) {
	f, err := systems.Builtin("di-an-fo")
	if err != nil {
		t.Fatal(err)
	}
	var list []float64
	for k := range 11 {
		list = append(list, 1e5+0.05e9*float64(k))
	}
	s, err := pressure.Compute(func(P float64) (*gibbs.System, error) { return f.At(P, nil) }, list)
	if err != nil {
		t.Fatal(err)
	}
	inside := 0
	for _, tr := range s.Points {
		if tr.Edge >= 0 {
			continue
		}
		inside++
		if len(tr.At) != len(list) {
			t.Errorf("the point of %v is seen at %d of %d pressures", tr.Solids, len(tr.At), len(list))
		}
		for i := 2; i < len(tr.At); i++ {
			a, b, c := tr.At[i-2].Node.T, tr.At[i-1].Node.T, tr.At[i].Node.T
			if bend := math.Abs(a - 2*b + c); bend > 0.5 {
				t.Errorf("its temperature bends by %g K at %g GPa", bend, list[i-1]/1e9)
			}
		}
		if !(tr.At[len(tr.At)-1].Node.T > tr.At[0].Node.T) {
			t.Error("silicates that expand on melting have a eutectic that rises with pressure")
		}
	}
	if inside != 1 {
		t.Errorf("%d points inside the triangle", inside)
	}
}

func TestRefusals(t *testing.T) {
	for _, list := range [][]float64{nil, {1e9, 0}, make([]float64, 1000)} {
		if _, err := pressure.Compute(invented, list); err == nil {
			t.Errorf("no error for %d pressures", len(list))
		}
	}
}

func ExampleCompute() {
	s, _ := pressure.Compute(invented, []float64{0, 2e9})
	for _, c := range s.Changes {
		if c.Kind == pressure.KindChanged && c.Edge >= 0 {
			fmt.Printf("%.2f GPa: %s becomes %s\n", c.Pressure/1e9, c.From, c.To)
		}
	}
	// Output:
	// 0.49 GPa: eutectic becomes peritectic
}

func BenchmarkSeries(b *testing.B) {
	f, err := systems.Builtin("di-an-fo")
	if err != nil {
		b.Fatal(err)
	}
	var list []float64
	for k := range 20 {
		list = append(list, 1e5+0.05e9*float64(k))
	}
	for b.Loop() {
		if _, err := pressure.Compute(func(P float64) (*gibbs.System, error) { return f.At(P, nil) }, list); err != nil {
			b.Fatal(err)
		}
	}
}
