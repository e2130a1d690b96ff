package join

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

const (
	// endStep is how far from a station, in X, the ends of lines are evaluated.
	endStep = 1e-9
	// levelTol is the difference of temperature, relative, within which a reaction
	// at constant T is found again at another X.
	levelTol = 1e-8
	// dependTol is the singular value below which compositions are dependent.
	dependTol = 1e-10
	// bendTol is how far, relative to the range of T, a line may leave the chord
	// between two of its points; bendDepth bounds the halvings.
	bendTol   = 5e-5
	bendDepth = 10
	// strayTol is by how many kelvin a line may miss the column at its end.
	strayTol = 1e-6
)

// trace follows the lines of a slab over the given X.
func (e *engine) trace(s *slab, xs []float64) error {
	s.lines = make([][]Point, len(s.left.changes))
	for k := range s.left.changes {
		pts, ok := e.traceLine(s, k, xs)
		if !ok {
			var err error
			if pts, err = e.bracketLine(s, k, xs); err != nil {
				return err
			}
		}
		for i := range pts { // a change just outside the range is at its limit
			pts[i].T = math.Max(e.tMin, math.Min(e.tMax, pts[i].T))
		}
		s.lines[k] = pts
	}
	e.close(s)
	return nil
}

// inner are the X within a slab at which its lines are given.
func (s *slab) inner(xs []float64) (out []float64) {
	lo, hi := s.left.x, s.right.x
	if lo > s.from && lo < s.to {
		out = append(out, lo)
	}
	for _, x := range xs {
		if x > lo && x < hi {
			out = append(out, x)
		}
	}
	if hi > lo && hi < s.to {
		out = append(out, hi)
	}
	return out
}

// traceLine follows one line from the left column to the right one.
func (e *engine) traceLine(s *slab, k int, xs []float64) ([]Point, bool) {
	a, b := s.left.changes[k], s.right.changes[k]
	if a.eq == nil || b.eq == nil {
		return nil, false
	}
	if a.level() && b.level() && math.Abs(a.T-b.T) <= levelTol*a.T {
		var pts []Point
		for _, x := range []float64{s.from, s.left.x, s.right.x, s.to} {
			if n := len(pts); n == 0 || x > pts[n-1].X {
				pts = append(pts, Point{x, a.T})
			}
		}
		return pts, true
	}
	at := s.inner(xs)
	ahead := e.run(a, at, 1)
	if len(ahead) < len(at) {
		back := e.run(b, at, -1)
		return e.patch(s, k, at, ahead, back)
	}
	if n := len(ahead); n > 0 {
		if end, ok := e.follow(ahead[n-1], s.right.x); !ok || math.Abs(end.T-b.T) > strayTol {
			return nil, false
		}
	}
	return e.ends(s, k, e.bent(nil, ahead, at)), true
}

// run follows a change over the given X, forward or backward, as far as it goes.
// It does not go where the phase that comes or goes becomes one with another.
func (e *engine) run(k change, at []float64, dir int) (out []change) {
	phases := partPhases(&k)
	for n := range at {
		x := at[n]
		if dir < 0 {
			x = at[len(at)-1-n]
		}
		q, ok := e.follow(k, x)
		if !ok || !slices.Equal(partPhases(&q), phases) || q.merged() || !e.sound(q.eq, q.zero) {
			return out
		}
		k = q
		out = append(out, k)
	}
	return out
}

// merged reports that two forms of a phase have become one.
func (k *change) merged() bool {
	for i, p := range k.eq.Parts {
		for _, o := range k.eq.Parts[:i] {
			if o.State.Phase == p.State.Phase && alike(o.State.Y, p.State.Y) {
				return true
			}
		}
	}
	return false
}

// bent appends the points of a run, with more where it is curved.
func (e *engine) bent(pts []Point, run []change, at []float64) []Point {
	for i, q := range run {
		if i > 0 {
			pts = e.bend(pts, run[i-1], q, at[i-1], at[i], 0)
		}
		pts = append(pts, Point{at[i], q.T})
	}
	return pts
}

// patch brackets what lies between two runs from either end: the top of a solvus.
func (e *engine) patch(s *slab, k int, at []float64, ahead, back []change) ([]Point, bool) {
	n, m := len(ahead), len(at)-len(back)
	if m < n {
		m = n
		back = back[:len(at)-n]
	}
	slices.Reverse(back)
	pts := e.bent(nil, ahead, at[:n])
	c := s.left.changes[k]
	guess := c.T
	for _, x := range at[n:m] {
		if len(pts) > 0 {
			guess = pts[len(pts)-1].T
		}
		T, ok := e.bracket(x, guess, c.above, c.below)
		if !ok {
			return nil, false
		}
		pts = append(pts, Point{x, T})
	}
	return e.ends(s, k, e.bent(pts, back, at[m:])), true
}

