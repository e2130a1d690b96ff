package systems

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// The fits of the silica-bearing files. Their points include compounds, second
// liquids, solid solutions and invariant points without a composition, so the
// misfits are taken from the compiled file itself: a meeting is a difference of
// potentials, whose zero is equilibrium, and its weight is what the uncertainties
// of its temperature and composition are worth in it. The test asks whether
// another step of least squares would leave the committed coefficients where they
// are, and whether their standard errors are those of the fit.

// meeting is a liquid with a solid or with a second liquid.
type meeting struct {
	what   string
	liquid [3]float64 // wt%
	T      float64    // °C
	solid  string     // symbol; empty for a second liquid
	member int        // of the solid that is in equilibrium, at the fractions y
	y      [3]float64 // of a solid solution, wt% of its members
	second [3]float64 // wt%
	of     int        // component whose potentials in the two liquids are equal
	dT, dX float64    // uncertainties: °C, wt% of the component moved
	moved  int
	dX2    float64 // of the same component in the second liquid
}

// misfit is the difference of potentials of a meeting in a system, J/mol.
func (m meeting) misfit(t *testing.T, sys *gibbs.System) float64 {
	t.Helper()
	mu := potentials(t, sys, m.liquid, m.T)
	if m.solid == "" {
		return mu[m.of] - potentials(t, sys, m.second, m.T)[m.of]
	}
	T := m.T + ternary.ZeroCelsius
	p := solid(t, sys, m.solid)
	d := -p.Members[m.member].G.At(T)
	for i, n := range p.Members[m.member].C {
		if n != 0 {
			d += n * mu[i]
		}
	}
	if len(p.Members) > 1 {
		var y [3]float64
		sum := 0.0
		for k, member := range p.Members {
			y[k] = m.y[k] / member.Formula.MolarMass()
			sum += y[k]
		}
		for k := range y {
			y[k] /= sum
		}
		d -= p.Column(y)[m.member].At(T) - p.Members[m.member].G.At(T)
	}
	return d
}

// worth is what the uncertainties of a meeting are worth in its misfit.
func (m meeting) worth(t *testing.T, sys *gibbs.System) float64 {
	t.Helper()
	const h = 0.01
	change := func(dT, dX, dX2 float64) float64 {
		n := m
		n.T += dT
		n.liquid = enriched(n.liquid, n.moved, dX)
		if n.dX2 > 0 {
			n.second = enriched(n.second, n.moved, dX2)
		}
		return n.misfit(t, sys)
	}
	u := (change(h, 0, 0) - change(-h, 0, 0)) / (2 * h) * m.dT
	v := (change(0, h, 0) - change(0, -h, 0)) / (2 * h) * m.dX
	w := (change(0, 0, h) - change(0, 0, -h)) / (2 * h) * m.dX2
	return math.Hypot(math.Hypot(u, v), w)
}

// enriched is a composition (wt%) with d more of component i and the others in
// the same proportion to one another.
func enriched(wt [3]float64, i int, d float64) [3]float64 {
	sum := wt[0] + wt[1] + wt[2]
	for k := range wt {
		if k != i {
			wt[k] *= (sum - wt[i] - d) / (sum - wt[i])
		}
	}
	wt[i] += d
	return wt
}

// potentials are those of the components in a liquid, with an absent component
// at −Inf.
func potentials(t *testing.T, sys *gibbs.System, wt [3]float64, tC float64) (mu [3]float64) {
	t.Helper()
	x, err := sys.Components.Composition(wt, ternary.Mass)
	if err != nil {
		t.Fatal(err)
	}
	T := tC + ternary.ZeroCelsius
	for i, c := range sys.Liquid.Column(x) {
		mu[i] = c.At(T)
		if x[i] == 0 {
			mu[i] = math.Inf(-1)
		}
	}
	return mu
}

// without is an invariant point of three pure solids of which the temperature
// alone is published.
type without struct {
	solids [3]string
	T, dT  float64    // °C
	start  [3]float64 // where the search begins, wt%
}

