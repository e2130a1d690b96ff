package gibbs

import "math"

// Starts of the search for all maxima of a phase that can unmix: a mesh fine
// enough that each basin of a Redlich–Kister model of low order holds a node.
const (
	startMesh2 = 40
	startMesh3 = 20
)

// maxima finds all local maxima of the driving force: the nodes of a mesh that
// are not lower than their neighbours are starts of Newton's method. From every
// maximum found, points along the direction in which the phase is softest are
// starts as well, since a gap narrower than the mesh opens along it.
func (p *Phase) maxima(d *[3]float64, T float64) []Drive {
	var starts [][3]float64
	if len(p.Members) == 2 || p.dead(d) {
		starts = p.starts2(d, T)
	} else {
		starts = p.starts3(d, T)
	}
	out := make([]Drive, 0, 3)
	for _, y := range starts {
		q := p.climb(d, y, T)
		if p.settled(d, q.Y, T) && !p.isMaximum(q.Y, T) {
			out = p.probe(out, d, q.Y, T) // a saddle: what it divides lies on both sides
			continue
		}
		out = p.addMaximum(out, d, q.Y, T)
	}
	for k := 0; k < len(out) && k < 4; k++ {
		out = p.probe(out, d, out[k].Y, T)
	}
	for i := 1; i < len(out); i++ { // insertion sort: highest first
		for k := i; k > 0 && out[k].D > out[k-1].D; k-- {
			out[k], out[k-1] = out[k-1], out[k]
		}
	}
	return out
}

// probes are the distances, in end-member fraction, of the starts along the
// softest direction.
var probes = [12]float64{0.006, -0.006, 0.02, -0.02, 0.05, -0.05, 0.1, -0.1, 0.18, -0.18, 0.3, -0.3}

// probe climbs from points along the softest direction through y.
func (p *Phase) probe(out []Drive, d *[3]float64, y [3]float64, T float64) []Drive {
	v, ok := p.Softest(y, T)
	if !ok {
		return out
	}
	for _, s := range probes {
		z := [3]float64{y[0] + s*v[0], y[1] + s*v[1], y[2] + s*v[2]}
		if z[0] >= 0 && z[1] >= 0 && z[2] >= 0 {
			out = p.addMaximum(out, d, z, T)
		}
	}
	return out
}

// addMaximum climbs from y and adds the maximum reached, if it is new.
func (p *Phase) addMaximum(out []Drive, d *[3]float64, y [3]float64, T float64) []Drive {
	q := p.climb(d, y, T)
	if !p.isMaximum(q.Y, T) || !p.settled(d, q.Y, T) {
		return out
	}
	for i := range out {
		if near(out[i].Y, q.Y) {
			if q.D > out[i].D {
				out[i] = q
			}
			return out
		}
	}
	return append(out, q)
}

// Softest is the direction in y, Σ = 0 and of unit largest entry, along which
// the Gibbs energy at y curves least in proportion to ideal mixing.
func (p *Phase) Softest(y [3]float64, T float64) (v [3]float64, ok bool) {
	n := len(p.Members) - 1
	for k := 0; k <= n; k++ {
		if y[k] <= 1e-9 {
			return v, false
		}
	}
	if n == 1 {
		return [3]float64{1, -1}, true
	}
	var q Potentials
	p.Potentials(&y, T, &q)
	var h [2][2]float64
	for a := 0; a < n; a++ {
		for b := 0; b < n; b++ {
			h[a][b] = (q.DY[a][b] - q.DY[a][n] - q.DY[n][b] + q.DY[n][n]) * math.Sqrt(y[a]*y[b])
		}
	}
	mean, diff := (h[0][0]+h[1][1])/2, (h[0][0]-h[1][1])/2
	low := mean - math.Hypot(diff, h[0][1])
	e0, e1 := h[0][1], low-h[0][0]
	if math.Abs(e0)+math.Abs(e1) < 1e-12*math.Abs(mean) {
		e0, e1 = low-h[1][1], h[0][1]
	}
	v[0], v[1] = e0*math.Sqrt(y[0]), e1*math.Sqrt(y[1])
	v[2] = -v[0] - v[1]
	top := math.Max(math.Abs(v[0]), math.Max(math.Abs(v[1]), math.Abs(v[2])))
	if top == 0 {
		return v, false
	}
	for k := range v {
		v[k] /= top
	}
	return v, true
}