// ends adds the points at the stations, evaluated a little beside them.
func (e *engine) ends(s *slab, k int, pts []Point) []Point {
	beside := func(c *column, station, x float64) Point {
		p := Point{station, c.changes[k].T}
		if q, ok := e.follow(c.changes[k], x); ok && math.Abs(q.T-p.T) < 5 {
			p.T = q.T
		}
		return p
	}
	first := beside(s.left, s.from, s.from+math.Min(endStep, (s.left.x-s.from)/2))
	last := beside(s.right, s.to, s.to-math.Min(endStep, (s.to-s.right.x)/2))
	return append(slices.Insert(pts, 0, first), last)
}

// bend adds points between two of a line where it is curved.
func (e *engine) bend(pts []Point, a, b change, xa, xb float64, depth int) []Point {
	if depth == bendDepth {
		return pts
	}
	mid := (xa + xb) / 2
	q, ok := e.follow(a, mid)
	if !ok || math.Abs(q.T-(a.T+b.T)/2) < bendTol*(e.tMax-e.tMin) || (q.T-a.T)*(q.T-b.T) > 0 && math.Abs(q.T-(a.T+b.T)/2) > math.Abs(a.T-b.T)+1 {
		return pts
	}
	pts = e.bend(pts, a, q, xa, mid, depth+1)
	pts = append(pts, Point{mid, q.T})
	return e.bend(pts, q, b, mid, xb, depth+1)
}

// level reports that a change is a reaction among its phases, which runs at one
// temperature whatever the bulk: their compositions are dependent.
func (k *change) level() bool {
	if k.eq == nil {
		return false
	}
	n := len(k.eq.Parts)
	if n > 3 {
		return true
	}
	c := mat.NewDense(3, n, nil)
	for j, p := range k.eq.Parts {
		size := math.Abs(p.State.C[0]) + math.Abs(p.State.C[1]) + math.Abs(p.State.C[2])
		for i, v := range p.State.C {
			c.Set(i, j, v/size)
		}
	}
	var svd mat.SVD
	if !svd.Factorize(c, mat.SVDNone) {
		return false
	}
	return svd.Values(nil)[n-1] < dependTol
}

func partPhases(k *change) (out []int) {
	for _, p := range k.eq.Parts {
		out = append(out, p.State.Phase)
	}
	return out
}

// bracketLine finds the points of one line from whole columns, for lines along
// which Newton's method has no hold: the top of a solvus.
func (e *engine) bracketLine(s *slab, k int, xs []float64) ([]Point, error) {
	a, b := s.left.changes[k], s.right.changes[k]
	pts := []Point{{s.from, a.T}}
	for _, x := range s.inner(xs) {
		u := (x - s.left.x) / math.Max(s.right.x-s.left.x, 1e-300)
		guess := a.T + u*(b.T-a.T)
		if n := len(pts); n > 1 {
			guess = pts[n-1].T
		}
		T, ok := e.bracket(x, guess, a.above, a.below)
		if !ok {
			c, err := e.column(x)
			if err != nil {
				return nil, err
			}
			if k >= len(c.changes) {
				continue
			}
			T = c.changes[k].T
		}
		pts = append(pts, Point{x, T})
	}
	return append(pts, Point{s.to, b.T}), nil
}

// bracket finds the temperature near a guess between two assemblages.
func (e *engine) bracket(x, guess float64, above, below []int) (float64, bool) {
	is := func(T float64, want []int) bool {
		q, err := e.solve(x, T)
		return err == nil && slices.Equal(phasesOf(q), want)
	}
	for w := 1e-3 * guess; w < 0.06*guess; w *= 3 {
		lo, hi := guess-w, guess+w
		if !is(hi, above) || !is(lo, below) {
			continue
		}
		for hi-lo > columnLeast {
			mid := (hi + lo) / 2
			switch {
			case is(mid, above):
				hi = mid
			case is(mid, below):
				lo = mid
			default:
				return 0, false
			}
		}
		return (hi + lo) / 2, true
	}
	return 0, false
}

// close lets lines that meet at a station have one temperature there: their ends
// were evaluated a little beside it.
func (e *engine) close(s *slab) {
	for _, end := range []bool{false, true} {
		at := func(k int) *Point {
			if end {
				return &s.lines[k][len(s.lines[k])-1]
			}
			return &s.lines[k][0]
		}
		for k := 1; k < len(s.lines); k++ {
			if d := at(k-1).T - at(k).T; d < 0 || d < 1e-4 {
				at(k).T = at(k - 1).T
			}
		}
	}
}
