package tangent

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// point is a phase at a definite composition: a column of the linear programme.
type point struct {
	state gibbs.State
	g     float64 // J/mol at state.Y
}

// simplex carries up to three phase points whose amounts make up the bulk.
type simplex struct {
	sys    *gibbs.System
	b      ternary.Composition
	T      float64
	live   [3]int // components in the problem
	n      int    // their number
	basis  [3]point
	amount [3]float64
	mu     [3]float64
	rounds int
}

// newSimplex starts from the pure liquid components, at zero Gibbs energy.
func newSimplex(sys *gibbs.System, b ternary.Composition, T float64) *simplex {
	s := &simplex{sys: sys, b: b, T: T}
	for i := range b {
		s.mu[i] = math.Inf(-1)
		if b[i] > 0 || negative(sys, i) {
			s.live[s.n] = i
			s.n++
		}
	}
	for k := 0; k < s.n; k++ {
		var y [3]float64
		y[s.live[k]] = 1
		s.basis[k] = point{state: gibbs.State{Phase: gibbs.Liquid, Y: y, C: y}}
		s.amount[k] = b[s.live[k]]
		s.mu[s.live[k]] = 0
	}
	return s
}

// negative reports whether some end-member holds component i with a negative
// coefficient.
func negative(sys *gibbs.System, i int) bool {
	for _, p := range sys.Solids {
		for k := range p.Members {
			if p.Members[k].C[i] < 0 {
				return true
			}
		}
	}
	return false
}

// cut adds the phase point that lies highest above the plane to the basis and
// returns its driving force in RT before that.
func (s *simplex) cut() float64 {
	s.rounds++
	best := gibbs.Drive{D: math.Inf(-1)}
	phase := 0
	drives(s.sys, &s.mu, s.T, func(i int, d gibbs.Drive) {
		if d.D > best.D {
			best, phase = d, i
		}
	})
	rt := ternary.R * s.T
	if best.D > 1e-14*rt {
		s.enter(phase, best)
	}
	return best.D / rt
}

// addAt lets in every phase that lies above the plane mu.
func (s *simplex) addAt(mu [3]float64) {
	drives(s.sys, &mu, s.T, func(i int, d gibbs.Drive) {
		if d.D > 0 {
			s.enter(i, d)
		}
	})
}

// enter brings a phase point into the basis in place of the one whose amount
// first falls to nothing.
func (s *simplex) enter(phase int, d gibbs.Drive) {
	p := point{state: gibbs.State{Phase: phase, Y: d.Y, C: d.C}}
	p.g, _, _ = phaseOf(s.sys, phase).Gibbs(d.Y, s.T)
	w, ok := s.solve(d.C)
	if !ok {
		return
	}
	out, best := -1, math.Inf(1)
	for k := 0; k < s.n; k++ {
		if w[k] <= 1e-12 {
			continue
		}
		r := s.amount[k] / w[k]
		if r < best || r == best && w[k] > w[out] {
			out, best = k, r
		}
	}
	if out < 0 {
		return
	}
	old, oldAmount := s.basis[out], s.amount
	for k := 0; k < s.n; k++ {
		s.amount[k] = math.Max(0, s.amount[k]-best*w[k])
	}
	s.basis[out], s.amount[out] = p, best
	if !s.price() {
		s.basis[out], s.amount = old, oldAmount
		s.price()
	}
}

// solve writes contents c as a sum of the basis points.
func (s *simplex) solve(c [3]float64) (w [3]float64, ok bool) {
	var m linear
	m.n = s.n
	for r := 0; r < s.n; r++ {
		for k := 0; k < s.n; k++ {
			m.a[r][k] = s.basis[k].state.C[s.live[r]]
		}
		m.a[r][s.n] = c[s.live[r]]
	}
	if !m.solve() {
		return w, false
	}
	for k := 0; k < s.n; k++ {
		w[k] = m.x[k]
	}
	return w, true
}

// price finds the plane through the basis points.
func (s *simplex) price() bool {
	var m linear
	m.n = s.n
	for k := 0; k < s.n; k++ {
		for r := 0; r < s.n; r++ {
			m.a[k][r] = s.basis[k].state.C[s.live[r]]
		}
		m.a[k][s.n] = s.basis[k].g
	}
	if !m.solve() {
		return false
	}
	for r := 0; r < s.n; r++ {
		s.mu[s.live[r]] = m.x[r]
	}
	return true
}

// parts are the phases of the basis, points of one phase that belong to one
// maximum of its driving force taken together, those with an amount.
func (s *simplex) parts() []Part {
	out := s.held()
	kept := out[:0]
	for _, p := range out {
		if p.Mole > 0 {
			kept = append(kept, p)
		}
	}
	return kept
}

// held is parts with those that have no amount.
func (s *simplex) held() []Part {
	out := make([]Part, 0, 3)
	for k := 0; k < s.n; k++ {
		st := s.basis[k].state
		p := phaseOf(s.sys, st.Phase)
		d := p.DriveFrom(&s.mu, s.T, st.Y)
		merged := false
		for i := range out {
			if out[i].State.Phase == st.Phase && near(out[i].State.Y, d.Y, 1e-3) {
				out[i].Mole += s.amount[k]
				merged = true
			}
		}
		if !merged {
			out = append(out, Part{State: gibbs.State{Phase: st.Phase, Y: d.Y, C: d.C}, Mole: s.amount[k]})
		}
	}
	return out
}

// linear is a small dense system a·x = last column, solved by elimination with
// partial pivoting.
type linear struct {
	n int
	a [8][9]float64
	x [8]float64
}

func (m *linear) solve() bool {
	n := m.n
	for c := 0; c < n; c++ {
		p := c
		for r := c + 1; r < n; r++ {
			if math.Abs(m.a[r][c]) > math.Abs(m.a[p][c]) {
				p = r
			}
		}
		if math.Abs(m.a[p][c]) < 1e-300 {
			return false
		}
		m.a[c], m.a[p] = m.a[p], m.a[c]
		for r := c + 1; r < n; r++ {
			f := m.a[r][c] / m.a[c][c]
			if f == 0 {
				continue
			}
			for k := c; k <= n; k++ {
				m.a[r][k] -= f * m.a[c][k]
			}
		}
	}
	for c := n - 1; c >= 0; c-- {
		v := m.a[c][n]
		for k := c + 1; k < n; k++ {
			v -= m.a[c][k] * m.x[k]
		}
		m.x[c] = v / m.a[c][c]
		if math.IsNaN(m.x[c]) || math.IsInf(m.x[c], 0) {
			return false
		}
	}
	return true
}
