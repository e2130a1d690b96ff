package liquidus

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

const (
	stepFirst = 0.015 // first step, in triangle sides (T counts by tRef)
	stepMax   = 0.07  // longest step: a curve is never drawn with fewer than some 10 points a side
	stepMin   = 1e-8  // below this a curve is given up as lost
	turnAim   = 0.10  // aimed turn of the tangent per step, rad: chords stray by 1e-3 of a side at the most, cubics by 1e-5 and, beside an edge, 3e-4
	turnMax   = 0.25  // a step that turns more is repeated shorter
	stepsMax  = 5000  // bound on the steps of one curve

	// eventShy: when the cubic through a watched driving force comes this close
	// to zero (as a share of its slope times the step) the step is repeated
	// shorter, down to eventStep, so that a brief visit is not stepped over.
	eventShy  = 0.05
	eventStep = 0.004
	// zeroDrive is the driving force, in R·tRef, below which a phase counts as
	// saturated: the residual of a solved point with room for rounding.
	zeroDrive = 1e-10
	// tieCritical is the length of a tie line, in end-member fractions, at which a
	// curve is taken to its critical point by extrapolation: the error is of the
	// order of its fourth power.
	tieCritical = 0.02
)

// ending says how a traced curve ended.
type ending int

const (
	endLost     ending = iota // continuation failed
	endPhase                  // a watched phase became saturated
	endEdge                   // an edge of the triangle was reached
	endClosed                 // the curve came back to its start
	endLimit                  // the limit of temperature was reached
	endApex                   // an apex of the triangle was reached
	endCritical               // the two liquids, or two forms of a solid, became one
)

// tracePoint is one solved point of a curve.
type tracePoint struct {
	x        ternary.Composition
	z, t     vec // place and unit tangent in the direction of travel
	a, b     gibbs.State
	c        gibbs.State // the third phase, at the end of a curve at an invariant point
	extremum bool        // T is stationary here
}

func (p *tracePoint) place() place { return place{p.x, p.z[2]} }

// traced is a followed curve.
type traced struct {
	points []tracePoint
	end    ending
	edge   int // endEdge: the component that vanished; endApex: the one that is left
}

// watch is the driving force of one phase along a curve, in R·tRef, with its
// derivative along the tangent.
type watch struct {
	phase int
	other bool // another composition of a phase that is active already
	d, m  float64
	y     [3]float64
}

// tracer follows one curve.
type tracer struct {
	e        *engine
	a, b     constraint
	extrema  bool // look for extrema of T
	merging  bool // a and b, or b and the liquid itself, can become one phase
	s        site
	now, old []watch
	buffer   []tracePoint // where run collects its points; nil: anew
}

func newTracer(e *engine, a, b constraint) *tracer {
	t := &tracer{e: e, a: a, b: b, extrema: b.phase != isothermal && !e.samePlace(a.phase, b.phase)}
	t.merging = b.phase == gibbs.Liquid || b.phase == a.phase
	for i := gibbs.Liquid; i < len(e.sys.Solids); i++ {
		active := i == a.phase || i == b.phase || i == gibbs.Liquid
		if !active || e.phaseOf(i).ConvexAbove() > e.tLow {
			t.now = append(t.now, watch{phase: i, other: active})
		}
	}
	t.old = append([]watch(nil), t.now...)
	return t
}

// look evaluates the watched phases at the site.
func (t *tracer) look(dir vec) {
	k := 1 / t.e.rtRef
	for i := range t.now {
		w := &t.now[i]
		var q gibbs.Drive
		if w.other {
			q = t.otherForm(w.phase)
		} else {
			q = t.e.sys.Solids[w.phase].Drive(&t.s.pot.Mu, t.s.T)
		}
		w.d, w.y = q.D*k, q.Y
		if math.IsInf(w.d, -1) {
			w.m = 0
			continue
		}
		w.m = t.s.gradient(t.e, &q.C, q.S).dot(dir) * k
	}
}

// formSame is the difference in end-member fraction within which two maxima of a
// phase's driving force are one.
const formSame = 1e-5