// dead reports that a phase of three end-members has one at −Inf.
func (p *Phase) dead(d *[3]float64) bool {
	for k := range p.Members {
		if math.IsInf(d[k], -1) {
			return true
		}
	}
	return false
}

// isMaximum rejects points at which Newton's method stalled on a saddle.
func (p *Phase) isMaximum(y [3]float64, T float64) bool {
	for k := range p.Members {
		if y[k] <= 1e-12 {
			return true // against a wall of the ideal entropy
		}
	}
	return p.ConvexAt(y, T)
}

// settled reports that fractions are stationary: that the climb did not end for
// lack of rounds, as it may where two maxima are about to merge.
func (p *Phase) settled(d *[3]float64, y [3]float64, T float64) bool {
	base := 0
	var idx [2]int
	free := 0
	for k := range p.Members {
		if y[k] > y[base] {
			base = k
		}
	}
	for k := range p.Members {
		if k != base && y[k] > 0 {
			idx[free] = k
			free++
		}
	}
	step, _ := p.newton(d, &y, p.Mixing.Sites*rGas*T, atT(T), base, idx, free)
	return tame(&step, &y, idx, free) < 1e-6
}

func near(a, b [3]float64) bool {
	return math.Abs(a[0]-b[0])+math.Abs(a[1]-b[1])+math.Abs(a[2]-b[2]) < 2*driveSame
}

// starts2 returns the mesh maxima along the two live end-members.
func (p *Phase) starts2(d *[3]float64, T float64) [][3]float64 {
	a, b := -1, -1
	for k := range p.Members {
		if math.IsInf(d[k], -1) {
			continue
		}
		if a < 0 {
			a = k
		} else {
			b = k
		}
	}
	srt, w := p.Mixing.Sites*rGas*T, atT(T)
	var h [startMesh2 + 1]float64
	at := func(i int) (y [3]float64) {
		t := (float64(i) + 0.01) / (startMesh2 + 0.02)
		y[a], y[b] = t, 1-t
		return y
	}
	for i := range h {
		y := at(i)
		h[i] = p.height(d, &y, srt, w)
	}
	var out [][3]float64
	for i := range h {
		if (i == 0 || h[i] >= h[i-1]) && (i == startMesh2 || h[i] >= h[i+1]) {
			out = append(out, at(i))
		}
	}
	return out
}

// starts3 returns the mesh maxima of a phase of three end-members.
func (p *Phase) starts3(d *[3]float64, T float64) [][3]float64 {
	const n = startMesh3
	srt, w := p.Mixing.Sites*rGas*T, atT(T)
	var h [n + 1][n + 1]float64
	at := func(i, j int) [3]float64 {
		const e = 0.01
		s := n + 3*e
		return [3]float64{(float64(i) + e) / s, (float64(j) + e) / s, (float64(n-i-j) + e) / s}
	}
	for i := 0; i <= n; i++ {
		for j := 0; i+j <= n; j++ {
			y := at(i, j)
			h[i][j] = p.height(d, &y, srt, w)
		}
	}
	var out [][3]float64
	for i := 0; i <= n; i++ {
		for j := 0; i+j <= n; j++ {
			top := true
			for _, s := range [6][2]int{{1, 0}, {-1, 0}, {0, 1}, {0, -1}, {1, -1}, {-1, 1}} {
				a, b := i+s[0], j+s[1]
				if a >= 0 && b >= 0 && a+b <= n && h[a][b] > h[i][j] {
					top = false
				}
			}
			if top {
				out = append(out, at(i, j))
			}
		}
	}
	return out
}
