package pressure_test

import (
	"math"
	"slices"
	"strings"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/pressure"
)

// Every point that is followed obeys Clapeyron's law for its own reaction,
// dT/dP = T·ΔV/ΔH: the slope by differences, volumes and heat from one projection.
func TestSlopesOfPoints(t *testing.T) {
	const P, h = 0.5e9, 1e7
	n := 0
	for _, name := range []string{"di-an-fo", "di-ab-an"} {
		f, err := systems.Builtin(name)
		if err != nil {
			t.Fatal(err)
		}
		s, err := pressure.Compute(func(P float64) (*gibbs.System, error) { return f.At(P, nil) }, []float64{P - h, P, P + h})
		if err != nil {
			t.Fatal(err)
		}
		low, high := s.Projections[0].System, s.Projections[2].System
		for _, tr := range s.Points {
			if len(tr.At) != 3 {
				t.Fatalf("%s: the point of %v is seen %d times", name, tr.Solids, len(tr.At))
			}
			node := tr.At[1].Node
			volume := 0.0 // taken up in the reaction from left to right, m³
			for i, st := range node.Solids {
				y := st.Y
				for k, m := range low.Solids[st.Phase].Members {
					v := (high.Solids[st.Phase].Members[k].G.At(node.T) - m.G.At(node.T)) / (2 * h)
					volume += node.Coefficients[i] * y[k] * v
				}
			}
			want := -node.T * volume / node.Heat
			got := (tr.At[2].Node.T - tr.At[0].Node.T) / (2 * h)
			if math.Abs(got-want) > 1e-4*math.Abs(want) {
				t.Errorf("%s, %v on edge %d: %.5f K/GPa, by Clapeyron's law %.5f", name, tr.Solids, tr.Edge, got*1e9, want*1e9)
			}
			n++
		}
	}
	if n != 6 {
		t.Errorf("%d points were compared", n)
	}
}

// AB is gone for good where it no longer saturates in the liquid of A and B at their
// own eutectic: in an ideal liquid x_A + x_B = 1 with x_i = exp(−ΔG_i/RT).
func TestFieldLost(t *testing.T) {
	b := gibbs.Fusion{T: 1000, H: 20000}
	activity := func(f gibbs.Fusion, T, P float64) float64 {
		return math.Exp(gibbs.Melting(f, P).At(T) / (ternary.R * T))
	}
	short := func(P float64) float64 { // of saturation with AB at the eutectic of A and B
		T := root(func(T float64) float64 { return activity(pureA, T, P) + activity(b, T, P) - 1 }, 500, 1000)
		xA := activity(pureA, T, P)
		return gibbs.Melting(compound, P).At(T)/(ternary.R*T) - math.Log(4*xA*(1-xA)) // 1/4 is x_A·x_B in the liquid of AB
	}
	want := root(short, 0, 5e9)
	s, err := pressure.Compute(invented, []float64{0, 1e9, 2e9})
	if err != nil {
		t.Fatal(err)
	}
	i := slices.IndexFunc(s.Changes, func(c pressure.Change) bool { return c.Kind == pressure.FieldLost })
	if i < 0 {
		t.Fatalf("no field is lost; by the closed form that of AB at %.4f GPa", want/1e9)
	}
	if c := s.Changes[i]; c.Solid != 3 || math.Abs(c.Pressure-want) > 1e5 {
		t.Errorf("solid %d loses its field at %.6f GPa, in closed form AB (3) at %.6f", c.Solid, c.Pressure/1e9, want/1e9)
	}
	for _, tr := range s.Points { // all points of AB end at a change, that of A and B alone begins at one
		if of := slices.Contains(tr.Solids, 3); of != (tr.To != nil) || !of && slices.Contains(tr.Solids, 0) && slices.Contains(tr.Solids, 1) != (tr.From != nil) {
			t.Errorf("the track of %v on edge %d comes from %+v and goes to %+v", tr.Solids, tr.Edge, tr.From, tr.To)
		}
		if c := tr.To; c != nil && (c.Kind != pressure.PointLost || math.Abs(c.Node.T-tr.At[len(tr.At)-1].Node.T) > 60) {
			t.Errorf("the track of %v on edge %d goes to %+v", tr.Solids, tr.Edge, c)
		}
	}
	if !slices.IsSortedFunc(s.Changes, func(a, b pressure.Change) int { return int(math.Copysign(1, a.Pressure-b.Pressure)) }) {
		t.Error("the changes are not in the order of their pressures")
	}
}

// root is where a monotonic function changes its sign.
func root(f func(float64) float64, lo, hi float64) float64 {
	down := f(lo) > f(hi)
	for range 100 {
		if m := (lo + hi) / 2; (f(m) > 0) == down {
			lo = m
		} else {
			hi = m
		}
	}
	return lo
}

// What projections say against themselves is passed on, those among them that are
// only computed to locate a change.
func TestProblemsAreReported(t *testing.T) {
	list := []float64{0, 1e6, 2e6}
	broken := func(at func(P float64) bool) pressure.Build {
		return func(P float64) (*gibbs.System, error) {
			sys, err := invented(P)
			if err == nil && at(P) { // three liquids, which are not computed
				w := []gibbs.TFunc{{A: 40e3}}
				sys.Liquid = gibbs.NewLiquid(sys.Components, gibbs.Mixing{Pairs: []gibbs.Pair{{I: 0, J: 1, L: w}, {I: 1, J: 2, L: w}, {I: 0, J: 2, L: w}}})
			}
			return sys, err
		}
	}
	for _, c := range []struct {
		what string
		at   func(P float64) bool
		says string // of the first problem
	}{
		{"one of the list", func(P float64) bool { return P == 1e6 }, "0.001 GPa: "},
		{"between two of the list", func(P float64) bool { return P > 1.2e6 && P < 1.8e6 }, ""},
		{"to locate a change", func(P float64) bool { return P > 1.2e6 && P < 1.8e6 || P == 2e6 }, "by which changes were located"},
	} {
		s, err := pressure.Compute(broken(c.at), list)
		if err != nil {
			t.Fatal(err)
		}
		all := strings.Join(s.Problems, "\n")
		if c.says == "" && all != "" || c.says != "" && !strings.Contains(all, c.says) {
			t.Errorf("%s: %q, want %q", c.what, all, c.says)
		}
	}
}
