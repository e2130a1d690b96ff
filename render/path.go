package render

import "math"

// Point is a place on the page, mm from the bottom left.
type Point struct{ X, Y float64 }

type pathOp uint8

const (
	opMove pathOp = iota
	opLine
	opCube
	opClose
)

// points is the number of points each operation carries.
func (op pathOp) points() int {
	switch op {
	case opCube:
		return 3
	case opClose:
		return 0
	}
	return 1
}

// Path is a sequence of subpaths made of straight lines and cubic Bezier
// curves. The zero value is empty and ready to use. Copies share storage
// until one of them is appended to, so build a path, then hand it on.
type Path struct {
	ops []pathOp
	pts []Point
}

// Polyline returns the path through pts; closed joins the last to the first.
// Fewer than two points give an empty path.
func Polyline(pts []Point, closed bool) Path {
	var p Path
	if len(pts) < 2 {
		return p
	}
	p.MoveTo(pts[0].X, pts[0].Y)
	for _, q := range pts[1:] {
		p.LineTo(q.X, q.Y)
	}
	if closed {
		p.Close()
	}
	return p
}

// MoveTo starts a new subpath at x, y.
func (p *Path) MoveTo(x, y float64) { p.add(opMove, Point{x, y}) }

// LineTo draws a straight line to x, y. On an empty path it is a MoveTo.
func (p *Path) LineTo(x, y float64) {
	if len(p.ops) == 0 {
		p.MoveTo(x, y)
		return
	}
	p.add(opLine, Point{x, y})
}

// CubeTo draws a cubic Bezier curve to x, y with control points x1, y1 and
// x2, y2. On an empty path it starts at x1, y1.
func (p *Path) CubeTo(x1, y1, x2, y2, x, y float64) {
	if len(p.ops) == 0 {
		p.MoveTo(x1, y1)
	}
	p.add(opCube, Point{x1, y1}, Point{x2, y2}, Point{x, y})
}

// Close joins the current subpath to its start. It does nothing on an empty
// path or right after another Close.
func (p *Path) Close() {
	if n := len(p.ops); n == 0 || p.ops[n-1] == opClose {
		return
	}
	p.ops = append(p.ops, opClose)
}

// Append adds every subpath of q after those of p.
func (p *Path) Append(q Path) {
	p.ops = append(p.ops, q.ops...)
	p.pts = append(p.pts, q.pts...)
}

func (p *Path) add(op pathOp, pts ...Point) {
	p.ops = append(p.ops, op)
	p.pts = append(p.pts, pts...)
}

// Empty reports whether the path draws nothing.
func (p Path) Empty() bool { return len(p.ops) < 2 }

// Transform returns the path with every point replaced by f(point), which
// must be affine for curves to stay exact.
func (p Path) Transform(f func(Point) Point) Path {
	q := Path{ops: append([]pathOp(nil), p.ops...), pts: make([]Point, len(p.pts))}
	for i, pt := range p.pts {
		q.pts[i] = f(pt)
	}
	return q
}

// each calls f for every operation with the current point before it and the
// points it carries. After a close the current point is the subpath's start.
func (p Path) each(f func(op pathOp, from Point, pts []Point)) {
	var cur, start Point
	i := 0
	for _, op := range p.ops {
		pts := p.pts[i : i+op.points()]
		i += len(pts)
		f(op, cur, pts)
		switch op {
		case opMove:
			cur, start = pts[0], pts[0]
		case opClose:
			cur = start
		default:
			cur = pts[len(pts)-1]
		}
	}
}

