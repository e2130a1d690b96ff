package liquidus_test

import (
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/liquidus"
)

const (
	dense = 60 // intervals per side of the lattice
	// outlineNear is how far, in sides of the triangle, an outline's chords may
	// stray from the curve itself.
	outlineNear = 1e-4
)

// Every liquid of a dense lattice lies in a field of its own primary phase, and
// in no other, unless it is closer to a boundary than an outline is exact.
func TestFieldsAgainstLattice(t *testing.T) {
	for _, s := range subjects(t) {
		t.Run(s.name, func(t *testing.T) {
			t.Parallel()
			p := whole(t, s.sys, liquidus.Options{})
			surf := surface(t, s.sys)
			counted := 0
			for _, x := range lattice(dense) {
				if x[0]*x[1]*x[2] == 0 { // a side belongs to the outlines: step inside
					x = x.Lerp(ternary.Composition{1. / 3, 1. / 3, 1. / 3}, 1e-3)
				}
				T, primary := surf.Liquidus(x)
				if math.IsInf(T, -1) {
					t.Errorf("nothing crystallises at %v", x)
				}
				in, near := []int{}, math.Inf(1)
				for i := range p.Fields {
					if holds(&p.Fields[i], x) {
						in = append(in, p.Fields[i].Solid)
					}
					if p.Fields[i].Solid == primary.Phase {
						near = math.Min(near, toOutline(&p.Fields[i], x))
					}
				}
				if len(in) == 1 && in[0] == primary.Phase {
					counted++
				} else if near > outlineNear {
					t.Errorf("%v: primary is %d, fields are %v, %.1e from its outline", x, primary.Phase, in, near)
				}
			}
			if counted < 1800 {
				t.Errorf("only %d liquids of 1891 in their fields", counted)
			}
		})
	}
}

// The shares of the fields sum to one in both bases.
func TestAreasSumToOne(t *testing.T) {
	for _, s := range subjects(t) {
		p := whole(t, s.sys, liquidus.Options{})
		for _, b := range []ternary.Basis{ternary.Mole, ternary.Mass} {
			sum := 0.0
			for i := range p.Fields {
				a := p.Fields[i].AreaFraction(s.sys.Components, b)
				if a <= 0 {
					t.Errorf("%s: field %d has a share of %g", s.name, i, a)
				}
				sum += a
			}
			if math.Abs(sum-1) > 1e-9 {
				t.Errorf("%s: shares in %s sum to %.12f", s.name, b.Unit(), sum)
			}
		}
	}
}

// massShare is a field's share by mass, integrated over the mole triangle: the
// map from mole to mass fractions w_i = m_i x_i / Σ m x has the determinant
// m0·m1·m2 / (Σ m x)³. The midpoint rule over n² cells errs only at the cells
// that the outline cuts, on either side by turns; half of their sum is a bound.
func massShare(f *liquidus.Field, m [3]float64, n int) (share, bound float64) {
	total := 0.0
	reach := 1 / (math.Sqrt(3) * float64(n)) // from a cell's middle to its corners
	cell := func(a, b, c float64) {
		k := float64(3 * n)
		x := ternary.Composition{a / k, b / k, c / k}
		w := m[0]*x[0] + m[1]*x[1] + m[2]*x[2]
		v := m[0] * m[1] * m[2] / (w * w * w)
		total += v
		if holds(f, x) {
			share += v
		}
		if toOutline(f, x) < reach {
			bound += v / 2
		}
	}
	for i := 0; i < n; i++ {
		for j := 0; i+j < n; j++ {
			k := n - 1 - i - j
			cell(float64(3*i+1), float64(3*j+1), float64(3*k+1))
			if k > 0 {
				cell(float64(3*i+2), float64(3*j+2), float64(3*k-1))
			}
		}
	}
	return share / total, bound / total
}

// Areas by mass follow from areas by mole, and so do the nodes' compositions.
func TestMassAgainstMole(t *testing.T) {
	const n = 60
	for _, s := range subjects(t) {
		cs := s.sys.Components
		m := cs.MolarMasses()
		p := whole(t, s.sys, liquidus.Options{})
		for i := range p.Fields {
			f := &p.Fields[i]
			want, tol := massShare(f, m, n)
			got := f.AreaFraction(cs, ternary.Mass)
			if math.Abs(got-want) > tol {
				t.Errorf("%s field %d: share by mass %.5f, integrated %.5f ± %.5f", s.name, i, got, want, tol)
			}
		}
		for _, nd := range p.Nodes {
			w := cs.Fractions(nd.Liquid, ternary.Mass)
			x, err := cs.Composition(w, ternary.Mass)
			if err != nil || x.Distance(nd.Liquid) > 1e-14 {
				t.Errorf("%s %s: %v came back as %v, %v", s.name, nd.ID, nd.Liquid, x, err)
			}
		}
	}
}