// otherForm is the highest maximum of a phase's driving force besides those that
// are active already; −Inf where there is none.
func (t *tracer) otherForm(phase int) gibbs.Drive {
	none := gibbs.Drive{D: math.Inf(-1)}
	p := t.e.phaseOf(phase)
	if !p.CanUnmix(t.s.T) {
		return none
	}
	for _, q := range p.Maxima(&t.s.pot.Mu, t.s.T) {
		if phase == gibbs.Liquid && sameForm(q.Y, t.s.x) ||
			phase == t.a.phase && sameForm(q.Y, t.a.y) ||
			phase == t.b.phase && sameForm(q.Y, t.b.y) {
			continue
		}
		return q
	}
	return none
}

func sameForm(a, b [3]float64) bool {
	return math.Abs(a[0]-b[0])+math.Abs(a[1]-b[1])+math.Abs(a[2]-b[2]) < formSame
}

// tieLength is how far apart the two forms are that can become one.
func (t *tracer) tieLength() float64 {
	if !t.merging {
		return math.Inf(1)
	}
	u, v := t.a.y, t.b.y
	if t.b.phase == gibbs.Liquid {
		u = t.s.x
	}
	return math.Abs(u[0]-v[0]) + math.Abs(u[1]-v[1]) + math.Abs(u[2]-v[2])
}

// run follows the curve from a solved point in direction dir. A closable curve
// may come back to its start.
func (t *tracer) run(from place, dir vec, closable bool) traced {
	e := t.e
	out := traced{points: t.buffer[:0]}
	if t.buffer == nil {
		out.points = make([]tracePoint, 0, 48)
	}
	t.s.set(e, from)
	a, b := t.a, t.b
	a.eval(e, &t.s)
	b.eval(e, &t.s)
	t.a, t.b = a, b
	p := t.point(dir)
	out.points = append(out.points, p)
	t.look(dir)
	h := stepFirst
	start := p
	travelled := 0.0
	for steps := 0; steps < stepsMax && h >= stepMin; steps++ {
		if f, k := exitDistance(p.x, p.t); f <= h {
			if q, ok := t.land(&p, f, k); ok {
				if x, found := t.extremum(&p, &q, a, b); found {
					out.points = append(out.points, x)
				}
				out.points = append(out.points, q)
				out.end, out.edge = endEdge, k
				return out
			}
			h = math.Min(h, 0.7*f)
		}
		t.a, t.b = a, b
		q, turn, ok := t.step(&p, h)
		if !ok {
			h /= 2
			continue
		}
		chord := q.z.minus(p.z).norm()
		t.now, t.old = t.old, t.now
		t.look(q.t)
		hit, shy := t.events(chord)
		if shy && h > eventStep {
			t.now, t.old = t.old, t.now
			h /= 2
			continue
		}
		if hit {
			m, ok := t.locate(&p, &q, a, b)
			if !ok {
				t.now, t.old = t.old, t.now
				h /= 2
				continue
			}
			if x, found := t.extremum(&p, &m, a, b); found {
				out.points = append(out.points, x)
			}
			out.points = append(out.points, m)
			out.end = endPhase
			return out
		}
		if x, found := t.extremum(&p, &q, a, b); found {
			out.points = append(out.points, x)
		}
		if closable && travelled > 2*chord && passes(start, p.z, q.z, chord) && q.t.dot(start.t) > 0.9 {
			out.points = append(out.points, out.points[0])
			out.end = endClosed
			return out
		}
		out.points = append(out.points, q)
		travelled += chord
		p, a, b = q, t.a, t.b
		if k := apexAt(p.x); k >= 0 {
			out.end, out.edge = endApex, k
			return out
		}
		if tie := t.tieLength(); tie < tieCritical {
			out.end = endCritical
			return out
		}
		if p.z[2]*e.tRef > e.tCap {
			out.end = endLimit
			return out
		}
		h = math.Min(stepMax, h*math.Max(0.5, math.Min(2, turnAim/math.Max(turn, 1e-3))))
		if t.merging {
			h = math.Min(h, 0.2*t.tieLength())
		}
	}
	out.end = endLost
	return out
}

// step predicts along the tangent and corrects; ok is false when the curve was
// not found or turned too much.
func (t *tracer) step(p *tracePoint, h float64) (q tracePoint, turn float64, ok bool) {
	at := p.place().moved(p.t, h)
	if !at.inside() {
		return q, 0, false
	}
	t.s.set(t.e, at)
	dir, ok := t.e.correct(&t.s, &t.a, &t.b, p.t)
	if !ok {
		return q, 0, false
	}
	turn = math.Acos(math.Max(-1, math.Min(1, dir.dot(p.t))))
	if t.tieLength() < tieCritical/4 {
		return q, turn, false // stepped past the critical point, or fell into the trivial solution
	}
	return t.point(dir), turn, turn <= turnMax
}

