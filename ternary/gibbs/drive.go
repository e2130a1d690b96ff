package gibbs

import "math"

// Drive is the driving force of a phase against a plane of potentials.
type Drive struct {
	D float64    // J per mole of formula unit; > 0 the phase would grow
	Y [3]float64 // end-member fractions at the maximum
	C [3]float64 // moles of components there: ∂D/∂μ (envelope theorem)
	S float64    // entropy of the phase there, J/(mol K): ∂D/∂T at constant μ
}

const (
	// driveTol stops Newton's iteration on the fractions: D is stationary there,
	// so its own error is the square of this, and ∂D/∂μ is exact to it.
	driveTol = 1e-13
	// driveSame tells two maxima apart, in end-member fraction.
	driveSame = 1e-6
	// driveSure is the size of a Newton step from which the iteration converges
	// quadratically, so that it need not be checked against the height, whose
	// rounding would hide the gain.
	driveSure = 1e-3
	// flatTol is the curvature, relative to that of ideal mixing, below which the
	// phase counts as not convex and Newton's step is replaced by an uphill one.
	flatTol = 1e-8
	// hollowTol is the least curvature, relative to that of ideal mixing, that an
	// uphill step assumes.
	hollowTol = 0.01
	// driveLeap is the longest step in a log-ratio.
	driveLeap = 3
	// vanished is a fraction so small that it does not matter how small it is: a
	// plane may ask for less than a number can hold.
	vanished = 1e-40
	// excluded is how far below another, in RT per site, an end-member is taken
	// for absent.
	excluded = 1000
	// driveRounds bounds Newton's iteration; it takes 3 to 8 in practice.
	driveRounds = 60
)

// gaps returns d_k = μ·c_k − G°_k(T) of the end-members. A potential of −Inf
// counts only where the end-member holds that component.
func (p *Phase) gaps(mu *[3]float64, T float64) (d [3]float64) {
	for k := range p.Members {
		m := &p.Members[k]
		if m.G != (TFunc{}) {
			d[k] = -m.G.At(T)
		}
		for i, c := range m.C {
			if c != 0 {
				d[k] += mu[i] * c
			}
		}
		if math.IsNaN(d[k]) { // at an apex: +Inf and −Inf; what is absent cannot be made
			d[k] = math.Inf(-1)
		}
	}
	if n := len(p.Members); n > 1 {
		top := math.Max(d[0], d[1])
		if n == 3 {
			top = math.Max(top, d[2])
		}
		for k := range p.Members {
			if d[k] < top-excluded*p.Mixing.Sites*rGas*T {
				d[k] = math.Inf(-1) // its fraction would be less than a number can hold
			}
		}
	}
	return d
}

// Drive returns the driving force of the phase against the plane mu (J/mol of
// each component) at T, the largest of μ·c(y) − G(y, T) over all y:
//
//   - a stoichiometric phase needs no search;
//   - ideal mixing has the closed form s·RT·ln Σ exp(d_k/sRT);
//   - otherwise Newton's method, from one start where the phase is known to be
//     convex, else from enough starts to find every local maximum.
//
// A component potential of −Inf (a liquid on an edge) is ordinary: D is −Inf if
// every end-member holds that component, and +Inf if one holds it with a
// negative coefficient.
func (p *Phase) Drive(mu *[3]float64, T float64) Drive {
	d := p.gaps(mu, T)
	if len(p.Members) == 1 {
		return p.pure(0, d[0], T)
	}
	if q, done := p.atInfinity(&d, T); done {
		return q
	}
	y := p.idealFractions(&d, T)
	if p.Mixing.ideal() {
		return p.finish(&d, y, T)
	}
	if T > p.convexAbove {
		return p.climb(&d, y, T)
	}
	best := Drive{D: math.Inf(-1)}
	for _, q := range p.maxima(&d, T) {
		if q.D > best.D {
			best = q
		}
	}
	return best
}

// DriveFrom is the local maximum of the driving force that Newton's method
// reaches from fractions y: the branch of a phase that can unmix.
func (p *Phase) DriveFrom(mu *[3]float64, T float64, y [3]float64) Drive {
	d := p.gaps(mu, T)
	if len(p.Members) == 1 {
		return p.pure(0, d[0], T)
	}
	if q, done := p.atInfinity(&d, T); done {
		return q
	}
	if p.Mixing.ideal() {
		return p.finish(&d, p.idealFractions(&d, T), T)
	}
	return p.climb(&d, y, T)
}

