package join

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

const (
	// endStep is how far from a station, in X, the ends of lines are evaluated.
	endStep = 1e-7
	// sameEnd is the difference of temperature, in K, of two ends at a station that
	// are one point.
	sameEnd = 1e-4
	// stitchTol is that of the ends of one line on either side of a station.
	stitchTol = 0.05
	// levelTol is the difference of temperature, relative, within which a reaction
	// at constant T is found again at another X.
	levelTol = 1e-8
	// dependTol is the singular value below which compositions are dependent.
	dependTol = 1e-10
	// bendTol is how far, relative to the range of T, a line may leave the chord
	// between two of its points; bendDepth bounds the halvings.
	bendTol   = 5e-5
	bendDepth = 10
	// soundEvery is how many points of a line go by between two at which all phases
	// are asked whether they lie above the plane.
	soundEvery = 4
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
	var xs [2]float64 // of the last two
	sound := 0        // so many are known to be states of equilibrium
	for n := range at {
		x := at[n]
		if dir < 0 {
			x = at[len(at)-1-n]
		}
		guess := k
		if n > 1 {
			guess = lerp(out[n-2], k, (x-xs[0])/(xs[1]-xs[0]))
		}
		q, ok := e.follow(guess, x)
		if !ok && n > 1 {
			q, ok = e.follow(k, x)
		}
		if !ok || q.merged() {
			return out[:sound]
		}
		k = q
		out = append(out, k)
		if n%soundEvery == soundEvery-1 || n == len(at)-1 {
			if !e.sound(q.eq, q.zero) {
				return out[:sound]
			}
			sound = len(out)
		}
		xs[0], xs[1] = xs[1], x
	}
	return out
}

// lerp is a guess at a change from two others of its line, a where t is 0 and b where
// it is 1; compositions are those of b.
func lerp(a, b change, t float64) change {
	eq := *b.eq
	eq.Parts = slices.Clone(b.eq.Parts)
	for i := range eq.Mu {
		if d := b.eq.Mu[i] - a.eq.Mu[i]; !math.IsNaN(d) { // both absent
			eq.Mu[i] = a.eq.Mu[i] + t*d
		}
	}
	for i := range eq.Parts {
		eq.Parts[i].Mole = a.eq.Parts[i].Mole + t*(b.eq.Parts[i].Mole-a.eq.Parts[i].Mole)
	}
	return change{T: a.T + t*(b.T-a.T), above: b.above, below: b.below, eq: &eq, zero: b.zero}
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

// ends adds the points at the stations, carried on from two points a little beside
// them: at a station itself a part has no amount, or a component is absent.
func (e *engine) ends(s *slab, k int, pts []Point) []Point {
	beside := func(c *column, station float64) Point {
		step := math.Copysign(math.Min(endStep, math.Abs(c.x-station)/4), c.x-station)
		p := Point{station, c.changes[k].T}
		if q, ok := e.follow(c.changes[k], station+2*step); ok && math.Abs(q.T-p.T) < 5 {
			p.T = q.T
			if r, ok := e.follow(q, station+step); ok {
				p.T = 2*r.T - q.T
			}
		}
		return p
	}
	first, last := beside(s.left, s.from), beside(s.right, s.to)
	return append(slices.Insert(pts, 0, first), last)
}

// bend adds points between two of a line where it is curved.
func (e *engine) bend(pts []Point, a, b change, xa, xb float64, depth int) []Point {
	if depth == bendDepth {
		return pts
	}
	mid := (xa + xb) / 2
	q, ok := e.follow(lerp(a, b, 0.5), mid)
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
	pts = append(pts, Point{s.to, b.T})
	straighten(pts)
	return pts, nil
}

// straighten carries a line on to the stations, where the temperatures of its ends are
// those of the columns beside them.
func straighten(pts []Point) {
	n := len(pts)
	if n < 4 {
		return
	}
	on := func(end, a, b *Point) {
		if math.Abs(end.X-a.X) <= 2*stationStep && a.X != b.X {
			end.T = a.T + (b.T-a.T)/(b.X-a.X)*(end.X-a.X)
		}
	}
	on(&pts[0], &pts[1], &pts[2])
	on(&pts[n-1], &pts[n-2], &pts[n-3])
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

// close lets lines that meet at a station have one temperature there, that of a level
// if one of them is: the others' ends were evaluated a little beside it.
func (e *engine) close(s *slab) {
	for _, c := range [2]*column{s.left, s.right} {
		at := func(k int) *Point {
			if c == s.right {
				return &s.lines[k][len(s.lines[k])-1]
			}
			return &s.lines[k][0]
		}
		for k := 0; k < len(s.lines); {
			n, T := k+1, at(k).T
			if c.changes[k].level() {
				T = c.changes[k].T
			} else if n < len(s.lines) && slices.Equal(c.changes[k].above, c.changes[n].below) && math.Abs(T-at(n).T) < stitchTol {
				T = (T + at(n).T) / 2 // the nose of a field
				at(k).T, at(n).T = T, T
			}
			for ; n < len(s.lines) && at(n).T > at(n-1).T-sameEnd; n++ {
				if c.changes[n].level() {
					T = c.changes[n].T
				}
			}
			for ; k < n; k++ {
				at(k).T = math.Max(e.tMin, math.Min(e.tMax, T))
			}
		}
	}
}

// stitch gives a line that goes on beyond a station one temperature there.
func stitch(a, b *slab) {
	for i, p := range a.lines {
		for k, q := range b.lines {
			c, d := &a.right.changes[i], &b.left.changes[k]
			end, start := &p[len(p)-1], &q[0]
			if !slices.Equal(c.above, d.above) || !slices.Equal(c.below, d.below) || math.Abs(end.T-start.T) > stitchTol {
				continue
			}
			was, now := end.T, start.T
			T := was
			if d.level() && !c.level() {
				T = now
			}
			for _, o := range a.lines { // with the ends that it meets
				if o[len(o)-1].T == was {
					o[len(o)-1].T = T
				}
			}
			for _, o := range b.lines {
				if o[0].T == now {
					o[0].T = T
				}
			}
		}
	}
}
