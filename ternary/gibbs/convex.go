package gibbs

import "math"

// Where a phase can unmix is found once, on a grid: fine enough that a gap
// that it misses is narrower than the mesh and shallower than what such a mesh
// resolves. Gaps are widest at low temperature, so the scan looks for the
// highest temperature at which any node is not convex, then adds a margin.
const (
	convexTMin   = 100.0  // K, lower end of the scan
	convexTMax   = 6000.0 // K, upper end of the scan
	convexSteps  = 60     // temperatures of the scan, in geometric progression
	convexMesh2  = 64     // intervals of y for two end-members
	convexMesh3  = 16     // intervals per side for three
	convexMargin = 1.08   // one step of the progression
)

// findConvex returns a temperature above which the Gibbs energy of mixing was
// found convex at every node of the scan.
func (p *Phase) findConvex() float64 {
	if len(p.Members) == 1 || p.Mixing.ideal() {
		return 0
	}
	ratio := math.Pow(convexTMax/convexTMin, 1.0/convexSteps)
	top := 0.0
	for k, T := 0, convexTMin; k <= convexSteps; k, T = k+1, T*ratio {
		if !p.convexAt(T) {
			top = T
		}
	}
	if top >= convexTMax/ratio {
		return math.Inf(1)
	}
	return top * convexMargin
}

// convexAt reports whether G(y) is convex at every node of the scan.
func (p *Phase) convexAt(T float64) bool {
	if len(p.Members) == 2 {
		for i := 1; i < convexMesh2; i++ {
			y := float64(i) / convexMesh2
			if !p.ConvexAt([3]float64{y, 1 - y}, T) {
				return false
			}
		}
		return true
	}
	const n = convexMesh3
	const rim = 0.02 // also look at the binaries, a little inside
	for i := 0; i <= n; i++ {
		for j := 0; i+j <= n; j++ {
			y := [3]float64{float64(i) + rim, float64(j) + rim, float64(n-i-j) + rim}
			s := y[0] + y[1] + y[2]
			if !p.ConvexAt([3]float64{y[0] / s, y[1] / s, y[2] / s}, T) {
				return false
			}
		}
	}
	return true
}

// ConvexAt reports whether the Gibbs energy is convex at y: whether the phase
// is stable there against unmixing into neighbours (inside its spinodal it is
// not). End-members of which there is none do not count: a first trace of them
// always lowers the energy of mixing.
func (p *Phase) ConvexAt(y [3]float64, T float64) bool {
	var here [3]int
	n := -1 // end-members present, but for the last
	for k := range p.Members {
		if y[k] > 0 {
			n++
			here[n] = k
		}
	}
	if n < 1 {
		return true
	}
	var q Potentials
	p.Potentials(&y, T, &q)
	// Second derivatives along the directions (k, last), scaled by √(y_k·y_l)
	// so that the ideal part is of order RT everywhere.
	var h [2][2]float64
	last := here[n]
	for a, i := range here[:n] {
		for b, j := range here[:n] {
			v := q.DY[i][j] - q.DY[i][last] - q.DY[last][j] + q.DY[last][last]
			h[a][b] = v * math.Sqrt(y[i]*y[j])
		}
	}
	if n == 1 {
		return h[0][0] > 0
	}
	return h[0][0] > 0 && h[0][0]*h[1][1]-h[0][1]*h[1][0] > 0
}
