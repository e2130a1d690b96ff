package render

import "math"

// lineClass says what a line means to a label that would lie on it.
type lineClass uint8

const (
	rigid lineClass = iota // boundary curves, frame, paths: words keep off
	faint                  // isotherms: they make way, but few should have to
	classes
)

// lineIndex holds straight segments in a grid of square cells, so that those
// near a box are found without looking at all.
type lineIndex struct {
	size       float64
	cols, rows int
	cells      [][]int32
	segs       []segment
	class      []lineClass
	half       []float64 // half lengths of the segments
	seen       []int32   // stamp of the last query that met a segment
	stamp      int32
}

// newLineIndex covers a page of w by h mm.
func newLineIndex(w, h float64) *lineIndex {
	const size = 3
	x := &lineIndex{size: size, cols: int(w/size) + 2, rows: int(h/size) + 2}
	x.cells = make([][]int32, x.cols*x.rows)
	return x
}

func (x *lineIndex) clampCol(v float64) int {
	return max(0, min(x.cols-1, int(math.Floor(v/x.size))))
}

func (x *lineIndex) clampRow(v float64) int {
	return max(0, min(x.rows-1, int(math.Floor(v/x.size))))
}

// visit calls f for the cells that an upright box touches.
func (x *lineIndex) visit(x0, y0, x1, y1 float64, f func(cell int)) {
	for r := x.clampRow(y0); r <= x.clampRow(y1); r++ {
		for c := x.clampCol(x0); c <= x.clampCol(x1); c++ {
			f(r*x.cols + c)
		}
	}
}

// add puts segments into the index; long ones should be split first, because a
// segment is filed under every cell of its bounding box.
func (x *lineIndex) add(class lineClass, segs ...segment) {
	for _, s := range segs {
		id := int32(len(x.segs))
		x.segs = append(x.segs, s)
		x.class = append(x.class, class)
		x.half = append(x.half, s.a.distance(s.b)/2)
		x.seen = append(x.seen, 0)
		x.visit(min(s.a.X, s.b.X), min(s.a.Y, s.b.Y), max(s.a.X, s.b.X), max(s.a.Y, s.b.Y), func(c int) {
			x.cells[c] = append(x.cells[c], id)
		})
	}
}

// crossed is the length of line of each class inside the box, and the length
// of rigid line inside the box grown by room further mm.
func (x *lineIndex) crossed(b box, room float64) (under [classes]float64, near float64) {
	wide := b.grown(room)
	reach := Point{wide.w, wide.h}.length()
	x.near(wide, func(id int32) {
		s := x.segs[id]
		if d := s.a.lerp(s.b, 0.5).minus(b.c); d.dot(d) > (reach+x.half[id])*(reach+x.half[id]) {
			return
		}
		class := x.class[id]
		if class == faint {
			under[faint] += b.chord(s)
			return
		}
		if l := wide.chord(s); l > 0 {
			near += l
			under[class] += b.chord(s)
		}
	})
	return under, near
}

// near calls f once for every segment filed near the box.
func (x *lineIndex) near(b box, f func(id int32)) {
	x.stamp++
	w, h := b.bounds()
	x.visit(b.c.X-w, b.c.Y-h, b.c.X+w, b.c.Y+h, func(c int) {
		for _, id := range x.cells[c] {
			if x.seen[id] != x.stamp {
				x.seen[id] = x.stamp
				f(id)
			}
		}
	})
}

// meets counts the rigid segments that s crosses.
func (x *lineIndex) meets(s segment) int {
	n := 0
	b := uprightBox(s.a.X, s.a.Y, s.b.X, s.b.Y).grown(0.01)
	x.near(b, func(id int32) {
		if x.class[id] == rigid && crosses(s, x.segs[id]) {
			n++
		}
	})
	return n
}

// crosses reports whether two segments cross at an inner point of both.
func crosses(s, t segment) bool {
	d, e := s.b.minus(s.a), t.b.minus(t.a)
	return d.cross(t.a.minus(s.a))*d.cross(t.b.minus(s.a)) < 0 &&
		e.cross(s.a.minus(t.a))*e.cross(s.b.minus(t.a)) < 0
}
