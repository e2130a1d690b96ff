package gibbs

import (
	"fmt"
	"math"
	"math/rand"
	"testing"

	"gonum.org/v1/gonum/diff/fd"

	"thalweg/ternary"
)

// modelCase is a phase with a mixing model of some kind.
type modelCase struct {
	name string
	p    *Phase
}

// modelCases makes phases of two and three end-members with every kind of
// mixing: sites, orders 0 to 4, all extensions, ternary terms, dependence on T.
func modelCases(seed int64) []modelCase {
	r := rand.New(rand.NewSource(seed))
	tf := func(scale float64) TFunc {
		return TFunc{A: scale * (2*r.Float64() - 1), B: scale / 1500 * (2*r.Float64() - 1), C: scale / 12000 * (2*r.Float64() - 1)}
	}
	member := func(k int) EndMember {
		m := EndMember{Symbol: fmt.Sprint(k), G: tf(30000)}
		m.C[k%3] = 1
		m.C[(k+1)%3] = math.Round(2 * r.Float64())
		return m
	}
	series := func(order int, scale float64) []TFunc {
		l := make([]TFunc, order+1)
		for k := range l {
			l[k] = tf(scale / float64(k+1))
		}
		return l
	}
	var out []modelCase
	add := func(name string, members int, m Mixing) {
		p := &Phase{Symbol: name, Mixing: m}
		for k := 0; k < members; k++ {
			p.Members = append(p.Members, member(k))
		}
		out = append(out, modelCase{name, p.Prepare()})
	}
	for order := 0; order <= 4; order++ {
		add(fmt.Sprintf("two members, order %d", order), 2, Mixing{Sites: 1, Pairs: []Pair{{0, 1, series(order, 8000)}}})
		for _, x := range []struct {
			name string
			ext  Extension
			odd  int
		}{{"Muggianu", Muggianu, 0}, {"Kohler", Kohler, 0}, {"Toop 0", Toop, 0}, {"Toop 1", Toop, 1}, {"Toop 2", Toop, 2}} {
			add(fmt.Sprintf("%s, order %d", x.name, order), 3, Mixing{Sites: 2, Extension: x.ext, Odd: x.odd,
				Pairs:   []Pair{{0, 1, series(order, 8000)}, {0, 2, series(order, 8000)}, {1, 2, series(order, 8000)}},
				Ternary: [3]TFunc{tf(9000), tf(9000), tf(9000)}})
		}
	}
	add("ideal", 3, Mixing{})
	return out
}

// somewhere is a random composition of n end-members away from the walls.
func somewhere(r *rand.Rand, n int) (y [3]float64) {
	s := 0.0
	for k := 0; k < n; k++ {
		y[k] = 0.05 + r.Float64()
		s += y[k]
	}
	for k := range y {
		y[k] /= s
	}
	return y
}

// close reports agreement to a relative tolerance with an absolute floor.
func closeTo(got, want, rel, floor float64) bool {
	return math.Abs(got-want) <= rel*math.Abs(want)+floor
}

// Every analytic derivative of the excess energy against central differences.
func TestExcessDerivatives(t *testing.T) {
	r := rand.New(rand.NewSource(7))
	checks := 0
	set := &fd.Settings{Formula: fd.Central, Step: 1e-5}
	for _, c := range modelCases(1) {
		n := len(c.p.Members)
		for trial := 0; trial < 4; trial++ {
			y, T := somewhere(r, n), 800+1200*r.Float64()
			w := atT(T)
			var ex, tmp excess
			c.p.Mixing.excess(&y, w, &ex)
			g := func(v []float64) float64 {
				z := [3]float64{v[0], v[1], v[2]}
				c.p.Mixing.excess(&z, w, &tmp)
				return tmp.g
			}
			num := fd.Gradient(nil, g, y[:], set)
			for k := 0; k < n; k++ {
				if !closeTo(ex.d[k], num[k], 1e-6, 1e-3) {
					t.Errorf("%s: ∂g/∂y%d = %g, differences give %g", c.name, k, ex.d[k], num[k])
				}
				checks++
				row := fd.Gradient(nil, func(v []float64) float64 {
					z := [3]float64{v[0], v[1], v[2]}
					c.p.Mixing.excess(&z, w, &tmp)
					return tmp.d[k]
				}, y[:], set)
				for l := 0; l < n; l++ {
					if !closeTo(ex.h[k][l], row[l], 1e-6, 1e-2) {
						t.Errorf("%s: ∂²g/∂y%d∂y%d = %g, differences give %g", c.name, k, l, ex.h[k][l], row[l])
					}
					checks++
				}
			}
			// the weights of a slope give ∂g/∂T
			c.p.Mixing.excess(&y, slopeT(T), &ex)
			dT := fd.Derivative(func(T float64) float64 {
				c.p.Mixing.excess(&y, atT(T), &tmp)
				return tmp.g
			}, T, &fd.Settings{Formula: fd.Central, Step: 1e-2})
			if !closeTo(ex.g, dT, 1e-6, 1e-6) {
				t.Errorf("%s: ∂g/∂T = %g, differences give %g", c.name, ex.g, dT)
			}
			checks++
		}
	}
	if checks < 1200 {
		t.Errorf("only %d derivatives were checked", checks)
	}
}