// find returns the liquid and the temperature (K) at which the three solids
// meet it, by Newton's method in two fractions and the temperature.
func (w without) find(t *testing.T, sys *gibbs.System) (ternary.Composition, float64) {
	t.Helper()
	x, err := sys.Components.Composition(w.start, ternary.Mass)
	if err != nil {
		t.Fatal(err)
	}
	v := [3]float64{x[0], x[1], w.T + ternary.ZeroCelsius}
	misfits := func(v [3]float64) (d [3]float64) {
		y := ternary.Composition{v[0], v[1], 1 - v[0] - v[1]}
		for k, s := range w.solids {
			m := solid(t, sys, s).Members[0]
			d[k] = -m.G.At(v[2])
			for i, c := range sys.Liquid.Column(y) {
				if m.C[i] != 0 {
					d[k] += m.C[i] * c.At(v[2])
				}
			}
		}
		return d
	}
	for range 100 {
		f := misfits(v)
		j := mat.NewDense(3, 3, nil)
		for c, h := range [3]float64{1e-7, 1e-7, 1e-3} {
			up, down := v, v
			up[c] += h
			down[c] -= h
			fu, fd := misfits(up), misfits(down)
			for r := range f {
				j.Set(r, c, (fu[r]-fd[r])/(2*h))
			}
		}
		var s mat.VecDense
		if err := s.SolveVec(j, mat.NewVecDense(3, f[:])); err != nil {
			t.Fatalf("%v: %v", w.solids, err)
		}
		shorten := 1.0 // keep the fractions positive and the steps small
		for c, most := range [3]float64{0.05, 0.05, 40} {
			shorten = math.Min(shorten, most/math.Max(math.Abs(s.AtVec(c)), 1e-300))
		}
		for c := range v {
			v[c] -= shorten * s.AtVec(c)
		}
		v[0], v[1] = math.Max(v[0], 1e-6), math.Max(v[1], 1e-6)
		if math.Abs(s.AtVec(2)) < 1e-7 && shorten == 1 {
			return ternary.Composition{v[0], v[1], 1 - v[0] - v[1]}, v[2]
		}
	}
	t.Fatalf("%v: no meeting with the liquid found", w.solids)
	return ternary.Composition{}, 0
}

// coefficient is one fitted number of a file; several quantities may share it.
type coefficient struct {
	what string
	of   func(f *File) []*Quantity
}

// pairTerm is the coefficient a (or b) of order k of a liquid pair.
func pairTerm(i, j string, k int, b bool) coefficient {
	what := i + "–" + j + " " + string(rune('0'+k)) + map[bool]string{false: "a", true: "b"}[b]
	return coefficient{what, func(f *File) []*Quantity {
		for p := range f.Liquid.Pairs {
			if f.Liquid.Pairs[p].Of != [2]string{i, j} {
				continue
			}
			for n := range f.Liquid.Pairs[p].Terms {
				if term := &f.Liquid.Pairs[p].Terms[n]; term.Order == k {
					if b {
						return []*Quantity{&term.B}
					}
					return []*Quantity{&term.A}
				}
			}
		}
		return nil
	}}
}

// ternaryTerms is one coefficient for the ternary terms on these components.
func ternaryTerms(on ...string) coefficient {
	return coefficient{"ternary", func(f *File) (q []*Quantity) {
		for n := range f.Liquid.Ternary {
			for _, s := range on {
				if f.Liquid.Ternary[n].On == s {
					q = append(q, &f.Liquid.Ternary[n].A)
				}
			}
		}
		return q
	}}
}

// reactionEntropy is the entropy of the reaction that forms a solid.
func reactionEntropy(symbol string) coefficient {
	return coefficient{"entropy of " + symbol, func(f *File) []*Quantity {
		for i := range f.Solids {
			if f.Solids[i].Symbol == symbol {
				return []*Quantity{&f.Solids[i].Members[0].State.S}
			}
		}
		return nil
	}}
}

