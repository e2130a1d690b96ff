package gibbs

import (
	"math"
	"testing"

	"thalweg/ternary"
)

// Melting: no difference at the melting point, there the entropy of fusion as
// slope and the heat capacity as curvature; volume as slope with pressure.
func TestMelting(t *testing.T) {
	f := Fusion{T: 1664.65, H: 138100, Cp: 86, V: 10.8e-6}
	g := Melting(f, 0)
	if math.Abs(g.At(f.T)) > 1e-9 {
		t.Errorf("G at the melting point: %g", g.At(f.T))
	}
	if want := f.H / f.T; math.Abs(g.Slope(f.T)-want) > 1e-9 {
		t.Errorf("slope at the melting point: %g, want the entropy of fusion %g", g.Slope(f.T), want)
	}
	// −ΔG = −{ΔH(1 − T/Tm) + ΔCp[(T − Tm) − T ln(T/Tm)]}, written out
	T := 1500.0
	want := -(f.H*(1-T/f.T) + f.Cp*((T-f.T)-T*math.Log(T/f.T)))
	if math.Abs(g.At(T)-want) > 1e-8 {
		t.Errorf("G at %g K: %g, want %g", T, g.At(T), want)
	}
	const dP = 1e8
	if got := Melting(f, dP).At(T) - g.At(T); math.Abs(got+f.V*dP) > 1e-9 {
		t.Errorf("0.1 GPa changes G by %g, want %g", got, -f.V*dP)
	}
	// Clapeyron: the melting point rises by V·T/H per pascal. Yoder 1952, J. Geol.
	// 60, 364–374 (from memory): 12.97 K/kbar for diopside; V was derived from it.
	lo, hi := f.T, f.T+100
	for k := 0; k < 60; k++ {
		m := (lo + hi) / 2
		if Melting(f, dP).At(m) < 0 {
			lo = m
		} else {
			hi = m
		}
	}
	if rise := lo - f.T; math.Abs(rise-12.97) > 0.3 {
		t.Errorf("melting point rises %g K in the first kbar, measured 12.97", rise)
	}
}

// meltingPoint is where a solid's standard Gibbs energy is that of its liquid, by
// bisection.
func meltingPoint(f Fusion, dP float64) float64 {
	g := Melting(f, dP)
	lo, hi := 0.3*f.T, 3*f.T
	for k := 0; k < 80; k++ {
		if m := (lo + hi) / 2; g.At(m) < 0 {
			lo = m
		} else {
			hi = m
		}
	}
	return lo
}

// Melting under pressure: the slope at the start is Clapeyron's, V falls as it is
// told, and a melting curve of Simon and Glatzel is met at every pressure.
func TestMeltingUnderPressure(t *testing.T) {
	f := Fusion{T: 1664.65, H: 138100, Cp: 86}
	const slope = 12.97e-8 // K/Pa: diopside, Yoder 1952, J. Geol. 60, 364–374 (from memory)
	f.V = Clapeyron(f, slope)
	const h = 1e6
	if got := (meltingPoint(f, h) - meltingPoint(f, -h)) / (2 * h); math.Abs(got-slope) > 1e-5*slope {
		t.Errorf("initial slope %g K/Pa, want %g", got, slope)
	}
	g := f
	g.VP = -f.V / 10e9 // nothing is left of ΔV at 10 GPa: there the curve has its top
	top := meltingPoint(g, 10e9)
	if meltingPoint(g, 9.9e9) > top || meltingPoint(g, 10.1e9) > top || !(meltingPoint(g, 5e9) < meltingPoint(f, 5e9)) {
		t.Error("a change of volume that falls to nothing makes no maximum of the melting curve")
	}
	// forsterite: an initial slope of 5.17 K/kbar (Ohtani & Kumazawa 1981, Phys. Earth
	// Planet. Inter. 27, 32–38, derived), which a = T/(c·slope) gives to any c
	c := 3.7
	s := Fusion{T: 2163, H: 114000, Cp: 70, Curve: &SimonGlatzel{A: 2163 / (c * 5.17e-8), C: c}}
	for _, P := range []float64{0, 1e5, 1e9, 5e9, 12e9} {
		want := 2163 * math.Pow(1+P/s.Curve.A, 1/c)
		if got := meltingPoint(s, P); math.Abs(got-want) > 1e-9 {
			t.Errorf("%g GPa: melts at %.10f K, the curve says %.10f", P/1e9, got, want)
		}
	}
	if got := (meltingPoint(s, h) - 2163) / h; math.Abs(got-5.17e-8) > 1e-3*5.17e-8 {
		t.Errorf("initial slope %g K/Pa", got)
	}
}

