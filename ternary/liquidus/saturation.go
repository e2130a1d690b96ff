package liquidus

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

const (
	// satTol is the relative change of T at which Newton's iteration for a
	// saturation temperature stops: below a nanokelvin at silicate temperatures.
	satTol = 1e-13
	// satScan is the ratio of successive temperatures of the downward scan that
	// stands behind Newton's method.
	satScan = 0.93
)

// column is a liquid composition with its chemical potentials as functions of T.
type column struct {
	x    ternary.Composition
	mu   [3]gibbs.TFunc
	zero [3]bool
}

func (e *engine) column(x ternary.Composition) column {
	c := column{x: x, mu: e.sys.Liquid.Column(x)}
	for i := range x {
		c.zero[i] = x[i] <= 0
	}
	return c
}

func (c *column) at(T float64) (mu [3]float64) {
	for i := range mu {
		if c.zero[i] {
			mu[i] = math.Inf(-1)
		} else {
			mu[i] = c.mu[i].At(T)
		}
	}
	return mu
}

// slope is the part of dD/dT at constant x that comes from the potentials.
func (c *column) slope(T float64, contents *[3]float64) float64 {
	d := 0.0
	for i, n := range contents {
		if n != 0 && !c.zero[i] {
			d += n * c.mu[i].Slope(T)
		}
	}
	return d
}

// saturated is T_φ(x), the highest temperature at which the liquid is saturated
// with a phase, and the phase's fractions there. T is −Inf where that never
// happens between the engine's limits and +Inf where the liquid is still
// oversaturated at the upper limit.
type saturated struct {
	T float64
	Y [3]float64
}

// saturation finds T_φ(x) by Newton's method from the hint, and by a scan from
// the upper limit downward where that fails or where D does not fall with T.
func (e *engine) saturation(phase int, c *column, hint saturated) saturated {
	p := e.sys.Solids[phase]
	if p.Stoichiometric() {
		return e.saturationPure(p, c, hint.T)
	}
	T := hint.T
	if !(T > e.tLow && T < e.tCap) {
		T = e.tRef
	}
	for round := 0; round < 30; round++ {
		q := e.drive(p, c, T)
		if math.IsInf(q.D, 0) {
			return saturated{T: math.Copysign(math.Inf(1), q.D)}
		}
		s := q.S + c.slope(T, &q.C)
		if s >= 0 {
			break
		}
		next := T - q.D/s
		next = math.Max(0.5*T, math.Min(next, 1.5*T))
		if math.Abs(next-T) <= satTol*T {
			if e.drive(p, c, e.tCap).D > 0 {
				return saturated{T: math.Inf(1), Y: q.Y}
			}
			return saturated{T: next, Y: q.Y}
		}
		if next < e.tLow || next > e.tCap {
			break
		}
		T = next
	}
	return e.saturationScan(p, c)
}

func (e *engine) drive(p *gibbs.Phase, c *column, T float64) gibbs.Drive {
	mu := c.at(T)
	return p.Drive(&mu, T)
}

// saturationPure solves α + βT + γT ln T = 0 for a stoichiometric phase, by
// Newton's method from T if that is within the limits.
func (e *engine) saturationPure(p *gibbs.Phase, c *column, T float64) saturated {
	m := &p.Members[0]
	f := gibbs.TFunc{A: -m.G.A, B: -m.G.B, C: -m.G.C}
	above := false
	for i, n := range m.C {
		switch {
		case n == 0:
		case !c.zero[i]:
			f = f.Add(c.mu[i], n)
		case n > 0: // holds a component that is absent
			return saturated{T: math.Inf(-1)}
		default:
			above = true
		}
	}
	y := [3]float64{1}
	if above {
		return saturated{T: math.Inf(1), Y: y}
	}
	if f.At(e.tCap) > 0 {
		return saturated{T: math.Inf(1), Y: y}
	}
	if f.C == 0 {
		if T := -f.A / f.B; f.B < 0 && T > e.tLow {
			return saturated{T: T, Y: y}
		}
		return saturated{T: math.Inf(-1)}
	}
	if !(T > e.tLow && T < e.tCap) {
		T = e.tRef
	}
	for round := 0; round < 40; round++ {
		ln := math.Log(T)
		s := f.B + f.C*(1+ln)
		if s >= 0 {
			break
		}
		next := math.Max(0.5*T, math.Min(T-(f.A+T*(f.B+f.C*ln))/s, 1.5*T))
		if next < e.tLow {
			break
		}
		if math.Abs(next-T) <= satTol*T {
			return saturated{T: next, Y: y}
		}
		T = next
	}
	return e.saturationScan(p, c)
}

// saturationScan looks downward from the upper limit for the first change of
// sign and bisects it.
func (e *engine) saturationScan(p *gibbs.Phase, c *column) saturated {
	hi := e.tCap
	q := e.drive(p, c, hi)
	if q.D > 0 {
		return saturated{T: math.Inf(1), Y: q.Y}
	}
	for hi > e.tLow {
		lo := hi * satScan
		q = e.drive(p, c, lo)
		if q.D > 0 {
			for hi-lo > satTol*hi {
				mid := (lo + hi) / 2
				if mid == lo || mid == hi {
					break
				}
				if q = e.drive(p, c, mid); q.D > 0 {
					lo = mid
				} else {
					hi = mid
				}
			}
			return saturated{T: (lo + hi) / 2, Y: q.Y}
		}
		hi = lo
	}
	return saturated{T: math.Inf(-1)}
}

// surface is the liquidus at one composition.
type surface struct {
	primary int // index of the primary phase, or -1 when no solid ever saturates
	T       float64
	all     []saturated // by solid
	split   bool        // the liquid separates into two before it crystallises
	other   [3]float64  // towards this liquid
}

// code is the mark of the region to which the liquid belongs: its primary solid,
// or splitCode.
func (e *engine) code(s *surface) int {
	if s.split {
		return e.splitCode()
	}
	return s.primary
}

// surface evaluates all saturation temperatures at x. all is used as scratch
// (allocated when nil) and holds hints on entry.
func (e *engine) surface(x ternary.Composition, all []saturated) surface {
	s := e.saturations(x, all)
	var q gibbs.Drive
	if q, s.split = e.splits(x, s.T); s.split {
		s.other = q.Y
	}
	return s
}

// saturations is surface without the question whether the liquid separates.
func (e *engine) saturations(x ternary.Composition, all []saturated) surface {
	if all == nil {
		all = make([]saturated, len(e.sys.Solids))
	}
	c := e.column(x)
	s := surface{primary: -1, T: math.Inf(-1), all: all}
	for i := range e.sys.Solids {
		all[i] = e.saturation(i, &c, all[i])
		if all[i].T > s.T {
			s.T, s.primary = all[i].T, i
		}
	}
	return s
}
