package section

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

const (
	// touchTol is the driving force, in RT, at which a phase touches a plane.
	touchTol = 1e-12
	// aboveTol is the driving force, in RT, above which a third phase has come in.
	aboveTol = 1e-10
	// formSame is the difference in end-member fractions within which two forms of
	// one phase are the same.
	formSame = 1e-5
	// rounds bounds Newton's iteration.
	rounds = 40
)

// vec is a plane of potentials, in RT, or a direction between planes.
type vec [3]float64

func (a vec) plus(b vec, s float64) vec { return vec{a[0] + s*b[0], a[1] + s*b[1], a[2] + s*b[2]} }
func (a vec) dot(b vec) float64         { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }
func (a vec) norm() float64             { return math.Sqrt(a.dot(a)) }
func (a vec) cross(b vec) vec {
	return vec{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}

// engine is one computation.
type engine struct {
	sys      *gibbs.System
	T, rt    float64
	problems []string
	triples  []*triple
	families []*family
	edges    [3]*binary
	critical []ternary.Composition
}

func (e *engine) phase(i int) *gibbs.Phase {
	if i == gibbs.Liquid {
		return e.sys.Liquid
	}
	return e.sys.Solids[i]
}

func (e *engine) symbol(i int) string {
	if i == gibbs.Liquid {
		return "L"
	}
	return e.sys.Solids[i].Symbol
}

func (e *engine) problem(s string) {
	for _, p := range e.problems {
		if p == s {
			return
		}
	}
	e.problems = append(e.problems, s)
}

// drive is the driving force of a phase near fractions y against plane u, in RT.
func (e *engine) drive(phase int, u vec, y [3]float64) gibbs.Drive {
	mu := e.mu(u)
	d := e.phase(phase).DriveFrom(&mu, e.T, y)
	d.D /= e.rt
	return d
}

func (e *engine) mu(u vec) [3]float64 { return [3]float64{u[0] * e.rt, u[1] * e.rt, u[2] * e.rt} }

func state(phase int, d *gibbs.Drive) gibbs.State {
	return gibbs.State{Phase: phase, Y: d.Y, C: d.C}
}

func sameForm(a, b [3]float64) bool {
	return math.Abs(a[0]-b[0])+math.Abs(a[1]-b[1])+math.Abs(a[2]-b[2]) < formSame
}

// solve3 solves the system with rows a, b, c.
func solve3(a, b, c vec, f vec) (vec, bool) {
	bc := b.cross(c)
	det := a.dot(bc)
	if !(math.Abs(det) > 1e-13*a.norm()*b.norm()*c.norm()) {
		return vec{}, false
	}
	ca, ab := c.cross(a), a.cross(b)
	var x vec
	for i := range x {
		x[i] = (f[0]*bc[i] + f[1]*ca[i] + f[2]*ab[i]) / det
	}
	return x, true
}

// touchThree finds the plane that touches three phases, from a start close by.
func (e *engine) touchThree(u vec, st [3]gibbs.State) (vec, [3]gibbs.State, bool) {
	best := math.Inf(1)
	for r := 0; r < rounds; r++ {
		var d [3]gibbs.Drive
		worst := 0.0
		for i := range st {
			d[i] = e.drive(st[i].Phase, u, st[i].Y)
			st[i] = state(st[i].Phase, &d[i])
			worst = math.Max(worst, math.Abs(d[i].D))
		}
		if math.IsNaN(worst) || math.IsInf(worst, 0) {
			return u, st, false
		}
		if worst <= touchTol && worst >= best/2 || worst < 1e-15 {
			return u, st, true
		}
		best = math.Min(best, worst)
		step, ok := solve3(d[0].C, d[1].C, d[2].C, vec{-d[0].D, -d[1].D, -d[2].D})
		if !ok {
			return u, st, worst <= touchTol
		}
		if n := step.norm(); n > 2 {
			step = vec{}.plus(step, 2/n)
		}
		u = u.plus(step, 1)
	}
	return u, st, best <= touchTol
}

// touchTwo finds the plane that touches two phases within the plane of planes
// through u normal to t, and the direction of the family there, turned to agree
// with t.
func (e *engine) touchTwo(u, t vec, a, b gibbs.State) (vec, vec, gibbs.State, gibbs.State, bool) {
	start := u
	for r := 0; r < rounds; r++ {
		da, db := e.drive(a.Phase, u, a.Y), e.drive(b.Phase, u, b.Y)
		a, b = state(a.Phase, &da), state(b.Phase, &db)
		worst := math.Max(math.Abs(da.D), math.Abs(db.D))
		if math.IsNaN(worst) || math.IsInf(worst, 0) || u.plus(start, -1).norm() > 5 {
			return u, t, a, b, false
		}
		if worst <= touchTol {
			n := vec(a.C).cross(vec(b.C))
			l := n.norm()
			if l < 1e-12 {
				return u, t, a, b, false
			}
			if n.dot(t) < 0 {
				l = -l
			}
			return u, vec{}.plus(n, 1/l), a, b, true
		}
		step, ok := solve3(da.C, db.C, t, vec{-da.D, -db.D, 0})
		if !ok {
			return u, t, a, b, false
		}
		if n := step.norm(); n > 1 {
			step = vec{}.plus(step, 1/n)
		}
		u = u.plus(step, 1)
	}
	return u, t, a, b, false
}

// composition scales contents to Σ = 1.
func composition(c [3]float64) ternary.Composition {
	s := c[0] + c[1] + c[2]
	return ternary.Composition{c[0] / s, c[1] / s, c[2] / s}
}

// watcher is a phase that may come in, or another form of one that is there.
type watcher struct {
	phase int
	d, m  float64
	y     [3]float64
}

// watch lists, with their driving forces against plane u and the slopes along t,
// the phases that are not among the given ones.
func (e *engine) watch(u, t vec, have ...gibbs.State) []watcher {
	mu := e.mu(u)
	out := make([]watcher, 0, len(e.sys.Solids)+1)
	for i := gibbs.Liquid; i < len(e.sys.Solids); i++ {
		active := false
		for _, s := range have {
			active = active || s.Phase == i
		}
		p := e.phase(i)
		w := watcher{phase: i, d: math.Inf(-1)}
		take := func(d *gibbs.Drive) {
			w.d, w.m, w.y = d.D/e.rt, vec(d.C).dot(t), d.Y
		}
		if !active {
			d := p.Drive(&mu, e.T)
			take(&d)
		} else if p.CanUnmix(e.T) {
			for _, d := range p.Maxima(&mu, e.T) {
				known := false
				for _, s := range have {
					known = known || s.Phase == i && sameForm(s.Y, d.Y)
				}
				if !known {
					take(&d)
					break
				}
			}
		}
		out = append(out, w)
	}
	return out
}