// A compound's congruent melting point is met exactly whatever the liquid is.
func TestCompoundMelting(t *testing.T) {
	liquid := NewLiquid(ternary.Components{}, Mixing{
		Pairs:   []Pair{{0, 1, []TFunc{{A: -9000, B: 2}, {A: 4000}}}, {1, 2, []TFunc{{A: 7000}}}},
		Ternary: [3]TFunc{{A: 5000}, {}, {B: -3}},
	})
	for _, c := range [][3]float64{{1, 1, 0}, {2, 1, 3}, {0, 1, 2}} {
		f := Fusion{T: 1400, H: 60000, Cp: 20}
		g, err := CompoundMelting(liquid, c, f, 0)
		if err != nil {
			t.Fatal(err)
		}
		p := (&Phase{Members: []EndMember{{C: c, G: g}}}).Prepare()
		x, _ := ternary.Normalize(c)
		y := [3]float64(x)
		var q Potentials
		liquid.Potentials(&y, f.T, &q)
		d := p.Drive(&q.Mu, f.T)
		if math.Abs(d.D) > 1e-8 {
			t.Errorf("%v: driving force %g at its melting point", c, d.D)
		}
		// the liquid minus the solid has the entropy of fusion
		s := -d.S
		for i := range c {
			if c[i] > 0 {
				s -= c[i] * q.DT[i]
			}
		}
		if want := f.H / f.T; math.Abs(s-want) > 1e-8 {
			t.Errorf("%v: entropy of fusion %g, want %g", c, s, want)
		}
	}
	if _, err := CompoundMelting(liquid, [3]float64{1, -1, 0}, Fusion{T: 1000, H: 1}, 0); err == nil {
		t.Error("no error for a compound outside the triangle")
	}
}

// Graphite and diamond: −2.9 kJ/mol from diamond to graphite at 25 °C and 1 bar
// (common practice). The pair's heats and entropies: diamond 1.895 kJ/mol above
// graphite; 2.38 against 5.74 J/(mol K) (handbook tables, from memory); volumes
// 3.417 and 5.298 cm³/mol (from memory), which put their equilibrium at 25 °C
// between 1.4 and 1.7 GPa as published (from memory).
func TestGraphiteDiamond(t *testing.T) {
	const T = 298.15
	graphite := TFunc{}
	H, S, V := 1895.0, 2.38-5.74, (3.417-5.298)*1e-6
	diamond := func(dP float64) TFunc { return Reaction([]TFunc{graphite}, []float64{1}, H, S, V, dP) }
	if d := diamond(0).At(T); math.Abs(d-2900) > 50 {
		t.Errorf("diamond lies %g J/mol above graphite, known 2900", d)
	}
	if P := -diamond(0).At(T) / V; P < 1.4e9 || P > 1.7e9 {
		t.Errorf("equilibrium at %g GPa", P/1e9)
	}
	// the same pair as a transition at the temperature where the two would meet
	tr := H / S
	if d := Transition(graphite, tr, H, V, 0).At(T) - diamond(0).At(T); math.Abs(d) > 1e-9 {
		t.Errorf("transition and reaction differ by %g", d)
	}
}