// Potentials against differences and against Euler's theorem, Σ y μ = G; the
// Gibbs–Duhem relation, Σ y dμ = 0 at constant T.
func TestPotentials(t *testing.T) {
	r := rand.New(rand.NewSource(8))
	checks := 0
	for _, c := range modelCases(2) {
		n := len(c.p.Members)
		for trial := 0; trial < 3; trial++ {
			y, T := somewhere(r, n), 800+1200*r.Float64()
			var q, u, v Potentials
			c.p.Potentials(&y, T, &q)
			G, S, H := c.p.Gibbs(y, T)
			sum := 0.0
			for k := 0; k < n; k++ {
				sum += y[k] * q.Mu[k]
			}
			if !closeTo(sum, G, 1e-12, 1e-7) || !closeTo(H, G+T*S, 1e-12, 1e-7) {
				t.Errorf("%s: Σyμ = %g, G = %g, H = %g", c.name, sum, G, H)
			}
			const h = 1e-2
			c.p.Potentials(&y, T+h, &u)
			c.p.Potentials(&y, T-h, &v)
			Gp, _, _ := c.p.Gibbs(y, T+h)
			Gm, _, _ := c.p.Gibbs(y, T-h)
			if !closeTo(S, -(Gp-Gm)/(2*h), 1e-6, 1e-5) {
				t.Errorf("%s: S = %g, differences give %g", c.name, S, -(Gp-Gm)/(2*h))
			}
			for k := 0; k < n; k++ {
				if d := (u.Mu[k] - v.Mu[k]) / (2 * h); !closeTo(q.DT[k], d, 1e-6, 1e-4) {
					t.Errorf("%s: ∂μ%d/∂T = %g, differences give %g", c.name, k, q.DT[k], d)
				}
				checks++
			}
			for l := 0; l < n-1; l++ { // along y_l − y_{n−1}
				const e = 1e-6
				a, b := y, y
				a[l], a[n-1] = a[l]+e, a[n-1]-e
				b[l], b[n-1] = b[l]-e, b[n-1]+e
				c.p.Potentials(&a, T, &u)
				c.p.Potentials(&b, T, &v)
				duhem := 0.0
				for k := 0; k < n; k++ {
					got := q.DY[k][l] - q.DY[k][n-1]
					if d := (u.Mu[k] - v.Mu[k]) / (2 * e); !closeTo(got, d, 1e-5, 1) {
						t.Errorf("%s: ∂μ%d along %d = %g, differences give %g", c.name, k, l, got, d)
					}
					duhem += y[k] * got
					checks++
				}
				if math.Abs(duhem) > 1e-6 {
					t.Errorf("%s: Σ y dμ = %g", c.name, duhem)
				}
			}
			col := c.p.Column(y)
			for k := 0; k < n; k++ {
				if !closeTo(col[k].At(T), q.Mu[k], 1e-11, 1e-6) || !closeTo(col[k].Slope(T), q.DT[k], 1e-10, 1e-8) {
					t.Errorf("%s: column %d is %g with slope %g, potentials %g, %g", c.name, k, col[k].At(T), col[k].Slope(T), q.Mu[k], q.DT[k])
				}
				checks++
			}
		}
	}
	if checks < 800 {
		t.Errorf("only %d derivatives were checked", checks)
	}
}

