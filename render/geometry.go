package render

import (
	"container/heap"
	"math"
)

func (p Point) plus(q Point) Point       { return Point{p.X + q.X, p.Y + q.Y} }
func (p Point) minus(q Point) Point      { return Point{p.X - q.X, p.Y - q.Y} }
func (p Point) times(f float64) Point    { return Point{p.X * f, p.Y * f} }
func (p Point) dot(q Point) float64      { return p.X*q.X + p.Y*q.Y }
func (p Point) cross(q Point) float64    { return p.X*q.Y - p.Y*q.X }
func (p Point) length() float64          { return math.Sqrt(p.X*p.X + p.Y*p.Y) }
func (p Point) distance(q Point) float64 { return p.minus(q).length() }
func (p Point) left() Point              { return Point{-p.Y, p.X} } // turned a quarter anticlockwise
func (p Point) lerp(q Point, t float64) Point {
	return Point{p.X + t*(q.X-p.X), p.Y + t*(q.Y-p.Y)}
}

// unit returns p at length 1, or the zero point for a zero p.
func (p Point) unit() Point {
	if l := p.length(); l > 0 {
		return p.times(1 / l)
	}
	return Point{}
}

// polar returns the unit vector at an angle in degrees.
func polar(deg float64) Point {
	s, c := math.Sincos(deg * math.Pi / 180)
	return Point{c, s}
}

// segment is a straight line between two points.
type segment struct{ a, b Point }

// distance is the distance of q from the segment.
func (s segment) distance(q Point) float64 {
	d := s.b.minus(s.a)
	l2 := d.dot(d)
	if l2 == 0 {
		return q.distance(s.a)
	}
	t := max(0, min(1, q.minus(s.a).dot(d)/l2))
	return q.distance(s.a.lerp(s.b, t))
}

// box is an oriented rectangle: centre, unit axis along its width, half width
// and half height. Everything in mm.
type box struct {
	c    Point
	u    Point
	w, h float64
}

// uprightBox spans two opposite corners.
func uprightBox(x0, y0, x1, y1 float64) box {
	return box{Point{(x0 + x1) / 2, (y0 + y1) / 2}, Point{1, 0}, math.Abs(x1-x0) / 2, math.Abs(y1-y0) / 2}
}

// grown returns the box with d added on every side.
func (b box) grown(d float64) box { b.w += d; b.h += d; return b }

// local gives q in the box's own axes, from its centre.
func (b box) local(q Point) Point {
	d := q.minus(b.c)
	return Point{d.dot(b.u), b.u.cross(d)}
}

// contains reports whether q lies in the box or on its rim.
func (b box) contains(q Point) bool {
	p := b.local(q)
	return math.Abs(p.X) <= b.w && math.Abs(p.Y) <= b.h
}

// corners in anticlockwise order.
func (b box) corners() [4]Point {
	x, y := b.u.times(b.w), b.u.left().times(b.h)
	return [4]Point{
		b.c.minus(x).minus(y), b.c.plus(x).minus(y), b.c.plus(x).plus(y), b.c.minus(x).plus(y),
	}
}

// bounds returns half width and half height of the upright box around b.
func (b box) bounds() (w, h float64) {
	cx, cy := math.Abs(b.u.X), math.Abs(b.u.Y)
	return b.w*cx + b.h*cy, b.w*cy + b.h*cx
}

// overlaps reports whether two boxes share an inner point, by the
// separating-axis test on the four axes.
func (b box) overlaps(o box) bool {
	d := o.c.minus(b.c)
	reach := Point{b.w, b.h}.length() + Point{o.w, o.h}.length()
	if d.dot(d) >= reach*reach {
		return false
	}
	c, s := math.Abs(b.u.dot(o.u)), math.Abs(b.u.cross(o.u))
	return math.Abs(d.dot(b.u)) < b.w+o.w*c+o.h*s &&
		math.Abs(d.dot(b.u.left())) < b.h+o.w*s+o.h*c &&
		math.Abs(d.dot(o.u)) < o.w+b.w*c+b.h*s &&
		math.Abs(d.dot(o.u.left())) < o.h+b.w*s+b.h*c
}

// chord is the length of the part of s inside the box, by Liang and Barsky's
// parametric clipping (1984).
func (b box) chord(s segment) float64 {
	p, q := b.local(s.a), b.local(s.b)
	d := q.minus(p)
	t0, t1 := 0.0, 1.0
	for _, e := range [4][2]float64{{-d.X, p.X + b.w}, {d.X, b.w - p.X}, {-d.Y, p.Y + b.h}, {d.Y, b.h - p.Y}} {
		switch {
		case e[0] == 0:
			if e[1] < 0 {
				return 0
			}
		case e[0] < 0:
			t0 = max(t0, e[1]/e[0])
		default:
			t1 = min(t1, e[1]/e[0])
		}
	}
	if t1 <= t0 {
		return 0
	}
	return (t1 - t0) * d.length()
}

// region is a polygon with holes; rings are not closed by a repeated point.
type region struct {
	rings [][]Point
}

// contains uses the even-odd rule over all rings.
func (r region) contains(q Point) bool {
	in := false
	for _, ring := range r.rings {
		for i, a := range ring {
			b := ring[(i+1)%len(ring)]
			if (a.Y > q.Y) != (b.Y > q.Y) && q.X < a.X+(q.Y-a.Y)/(b.Y-a.Y)*(b.X-a.X) {
				in = !in
			}
		}
	}
	return in
}

// depth is the distance of q from the nearest rim, negative outside.
func (r region) depth(q Point) float64 {
	d := math.Inf(1)
	for _, ring := range r.rings {
		for i, a := range ring {
			d = min(d, segment{a, ring[(i+1)%len(ring)]}.distance(q))
		}
	}
	if !r.contains(q) {
		return -d
	}
	return d
}

