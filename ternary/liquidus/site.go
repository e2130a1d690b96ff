package liquidus

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// vec is a point of the space in which curves are followed: the two Cartesian
// coordinates of the liquid in a triangle of side 1 (Composition.XY) and T/tRef.
type vec [3]float64

func (a vec) plus(b vec, s float64) vec { return vec{a[0] + s*b[0], a[1] + s*b[1], a[2] + s*b[2]} }
func (a vec) minus(b vec) vec           { return vec{a[0] - b[0], a[1] - b[1], a[2] - b[2]} }
func (a vec) dot(b vec) float64         { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }
func (a vec) norm() float64             { return math.Sqrt(a.dot(a)) }
func (a vec) scaled(s float64) vec      { return vec{s * a[0], s * a[1], s * a[2]} }
func (a vec) cross(b vec) vec {
	return vec{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}
func (a vec) flat() float64 { return math.Hypot(a[0], a[1]) }

// dxdp is the derivative of the mole fractions with respect to the two
// Cartesian coordinates.
var dxdp = [3][2]float64{
	{0, 2 / math.Sqrt(3)},
	{-1, -1 / math.Sqrt(3)},
	{1, -1 / math.Sqrt(3)},
}

// compositionAt inverts Composition.XY.
func compositionAt(px, py float64) ternary.Composition {
	x0 := 2 * py / math.Sqrt(3)
	x2 := px - py/math.Sqrt(3)
	return ternary.Composition{x0, 1 - x0 - x2, x2}
}

// place is a point of that space that keeps its fractions apart: near a side of
// the triangle a small fraction cannot be had from Cartesian coordinates to the
// precision that its logarithm needs.
type place struct {
	x ternary.Composition
	t float64 // T/tRef
}

// moved is the place a step further.
func (p place) moved(v vec, s float64) place {
	for i := range p.x {
		p.x[i] += s * (dxdp[i][0]*v[0] + dxdp[i][1]*v[1])
	}
	p.t += s * v[2]
	return p
}

func (p place) inside() bool { return p.x[0] > 0 && p.x[1] > 0 && p.x[2] > 0 && p.t > 0 }

// betweenPlaces is the cubic through p and q with unit tangents tp and tq.
func betweenPlaces(p, q place, tp, tq vec, h, u float64) (m place) {
	for i := range m.x {
		a := dxdp[i][0]*tp[0] + dxdp[i][1]*tp[1]
		b := dxdp[i][0]*tq[0] + dxdp[i][1]*tq[1]
		m.x[i] = hermite(p.x[i], q.x[i], a*h, b*h, u)
	}
	m.t = hermite(p.t, q.t, tp[2]*h, tq[2]*h, u)
	if !m.inside() {
		m.x, m.t = p.x.Lerp(q.x, u), p.t+u*(q.t-p.t)
	}
	return m
}

// site is a liquid at a temperature with its chemical potentials.
type site struct {
	z   vec
	x   ternary.Composition
	T   float64
	pot gibbs.Potentials
}

// set evaluates the site at a place. Fractions must be positive, or exactly zero
// for a component that is absent.
func (s *site) set(e *engine, p place) { s.setOn(e, p.x, p.t*e.tRef) }

// setOn evaluates the site at composition x and temperature T.
func (s *site) setOn(e *engine, x ternary.Composition, T float64) {
	px, py := x.XY()
	s.z = vec{px, py, T / e.tRef}
	s.x, s.T = x, T
	y := [3]float64(x)
	e.sys.Liquid.Potentials(&y, T, &s.pot)
}

func (s *site) place() place { return place{s.x, s.z[2]} }

// gradient returns the derivative of μ·c with respect to z at constant c, and
// adds the entropy S of a phase to its temperature part.
func (s *site) gradient(e *engine, c *[3]float64, S float64) vec {
	var dx [3]float64
	dT := S
	for i := 0; i < 3; i++ {
		if c[i] == 0 {
			continue
		}
		dT += c[i] * s.pot.DT[i]
		for j := 0; j < 3; j++ {
			dx[j] += c[i] * s.pot.DY[i][j]
		}
	}
	var g vec
	for j := 0; j < 3; j++ {
		g[0] += dx[j] * dxdp[j][0]
		g[1] += dx[j] * dxdp[j][1]
	}
	g[2] = dT * e.tRef
	return g
}