// point is the point at the site.
func (t *tracer) point(dir vec) tracePoint {
	p := tracePoint{x: t.s.x, z: t.s.z, t: dir, a: t.a.state()}
	if t.b.phase != isothermal {
		p.b = t.b.state()
	}
	return p
}

// exitDistance is how far along dir the line from x leaves the triangle, and
// which component vanishes there.
func exitDistance(x ternary.Composition, dir vec) (float64, int) {
	best, which := math.Inf(1), -1
	for i := range x {
		d := dxdp[i][0]*dir[0] + dxdp[i][1]*dir[1]
		if d < 0 && -x[i]/d < best {
			best, which = -x[i]/d, i
		}
	}
	return best, which
}

// apexNear is the distance, in mole fraction, at which a curve that runs into an
// apex is taken to have arrived.
const apexNear = 1e-6

// apexAt returns the component of which x is all but pure, or -1.
func apexAt(x ternary.Composition) int {
	for i, v := range x {
		if v > 1-apexNear {
			return i
		}
	}
	return -1
}

// land solves the curve's end on the edge where component k vanishes.
func (t *tracer) land(from *tracePoint, f float64, k int) (tracePoint, bool) {
	e := t.e
	z, dir := from.z, from.t
	i, j := (k+1)%3, (k+2)%3
	aim := from.place().moved(dir, f)
	x := aim.x
	x0, dx := edgeLine(i, j)
	at := math.Max(1e-9, math.Min(1-1e-9, x[j]/(x[i]+x[j])))
	a, b := t.a, t.b
	var s site
	_, ok := e.solveOnLine(&s, &a, &b, x0, dx, at, aim.t*e.tRef)
	if !ok || s.z.minus(z).norm() > 4*f+1e-6 {
		return tracePoint{}, false
	}
	for i := range t.now {
		if t.now[i].other {
			continue
		}
		q := e.sys.Solids[t.now[i].phase].Drive(&s.pot.Mu, s.T)
		if q.D/e.rtRef > zeroDrive {
			return tracePoint{}, false // another phase comes first
		}
	}
	p := tracePoint{x: s.x, z: s.z, t: dir, a: a.state()}
	if b.phase != isothermal {
		p.b = b.state()
	}
	if d := s.z.minus(z); d.norm() > 1e-12 {
		p.t = d.scaled(1 / d.norm())
	}
	return p, true
}

// events compares the watched driving forces before and after a step. hit: one
// has become positive; shy: one may have been positive in between.
func (t *tracer) events(chord float64) (hit, shy bool) {
	for i := range t.now {
		d0, d1 := t.old[i].d, t.now[i].d
		if d1 > zeroDrive {
			hit = true
			continue
		}
		m0, m1 := t.old[i].m*chord, t.now[i].m*chord
		if m0 > 0 && m1 < 0 && !math.IsInf(d0, 0) && !math.IsInf(d1, 0) {
			if hermiteMax(d0, d1, m0, m1) > -eventShy*math.Max(m0, -m1) {
				shy = true
			}
		}
	}
	return hit, shy
}

// hermite is the cubic with values d0, d1 and slopes m0, m1 at 0 and 1.
func hermite(d0, d1, m0, m1, u float64) float64 {
	v := 1 - u
	return d0*(1+2*u)*v*v + m0*u*v*v + d1*u*u*(3-2*u) - m1*u*u*v
}

func hermiteMax(d0, d1, m0, m1 float64) float64 {
	best := math.Max(d0, d1)
	for k := 1; k < 12; k++ {
		best = math.Max(best, hermite(d0, d1, m0, m1, float64(k)/12))
	}
	return best
}

// hermiteRise is where the cubic last goes from negative to positive before 1.
func hermiteRise(d0, d1, m0, m1 float64) float64 {
	lo, hi := 0.0, 1.0
	for k := 15; k >= 0; k-- {
		u := float64(k) / 16
		if hermite(d0, d1, m0, m1, u) < 0 {
			lo = u
			break
		}
		hi = u
	}
	for k := 0; k < 30; k++ {
		mid := (lo + hi) / 2
		if hermite(d0, d1, m0, m1, mid) < 0 {
			lo = mid
		} else {
			hi = mid
		}
	}
	return (lo + hi) / 2
}

