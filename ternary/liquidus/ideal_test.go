package liquidus_test

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

// The system biphenyl–bibenzyl–naphthalene, which its authors found nearly ideal.
// Melting points and heats of fusion: Lee & Warner 1935, J. Am. Chem. Soc. 57,
// 318–321, table I (cal/mol, × 4.184); heat of fusion of bibenzyl read as 5390
// from a worn print.
var (
	leeWarnerT = [3]float64{69.0 + 273.15, 51.25 + 273.15, 80.05 + 273.15}
	leeWarnerH = [3]float64{4235 * 4.184, 5390 * 4.184, 4495 * 4.184}
)

// idealEutectic solves Σ exp(−(ΔH/R)(1/T − 1/Tm)) = 1 over the components
// present: the eutectic of an ideal liquid is where its saturated fractions sum
// to one.
func idealEutectic(tm, dH [3]float64, present [3]bool) (T float64, x ternary.Composition) {
	fractions := func(T float64) (x ternary.Composition, sum float64) {
		for i := range x {
			if present[i] {
				x[i] = math.Exp(-dH[i] / ternary.R * (1/T - 1/tm[i]))
				sum += x[i]
			}
		}
		return x, sum
	}
	lo, hi := 1.0, math.Max(tm[0], math.Max(tm[1], tm[2]))
	for hi-lo > 1e-12*hi {
		mid := (lo + hi) / 2
		if _, sum := fractions(mid); sum < 1 {
			lo = mid
		} else {
			hi = mid
		}
	}
	x, _ = fractions(lo)
	return lo, x
}

// Every eutectic of an ideal system has a closed form.
func TestIdealEutectics(t *testing.T) {
	systems := []struct {
		name   string
		tm, dH [3]float64
	}{
		{"biphenyl, bibenzyl, naphthalene", leeWarnerT, leeWarnerH},
		{"unlike melting points", [3]float64{600, 1100, 1700}, [3]float64{20000, 15000, 50000}},
		{"one alike pair", [3]float64{900, 900, 1400}, [3]float64{18000, 18000, 30000}},
	}
	for _, s := range systems {
		t.Run(s.name, func(t *testing.T) {
			p := whole(t, trial.Ideal(s.tm, s.dH), liquidus.Options{})
			if len(p.Nodes) != 4 || len(p.Curves) != 3 || len(p.Fields) != 3 {
				t.Fatalf("%d nodes, %d curves, %d fields", len(p.Nodes), len(p.Curves), len(p.Fields))
			}
			for _, n := range p.Nodes {
				present := [3]bool{true, true, true}
				if n.Edge >= 0 {
					present[n.Edge] = false
				}
				T, x := idealEutectic(s.tm, s.dH, present)
				if math.Abs(n.T-T) > 1e-8 || n.Liquid.Distance(x) > 1e-10 {
					t.Errorf("%s: %.8f K at %v, closed form %.8f K at %v", n.ID, n.T, n.Liquid, T, x)
				}
				if n.Kind != liquidus.Eutectic {
					t.Errorf("%s is a %s", n.ID, n.Kind)
				}
			}
		})
	}
}

// The same in numbers worked out once by hand from the same inputs, so that a slip
// in the closed form above would show.
func TestIdealByHand(t *testing.T) {
	want := map[int]struct {
		C float64 // °C
		x ternary.Composition
	}{
		-1: {18.86, ternary.Composition{0.343, 0.396, 0.261}},
		0:  {33.70, ternary.Composition{0, 0.620, 0.380}},
		1:  {39.89, ternary.Composition{0.560, 0, 0.440}},
		2:  {29.80, ternary.Composition{0.447, 0.553, 0}},
	}
	for _, n := range whole(t, trial.Ideal(leeWarnerT, leeWarnerH), liquidus.Options{}).Nodes {
		w, ok := want[n.Edge]
		if !ok || math.Abs(n.T-273.15-w.C) > 0.01 || n.Liquid.Distance(w.x) > 1.5e-3 {
			t.Errorf("%s: %.2f °C at %.3f, want %.2f at %.3f", n.ID, n.T-273.15, n.Liquid, w.C, w.x)
		}
		delete(want, n.Edge)
	}
	if len(want) > 0 {
		t.Errorf("not found: %v", want)
	}
}

// Naphthalene–biphenyl is close to ideal: the computed eutectic against the
// measured one, 312.8 ± 0.1 K at x(naphthalene) = 0.445 ± 0.001 (Lee & Warner
// 1935, as evaluated in the IUPAC–NIST Solubility Database, SRD 106), and against
// measured liquidus points of the same work. Half a kelvin is what a liquid
// taken as ideal, with heats of fusion of 1935, may miss.
func TestIdealAgainstMeasured(t *testing.T) {
	const tol = 0.6 // K
	sys := trial.Ideal(leeWarnerT, leeWarnerH)
	p := whole(t, sys, liquidus.Options{})
	seen := false
	for _, n := range p.Nodes {
		if n.Edge == 1 {
			seen = true
			if math.Abs(n.T-312.8) > tol || math.Abs(n.Liquid[2]-0.445) > 0.01 {
				t.Errorf("eutectic %.2f K at %.4f, measured 312.8 K at 0.445", n.T, n.Liquid[2])
			}
		}
	}
	if !seen {
		t.Error("no eutectic on the edge biphenyl–naphthalene")
	}
	surf := surface(t, sys)
	for _, m := range []struct {
		x, T  float64 // mole fraction of naphthalene, K
		solid int
	}{
		{0.102, 336.7, 0}, {0.194, 331.0, 0}, {0.343, 321.0, 0},
		{0.474, 315.7, 2}, {0.500, 318.6, 2}, {0.600, 326.8, 2}, {0.700, 334.0, 2}, {0.770, 339.3, 2},
	} {
		T, primary := surf.Liquidus(ternary.Composition{1 - m.x, 0, m.x})
		if math.Abs(T-m.T) > 2*tol || primary.Phase != m.solid {
			t.Errorf("x = %.3f: %.2f K and solid %d, measured %.1f K and %d", m.x, T, primary.Phase, m.T, m.solid)
		}
	}
}