// silicaFit is one fit of coefficients of a file, the others being as they are.
type silicaFit struct {
	file     string
	terms    []coefficient
	meetings []meeting
	without  []without
}

// misfits are those of all points, each divided by its worth.
func (c silicaFit) misfits(t *testing.T, f *File, worth []float64) []float64 {
	t.Helper()
	sys, err := f.AtReference(nil)
	if err != nil {
		t.Fatal(err)
	}
	var d []float64
	for _, m := range c.meetings {
		d = append(d, m.misfit(t, sys)/worth[len(d)])
	}
	for _, w := range c.without {
		_, T := w.find(t, sys)
		d = append(d, (T-ternary.ZeroCelsius-w.T)/w.dT)
	}
	return d
}

// step is what one more step of least squares would add to the coefficients, in
// their units, with their standard errors and the misfits before it.
func (c silicaFit) step(t *testing.T, f *File) (step, sigma, misfits []float64) {
	t.Helper()
	sys, err := f.AtReference(nil)
	if err != nil {
		t.Fatal(err)
	}
	var worth []float64
	for _, m := range c.meetings {
		worth = append(worth, m.worth(t, sys))
	}
	misfits = c.misfits(t, f, worth)
	a := mat.NewDense(len(misfits), len(c.terms), nil)
	for k, term := range c.terms {
		g := f.Clone()
		const h = 0.01 // kJ/mol or J/(mol K)
		for _, q := range term.of(g) {
			q.Value += h
		}
		for r, v := range c.misfits(t, g, worth) {
			a.Set(r, k, (v-misfits[r])/h)
		}
	}
	var s mat.VecDense
	if err := s.SolveVec(a, mat.NewVecDense(len(misfits), append([]float64(nil), misfits...))); err != nil {
		t.Fatal(err)
	}
	var ata, cov mat.Dense
	ata.Mul(a.T(), a)
	if err := cov.Inverse(&ata); err != nil {
		t.Fatal(err)
	}
	for k := range c.terms {
		step = append(step, -s.AtVec(k))
		sigma = append(sigma, math.Sqrt(cov.At(k, k)))
	}
	return step, sigma, misfits
}

// foSilica turns MgO by weight on the join into wt% of forsterite and silica.
func foSilica(mgo float64) [3]float64 {
	fo := mgo * 140.693 / (2 * 40.304)
	return [3]float64{fo, 0, 100 - fo}
}