// locate solves for the first point between p and q at which a watched phase is
// saturated.
func (t *tracer) locate(p, q *tracePoint, a, b constraint) (tracePoint, bool) {
	e := t.e
	z0, z1 := p.z, q.z
	h := z1.minus(z0).norm()
	dir := z1.minus(z0).scaled(1 / h)
	var found tracePoint
	best := math.Inf(1)
	for i := range t.now {
		if t.now[i].d <= zeroDrive {
			continue
		}
		w0, w1 := t.old[i], t.now[i]
		u := 0.5
		if !math.IsInf(w0.d, 0) {
			u = hermiteRise(math.Min(w0.d, 0), w1.d, w0.m*h, w1.m*h)
		}
		var s site
		s.set(e, betweenPlaces(p.place(), q.place(), p.t, q.t, h, u))
		ca, cb := a, b
		cc := constraint{phase: w1.phase, y: w1.y}
		if !w1.other {
			cc.y = e.phaseOf(cc.phase).Drive(&s.pot.Mu, s.T).Y
		}
		if !e.solvePoint(&s, &ca, &cb, &cc) {
			return found, false
		}
		if w1.other && trivial(&s, &ca, &cb, &cc) {
			return found, false
		}
		along := s.z.minus(z0).dot(dir)
		off := s.z.minus(z0).plus(dir, -along).norm()
		if along < 1e-3*h && along < 1e-6 || along > 1.05*h || off > 0.3*h {
			return found, false
		}
		if along < best {
			best = along
			found = tracePoint{x: s.x, z: s.z, a: ca.state(), c: cc.state()}
			_, ga := ca.eval(e, &s)
			_, gb := cb.eval(e, &s)
			if cb.phase != isothermal {
				found.b = cb.state()
			}
			found.t, _ = tangent(ga, gb, dir)
		}
	}
	return found, !math.IsInf(best, 1)
}

// trivial reports that the third phase has become one of those it was to differ
// from.
func trivial(s *site, a, b, c *constraint) bool {
	return c.phase == gibbs.Liquid && sameForm(c.y, s.x) ||
		c.phase == a.phase && sameForm(c.y, a.y) ||
		c.phase == b.phase && sameForm(c.y, b.y)
}

// hermiteVec is the cubic through z0 and z1 with unit tangents t0 and t1.
func hermiteVec(z0, z1, t0, t1 vec, h, u float64) (z vec) {
	for i := range z {
		z[i] = hermite(z0[i], z1[i], t0[i]*h, t1[i]*h, u)
	}
	return z
}

// extremum looks for a stationary temperature between two points of a curve.
func (t *tracer) extremum(p, q *tracePoint, a, b constraint) (tracePoint, bool) {
	z0, t0, z1, t1 := p.z, p.t, q.z, q.t
	if !t.extrema || t0[2]*t1[2] >= 0 {
		return tracePoint{}, false
	}
	e := t.e
	chord := z1.minus(z0)
	h := chord.norm()
	lo, hi := 0.0, 1.0
	flo, fhi := t0[2], t1[2]
	var best tracePoint
	ok := false
	for round := 0; round < 60; round++ {
		u := (lo*fhi - hi*flo) / (fhi - flo)
		if round%3 == 2 {
			u = (lo + hi) / 2
		}
		var s site
		s.set(e, betweenPlaces(p.place(), q.place(), t0, t1, h, u))
		ca, cb := a, b
		dir, solved := e.correct(&s, &ca, &cb, chord.scaled(1/h))
		if !solved {
			return best, false
		}
		best = tracePoint{x: s.x, z: s.z, t: dir, a: ca.state(), b: cb.state(), extremum: true}
		ok = true
		if math.Abs(dir[2]) < 1e-12 || hi-lo < 1e-13 {
			break
		}
		if dir[2]*flo > 0 {
			lo, flo = u, dir[2]
		} else {
			hi, fhi = u, dir[2]
		}
	}
	return best, ok
}

// passes reports whether the curve's start lies on the step from z0 to z1.
func passes(start tracePoint, z0, z1 vec, chord float64) bool {
	d := z1.minus(z0).scaled(1 / chord)
	s := start.z.minus(z0)
	along := s.dot(d)
	return along >= 0 && along <= chord*1.0001 && s.plus(d, -along).norm() < 0.05*chord
}