// Maxima returns every local maximum of the driving force, highest first. A
// phase that cannot unmix has one.
func (p *Phase) Maxima(mu *[3]float64, T float64) []Drive {
	if T > p.convexAbove || len(p.Members) == 1 {
		return []Drive{p.Drive(mu, T)}
	}
	d := p.gaps(mu, T)
	if q, done := p.atInfinity(&d, T); done {
		return []Drive{q}
	}
	return p.maxima(&d, T)
}

// atInfinity deals with a plane on which some end-member is at ±Inf and no
// other choice is left.
func (p *Phase) atInfinity(d *[3]float64, T float64) (Drive, bool) {
	finite, last := 0, 0
	for k := range p.Members {
		if math.IsInf(d[k], 1) {
			return p.pure(k, d[k], T), true
		}
		if !math.IsInf(d[k], -1) {
			finite++
			last = k
		}
	}
	switch finite {
	case 0:
		return p.pure(0, math.Inf(-1), T), true
	case 1:
		return p.pure(last, d[last], T), true
	}
	return Drive{}, false
}

// pure is the driving force at y_k = 1.
func (p *Phase) pure(k int, d, T float64) Drive {
	m := &p.Members[k]
	q := Drive{D: d, C: m.C, S: -m.G.Slope(T)}
	q.Y[k] = 1
	return q
}

// idealFractions are the fractions that ideal mixing would have.
func (p *Phase) idealFractions(d *[3]float64, T float64) (y [3]float64) {
	n := len(p.Members)
	top := d[0]
	for k := 1; k < n; k++ {
		top = math.Max(top, d[k])
	}
	srt := p.Mixing.Sites * rGas * T
	sum := 0.0
	for k := 0; k < n; k++ {
		y[k] = math.Exp((d[k] - top) / srt)
		sum += y[k]
	}
	for k := 0; k < n; k++ {
		y[k] /= sum
	}
	return y
}

// finish evaluates D, C and S at fractions y.
func (p *Phase) finish(d *[3]float64, y [3]float64, T float64) Drive {
	q := Drive{Y: y}
	rs := p.Mixing.Sites * rGas
	for k := range p.Members {
		if y[k] == 0 {
			continue
		}
		m := &p.Members[k]
		ln := math.Log(y[k])
		q.D += y[k] * (d[k] - rs*T*ln)
		q.S -= y[k] * (m.G.Slope(T) + rs*ln)
		for i, c := range m.C {
			q.C[i] += y[k] * c
		}
	}
	if !p.Mixing.ideal() {
		var ex excess
		p.Mixing.excess(&y, atT(T), &ex)
		q.D -= ex.g
		if p.hasSlope {
			p.Mixing.excess(&y, slopeT(T), &ex)
			q.S -= ex.g
		}
	}
	return q
}

// climb is Newton's method on the log-ratios of the fractions, with steps
// halved until the driving force does not fall.
func (p *Phase) climb(d *[3]float64, y [3]float64, T float64) Drive {
	n := len(p.Members)
	live, base := p.begin(d, &y, T)
	var idx [2]int
	free := 0
	for k := 0; k < n; k++ {
		if live[k] && k != base {
			idx[free] = k
			free++
		}
	}
	w := atT(T)
	srt := p.Mixing.Sites * rGas * T
	h := p.height(d, &y, srt, w)
	for round := 0; round < driveRounds; round++ {
		step, size := p.newton(d, &y, srt, w, base, idx, free)
		if size > driveLeap {
			size = tame(&step, &y, idx, free)
		}
		if size <= driveTol {
			break
		}
		scale := 1.0
		if size < driveSure {
			y = shift(y, base, idx, free, step, 1)
			h = p.height(d, &y, srt, w)
			continue
		}
		moved := false
		for try := 0; try < 40; try++ {
			z := shift(y, base, idx, free, step, scale)
			hz := p.height(d, &z, srt, w)
			if hz >= h-1e-12*srt {
				moved = z != y
				y, h = z, hz
				break
			}
			scale /= 2
		}
		if !moved {
			break
		}
	}
	return p.finish(d, y, T)
}

// tame bounds a step in each log-ratio by itself, so that a member that is all but
// excluded does not hold up the others, and leaves alone what has vanished. It
// returns the largest entry.
func tame(step *[2]float64, y *[3]float64, idx [2]int, free int) (size float64) {
	for a := 0; a < free; a++ {
		if step[a] < 0 && y[idx[a]] < vanished {
			step[a] = 0
		}
		step[a] = math.Max(-driveLeap, math.Min(driveLeap, step[a]))
		size = math.Max(size, math.Abs(step[a]))
	}
	return size
}

