package join

import (
	"math"
	"slices"
)

const (
	// foldShare is the share of the way to where two lines are expected to meet that
	// a step goes: beyond it there is neither.
	foldShare = 0.9
	// foldLeast is the distance in X at which the meeting counts as located.
	foldLeast = 2e-10
	// foldAlike is the difference of temperature, relative to the one before, below
	// which both lines have fallen onto one.
	foldAlike = 1e-3
	foldSteps = 80
)

// fold follows two lines, n and the next, that are one line turning back: the upper and
// the lower edge of a field that ends in a round nose. The square of their distance falls to zero in
// a straight line, which the steps follow from within.
func (e *engine) fold(c *column, n int, away float64) (float64, bool) {
	if n+1 >= len(c.changes) {
		return 0, false
	}
	u, l := c.changes[n], c.changes[n+1]
	if u.eq == nil || l.eq == nil || !slices.Equal(u.above, l.below) {
		return 0, false
	}
	x, f := c.x, u.T-l.T
	h := 0.02 * (away - x)
	for range foldSteps {
		un, ok1 := e.follow(u, x+h)
		ln, ok2 := e.follow(l, x+h)
		fn := un.T - ln.T
		if !ok1 || !ok2 || fn >= f || fn < foldAlike*f {
			if h /= 2; math.Abs(h) < foldLeast {
				return 0, false
			}
			continue
		}
		left := h * fn * fn / (f*f - fn*fn)
		x, f, u, l = x+h, fn, un, ln
		if (x+left-away)*(away-c.x) > 0 {
			left = away - x
		}
		if math.Abs(left) < foldLeast {
			return x + left, true
		}
		h = foldShare * left
	}
	return 0, false
}