func TestReaction(t *testing.T) {
	a, b := TFunc{A: 100, B: 2}, TFunc{A: -50, C: 0.1}
	g := Reaction([]TFunc{a, b}, []float64{2, -1}, 1000, 3, 1e-6, 1e6)
	T := 700.0
	want := 2*a.At(T) - b.At(T) + 1000 - 3*T + 1
	if math.Abs(g.At(T)-want) > 1e-9 {
		t.Errorf("G = %g, want %g", g.At(T), want)
	}
}

// A symmetric regular solution: critical temperature W/2R, and below it the two
// forms of the closed form W(1 − 2y) = RT ln((1−y)/y).
func TestRegularSolution(t *testing.T) {
	const W = 20000.0
	p := (&Phase{Members: []EndMember{{C: ternary.Apex(0)}, {C: ternary.Apex(1)}}, Mixing: Mixing{Pairs: []Pair{{0, 1, []TFunc{{A: W}}}}}}).Prepare()
	Tc := W / (2 * ternary.R)
	half := [3]float64{0.5, 0.5}
	if p.ConvexAt(half, Tc*(1-1e-9)) || !p.ConvexAt(half, Tc*(1+1e-9)) {
		t.Errorf("the middle does not turn convex at W/2R = %g K", Tc)
	}
	if a := p.ConvexAbove(); a < Tc || a > Tc*convexMargin*convexMargin*1.001 {
		t.Errorf("convex above %g K, critical temperature %g", a, Tc)
	}
	for _, T := range []float64{0.5 * Tc, 0.8 * Tc, 0.95 * Tc, 0.99 * Tc, 0.999 * Tc} {
		mu := [3]float64{}
		m := p.Maxima(&mu, T)
		if len(m) != 2 {
			t.Fatalf("%d forms at %g of the critical temperature", len(m), T/Tc)
		}
		y := math.Min(m[0].Y[0], m[1].Y[0])
		if miss := W*(1-2*y) - ternary.R*T*math.Log((1-y)/y); math.Abs(miss) > 1e-6 {
			t.Errorf("T/Tc = %g: the closed form is missed by %g J/mol at y = %.10f", T/Tc, miss, y)
		}
		if math.Abs(m[0].D-m[1].D) > 1e-9 {
			t.Errorf("the two forms of a symmetric gap differ by %g J/mol", m[0].D-m[1].D)
		}
	}
}

// On an edge and at an apex of its composition a solution is as convex as it is a
// trace away from there: what is absent does not count.
func TestConvexWithoutAMember(t *testing.T) {
	p := (&Phase{Members: []EndMember{{C: ternary.Apex(0)}, {C: ternary.Apex(1)}, {C: ternary.Apex(2)}},
		Mixing: Mixing{Pairs: []Pair{{0, 1, []TFunc{{A: 20000}}}, {0, 2, []TFunc{{A: 9000}}}, {1, 2, []TFunc{{A: -4000}}}}}}).Prepare()
	const trace = 1e-9
	yes, no := 0, 0
	for absent := range 3 {
		for _, T := range []float64{300, 700, 1100, 1300} {
			for f := 0.05; f < 1; f += 0.1 {
				var edge, near [3]float64
				edge[(absent+1)%3], edge[(absent+2)%3] = f, 1-f
				for k := range near {
					near[k] = edge[k] * (1 - trace)
				}
				near[absent] = trace
				want := p.ConvexAt(near, T)
				if want {
					yes++
				} else {
					no++
				}
				if p.ConvexAt(edge, T) != want {
					t.Errorf("%v at %g K: convex %v, with a trace of the third %v", edge, T, !want, want)
				}
			}
		}
		if !p.ConvexAt([3]float64(ternary.Apex(absent)), 300) {
			t.Errorf("a pure end-member %d is not convex", absent)
		}
	}
	if yes < 10 || no < 10 {
		t.Errorf("%d convex and %d not: too few of one kind", yes, no)
	}
}