// Bounds returns the corners of the smallest upright box around the path's
// geometry (not counting stroke width), exact for curves. An empty path
// gives two zero points.
func (p Path) Bounds() (lo, hi Point) {
	if len(p.pts) == 0 {
		return Point{}, Point{}
	}
	inf := math.Inf(1)
	lo, hi = Point{inf, inf}, Point{-inf, -inf}
	add := func(q Point) {
		lo = Point{math.Min(lo.X, q.X), math.Min(lo.Y, q.Y)}
		hi = Point{math.Max(hi.X, q.X), math.Max(hi.Y, q.Y)}
	}
	p.each(func(op pathOp, from Point, pts []Point) {
		if op == opCube {
			for _, t := range cubeExtrema(from.X, pts[0].X, pts[1].X, pts[2].X) {
				add(cubeAt(from, pts, t))
			}
			for _, t := range cubeExtrema(from.Y, pts[0].Y, pts[1].Y, pts[2].Y) {
				add(cubeAt(from, pts, t))
			}
		}
		if n := len(pts); n > 0 {
			add(pts[n-1])
		}
	})
	return lo, hi
}

// cubeAt evaluates the cubic from, c[0], c[1], c[2] at parameter t in 0..1.
func cubeAt(from Point, c []Point, t float64) Point {
	u := 1 - t
	a, b, d, e := u*u*u, 3*u*u*t, 3*u*t*t, t*t*t
	return Point{
		a*from.X + b*c[0].X + d*c[1].X + e*c[2].X,
		a*from.Y + b*c[0].Y + d*c[1].Y + e*c[2].Y,
	}
}

// cubeExtrema returns the parameters strictly inside 0..1 where the cubic
// with these ordinates turns.
func cubeExtrema(p0, p1, p2, p3 float64) []float64 {
	a := -p0 + 3*p1 - 3*p2 + p3
	b := 2 * (p0 - 2*p1 + p2)
	c := p1 - p0
	var roots []float64
	keep := func(t float64) {
		if t > 0 && t < 1 {
			roots = append(roots, t)
		}
	}
	// a t^2 + b t + c = 0; q avoids cancellation and divides safely for a
	// near zero, where one of the two quotients is not finite or out of range.
	disc := b*b - 4*a*c
	if disc < 0 {
		return nil
	}
	q := -(b + math.Copysign(math.Sqrt(disc), b)) / 2
	if a != 0 {
		keep(q / a)
	}
	if q != 0 {
		keep(c / q)
	}
	return roots
}

// Flatten returns one point list per subpath with curves replaced by chords
// that stay within tol mm of them. Closed subpaths end on their first point.
func (p Path) Flatten(tol float64) [][]Point {
	if tol <= 0 {
		tol = 0.01
	}
	var out [][]Point
	var cur []Point
	flush := func() {
		if len(cur) > 1 {
			out = append(out, cur)
		}
		cur = nil
	}
	p.each(func(op pathOp, from Point, pts []Point) {
		if len(cur) == 0 && op != opMove {
			cur = append(cur, from)
		}
		switch op {
		case opMove:
			flush()
			cur = append(cur, pts[0])
		case opLine:
			cur = append(cur, pts[0])
		case opCube:
			cur = flattenCube(cur, from, pts, tol)
		case opClose:
			if cur[0] != cur[len(cur)-1] {
				cur = append(cur, cur[0])
			}
			flush()
		}
	})
	flush()
	return out
}

// flattenCube appends the chord ends of one cubic. The number of equal
// parameter steps n follows from the bound |B”| h^2/8 on the distance
// between a curve and its chord, with |B”| <= 6 max(second differences).
func flattenCube(dst []Point, from Point, c []Point, tol float64) []Point {
	d1 := math.Hypot(from.X-2*c[0].X+c[1].X, from.Y-2*c[0].Y+c[1].Y)
	d2 := math.Hypot(c[0].X-2*c[1].X+c[2].X, c[0].Y-2*c[1].Y+c[2].Y)
	n := int(math.Ceil(math.Sqrt(6 * math.Max(d1, d2) / (8 * tol))))
	n = min(max(n, 1), 10000)
	for i := 1; i < n; i++ {
		dst = append(dst, cubeAt(from, c, float64(i)/float64(n)))
	}
	return append(dst, c[2])
}
