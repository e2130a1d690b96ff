package systems

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// The fitted mixing terms of the built-in files are made here, by weighted linear
// least squares: every solid that coexists with a liquid at a measured point
// gives one equation, excess potential = G°(solid) − RT ln x, which is linear
// in the terms. The weight of an equation is what the uncertainties of the
// point's temperature and composition are worth in it.

// measuredPoint is a liquid that coexists with pure solids.
type measuredPoint struct {
	amounts [3]float64 // wt% or mol% of the components
	basis   ternary.Basis
	T       float64 // °C
	solids  []int   // components that crystallise
	dT, dX  float64 // uncertainties: °C, % of a component
	source  string
}

// term is a coefficient to be fitted: order k of the pair i, j; or, with i = −1,
// one coefficient for all three ternary terms.
type term struct{ i, j, k int }

// unit is a liquid in which the term is 1 J/mol and all else is ideal.
func (p term) unit() *gibbs.Phase {
	one := gibbs.TFunc{A: 1}
	if p.i < 0 {
		return gibbs.NewLiquid(ternary.Components{}, gibbs.Mixing{Ternary: [3]gibbs.TFunc{one, one, one}})
	}
	l := make([]gibbs.TFunc, p.k+1)
	l[p.k] = one
	return gibbs.NewLiquid(ternary.Components{}, gibbs.Mixing{Pairs: []gibbs.Pair{{I: p.i, J: p.j, L: l}}})
}

// fitCase is one fit of terms of a built-in file, other terms being known.
type fitCase struct {
	name   string
	terms  []term
	known  []term // taken at their value in the file
	points []measuredPoint
}

var diAn = measuredPoint{[3]float64{58, 0, 42}, ternary.Mass, 1274, []int{0, 2}, 2, 1,
	"Bowen 1915, Am. J. Sci. 40, 161–185; Osborn 1942, Am. J. Sci. 240, 751–788"}

var fitCases = []fitCase{
	{"di-ab-an", []term{{0, 2, 0}, {0, 2, 1}}, nil, []measuredPoint{diAn}},
	{"di-an-fo", []term{{0, 1, 0}, {0, 1, 1}}, nil, []measuredPoint{
		{[3]float64{58, 42, 0}, ternary.Mass, 1274, []int{0, 1}, 2, 1, diAn.source}}},
	{"di-an-fo", []term{{0, 2, 0}, {1, 2, 0}, {-1, 0, 0}}, []term{{0, 1, 0}, {0, 1, 1}}, []measuredPoint{
		{[3]float64{88, 0, 12}, ternary.Mass, 1387, []int{0, 2}, 4, 1,
			"Bowen 1914, Am. J. Sci. 38, 207–264 (from memory); not strictly binary, hence the wide uncertainties"},
		{[3]float64{49, 43.5, 7.5}, ternary.Mass, 1270, []int{0, 1, 2}, 3, 1,
			"Osborn & Tait 1952, Am. J. Sci. Bowen vol., 413–433"}}},
	{"lif-naf-kf", []term{{0, 1, 0}, {0, 1, 1}}, nil, []measuredPoint{
		{[3]float64{61, 39, 0}, ternary.Mole, 649, []int{0, 1}, 5, 1,
			"Janz & Tomkins 1981, NSRDS-NBS 61 Part IV, system 76"}}},
	{"lif-naf-kf", []term{{0, 2, 0}, {0, 2, 1}}, nil, []measuredPoint{
		{[3]float64{50, 0, 50}, ternary.Mole, 492, []int{0, 2}, 3, 1,
			"Janz & Tomkins 1981, NSRDS-NBS 61 Part IV, system 77"}}},
	{"lif-naf-kf", []term{{1, 2, 0}, {1, 2, 1}}, nil, []measuredPoint{
		{[3]float64{0, 40, 60}, ternary.Mole, 710, []int{1, 2}, 6, 1,
			"Bergman & Dergunov 1941, in Thoma (ed.) 1959, ORNL-2548"}}},
}

