package join

import (
	"math"
	"slices"
	"sort"

	"thalweg/ternary"
	"thalweg/ternary/tangent"
)

const (
	// stationStep is how far from a station, in X, the columns on either side of
	// it are asked: far enough that the lines which meet there are apart.
	stationStep = 2e-5
	// stationLeast is the distance of two columns below which what changes
	// between them counts as located.
	stationLeast = 1e-9
	// columnsFirst is the number of intervals of X that are asked first.
	columnsFirst = 12
	// meetTol is the difference of temperature, in K, at which two lines meet.
	meetTol = 1e-9
)

// slab is a range of X without any change in the sequence of assemblages.
type slab struct {
	from, to    float64 // X: the stations at its ends
	left, right *column // near its ends
	lines       [][]Point
}

// slabs divides the join at its stations.
func (e *engine) slabs(at []float64) ([]slab, error) {
	verticals := e.verticals()
	var xs []float64
	for k := 1; k < columnsFirst; k++ {
		xs = append(xs, float64(k)/columnsFirst+0.003) // off the round compositions
	}
	xs = append(append(xs, at...), stationStep, 1-stationStep)
	for _, v := range verticals {
		xs = append(xs, v-stationStep, v+stationStep)
	}
	sort.Float64s(xs)
	var cols []*column
	for i, x := range xs {
		if x < stationStep || x > 1-stationStep || i > 0 && x-xs[i-1] < stationStep/4 {
			continue
		}
		c, err := e.column(x)
		if err != nil {
			return nil, err
		}
		cols = append(cols, c)
	}
	var out []slab
	start, left := 0.0, cols[0]
	for i := 1; i < len(cols); i++ {
		a, b := cols[i-1], cols[i]
		v := between(verticals, a.x, b.x)
		if v >= 0 && (!sameColumns(a, b) || apart(a, b) || e.compoundAt(v) != noCompound) {
			out = append(out, slab{from: start, to: v, left: left, right: a})
			start, left = v, b
			continue
		}
		list, err := e.stations(a, b, 0)
		if err != nil {
			return nil, err
		}
		for _, s := range list {
			out = append(out, slab{from: start, to: s.x, left: left, right: s.left})
			start, left = s.x, s.right
		}
	}
	return append(out, slab{from: start, to: 1, left: left, right: cols[len(cols)-1]}), nil
}

// between is the vertical between two close columns, or −1.
func between(verticals []float64, a, b float64) float64 {
	if b-a < 3*stationStep {
		for _, v := range verticals {
			if v > a && v < b {
				return v
			}
		}
	}
	return -1
}

// apart reports that a change has another temperature in a column close by.
func apart(a, b *column) bool {
	for i := range a.changes {
		if math.Abs(a.changes[i].T-b.changes[i].T) > 1 {
			return true
		}
	}
	return false
}

// noCompound stands for no phase.
const noCompound = -2

// compoundAt is the stoichiometric solid whose composition lies at X.
func (e *engine) compoundAt(x float64) int {
	at := mix(e.from, e.to, x)
	for i, p := range e.sys.Solids {
		if !p.Stoichiometric() {
			continue
		}
		c := p.Members[0].C
		if sum := c[0] + c[1] + c[2]; sum > 1e-9 && at.Distance(ternary.Composition{c[0] / sum, c[1] / sum, c[2] / sum}) < 1e-9 {
			return i
		}
	}
	return noCompound
}

// parted reports that two cells of one assemblage on either side of X are two
// fields: between them lies a compound by itself.
func (e *engine) parted(x float64, phases []int) bool {
	c := e.compoundAt(x)
	return c != noCompound && len(phases) > 1 && slices.ContainsFunc(phases, func(p int) bool {
		return p >= 0 && e.sys.Solids[p].Stoichiometric() && e.sys.Solids[p].Members[0].C == e.sys.Solids[c].Members[0].C
	})
}

// verticals are the X at which the join meets a stoichiometric solid, or the line
// between two of them: there fields may end at a vertical line.
func (e *engine) verticals() (out []float64) {
	var u [3]float64
	for i := range u {
		u[i] = e.to[i] - e.from[i]
	}
	var comps [][3]float64
	for _, p := range e.sys.Solids {
		for _, m := range p.Members {
			if sum := m.C[0] + m.C[1] + m.C[2]; p.Stoichiometric() && sum > 1e-9 {
				comps = append(comps, [3]float64{m.C[0] / sum, m.C[1] / sum, m.C[2] / sum})
			}
		}
	}
	cross := func(a, b [3]float64) float64 { return a[0]*b[1] - a[1]*b[0] } // of directions, in two coordinates
	add := func(x float64) {
		if x > 2*stationStep && x < 1-2*stationStep && !slices.ContainsFunc(out, func(v float64) bool { return math.Abs(v-x) < stationLeast }) {
			out = append(out, x)
		}
	}
	for i, c := range comps {
		d := [3]float64{c[0] - e.from[0], c[1] - e.from[1], c[2] - e.from[2]}
		if math.Abs(cross(d, u)) < 1e-12 {
			k := 0
			for j := range u {
				if math.Abs(u[j]) > math.Abs(u[k]) {
					k = j
				}
			}
			add(d[k] / u[k])
			continue
		}
		for _, o := range comps[:i] {
			v := [3]float64{o[0] - c[0], o[1] - c[1], o[2] - c[2]}
			if det := cross(u, v); math.Abs(det) > 1e-12 {
				s := cross(d, u) / det // along the tie line
				if s >= -1e-12 && s <= 1+1e-12 {
					add(cross(d, v) / det)
				}
			}
		}
	}
	sort.Float64s(out)
	return out
}

