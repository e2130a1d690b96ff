package trial

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// This file is a second opinion: the same quantities as the production code
// computes, by plain and slow means, from nothing but Phase.Gibbs (a value of G
// at a composition) and the end-members' contents.

// Potentials returns the chemical potentials of the components in liquid x at
// T: RT ln x by hand, and the excess part by differences of sixth order of
// N·g(n/N) with respect to the amounts n. A component that is absent has −Inf.
// The error is about 1e-9 J/mol, and 1e-12/s near an apex, s the sum of the two
// smaller fractions.
func Potentials(liquid *gibbs.Phase, x ternary.Composition, T float64) (mu [3]float64) {
	rt := ternary.R * T
	excess := func(n [3]float64) float64 {
		sum := n[0] + n[1] + n[2]
		y := [3]float64{n[0] / sum, n[1] / sum, n[2] / sum}
		g, _, _ := liquid.Gibbs(y, T)
		for _, v := range y {
			if v > 0 {
				g -= rt * v * math.Log(v)
			}
		}
		return sum * g
	}
	h := 1e-3 * math.Min(x[0]+x[1], math.Min(x[0]+x[2], x[1]+x[2]))
	if h <= 0 { // an apex: its own potential has no excess part
		h = 1e-3
	}
	for i := range mu {
		if x[i] <= 0 {
			mu[i] = math.Inf(-1)
			continue
		}
		d := 0.0
		for k, w := range [4]float64{1: 45, 2: -9, 3: 1} {
			up, down := x, x
			up[i] += float64(k) * h
			down[i] -= float64(k) * h
			if k > 0 {
				d += w * (excess(up) - excess(down))
			}
		}
		mu[i] = d/(60*h) + rt*math.Log(x[i])
	}
	return mu
}

// The mesh of the search for the best composition of a solution, in logarithms
// of the ratios of the fractions: steps that put several nodes into each basin
// of a Redlich–Kister model of low order. The search that follows may leave it.
const (
	logitReach2 = 30.0
	logitReach3 = 16.0
	logitStep2  = 0.25
	logitStep3  = 2.0
	logitEnd    = 1e-7 // the last step; D is stationary, so its error is the square
	evenMesh    = 14   // intervals per side of a second mesh, even in the fractions, for three
)

// Force is the driving force of a phase against the plane mu, J per mole of
// formula unit: the largest of μ·c(y) − G(y) over a mesh in the logarithms of
// the ratios of the fractions, improved by a pattern search. y is where.
func Force(p *gibbs.Phase, mu [3]float64, T float64) (D float64, y [3]float64) {
	var live []int
	for k := range p.Members {
		switch d := linear(p.Members[k].C, mu); {
		case math.IsInf(d, 1):
			y[k] = 1
			return d, y
		case !math.IsInf(d, -1):
			live = append(live, k)
		}
	}
	at := func(u [2]float64) (float64, [3]float64) {
		y := softmax(live, u)
		g, _, _ := p.Gibbs(y, T)
		for k, v := range y {
			if v > 0 {
				g -= v * linear(p.Members[k].C, mu)
			}
		}
		return -g, y
	}
	switch len(live) {
	case 0:
		return math.Inf(-1), y
	case 1:
		return at([2]float64{})
	}
	best := math.Inf(-1)
	for _, start := range mesh(len(live), at) {
		if d, z := climb(len(live)-1, start, at); d > best {
			best, y = d, z
		}
	}
	return best, y
}

// linear is μ·c without 0·∞.
func linear(c, mu [3]float64) (d float64) {
	for i, n := range c {
		if n != 0 {
			d += n * mu[i]
		}
	}
	return d
}

// softmax turns the logarithms of the ratios to the first live fraction into
// fractions.
func softmax(live []int, u [2]float64) (y [3]float64) {
	top := 0.0
	for k := 1; k < len(live); k++ {
		top = math.Max(top, u[k-1])
	}
	sum := math.Exp(-top)
	y[live[0]] = sum
	for k := 1; k < len(live); k++ {
		y[live[k]] = math.Exp(u[k-1] - top)
		sum += y[live[k]]
	}
	for k := range y {
		y[k] /= sum
	}
	return y
}