// Every extension reduces to the binary on the triangle's edges, and Muggianu and
// Kohler agree for constant terms.
func TestExtensions(t *testing.T) {
	l := []TFunc{{A: 5000}, {A: -3000}, {A: 1000}}
	pairs := []Pair{{0, 1, l}, {0, 2, l[:2]}, {1, 2, l[1:]}}
	binary := func(p Pair, a, b float64) float64 {
		s, u := 0.0, 1.0
		for _, f := range p.L {
			s += f.A * u
			u *= a - b
		}
		return a * b * s
	}
	for ext := Muggianu; ext <= Toop; ext++ {
		for odd := 0; odd < 3; odd++ {
			m := Mixing{Pairs: pairs, Extension: ext, Odd: odd}
			for _, p := range pairs {
				var y [3]float64
				y[p.I], y[p.J] = 0.3, 0.7
				var ex excess
				m.excess(&y, atT(1000), &ex)
				if want := binary(p, 0.3, 0.7); !closeTo(ex.g, want, 1e-13, 1e-9) {
					t.Errorf("extension %d, odd %d, pair %d-%d: %g on its edge, want %g", ext, odd, p.I, p.J, ex.g, want)
				}
			}
		}
	}
	constant := []Pair{{0, 1, l[:1]}, {0, 2, l[:1]}, {1, 2, l[:1]}}
	y := [3]float64{0.2, 0.3, 0.5}
	var a, b excess
	(&Mixing{Pairs: constant}).excess(&y, atT(1000), &a)
	(&Mixing{Pairs: constant, Extension: Kohler}).excess(&y, atT(1000), &b)
	if !closeTo(a.g, b.g, 1e-14, 0) {
		t.Errorf("constant terms: Muggianu %g, Kohler %g", a.g, b.g)
	}
}

// The driving force is a maximum: no composition of a dense grid does better, and
// its gradients are the contents and the entropy (envelope theorem).
func TestDriveIsMaximum(t *testing.T) {
	r := rand.New(rand.NewSource(9))
	checks := 0
	for _, c := range modelCases(3) {
		n := len(c.p.Members)
		for trial := 0; trial < 3; trial++ {
			T := 900 + 900*r.Float64()
			mu := [3]float64{40000 * (2*r.Float64() - 1), 40000 * (2*r.Float64() - 1), 40000 * (2*r.Float64() - 1)}
			q := c.p.Drive(&mu, T)
			if best := gridDrive(c.p, &mu, T); best > q.D+1e-6 || best < q.D-150 {
				t.Errorf("%s: D = %g, a dense grid reaches %g", c.name, q.D, best)
			}
			for i := range mu {
				const h = 0.5
				a, b := mu, mu
				a[i] += h
				b[i] -= h
				if d := (c.p.Drive(&a, T).D - c.p.Drive(&b, T).D) / (2 * h); !closeTo(q.C[i], d, 1e-6, 1e-6) {
					t.Errorf("%s: ∂D/∂μ%d = %g, differences give %g", c.name, i, q.C[i], d)
				}
				checks++
			}
			const h = 0.01
			if d := (c.p.Drive(&mu, T+h).D - c.p.Drive(&mu, T-h).D) / (2 * h); !closeTo(q.S, d, 1e-6, 1e-5) {
				t.Errorf("%s: ∂D/∂T = %g, differences give %g", c.name, q.S, d)
			}
			hess, ct, ok := c.p.Curvature(q.Y, T)
			if !ok {
				t.Errorf("%s: not convex at its own maximum", c.name)
			}
			for i := range mu {
				const h = 1.0
				a, b := mu, mu
				a[i] += h
				b[i] -= h
				u, v := c.p.Drive(&a, T), c.p.Drive(&b, T)
				for l := range mu {
					if d := (u.C[l] - v.C[l]) / (2 * h); !closeTo(hess[l][i], d, 1e-4, 1e-10) {
						t.Errorf("%s: ∂c%d/∂μ%d = %g, differences give %g", c.name, l, i, hess[l][i], d)
					}
					checks++
				}
			}
			u, v := c.p.Drive(&mu, T+h), c.p.Drive(&mu, T-h)
			for l := range mu {
				if d := (u.C[l] - v.C[l]) / (2 * h); !closeTo(ct[l], d, 1e-4, 1e-9) {
					t.Errorf("%s: ∂c%d/∂T = %g, differences give %g", c.name, l, ct[l], d)
				}
				checks++
			}
			_ = n
		}
	}
	if checks < 900 {
		t.Errorf("only %d derivatives were checked", checks)
	}
}

// gridDrive is the best driving force on a dense grid of compositions.
func gridDrive(p *Phase, mu *[3]float64, T float64) float64 {
	best := math.Inf(-1)
	value := func(y [3]float64) {
		G, _, _ := p.Gibbs(y, T)
		c := p.Contents(y)
		best = math.Max(best, mu[0]*c[0]+mu[1]*c[1]+mu[2]*c[2]-G)
	}
	const n = 120
	for i := 0; i <= n; i++ {
		if len(p.Members) == 2 {
			value([3]float64{float64(i) / n, 1 - float64(i)/n})
			continue
		}
		for j := 0; i+j <= n; j++ {
			value([3]float64{float64(i) / n, float64(j) / n, float64(n-i-j) / n})
		}
	}
	return best
}

