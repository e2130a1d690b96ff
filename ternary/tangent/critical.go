package tangent

import (
	"math"

	"thalweg/ternary/gibbs"
)

// criticalRatio is that of the two forms' distance to the distance of the limits
// of stability between them, close to a critical point: √3, since the Gibbs energy
// is there a polynomial of fourth degree.
const criticalRatio = 1.7320508

// criticalReach are the distances, in end-member fraction, at which the limits of
// stability are looked for.
var criticalReach = [...]float64{1e-5, 3e-5, 1e-4, 3e-4, 1e-3, 3e-3, 0.01, 0.03, 0.1, 0.2}

// criticalStart guesses the two forms of a bulk that is all one phase and close to
// its critical point, where planes that touch one form all but touch the other and
// cutting planes cannot tell them apart. It looks along the direction in which the
// phase is softest for the stretch in which it is unstable.
func (s *simplex) criticalStart() ([]Part, bool) {
	phase, sum := s.basis[0].state.Phase, 0.0
	var y [3]float64
	for k := 0; k < s.n; k++ {
		if s.basis[k].state.Phase != phase {
			return nil, false
		}
		sum += s.amount[k]
		for i, v := range s.basis[k].state.Y {
			y[i] += s.amount[k] * v
		}
	}
	for i := range y {
		y[i] /= sum
	}
	p := phaseOf(s.sys, phase)
	v, ok := p.Softest(y, s.T)
	if !ok {
		return nil, false
	}
	at := func(d float64) [3]float64 { return [3]float64{y[0] + d*v[0], y[1] + d*v[1], y[2] + d*v[2]} }
	inside := func(d float64) bool {
		z := at(d)
		return z[0] > 0 && z[1] > 0 && z[2] > 0 || len(p.Members) == 2 && z[0] > 0 && z[1] > 0
	}
	curve := func(d float64) float64 { // second derivative of G along v
		z := at(d)
		var q gibbs.Potentials
		p.Potentials(&z, s.T, &q)
		c := 0.0
		for i := range p.Members {
			for k := range p.Members {
				if v[i] != 0 && v[k] != 0 {
					c += v[i] * v[k] * q.DY[i][k]
				}
			}
		}
		return c
	}
	// a point within the unstable stretch
	in := math.NaN()
	for _, d := range append([]float64{0}, criticalReach[:]...) {
		for _, d := range []float64{d, -d} {
			if math.IsNaN(in) && inside(d) && curve(d) < 0 {
				in = d
			}
		}
	}
	if math.IsNaN(in) {
		return nil, false
	}
	limit := func(sign float64) (float64, bool) {
		for _, r := range criticalReach {
			if d := in + sign*r; inside(d) && curve(d) > 0 {
				lo, hi := in, d
				for range 60 {
					if mid := (lo + hi) / 2; curve(mid) < 0 {
						lo = mid
					} else {
						hi = mid
					}
				}
				return hi, true
			}
		}
		return 0, false
	}
	a, ok1 := limit(-1)
	b, ok2 := limit(1)
	if !ok1 || !ok2 {
		return nil, false
	}
	mid, half := (a+b)/2, criticalRatio*(b-a)/2
	d1, d2 := mid-half, mid+half
	for !inside(d1) || !inside(d2) || d1 > 0 || d2 < 0 { // the bulk lies between the two
		if half < (b-a)/2 {
			return nil, false
		}
		if d1 > 0 || d2 < 0 {
			return nil, false
		}
		half *= 0.95
		d1, d2 = mid-half, mid+half
	}
	share := d2 / (d2 - d1)
	var out []Part
	for i, d := range [2]float64{d1, d2} {
		z := at(d)
		n := sum * share
		if i == 1 {
			n = sum * (1 - share)
		}
		out = append(out, Part{State: gibbs.State{Phase: phase, Y: z, C: p.Contents(z)}, Mole: n})
	}
	return out, true
}