func sameColumns(a, b *column) bool {
	if !slices.Equal(a.top, b.top) || len(a.changes) != len(b.changes) {
		return false
	}
	for i := range a.changes {
		if !slices.Equal(a.changes[i].above, b.changes[i].above) || !slices.Equal(a.changes[i].below, b.changes[i].below) {
			return false
		}
	}
	return true
}

// station is an X at which the sequence changes, with columns on either side.
type station struct {
	x           float64
	left, right *column
}

// stations finds those between two columns, in order.
func (e *engine) stations(a, b *column, depth int) ([]station, error) {
	if sameColumns(a, b) {
		return nil, nil
	}
	if b.x-a.x < stationLeast || depth > 60 {
		return []station{{(a.x + b.x) / 2, a, b}}, nil
	}
	if x, ok := e.meeting(a, b); ok {
		step := math.Min(stationStep, math.Min(x-a.x, b.x-x)/2)
		l, err := e.column(x - step)
		if err != nil {
			return nil, err
		}
		r, err := e.column(x + step)
		if err != nil {
			return nil, err
		}
		if !sameColumns(l, r) {
			before, err := e.stations(a, l, depth+1)
			if err != nil {
				return nil, err
			}
			after, err := e.stations(r, b, depth+1)
			if err != nil {
				return nil, err
			}
			return append(append(before, station{x, l, r}), after...), nil
		}
	}
	mid, err := e.column((a.x + b.x) / 2)
	if err != nil {
		return nil, err
	}
	before, err := e.stations(a, mid, depth+1)
	if err != nil {
		return nil, err
	}
	after, err := e.stations(mid, b, depth+1)
	return append(before, after...), err
}

// meeting solves for the X at which the first and the last line round the
// assemblages that one of two columns has and the other has not come together.
func (e *engine) meeting(a, b *column) (float64, bool) {
	p, q := a.sets(), b.sets()
	first := 0
	for first < len(p) && first < len(q) && slices.Equal(p[first], q[first]) {
		first++
	}
	last := 0
	for last < len(p)-first && last < len(q)-first && slices.Equal(p[len(p)-1-last], q[len(q)-1-last]) {
		last++
	}
	for _, side := range []struct {
		c    *column
		n    int
		away float64
	}{{a, len(p), b.x}, {b, len(q), a.x}} {
		upper, lower := first-1, side.n-1-last
		if lower <= upper {
			continue
		}
		if x, ok := e.meet(side.c, upper, lower, side.away); ok {
			return x, true
		}
		for n := max(upper, 0); n < lower; n++ {
			if x, ok := e.fold(side.c, n, side.away); ok {
				return x, true
			}
		}
	}
	return 0, false
}

// meet follows two lines from a column towards X until they meet, by secants. Beyond
// the first and the last line are the limits of T.
func (e *engine) meet(c *column, upper, lower int, away float64) (float64, bool) {
	u, l := change{T: e.tMax, limit: true}, change{T: e.tMin, limit: true}
	if upper >= 0 {
		u = c.changes[upper]
	}
	if lower < len(c.changes) {
		l = c.changes[lower]
	}
	if u.eq == nil && !u.limit || l.eq == nil && !l.limit || u.limit && l.limit {
		return 0, false
	}
	x0, f0 := c.x, u.T-l.T
	x1 := x0 + (away-x0)*0.02
	for round := 0; round < 60; round++ {
		var ok bool
		if u, ok = e.follow(u, x1); !ok {
			return 0, false
		}
		if l, ok = e.follow(l, x1); !ok {
			return 0, false
		}
		f1 := u.T - l.T
		if math.Abs(f1) < meetTol || math.Abs(x1-x0) < 1e-13 {
			inside := (x1-c.x)*(x1-away) < 0
			return x1, inside && math.Abs(f1) < 1e-5
		}
		if f1 == f0 {
			return 0, false
		}
		x2 := x1 - f1*(x1-x0)/(f1-f0)
		reach := math.Abs(away - c.x)
		if math.Abs(x2-c.x) > reach || (x2-c.x)*(away-c.x) < 0 {
			return 0, false
		}
		x2 = math.Max(x1-reach/5, math.Min(x1+reach/5, x2))
		x0, f0, x1 = x1, f1, x2
	}
	return 0, false
}

// follow moves a change to another X, for better or worse: the state need not be
// one of equilibrium there.
func (e *engine) follow(k change, x float64) (change, bool) {
	if k.limit {
		return k, true
	}
	ev, err := tangent.Event(e.sys, mix(e.from, e.to, x), k.T, k.eq.Mu, k.eq.Parts, k.zero)
	if err != nil {
		return k, false
	}
	k.eq, k.T = ev, ev.T
	return k, true
}
