package render

import (
	"math"
	"sort"
)

// arc is a smooth line made of cubic Bezier pieces, with its arc length. Places
// on it are given in mm from its start.
type arc struct {
	segs [][4]Point
	cum  []float64 // cum[i] is the length before piece i; one entry more than segs
}

// sameSpot is the distance, mm, below which neighbouring points of a line are
// taken for one: a tenth of the width of the finest stroke.
const sameSpot = 0.01

// cornerCos is the cosine of the turn between two chords from which a line is
// taken to have a corner there, and is not rounded.
var cornerCos = math.Cos(50 * math.Pi / 180)

// smooth returns the line through pts with continuous direction. The direction
// at each point is that of the parabola through it and its neighbours with
// chord lengths as parameter (Bessel's tangents), so that the line does not
// overshoot where points lie close; corners sharper than 50° are kept. Points
// nearer than sameSpot are merged. closed joins the last point to the first.
// Handles are pulled back inside bound, so the line stays inside it wherever
// its points do; a nil bound leaves them.
func smooth(pts []Point, closed bool, bound convex) arc {
	pts = distinct(pts, closed)
	n := len(pts)
	if n < 2 {
		return arc{cum: []float64{0}}
	}
	last := n - 1
	if closed {
		last = n
	}
	segs := make([][4]Point, 0, last)
	for i := 0; i < last; i++ {
		p, q := pts[i], pts[(i+1)%n]
		h := p.distance(q) / 3
		c1 := p.plus(tangent(pts, i, closed, +1).times(h))
		c2 := q.minus(tangent(pts, (i+1)%n, closed, -1).times(h))
		if bound != nil {
			c1, c2 = bound.pull(p, c1), bound.pull(q, c2)
		}
		segs = append(segs, [4]Point{p, c1, c2, q})
	}
	return newArc(segs)
}

// straight returns the line of straight pieces through pts.
func straight(pts []Point) arc {
	pts = distinct(pts, false)
	var segs [][4]Point
	for i := 1; i < len(pts); i++ {
		p, q := pts[i-1], pts[i]
		segs = append(segs, [4]Point{p, p.lerp(q, 1./3), p.lerp(q, 2./3), q})
	}
	return newArc(segs)
}

// distinct drops points that coincide with the one before.
func distinct(pts []Point, closed bool) []Point {
	var out []Point
	for _, i := range distinctIndex(pts, closed) {
		out = append(out, pts[i])
	}
	return out
}

// distinctIndex returns the indices of the points that distinct keeps. Both
// ends of an open line are kept.
func distinctIndex(pts []Point, closed bool) []int {
	var out []int
	for i, p := range pts {
		if len(out) == 0 || p.distance(pts[out[len(out)-1]]) > sameSpot {
			out = append(out, i)
		}
	}
	if n := len(out); n > 1 {
		if closed && pts[out[0]].distance(pts[out[n-1]]) <= sameSpot {
			out = out[:n-1]
		} else if !closed {
			out[n-1] = len(pts) - 1
		}
	}
	return out
}

// tangent is the unit direction of the smooth line at point i. side tells the
// piece it serves where the line has a corner: +1 the one after, -1 before.
func tangent(pts []Point, i int, closed bool, side int) Point {
	n := len(pts)
	at := func(k int) Point { return pts[(k%n+n)%n] }
	if n == 2 {
		return pts[1].minus(pts[0]).unit()
	}
	if !closed && i == 0 {
		return endTangent(pts[0], pts[1], pts[2])
	}
	if !closed && i == n-1 {
		return endTangent(pts[n-1], pts[n-2], pts[n-3]).times(-1)
	}
	a, b := at(i).minus(at(i-1)), at(i+1).minus(at(i))
	la, lb := a.length(), b.length()
	if a.dot(b) < cornerCos*la*lb {
		if side > 0 {
			return b.unit()
		}
		return a.unit()
	}
	return a.times(lb / la).plus(b.times(la / lb)).unit()
}

// endTangent is the parabola's direction at its first point p, towards q.
func endTangent(p, q, r Point) Point {
	a, b := q.minus(p), r.minus(q)
	la, lb := a.length(), b.length()
	if a.dot(b) < cornerCos*la*lb {
		return a.unit()
	}
	mid := a.times(lb / la).plus(b.times(la / lb)).times(1 / (la + lb))
	return a.times(2 / la).minus(mid).unit()
}

func newArc(segs [][4]Point) arc {
	a := arc{segs: segs, cum: make([]float64, len(segs)+1)}
	for i, s := range segs {
		a.cum[i+1] = a.cum[i] + cubicLength(s)
	}
	return a
}