// mesh returns the nodes that are not lower than their neighbours.
func mesh(n int, at func([2]float64) (float64, [3]float64)) (starts [][2]float64) {
	if n == 2 {
		m := int(2*logitReach2/logitStep2) + 1
		v := make([]float64, m)
		u := func(i int) [2]float64 { return [2]float64{-logitReach2 + float64(i)*logitStep2} }
		for i := range v {
			v[i], _ = at(u(i))
		}
		for i := range v {
			if (i == 0 || v[i] >= v[i-1]) && (i == m-1 || v[i] >= v[i+1]) {
				starts = append(starts, u(i))
			}
		}
		return starts
	}
	m := int(2*logitReach3/logitStep3) + 1
	v := make([]float64, m*m)
	u := func(i, j int) [2]float64 {
		return [2]float64{-logitReach3 + float64(i)*logitStep3, -logitReach3 + float64(j)*logitStep3}
	}
	for i := 0; i < m; i++ {
		for j := 0; j < m; j++ {
			v[i*m+j], _ = at(u(i, j))
		}
	}
	for i := 0; i < m; i++ {
		for j := 0; j < m; j++ {
			top := true
			for a := max(0, i-1); a <= min(m-1, i+1); a++ {
				for b := max(0, j-1); b <= min(m-1, j+1); b++ {
					top = top && v[a*m+b] <= v[i*m+j]
				}
			}
			if top {
				starts = append(starts, u(i, j))
			}
		}
	}
	return append(starts, even(at)...)
}

// even returns the starts of a mesh of three fractions, all positive, that is even in the
// fractions: two liquids may lie within one step of the logarithmic one.
func even(at func([2]float64) (float64, [3]float64)) (starts [][2]float64) {
	const n = evenMesh
	u := func(i, j int) [2]float64 {
		a, b, c := float64(i)+0.1, float64(j)+0.1, float64(n-i-j)+0.1
		return [2]float64{math.Log(b / a), math.Log(c / a)}
	}
	var v [n + 1][n + 1]float64
	for i := 0; i <= n; i++ {
		for j := 0; i+j <= n; j++ {
			v[i][j], _ = at(u(i, j))
		}
	}
	for i := 0; i <= n; i++ {
		for j := 0; i+j <= n; j++ {
			top := true
			for _, d := range [6][2]int{{0, 1}, {1, 0}, {1, -1}, {0, -1}, {-1, 0}, {-1, 1}} {
				a, b := i+d[0], j+d[1]
				if a >= 0 && b >= 0 && a+b <= n && v[a][b] > v[i][j] {
					top = false
				}
			}
			if top {
				starts = append(starts, u(i, j))
			}
		}
	}
	return starts
}

// climb is a pattern search with halving steps in one or two variables.
func climb(free int, u [2]float64, at func([2]float64) (float64, [3]float64)) (float64, [3]float64) {
	d, y := at(u)
	moves := [][2]float64{{1, 0}, {-1, 0}, {0, 1}, {0, -1}, {1, 1}, {-1, -1}, {1, -1}, {-1, 1}}
	if free == 1 {
		moves = moves[:2]
	}
	for h := 0.5; h > logitEnd; h /= 2 {
		for moved, count := true, 0; moved && count < 100; count++ {
			moved = false
			for _, m := range moves {
				v := [2]float64{u[0] + h*m[0], u[1] + h*m[1]}
				if e, z := at(v); e > d {
					d, y, u, moved = e, z, v, true
				}
			}
		}
	}
	return d, y
}

// Freezing returns the highest temperature up to top, K, at which liquid x is
// saturated with a solid, and its index: −1 if none down to bottom. Every solid
// is asked on the way down in steps of three per cent, and the first change of
// sign is narrowed to tol kelvin. At +Inf the liquid is oversaturated already at top.
func Freezing(sys *gibbs.System, x ternary.Composition, top, bottom, tol float64) (float64, int) {
	bestT, best := math.Inf(-1), -1
	for i, p := range sys.Solids {
		f := func(T float64) float64 {
			d, _ := Force(p, Potentials(sys.Liquid, x, T), T)
			return d
		}
		if T := fallThrough(f, top, math.Max(bottom, bestT), tol); T > bestT {
			bestT, best = T, i
		}
	}
	return bestT, best
}

// fallThrough looks from top downward for the first T at which f becomes
// positive: the Illinois variant of false position inside the bracket.
func fallThrough(f func(float64) float64, top, bottom, tol float64) float64 {
	hi, fhi := top, f(top)
	if fhi > 0 {
		return math.Inf(1)
	}
	for hi > bottom {
		lo := hi * 0.97
		flo := f(lo)
		if math.IsInf(flo, -1) {
			return math.Inf(-1)
		}
		if flo <= 0 {
			hi, fhi = lo, flo
			continue
		}
		side := 0
		for round := 0; round < 100 && hi-lo > tol; round++ {
			mid := (lo*fhi - hi*flo) / (fhi - flo)
			switch v := f(mid); {
			case v == 0:
				return mid
			case v > 0:
				lo, flo = mid, v
				if side == 1 {
					fhi /= 2
				}
				side = 1
			default:
				hi, fhi = mid, v
				if side == -1 {
					flo /= 2
				}
				side = -1
			}
		}
		return (lo + hi) / 2
	}
	return math.Inf(-1)
}