// begin prepares the start of a climb: members at −Inf are taken out, members
// that the start lacks are given their dilute share, and the largest fraction
// becomes the denominator of the log-ratios.
func (p *Phase) begin(d, y *[3]float64, T float64) (live [3]bool, base int) {
	base = -1
	sum := 0.0
	for k := range p.Members {
		live[k] = !math.IsInf(d[k], -1)
		if !live[k] {
			y[k] = 0
		}
		sum += y[k]
		if live[k] && (base < 0 || y[k] > y[base]) {
			base = k
		}
	}
	for k := range y {
		y[k] /= sum
	}
	if !(sum > 0) { // the start held only what is absent
		*y = p.idealFractions(d, T)
		for k := range p.Members {
			if live[k] && y[k] > y[base] {
				base = k
			}
		}
	}
	missing := false
	for k := range p.Members {
		missing = missing || live[k] && y[k] < tinyFraction
	}
	if missing {
		p.fillDilute(d, y, &live, base, T)
	}
	return live, base
}

// tinyFraction is a fraction below which a start is replaced by the dilute
// estimate: Newton's steps in the log-ratio would take long to climb back.
const tinyFraction = 1e-30

// fillDilute sets fractions that are all but zero to Henry's law: the value at
// which d_k − m_k equals that of the base member, with the excess potentials of
// the others.
func (p *Phase) fillDilute(d, y *[3]float64, live *[3]bool, base int, T float64) {
	var ex excess
	p.Mixing.excess(y, atT(T), &ex)
	mex := ex.partial(y)
	srt := p.Mixing.Sites * rGas * T
	lambda := d[base] - mex[base] - srt*math.Log(y[base])
	sum := 0.0
	for k := range p.Members {
		if live[k] && y[k] < tinyFraction {
			y[k] = math.Exp(math.Max(-690, math.Min(0, (d[k]-mex[k]-lambda)/srt)))
		}
		sum += y[k]
	}
	for k := range y {
		y[k] /= sum
	}
}

// height is the function climbed: μ·c(y) − G(y).
func (p *Phase) height(d, y *[3]float64, srt float64, w weights) float64 {
	var ex excess
	p.Mixing.excess(y, w, &ex)
	v := -ex.g
	for k := range p.Members {
		if y[k] > 0 {
			v += y[k] * (d[k] - srt*math.Log(y[k]))
		}
	}
	return v
}

// newton returns the step in the log-ratios ln(y_k/y_base) that makes all
// d_k − m_k equal, m_k the potential of mixing, and its largest entry. Where
// the phase is not convex it returns an uphill step instead.
func (p *Phase) newton(d, y *[3]float64, srt float64, w weights, base int, idx [2]int, free int) (step [2]float64, size float64) {
	var ex excess
	p.Mixing.excess(y, w, &ex)
	mex := ex.partial(y)
	var f [2]float64
	for a := 0; a < free; a++ {
		k := idx[a]
		f[a] = (d[k] - mex[k] - srt*math.Log(y[k])) - (d[base] - mex[base] - srt*math.Log(y[base]))
	}
	// ∂f_a/∂η_b with ∂y_k/∂η_b = y_k(δ_kb − y_b)
	var j [2][2]float64
	for a := 0; a < free; a++ {
		for b := 0; b < free; b++ {
			kb := idx[b]
			v := ex.h[idx[a]][kb] - ex.h[base][kb]
			for l := range p.Members {
				v -= (ex.h[idx[a]][l] - ex.h[base][l]) * y[l]
			}
			j[a][b] = v * y[kb]
			if a == b {
				j[a][b] += srt
			}
		}
	}
	if free == 1 {
		if j[0][0] > flatTol*srt {
			step[0] = f[0] / j[0][0]
		} else {
			step[0] = f[0] / math.Max(-j[0][0], hollowTol*srt)
		}
		return step, math.Abs(step[0])
	}
	det := j[0][0]*j[1][1] - j[0][1]*j[1][0]
	if j[0][0] > 0 && det > flatTol*srt*srt {
		step[0] = (f[0]*j[1][1] - f[1]*j[0][1]) / det
		step[1] = (f[1]*j[0][0] - f[0]*j[1][0]) / det
	} else {
		step = uphill(&ex, y, srt, base, idx, f)
	}
	return step, math.Max(math.Abs(step[0]), math.Abs(step[1]))
}