// cubicLength integrates the speed with Gauss and Legendre's rule of three
// points: exact for straight pieces, and better than 1e-3 of the length for
// pieces that turn less than a right angle.
func cubicLength(s [4]Point) float64 {
	d0, d1, d2 := s[1].minus(s[0]), s[2].minus(s[1]), s[3].minus(s[2])
	speed := func(t float64) float64 {
		u := 1 - t
		return d0.times(3 * u * u).plus(d1.times(6 * u * t)).plus(d2.times(3 * t * t)).length()
	}
	const x = 0.3872983346207417 // √(3/5)/2
	return (5*speed(0.5-x) + 8*speed(0.5) + 5*speed(0.5+x)) / 18
}

func (a arc) length() float64 { return a.cum[len(a.segs)] }
func (a arc) empty() bool     { return len(a.segs) == 0 }

// find returns the piece that holds place s and the parameter in it.
func (a arc) find(s float64) (i int, t float64) {
	n := len(a.segs)
	i = sort.Search(n, func(k int) bool { return a.cum[k+1] >= s })
	if i == n {
		return n - 1, 1
	}
	l := a.cum[i+1] - a.cum[i]
	if l == 0 {
		return i, 0
	}
	return i, max(0, min(1, (s-a.cum[i])/l))
}

// at returns the point at place s; places beyond the ends give the ends.
func (a arc) at(s float64) Point {
	i, t := a.find(s)
	c := a.segs[i]
	return cubeAt(c[0], c[1:], t)
}

// nearest returns the direction of the line where it passes closest to q, to
// about a millimetre.
func (a arc) nearest(q Point) Point {
	best, dir := math.Inf(1), Point{}
	for _, s := range a.chords(1) {
		if d := s.distance(q); d < best {
			best, dir = d, s.b.minus(s.a).unit()
		}
	}
	return dir
}

// part returns the line between places s0 and s1.
func (a arc) part(s0, s1 float64) arc {
	if a.empty() || s1 <= s0 {
		return arc{cum: []float64{0}}
	}
	i, t := a.find(s0)
	j, u := a.find(s1)
	if i == j {
		return newArc([][4]Point{cutCubic(a.segs[i], t, u)})
	}
	segs := make([][4]Point, 0, j-i+1)
	if t < 1 {
		segs = append(segs, cutCubic(a.segs[i], t, 1))
	}
	segs = append(segs, a.segs[i+1:j]...)
	if u > 0 {
		segs = append(segs, cutCubic(a.segs[j], 0, u))
	}
	return newArc(segs)
}

// cutCubic returns the part of a cubic between two parameters (de Casteljau).
func cutCubic(c [4]Point, t0, t1 float64) [4]Point {
	if t1 < 1 {
		p, q, r := c[0].lerp(c[1], t1), c[1].lerp(c[2], t1), c[2].lerp(c[3], t1)
		pq, qr := p.lerp(q, t1), q.lerp(r, t1)
		c = [4]Point{c[0], p, pq, pq.lerp(qr, t1)}
		t0 /= t1
	}
	if t0 > 0 {
		p, q, r := c[0].lerp(c[1], t0), c[1].lerp(c[2], t0), c[2].lerp(c[3], t0)
		pq, qr := p.lerp(q, t0), q.lerp(r, t0)
		c = [4]Point{pq.lerp(qr, t0), qr, r, c[3]}
	}
	return c
}

// reversed returns the line run the other way.
func (a arc) reversed() arc {
	segs := make([][4]Point, len(a.segs))
	for i, s := range a.segs {
		segs[len(segs)-1-i] = [4]Point{s[3], s[2], s[1], s[0]}
	}
	return newArc(segs)
}

// path returns the drawing of the line.
func (a arc) path() Path {
	var p Path
	for i, s := range a.segs {
		if i == 0 {
			p.MoveTo(s[0].X, s[0].Y)
		}
		p.CubeTo(s[1].X, s[1].Y, s[2].X, s[2].Y, s[3].X, s[3].Y)
	}
	return p
}

// chords returns the line as straight segments of at most step mm.
func (a arc) chords(step float64) []segment {
	var out []segment
	for i, c := range a.segs {
		n := int(math.Ceil((a.cum[i+1] - a.cum[i]) / step))
		p := c[0]
		for k := 1; k <= n; k++ {
			q := cubeAt(c[0], c[1:], float64(k)/float64(n))
			out = append(out, segment{p, q})
			p = q
		}
	}
	return out
}