// inFile is the value of a term in a file, J/mol, and its standard error.
func inFile(t *testing.T, f *File, p term) (value, err float64) {
	if p.i < 0 {
		if len(f.Liquid.Ternary) == 0 {
			t.Fatalf("%s has no ternary terms", f.Name)
		}
		q := f.Liquid.Ternary[0].A
		return 1000 * q.Value, 1000 * q.Uncertainty
	}
	for _, pair := range f.Liquid.Pairs {
		if pair.Of[0] != f.Components[p.i].Symbol || pair.Of[1] != f.Components[p.j].Symbol {
			continue
		}
		for _, term := range pair.Terms {
			if term.Order == p.k {
				return 1000 * term.A.Value, 1000 * term.A.Uncertainty
			}
		}
	}
	t.Fatalf("%s has no term %v", f.Name, p)
	return 0, 0
}

func TestFittedTermsAreTheFit(t *testing.T) {
	checked := 0
	for _, c := range fitCases {
		f, err := Builtin(c.name)
		if err != nil {
			t.Fatal(err)
		}
		value, sigma, worst := c.solve(t, f)
		t.Logf("%s: largest misfit %.1f of its uncertainty", c.name, worst)
		for n, p := range c.terms {
			got, se := inFile(t, f, p)
			t.Logf("  term %v: %.0f ± %.0f J/mol", p, value[n], sigma[n])
			if math.Abs(got-value[n]) > 6 {
				t.Errorf("%s: term %v is %.1f J/mol in the file, %.1f by the fit", c.name, p, got, value[n])
			}
			if se < 0.9*sigma[n] || se > 1.2*sigma[n]+60 {
				t.Errorf("%s: term %v has standard error %.1f J/mol in the file, %.1f by the fit", c.name, p, se, sigma[n])
			}
			checked++
		}
	}
	if checked != 13 {
		t.Errorf("%d terms checked, want 13", checked)
	}
}

// solve fits the terms; worst is the largest misfit in units of its uncertainty.
func (c fitCase) solve(t *testing.T, f *File) (value, sigma []float64, worst float64) {
	sys, err := f.AtReference(nil)
	if err != nil {
		t.Fatal(err)
	}
	var rows, rhs []float64
	for _, p := range c.points {
		x, err := sys.Components.Composition(p.amounts, p.basis)
		if err != nil {
			t.Fatal(err)
		}
		T := p.T + ternary.ZeroCelsius
		for _, s := range p.solids {
			g := standard(t, sys, s)
			r := g.At(T) - ternary.R*T*math.Log(x[s])
			for _, k := range c.known {
				v, _ := inFile(t, f, k)
				r -= v * k.unit().Column(x)[s].A
			}
			moved := p.amounts
			moved[s] += p.dX
			y, _ := sys.Components.Composition(moved, p.basis)
			u := math.Hypot((g.Slope(T)-ternary.R*math.Log(x[s]))*p.dT, ternary.R*T*math.Log(y[s]/x[s]))
			for _, k := range c.terms {
				rows = append(rows, k.unit().Column(x)[s].A/u)
			}
			rhs = append(rhs, r/u)
		}
	}
	m, n := len(rhs), len(c.terms)
	a, b := mat.NewDense(m, n, rows), mat.NewVecDense(m, rhs)
	var v, res mat.VecDense
	if err := v.SolveVec(a, b); err != nil {
		t.Fatal(err)
	}
	res.MulVec(a, &v)
	res.SubVec(b, &res)
	var ata, cov mat.Dense
	ata.Mul(a.T(), a)
	if err := cov.Inverse(&ata); err != nil {
		t.Fatal(err)
	}
	for k := range c.terms {
		value = append(value, v.AtVec(k))
		sigma = append(sigma, math.Sqrt(cov.At(k, k)))
	}
	for k := 0; k < m; k++ {
		worst = math.Max(worst, math.Abs(res.AtVec(k)))
	}
	return value, sigma, worst
}

// standard is the Gibbs energy of the pure solid of component i.
func standard(t *testing.T, sys *gibbs.System, i int) gibbs.TFunc {
	for _, s := range sys.Solids {
		for _, m := range s.Members {
			if m.C == ([3]float64(ternary.Apex(i))) {
				return m.G
			}
		}
	}
	t.Fatalf("no solid of component %d", i)
	return gibbs.TFunc{}
}