// Phases that unmix: every local maximum that a dense grid shows is found.
func TestMaximaFindsAll(t *testing.T) {
	r := rand.New(rand.NewSource(10))
	several := 0
	for trial := 0; trial < 150; trial++ {
		n := 2 + trial%2
		p := &Phase{Mixing: Mixing{Sites: 1}}
		T := 1000.0
		for k := 0; k < n; k++ {
			m := EndMember{G: TFunc{A: 2000 * r.Float64()}}
			m.C[k] = 1
			p.Members = append(p.Members, m)
		}
		for i := 0; i < n; i++ {
			for j := i + 1; j < n; j++ {
				p.Mixing.Pairs = append(p.Mixing.Pairs, Pair{i, j, []TFunc{{A: rGas * T * (1 + 2.2*r.Float64())}, {A: rGas * T * (r.Float64() - 0.5)}}})
			}
		}
		p.Prepare()
		mu := [3]float64{1500 * r.Float64(), 1500 * r.Float64(), 1500 * r.Float64()}
		found := p.Maxima(&mu, T)
		if len(found) > 1 {
			several++
		}
		for _, y := range gridMaxima(p, &mu, T) {
			y = climbByHand(p, &mu, T, y)
			near := math.Inf(1)
			for _, q := range found {
				near = math.Min(near, math.Abs(q.Y[0]-y[0])+math.Abs(q.Y[1]-y[1])+math.Abs(q.Y[2]-y[2]))
			}
			if near > 1e-4 {
				t.Errorf("trial %d: the maximum near %v is not among %v", trial, y, found)
			}
		}
		for k := 1; k < len(found); k++ {
			if found[k].D > found[k-1].D {
				t.Errorf("trial %d: maxima are not in order", trial)
			}
		}
	}
	if several < 35 {
		t.Errorf("only %d phases had several maxima", several)
	}
}

// climbByHand follows the driving force from y by a pattern search: a node of a
// grid may top its neighbours on a ridge that goes on rising between them.
func climbByHand(p *Phase, mu *[3]float64, T float64, y [3]float64) [3]float64 {
	value := func(y [3]float64) float64 {
		G, _, _ := p.Gibbs(y, T)
		c := p.Contents(y)
		return mu[0]*c[0] + mu[1]*c[1] + mu[2]*c[2] - G
	}
	n := len(p.Members)
	best := value(y)
	for h := 0.01; h > 1e-8; h /= 2 {
		for moved := true; moved; {
			moved = false
			for a := 0; a < n; a++ {
				for b := 0; b < n; b++ {
					for _, w := range [3]float64{0, 0.5, 0.25} { // 24 directions in a triangle
						if a == b || n == 2 && w != 0 {
							continue
						}
						z := y
						z[a] += h
						z[b] -= h * (1 - w)
						z[3-a-b] -= h * w
						if z[0] < 0 || z[1] < 0 || z[2] < 0 {
							continue
						}
						if v := value(z); v > best {
							best, y, moved = v, z, true
						}
					}
				}
			}
		}
	}
	return y
}

// gridMaxima lists the nodes of a dense grid that are higher than their
// neighbours, away from the walls.
func gridMaxima(p *Phase, mu *[3]float64, T float64) [][3]float64 {
	const n = 60
	value := func(y [3]float64) float64 {
		G, _, _ := p.Gibbs(y, T)
		c := p.Contents(y)
		return mu[0]*c[0] + mu[1]*c[1] + mu[2]*c[2] - G
	}
	var out [][3]float64
	if len(p.Members) == 2 {
		at := func(i int) [3]float64 { return [3]float64{float64(i) / n, 1 - float64(i)/n} }
		for i := 2; i < n-1; i++ {
			if v := value(at(i)); v > value(at(i-1)) && v > value(at(i+1)) {
				out = append(out, at(i))
			}
		}
		return out
	}
	at := func(i, j int) [3]float64 { return [3]float64{float64(i) / n, float64(j) / n, float64(n-i-j) / n} }
	for i := 2; i < n; i++ {
		for j := 2; i+j < n-1; j++ {
			v, top := value(at(i, j)), true
			for _, d := range [6][2]int{{1, 0}, {-1, 0}, {0, 1}, {0, -1}, {1, -1}, {-1, 1}} {
				top = top && v > value(at(i+d[0], j+d[1]))
			}
			if top {
				out = append(out, at(i, j))
			}
		}
	}
	return out
}