var silicaFits = []silicaFit{
	{"fo-an-silica",
		[]coefficient{pairTerm("Fo", "Silica", 0, false), pairTerm("Fo", "Silica", 0, true), pairTerm("Fo", "Silica", 1, false), pairTerm("Fo", "Silica", 2, false), reactionEntropy("En")},
		[]meeting{ // Bowen & Andersen 1914 and Greig 1927, from memory
			{what: "peritectic, Fo", liquid: foSilica(39), T: 1557, solid: "Fo", dT: 3, dX: 1, moved: 2},
			{what: "peritectic, En", liquid: foSilica(39), T: 1557, solid: "En", dT: 3, dX: 1, moved: 2},
			{what: "eutectic, En", liquid: foSilica(35), T: 1543, solid: "En", dT: 3, dX: 1, moved: 2},
			{what: "eutectic, Crs", liquid: foSilica(35), T: 1543, solid: "Crs", dT: 3, dX: 1, moved: 2},
			{what: "monotectic, Crs", liquid: foSilica(31), T: 1695, solid: "Crs", dT: 5, dX: 1, moved: 2},
			{what: "monotectic, Crs in the second liquid", liquid: foSilica(0.8), T: 1695, solid: "Crs", dT: 5, dX: 0.5, moved: 2},
			{what: "monotectic, two liquids", liquid: foSilica(31), T: 1695, second: foSilica(0.8), of: 0, dT: 5, dX: 1, moved: 2, dX2: 0.5},
		}, nil},
	{"fo-an-silica", []coefficient{pairTerm("An", "Silica", 0, false), pairTerm("An", "Silica", 1, false)},
		[]meeting{ // Osborn & Muan 1960, from memory
			{what: "eutectic, An", liquid: [3]float64{0, 52.5, 47.5}, T: 1368, solid: "An", dT: 5, dX: 1, moved: 1},
			{what: "eutectic, Trd", liquid: [3]float64{0, 52.5, 47.5}, T: 1368, solid: "Trd", dT: 5, dX: 1, moved: 2},
		}, nil},
	{"fo-an-silica", []coefficient{ternaryTerms("Silica")}, nil,
		[]without{ // Andersen 1915, from memory
			{[3]string{"Fo", "En", "An"}, 1260, 5, [3]float64{23, 59, 18}},
			{[3]string{"En", "An", "Trd"}, 1222, 5, [3]float64{18, 55, 27}},
		}},
	{"ab-or-silica", []coefficient{pairTerm("Ab", "Or", 0, false), pairTerm("Ab", "Or", 1, false)},
		[]meeting{ // Schairer 1950: liquid and feldspar of one composition
			{what: "minimum, Ab", liquid: [3]float64{65, 35, 0}, T: 1063, solid: "Afs", member: 0, y: [3]float64{65, 35}, dT: 3, dX: 2, moved: 1},
			{what: "minimum, Or", liquid: [3]float64{65, 35, 0}, T: 1063, solid: "Afs", member: 1, y: [3]float64{65, 35}, dT: 3, dX: 2, moved: 1},
		}, nil},
	{"ab-or-silica", []coefficient{pairTerm("Ab", "Silica", 0, false), pairTerm("Ab", "Silica", 1, false)},
		[]meeting{ // Schairer & Bowen 1956, from memory
			{what: "eutectic, Ab", liquid: [3]float64{68.5, 0, 31.5}, T: 1062, solid: "Afs", member: 0, y: [3]float64{1, 0}, dT: 3, dX: 1, moved: 2},
			{what: "eutectic, Trd", liquid: [3]float64{68.5, 0, 31.5}, T: 1062, solid: "Trd", dT: 3, dX: 1, moved: 2},
		}, nil},
	{"ab-or-silica", []coefficient{pairTerm("Or", "Silica", 0, false), pairTerm("Or", "Silica", 1, false)},
		[]meeting{ // Schairer & Bowen 1955, from memory
			{what: "eutectic, Or", liquid: [3]float64{0, 58, 42}, T: 990, solid: "Afs", member: 1, y: [3]float64{0, 1}, dT: 20, dX: 2, moved: 2},
			{what: "eutectic, Trd", liquid: [3]float64{0, 58, 42}, T: 990, solid: "Trd", dT: 20, dX: 2, moved: 2},
		}, nil},
}

func TestFitsWithSilica(t *testing.T) {
	for _, c := range silicaFits {
		f := open(t, c.file)
		step, sigma, misfits := c.step(t, f)
		n := 0
		for _, m := range c.meetings {
			t.Logf("%s, %s: misfit %+.2f of its uncertainty", c.file, m.what, misfits[n])
			n++
		}
		for _, w := range c.without {
			t.Logf("%s, %v: misfit %+.2f of its uncertainty", c.file, w.solids, misfits[n])
			n++
		}
		for k, term := range c.terms {
			q := term.of(f)
			if len(q) == 0 {
				t.Fatalf("%s has no %s", c.file, term.what)
			}
			t.Logf("%s, %s: %.4f, by the fit %.4f ± %.4f %s", c.file, term.what, q[0].Value, q[0].Value+step[k], sigma[k], q[0].Unit)
			if math.Abs(step[k]) > 0.006 {
				t.Errorf("%s, %s: %.4f in the file, %.4f by the fit", c.file, term.what, q[0].Value, q[0].Value+step[k])
			}
			if se := q[0].Uncertainty; se < 0.9*sigma[k] || se > 1.2*sigma[k]+0.06 {
				t.Errorf("%s, %s: standard error %.4f in the file, %.4f by the fit", c.file, term.what, se, sigma[k])
			}
		}
	}
}