// bounds returns the corners of the upright box around the outer ring.
func (r region) bounds() (lo, hi Point) {
	lo, hi = Point{math.Inf(1), math.Inf(1)}, Point{math.Inf(-1), math.Inf(-1)}
	for _, q := range r.rings[0] {
		lo = Point{min(lo.X, q.X), min(lo.Y, q.Y)}
		hi = Point{max(hi.X, q.X), max(hi.Y, q.Y)}
	}
	return lo, hi
}

// axis is the direction, in degrees between −90 and 90, in which the outer ring
// extends furthest: the principal axis of its outline.
func (r region) axis() float64 {
	var total, sx, sy, xx, xy, yy float64
	ring := r.rings[0]
	for i, p := range ring {
		q := ring[(i+1)%len(ring)]
		l, m := p.distance(q), p.lerp(q, 0.5)
		total += l
		sx, sy = sx+l*m.X, sy+l*m.Y
		xx, xy, yy = xx+l*m.X*m.X, xy+l*m.X*m.Y, yy+l*m.Y*m.Y
	}
	if total == 0 {
		return 0
	}
	xx, xy, yy = xx-sx*sx/total, xy-sx*sy/total, yy-sy*sy/total
	return math.Atan2(2*xy, xx-yy) * 90 / math.Pi
}

// pole returns the centre and radius of the largest circle inside the region,
// to tol mm: a branch-and-bound search over square cells, where a cell of half
// size s around a centre of depth d cannot hold a depth above d + s√2.
func (r region) pole(tol float64) (c Point, radius float64) {
	lo, hi := r.bounds()
	size := max(hi.X-lo.X, hi.Y-lo.Y)
	if len(r.rings[0]) < 3 || size <= 0 {
		return lo, 0
	}
	s := min(hi.X-lo.X, hi.Y-lo.Y) / 2
	s = max(s, size/16)
	var q cells
	best := cell{c: r.rings[0][0]}
	add := func(c Point, s float64) {
		d := r.depth(c)
		if d > best.depth {
			best = cell{c: c, depth: d}
		}
		if limit := d + s*math.Sqrt2; limit > best.depth+tol {
			heap.Push(&q, cell{c, s, d, limit})
		}
	}
	for x := lo.X; x < hi.X; x += 2 * s {
		for y := lo.Y; y < hi.Y; y += 2 * s {
			add(Point{x + s, y + s}, s)
		}
	}
	for q.Len() > 0 {
		top := heap.Pop(&q).(cell)
		if top.limit <= best.depth+tol {
			break
		}
		h := top.s / 2
		for _, d := range [4]Point{{-h, -h}, {h, -h}, {-h, h}, {h, h}} {
			add(top.c.plus(d), h)
		}
	}
	return best.c, best.depth
}

type cell struct {
	c               Point
	s, depth, limit float64
}

// cells is a heap with the most promising cell on top; ties go to the place
// further left and lower, so that the search is deterministic.
type cells []cell

func (q cells) Len() int { return len(q) }
func (q cells) Less(i, j int) bool {
	if q[i].limit != q[j].limit {
		return q[i].limit > q[j].limit
	}
	if q[i].c.X != q[j].c.X {
		return q[i].c.X < q[j].c.X
	}
	return q[i].c.Y < q[j].c.Y
}
func (q cells) Swap(i, j int) { q[i], q[j] = q[j], q[i] }
func (q *cells) Push(x any)   { *q = append(*q, x.(cell)) }
func (q *cells) Pop() any {
	n := len(*q) - 1
	c := (*q)[n]
	*q = (*q)[:n]
	return c
}

// convex is a convex polygon in anticlockwise order.
type convex []Point

// clip returns the pieces of a polyline that lie inside, cut at the rim.
func (v convex) clip(line []Point) [][]Point {
	var out [][]Point
	var cur []Point
	for i := 1; i < len(line); i++ {
		t0, t1, ok := v.clipSegment(line[i-1], line[i])
		if !ok {
			if len(cur) > 1 {
				out = append(out, cur)
			}
			cur = nil
			continue
		}
		if t0 > 0 || len(cur) == 0 {
			if len(cur) > 1 {
				out = append(out, cur)
			}
			cur = []Point{line[i-1].lerp(line[i], t0)}
		}
		cur = append(cur, line[i-1].lerp(line[i], t1))
	}
	if len(cur) > 1 {
		out = append(out, cur)
	}
	return out
}

// clipSegment returns the parameters between which a–b is inside (Cyrus and
// Beck 1978).
func (v convex) clipSegment(a, b Point) (t0, t1 float64, ok bool) {
	t0, t1 = 0, 1
	d := b.minus(a)
	for i, p := range v {
		e := v[(i+1)%len(v)].minus(p)
		num, den := e.cross(a.minus(p)), e.cross(d)
		switch {
		case den == 0:
			if num < 0 {
				return 0, 0, false
			}
		case den > 0:
			t0 = max(t0, -num/den)
		default:
			t1 = min(t1, -num/den)
		}
	}
	return t0, t1, t0 < t1
}

// excess is how far q lies outside, 0 inside.
func (v convex) excess(q Point) float64 {
	out := 0.0
	for i, p := range v {
		e := v[(i+1)%len(v)].minus(p).unit()
		out = max(out, -e.cross(q.minus(p)))
	}
	return out
}

// pull moves q towards the inner point from, just so far that it is inside.
func (v convex) pull(from, q Point) Point {
	if v.excess(q) == 0 {
		return q
	}
	_, t1, ok := v.clipSegment(from, q)
	if !ok {
		return from
	}
	return from.lerp(q, t1)
}