// uphill is Newton's step with every principal curvature, relative to that of
// ideal mixing, made positive: up a slope as steep as a hollow is deep. In the
// log-ratios η, with M = ∂y/∂η = L·Lᵀ and A the second derivatives of G in y, it
// solves |Lᵀ·A·L|·u = Lᵀ·f, η = L⁻ᵀ·u.
func uphill(ex *excess, y *[3]float64, srt float64, base int, idx [2]int, f [2]float64) (step [2]float64) {
	a, b := idx[0], idx[1]
	h := &ex.h
	ab := h[a][b] - h[a][base] - h[base][b] + h[base][base] + srt/y[base]
	aa := h[a][a] - 2*h[a][base] + h[base][base] + srt/y[base] + srt/y[a]
	bb := h[b][b] - 2*h[b][base] + h[base][base] + srt/y[base] + srt/y[b]
	l00 := math.Sqrt(y[a] * (1 - y[a]))
	l10 := -y[a] * y[b] / l00
	l11 := math.Sqrt(math.Max(y[b]*(1-y[b])-l10*l10, 1e-300))
	// A·L, then Lᵀ·A·L
	p00, p01 := aa*l00+ab*l10, ab*l11
	p10, p11 := ab*l00+bb*l10, bb*l11
	q00, q01, q11 := l00*p00+l10*p10, l00*p01+l10*p11, l11*p11
	g0, g1 := l00*f[0]+l10*f[1], l11*f[1]
	mean, diff := (q00+q11)/2, (q00-q11)/2
	r := math.Hypot(diff, q01)
	// principal directions (c, s) and (−s, c)
	theta := math.Atan2(q01, diff) / 2
	c, s := math.Cos(theta), math.Sin(theta)
	u, v := c*g0+s*g1, -s*g0+c*g1
	u /= math.Max(math.Abs(mean+r), hollowTol*srt)
	v /= math.Max(math.Abs(mean-r), hollowTol*srt)
	u, v = c*u-s*v, s*u+c*v
	step[1] = v / l11
	step[0] = (u - l10*step[1]) / l00
	return step
}

// shift multiplies the ratios to the base by exp(scale·step).
func shift(y [3]float64, base int, idx [2]int, free int, step [2]float64, scale float64) [3]float64 {
	for a := 0; a < free; a++ {
		y[idx[a]] *= math.Exp(scale * step[a])
	}
	s := y[0] + y[1] + y[2]
	return [3]float64{y[0] / s, y[1] / s, y[2] / s}
}

// Curvature returns the second derivatives of D with respect to the plane,
// ∂c/∂μ at fractions y: the 3×3 matrix C·(∂²G/∂y²)⁻¹·Cᵀ on Σ dy = 0, and ∂c/∂T
// at constant μ. It is zero for a stoichiometric phase. ok is false where the
// phase is not convex.
func (p *Phase) Curvature(y [3]float64, T float64) (h [3][3]float64, ct [3]float64, ok bool) {
	n := len(p.Members) - 1
	live := [3]int{}
	m := 0
	for k := 0; k <= n; k++ {
		if y[k] > 0 {
			live[m] = k
			m++
		}
	}
	if m <= 1 {
		return h, ct, true
	}
	var q Potentials
	p.Potentials(&y, T, &q)
	last := live[m-1]
	var g, inv [2][2]float64
	for a := 0; a < m-1; a++ {
		for b := 0; b < m-1; b++ {
			ka, kb := live[a], live[b]
			g[a][b] = q.DY[ka][kb] - q.DY[ka][last] - q.DY[last][kb] + q.DY[last][last]
		}
	}
	if m == 2 {
		if g[0][0] <= 0 {
			return h, ct, false
		}
		inv[0][0] = 1 / g[0][0]
	} else {
		det := g[0][0]*g[1][1] - g[0][1]*g[1][0]
		if det <= 0 || g[0][0] <= 0 {
			return h, ct, false
		}
		inv = [2][2]float64{{g[1][1] / det, -g[0][1] / det}, {-g[1][0] / det, g[0][0] / det}}
	}
	for a := 0; a < m-1; a++ {
		for b := 0; b < m-1; b++ {
			ka, kb := live[a], live[b]
			for i := 0; i < 3; i++ {
				ci := p.Members[ka].C[i] - p.Members[last].C[i]
				for l := 0; l < 3; l++ {
					h[i][l] += ci * inv[a][b] * (p.Members[kb].C[l] - p.Members[last].C[l])
				}
				// dy = −inv·∂(m_k − m_last)/∂T dT at constant μ
				ct[i] -= ci * inv[a][b] * (q.DT[kb] - q.DT[last])
			}
		}
	}
	return h, ct, true
}