// A plane on which a component is at −Inf: phases that hold it are out, one that
// holds it with a negative coefficient is beyond saturation.
func TestDriveAtTheEdges(t *testing.T) {
	mu := [3]float64{math.Inf(-1), 0, 0}
	one := func(c [3]float64) *Phase { return (&Phase{Members: []EndMember{{C: c}}}).Prepare() }
	if d := one([3]float64{1, 1, 0}).Drive(&mu, 1000).D; !math.IsInf(d, -1) {
		t.Errorf("a solid that holds an absent component: D = %g", d)
	}
	if d := one([3]float64{-1, 1, 0}).Drive(&mu, 1000).D; !math.IsInf(d, 1) {
		t.Errorf("a solid that holds it negatively: D = %g", d)
	}
	both := [3]float64{math.Inf(-1), math.Inf(-1), 0}
	if d := one([3]float64{-1, 1, 0}).Drive(&both, 1000).D; !math.IsInf(d, -1) {
		t.Errorf("both absent: D = %g", d)
	}
	ss := (&Phase{Members: []EndMember{{C: ternary.Apex(0)}, {C: ternary.Apex(1)}}, Mixing: Mixing{Pairs: []Pair{{0, 1, []TFunc{{A: 3000}}}}}}).Prepare()
	q := ss.Drive(&mu, 1000)
	if q.D != 0 || q.Y != [3]float64{0, 1, 0} {
		t.Errorf("a solution without its first end-member: D = %g at %v", q.D, q.Y)
	}
}

// The driving force of a phase that cannot unmix does not allocate.
func TestDriveDoesNotAllocate(t *testing.T) {
	mu := [3]float64{1000, 2000, -3000}
	for _, c := range modelCases(4) {
		T := 1500.0
		if c.p.CanUnmix(T) {
			continue
		}
		var q Potentials
		y := somewhere(rand.New(rand.NewSource(1)), len(c.p.Members))
		if n := testing.AllocsPerRun(20, func() {
			c.p.Drive(&mu, T)
			c.p.Potentials(&y, T, &q)
		}); n != 0 {
			t.Errorf("%s: %g allocations", c.name, n)
		}
	}
}

func BenchmarkDrive(b *testing.B) {
	mu := [3]float64{1000, 2000, -3000}
	cases := modelCases(5)
	for _, c := range []modelCase{cases[0], cases[1], cases[len(cases)-1]} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				c.p.Drive(&mu, 2500)
			}
		})
	}
}

func BenchmarkPotentials(b *testing.B) {
	c := modelCases(6)[1]
	y := [3]float64{0.2, 0.3, 0.5}
	var q Potentials
	for b.Loop() {
		c.p.Potentials(&y, 1500, &q)
	}
}

// A plane that all but excludes one end-member hides none of the maxima: they are
// those of the phase without it.
func TestMaximaOfAnAbsentMember(t *testing.T) {
	const T, W = 900.0, 20000.0
	pair := Pair{0, 1, []TFunc{{A: W}}}
	two := (&Phase{Members: []EndMember{{C: ternary.Apex(0)}, {C: ternary.Apex(1)}}, Mixing: Mixing{Pairs: []Pair{pair}}}).Prepare()
	three := (&Phase{
		Members: []EndMember{{C: ternary.Apex(0)}, {C: ternary.Apex(1)}, {C: ternary.Apex(2)}},
		Mixing:  Mixing{Pairs: []Pair{pair, {0, 2, []TFunc{{A: -8000}}}, {1, 2, []TFunc{{A: 6000}, {A: 2000}}}}},
	}).Prepare()
	for _, deep := range []float64{-1e6, -1.3e7, -1e9, math.Inf(-1)} {
		mu := [3]float64{0, 500, deep}
		want := two.Maxima(&mu, T)
		got := three.Maxima(&mu, T)
		if len(want) != 2 || len(got) != len(want) {
			t.Errorf("μ = %g: %d maxima, without the third member %d", deep, len(got), len(want))
			continue
		}
		for i := range got {
			if math.Abs(got[i].D-want[i].D) > 1e-8 || math.Abs(got[i].Y[0]-want[i].Y[0]) > 1e-8 {
				t.Errorf("μ = %g: D = %.9g at y = %.9f, without the third member %.9g at %.9f", deep, got[i].D, got[i].Y[0], want[i].D, want[i].Y[0])
			}
		}
	}
}
