package liquidus_test

import (
	"math"
	"testing"
	"time"

	"thalweg/ternary"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

// A whole projection with 20 isotherms: a system with a solid solution, and a
// simple eutectic one.
func BenchmarkSolution(b *testing.B) { benchmark(b, "di-ab-an") }
func BenchmarkEutectic(b *testing.B) { benchmark(b, "lif-naf-kf") }

func benchmark(b *testing.B, name string) {
	sys := trial.Builtin(b, name)
	o := liquidus.Options{Isotherms: spread(whole(b, sys, liquidus.Options{}), 20)}
	b.ReportAllocs()
	for b.Loop() {
		p, err := liquidus.Compute(sys, o)
		if err != nil || !p.Checks.Passed {
			b.Fatal(err, p.Checks)
		}
	}
}

// gridSolution is the obvious other way to a projection: the liquidus at every
// node of a lattice, with the same fast evaluation of T_φ(x) as the tracer uses,
// and points of boundary curves and isotherms by linear interpolation along its
// links. It is kept as simple and as quick as it can be.
type gridSolution struct {
	boundary, isotherm []gridPoint
}

// gridPoint is a point found on a link from x to y.
type gridPoint struct {
	x, y ternary.Composition
	at   float64 // fraction of the way from x to y
	a, b int     // the two solids; b = −1 on an isotherm
	T    float64 // of the isotherm
}

// gridNode is one node of the lattice.
type gridNode struct {
	T       float64
	primary int
}

func solveOnGrid(s *liquidus.Surface, n int, isotherms []float64) (out gridSolution) {
	at := func(i, j int) ternary.Composition {
		k := float64(n) + 0.3
		return ternary.Composition{(float64(i) + 0.1) / k, (float64(j) + 0.1) / k, (float64(n-i-j) + 0.1) / k}
	}
	row := func(i int) []gridNode {
		r := make([]gridNode, n-i+1)
		for j := range r {
			T, p := s.Liquidus(at(i, j))
			r[j] = gridNode{T, p.Phase}
		}
		return r
	}
	link := func(x, y ternary.Composition, a, b gridNode) {
		if a.primary != b.primary {
			// both saturation temperatures at both ends, and where they are equal
			da := a.T - s.Saturation(b.primary, x)
			db := s.Saturation(a.primary, y) - b.T
			out.boundary = append(out.boundary, gridPoint{x: x, y: y, at: da / (da - db), a: a.primary, b: b.primary})
			return
		}
		for _, T := range isotherms {
			if (a.T > T) != (b.T > T) {
				out.isotherm = append(out.isotherm, gridPoint{x: x, y: y, at: (a.T - T) / (a.T - b.T), a: a.primary, b: -1, T: T})
			}
		}
	}
	last := row(0)
	for i := 0; i < n; i++ {
		next := row(i + 1)
		for j := 0; i+j < n; j++ {
			link(at(i, j), at(i, j+1), last[j], last[j+1])
			link(at(i, j), at(i+1, j), last[j], next[j])
		}
		last = next
	}
	return out
}

// gridError is the root mean square distance, in sides of the triangle, of a
// sample of the grid's points from the true crossings of their links, which are
// bisected.
func gridError(s *liquidus.Surface, pts []gridPoint) float64 {
	sum, count := 0.0, 0
	for k := 0; k < len(pts); k += 1 + len(pts)/400 {
		p := &pts[k]
		f := func(u float64) float64 {
			x := p.x.Lerp(p.y, u)
			if p.b < 0 {
				return s.Saturation(p.a, x) - p.T
			}
			return s.Saturation(p.a, x) - s.Saturation(p.b, x)
		}
		lo, hi := 0.0, 1.0
		if f(0) > 0 == (f(1) > 0) {
			continue
		}
		for hi-lo > 1e-13 {
			if mid := (lo + hi) / 2; f(mid) > 0 == (f(0) > 0) {
				lo = mid
			} else {
				hi = mid
			}
		}
		d := (p.at - lo) * p.x.Distance(p.y)
		sum += d * d
		count++
	}
	return math.Sqrt(sum / float64(count))
}

// tracedError is the same for the computed points of a projection: how far along
// the steepest way the residual in T is from zero.
func tracedError(s *liquidus.Surface, p *liquidus.Projection) float64 {
	worst := 0.0
	for _, c := range p.Curves {
		for _, q := range c.Points[1 : len(c.Points)-1] {
			a, b := s.Saturation(c.Solids[0], q.Liquid), s.Saturation(c.Solids[1], q.Liquid)
			slope := math.Hypot(slopeAt(s, c.Solids[0], q.Liquid), slopeAt(s, c.Solids[1], q.Liquid))
			worst = math.Max(worst, (math.Abs(a-q.T)+math.Abs(b-q.T))/slope)
		}
	}
	return worst
}

// gridTarget is the accuracy, in sides of the triangle, at which the two ways
// are compared. The traced points are better than that (asserted below).
const gridTarget = 1e-6

// BenchmarkAgainstGrid times the projection with 20 isotherms, and reports how
// much longer a grid takes to points that are as good. The grid is run at three
// sizes; its time t ~ n^p and its error e ~ n^−q are measured, and the size and
// the time for gridTarget follow from p and q of the two larger ones. What is
// measured and what is extrapolated is in the names of the metrics:
//
//	x-grid-400   time of a 400-interval grid over ours (measured)
//	err-grid-400 its error in sides (measured)
//	n-for-1e-6   intervals that a grid would need (extrapolated)
//	x-for-1e-6   its time over ours (extrapolated)
//	order        q, 2 for linear interpolation
func BenchmarkAgainstGrid(b *testing.B) {
	for _, name := range []string{"di-ab-an", "lif-naf-kf"} {
		b.Run(name, func(b *testing.B) {
			sys := trial.Builtin(b, name)
			o := liquidus.Options{Isotherms: spread(whole(b, sys, liquidus.Options{}), 20)}
			s := surface(b, sys)
			p := whole(b, sys, o)
			if e := tracedError(s, p); e > gridTarget {
				b.Fatalf("traced points are good to %.1e only", e)
			}
			n := [3]int{100, 200, 400}
			var seconds, errs [3]float64
			for k := range n {
				seconds[k], errs[k] = timeGrid(s, n[k], o.Isotherms)
			}
			for b.Loop() {
				if _, err := liquidus.Compute(sys, o); err != nil {
					b.Fatal(err)
				}
			}
			ours := b.Elapsed().Seconds() / float64(b.N)
			order := math.Log2(errs[1] / errs[2])
			growth := math.Log2(seconds[2] / seconds[1])
			factor := math.Pow(errs[2]/gridTarget, 1/order)
			b.ReportMetric(seconds[2]/ours, "x-grid-400")
			b.ReportMetric(errs[2], "err-grid-400")
			b.ReportMetric(order, "order")
			b.ReportMetric(float64(n[2])*factor, "n-for-1e-6")
			b.ReportMetric(seconds[2]*math.Pow(factor, growth)/ours, "x-for-1e-6")
		})
	}
}

// timeGrid is the best time of three runs, and the error.
func timeGrid(s *liquidus.Surface, n int, isotherms []float64) (seconds, err float64) {
	seconds = math.Inf(1)
	var g gridSolution
	for run := 0; run < 3; run++ {
		start := time.Now()
		g = solveOnGrid(s, n, isotherms)
		seconds = math.Min(seconds, time.Since(start).Seconds())
	}
	return seconds, math.Max(gridError(s, g.boundary), gridError(s, g.isotherm))
}
